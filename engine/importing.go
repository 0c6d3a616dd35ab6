package engine

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/packed"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// importFile reads the file or the files of a CREATE statement and says what it met.
func (s *Session) importFile(ctx context.Context, st *statement, t *lang.CreateData, c *clauses,
	object *catalog.Object) (*column.Table, error) {
	sources, form, err := openSources(st, t)
	if err != nil {
		return nil, err
	}
	if err := form.suits(c); err != nil {
		return nil, err
	}
	named := t.File
	if t.Files != nil {
		named = t.Files
	}
	o := c.file
	o.Threads, o.Memory = s.o.Threads, s.o.Memory
	if s.o.Progress != nil {
		o.Progress = func(done, total int64) { s.o.Progress(int(done), int(total)) }
	}
	if c.id != nil {
		o.TextColumns = []string{c.id.Name.Text}
	} else if object.Kind == catalog.Campaign {
		o.TextColumns = []string{"id"}
	}
	refused, err := newRefusals(st, c, t.Files, sources)
	if err != nil {
		return nil, err
	}
	if refused != nil {
		o.Refused = refused.take
	}
	o.Censored = c.censoredFields()
	result, err := form.read.ReadFiles(ctx, sources, o)
	for _, source := range sources {
		if changed := source.Close(); changed != nil && (err == nil || errors.Is(err, reader.ErrChanged)) {
			return nil, changedMeanwhile(st.at(named), source.Name)
		}
	}
	if err != nil {
		return nil, c.importProblem(err, st.at(named), named.Value)
	}
	if refused != nil && !s.checkOnly {
		if err := refused.save(st, result); err != nil {
			return nil, err
		}
	}
	said := append(importNotes(result, named.Value), c.zoneNotes(named.Value)...)
	for _, text := range said {
		st.notes.Add(note.Note, note.Import, "%s", text)
	}
	object.Notes = said
	for i, f := range result.Files {
		object.Sources = append(object.Sources, catalog.SourceFile{
			Path: f.Name, SHA256: f.SHA256, Size: f.Bytes, ModTime: sources[i].ModTime, Rows: f.Rows,
		})
	}
	table := result.Table
	if need := column.SizeOf(table); s.o.Memory > 0 && need > s.o.Memory {
		return nil, tooLarge(st.at(named), named.Value, need, s.o.Memory)
	}
	if t.Files != nil {
		if table, err = withSourceFile(table, result.Files, st.at(t.Files)); err != nil {
			return nil, err
		}
	}
	if c.unpivot != nil {
		if table, err = c.unpivotTable(table, named.Value); err != nil {
			return nil, err
		}
	}
	if table, err = c.applyUnits(table, named.Value); err != nil {
		return nil, err
	}
	return c.boundColumns(table, named.Value)
}

// openSources reads the bytes of what a CREATE statement names, in name order.
func openSources(st *statement, t *lang.CreateData) ([]*reader.Source, *format, error) {
	named, names := t.File, []string(nil)
	if named != nil {
		names = []string{named.Value}
	} else {
		named = t.Files
		var err error
		if names, err = matching(st, t.Files); err != nil {
			return nil, nil, err
		}
	}
	var sources []*reader.Source
	var form *format
	for _, name := range names {
		at := &lang.Text{At: named.At, Value: name}
		next, wrong := formatOf(st.at(named), name)
		open := reader.Open
		if _, isPacked := packed.Ending(name); next == delimited && !isPacked {
			open = reader.Map
		}
		source, err := openSourceBy(st, at, open)
		if err != nil {
			return nil, nil, err
		}
		if wrong != nil {
			return nil, nil, wrong
		}
		if form != nil && next != form {
			return nil, nil, problem.New("import", st.at(named), "'%s' is %s and '%s' is %s: files that are read as one have one format", names[0], form.name, name, next.name).
				WithHint("let the pattern name one kind of files")
		}
		form = next
		if source, err = unpacked(st, at, source); err != nil {
			return nil, nil, err
		}
		sources = append(sources, source)
	}
	return sources, form, nil
}

// withSourceFile adds the column that tells which file a row was read from.
func withSourceFile(table *column.Table, files []reader.FileFacts, at problem.Place) (*column.Table, error) {
	const name = "source_file"
	for _, f := range table.Schema {
		if strings.EqualFold(f.Name, name) {
			return nil, problem.New("column-twice", at, "the files have a column '%s', which is the name of the column that tells the files apart", f.Name).
				WithHint("give it another name in the headings of the files")
		}
	}
	b := column.NewBuilder(column.Text, nil)
	b.Grow(table.N)
	for _, f := range files {
		for range f.Rows {
			b.AppendText(f.Name)
		}
	}
	field := column.Field{Name: name, Type: column.Text, Meaning: "file that the row was read from"}
	return &column.Table{
		N:      table.N,
		Schema: append(append(column.Schema(nil), table.Schema...), field),
		Cols:   append(append([]column.Vector(nil), table.Cols...), b.Finish()),
	}, nil
}

// openSource reads the bytes of a file that a statement names.
func openSource(st *statement, file *lang.Text) (*reader.Source, error) {
	return openSourceBy(st, file, reader.Open)
}

func openSourceBy(st *statement, file *lang.Text, open func(name, path string) (*reader.Source, error)) (*reader.Source, error) {
	path := st.path(file.Value)
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		p := problem.New("no-file", st.at(file), "there is no file '%s'", file.Value).Because(err)
		if near := nearestFile(path); near != "" {
			return nil, p.WithHint("did you mean '%s'?", near)
		}
		if strings.ContainsAny(file.Value, "*?[") {
			return nil, p.WithHint("FROM FILES '%s' reads all files of a pattern", file.Value)
		}
		return nil, p.WithHint("a relative path starts at the script's folder")
	}
	if err == nil && info.IsDir() {
		return nil, problem.New("no-file", st.at(file), "'%s' is a folder", file.Value).
			WithHint("FROM FILES '%s/*.csv' reads the files in it", strings.TrimRight(file.Value, "/"))
	}
	source, err := open(file.Value, path)
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
	lines  []refusedLine
	faults []reader.Fault
	many   bool
}

// refusedLine is a line at fault, as its file has it.
type refusedLine struct {
	file string
	raw  []byte
}

// newRefusals starts the collection; nil where the statement has no REFUSED TO.
// The file may not be one of those that are read: the next run would read it too.
func newRefusals(st *statement, c *clauses, pattern *lang.Text, sources []*reader.Source) (*refusals, error) {
	if c.refusedTo == nil {
		return nil, nil
	}
	path := filepath.Clean(st.path(c.refusedTo.Value))
	for _, source := range sources {
		if filepath.Clean(st.path(source.Name)) == path {
			return nil, problem.New("clause", st.at(c.refusedTo), "'%s' is one of the files that are read", c.refusedTo.Value).
				WithHint("give the refused lines a file of their own")
		}
	}
	if pattern != nil && matches(st, pattern, path) {
		return nil, problem.New("clause", st.at(c.refusedTo), "'%s' would be one of the files '%s' the next time", c.refusedTo.Value, pattern.Value).
			WithHint("put the refused lines into another folder")
	}
	return &refusals{file: c.refusedTo, many: pattern != nil}, nil
}

const listedFaults = 3

func (r *refusals) take(line int, raw []byte, f reader.Fault) error {
	if len(r.faults) < listedFaults {
		f.Text = strings.TrimSpace(f.Text)
		r.faults = append(r.faults, f)
	}
	r.lines = append(r.lines, refusedLine{file: f.File, raw: bytes.Clone(raw)})
	return nil
}

// save writes the file, with the heading alone where no line was refused: an
// older file must not be taken for this import's. It begins with the heading of
// its source, so that it can be mended and imported like any other; lines of
// several files are told apart by a last column.
func (r *refusals) save(st *statement, result *reader.Result) error {
	var buffer bytes.Buffer
	first := &result.Files[0]
	if first.Heading != "" { // objects of JSON have none, and name their file nowhere
		buffer.WriteString(first.Heading)
		r.tag(&buffer, first, "source_file")
	}
	facts := map[string]*reader.FileFacts{}
	for i := range result.Files {
		facts[result.Files[i].Name] = &result.Files[i]
	}
	for _, l := range r.lines {
		f := facts[l.file]
		if f.Heading != first.Heading {
			return problem.New("import", st.at(r.file), "lines of '%s' and of '%s' cannot be set aside in one file: their headings differ", first.Name, f.Name).
				WithHint("bring their columns into one order, or import them one by one")
		}
		buffer.Write(l.raw)
		r.tag(&buffer, f, f.Name)
	}
	err := WriteAside(st.path(r.file.Value), func(f *os.File) error {
		_, err := f.Write(buffer.Bytes())
		return err
	})
	if err != nil {
		return fileProblem(err, st.at(r.file), r.file.Value, "be written")
	}
	if len(r.lines) == 0 {
		return nil
	}
	verb := "were"
	if len(r.lines) == 1 {
		verb = "was"
	}
	st.notes.Add(note.Warning, note.Import, "%s %s refused to %s: %s", plural(len(r.lines), "line"), verb, r.file.Value, r.told())
	return nil
}

// tag ends a line, with the name of its file where there are several.
func (r *refusals) tag(b *bytes.Buffer, f *reader.FileFacts, name string) {
	if r.many && f.Heading != "" {
		b.WriteRune(f.Delimiter)
		if strings.ContainsRune(name, f.Delimiter) || strings.ContainsAny(name, "\"\r\n") {
			name = `"` + strings.ReplaceAll(name, `"`, `""`) + `"`
		}
		b.WriteString(name)
	}
	b.WriteByte('\n')
}

// told lists the first faults.
func (r *refusals) told() string {
	text := ""
	for i, f := range r.faults {
		if i > 0 {
			text += "; "
		}
		if r.many {
			text += f.File + " "
		}
		text += faultPlace(f) + faultText(f)
	}
	if len(r.lines) > len(r.faults) {
		text += fmt.Sprintf("; and %d more", len(r.lines)-len(r.faults))
	}
	return text
}
