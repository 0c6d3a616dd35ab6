package engine

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// readerFor is the reader of a file by its ending; files without a known one
// are read as CSV, since loggers write .txt and .dat.
func readerFor(st *statement, file *lang.Text) (reader.Reader, error) {
	switch ending := strings.ToLower(filepath.Ext(file.Value)); ending {
	case ".xlsx", ".xls", ".parquet", ".las", ".laz", ".ply", ".jsonl", ".json", ".gz", ".zst":
		return nil, problem.NotThereYet(st.at(file), "reading "+ending+" files")
	}
	return csv.Reader{}, nil
}

// importFile reads the file of a CREATE statement and says what it met.
func (s *Session) importFile(ctx context.Context, st *statement, t *lang.CreateData, c *clauses,
	object *catalog.Object) (*column.Table, error) {
	source, err := openSource(st, t.File)
	if err != nil {
		return nil, err
	}
	read, err := readerFor(st, t.File)
	if err != nil {
		return nil, err
	}
	o := c.file
	if c.id != nil {
		o.TextColumns = []string{c.id.Name.Text}
	} else if object.Kind == catalog.Campaign {
		o.TextColumns = []string{"id"}
	}
	refused := newRefusals(c, source)
	if refused != nil {
		o.Refused = refused.take
	}
	result, err := read.Read(ctx, source, o)
	if err != nil {
		return nil, importProblem(err, st.at(t.File), t.File.Value)
	}
	if refused != nil && !s.checkOnly {
		if err := refused.save(st, result.Facts.Refused); err != nil {
			return nil, err
		}
	}
	said := importNotes(&result.Facts, t.File.Value)
	for _, text := range said {
		st.notes.Add(note.Note, note.Import, "%s", text)
	}
	object.Notes = said
	object.Sources = []catalog.SourceFile{{
		Path: t.File.Value, SHA256: result.Facts.SHA256, Size: result.Facts.Bytes,
		ModTime: source.ModTime, Rows: result.Facts.Rows,
	}}
	return c.applyUnits(result.Table, t.File.Value)
}

// openSource reads the bytes of a file that a statement names.
func openSource(st *statement, file *lang.Text) (*reader.Source, error) {
	path := st.path(file.Value)
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		p := problem.New("no-file", st.at(file), "there is no file '%s'", file.Value).Because(err)
		if near := nearestFile(path); near != "" {
			return nil, p.WithHint("did you mean '%s'?", near)
		}
		return nil, p.WithHint("a relative path starts at the script's folder")
	}
	if err == nil && info.IsDir() {
		return nil, problem.New("no-file", st.at(file), "'%s' is a folder", file.Value)
	}
	source, err := reader.Open(file.Value, path)
	if err != nil {
		return nil, fileProblem(err, st.at(file), file.Value, "be read")
	}
	return source, nil
}

// nearestFile is the file in the same folder whose name is nearest.
func nearestFile(path string) string {
	entries, err := os.ReadDir(filepath.Dir(path))
	if err != nil {
		return ""
	}
	var names []string
	for _, e := range entries {
		if !e.IsDir() {
			names = append(names, e.Name())
		}
	}
	return lang.Nearest(filepath.Base(path), names)
}

// refusals collects the lines at fault for the file that REFUSED TO names.
type refusals struct {
	file   *lang.Text
	buffer bytes.Buffer
	faults []reader.Fault
}

// newRefusals starts the file with the heading of the source, so that it can be
// mended and imported like any other.
func newRefusals(c *clauses, source *reader.Source) *refusals {
	if c.refusedTo == nil {
		return nil
	}
	r := &refusals{file: c.refusedTo}
	r.buffer.Write(headingLine(source.Data, c.file.Heading))
	r.buffer.WriteByte('\n')
	return r
}

// headingLine is line number n of a file (0: the first that is not blank).
func headingLine(data []byte, n int) []byte {
	lines := bufio.NewScanner(bytes.NewReader(data))
	lines.Buffer(nil, len(data)+1)
	for number := 1; lines.Scan(); number++ {
		line := bytes.TrimSuffix(lines.Bytes(), []byte("\r"))
		if number == n || n == 0 && len(bytes.TrimSpace(line)) > 0 {
			return line
		}
	}
	return nil
}

const listedFaults = 3

func (r *refusals) take(line int, raw []byte, f reader.Fault) error {
	if len(r.faults) < listedFaults {
		f.Text = strings.TrimSpace(f.Text)
		r.faults = append(r.faults, f)
	}
	r.buffer.Write(raw)
	r.buffer.WriteByte('\n')
	return nil
}

// save writes the file, with the heading alone where no line was refused: an
// older file must not be taken for this import's.
func (r *refusals) save(st *statement, count int) error {
	err := WriteAside(st.path(r.file.Value), func(f *os.File) error {
		_, err := f.Write(r.buffer.Bytes())
		return err
	})
	if err != nil {
		return fileProblem(err, st.at(r.file), r.file.Value, "be written")
	}
	if count == 0 {
		return nil
	}
	text := ""
	for i, f := range r.faults {
		if i > 0 {
			text += "; "
		}
		text += faultPlace(f) + faultText(f)
	}
	if count > len(r.faults) {
		text += "; …"
	}
	verb := "were"
	if count == 1 {
		verb = "was"
	}
	st.notes.Add(note.Warning, note.Import, "%s %s refused to %s: %s", plural(count, "line"), verb, r.file.Value, text)
	return nil
}
