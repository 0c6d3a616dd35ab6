package engine

import (
	"bufio"
	"context"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"nearcell/engine/exec"
	"nearcell/engine/plan"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// savable are the file endings that SAVE writes.
var savable = map[string]present.Format{
	".csv": present.AsCSV, ".jsonl": present.AsJSONLines, ".json": present.AsJSON,
	".parquet": present.AsParquet, ".xlsx": present.AsXLSX,
	cellsEnding: "",
}

// cellsEnding is that of files of cells as polyhedra, which are not written row by row.
const cellsEnding = ".vtu"

// save writes a query's rows to a file: aside first, then renamed, so that a
// failing query or a full disk never leaves half a file under the name.
func (s *Session) save(ctx context.Context, st *statement, t *lang.Save) error {
	format, err := saveFormat(st, t)
	if err != nil {
		return err
	}
	node, shapes, err := s.prepareSave(st, t)
	if err != nil || s.checkOnly {
		return err
	}
	path := st.path(t.To.Value)
	if _, err := os.Stat(path); err == nil && !t.Overwrite {
		return problem.New("file-exists", st.at(t.To), "the file '%s' is there already", t.To.Value).
			WithHint("SAVE … TO '%s' OVERWRITE replaces it", t.To.Value)
	}
	var rows int64
	err = WriteAside(path, func(f *os.File) error {
		w := bufio.NewWriterSize(f, 1<<16)
		if shapes != nil {
			if rows, err = s.writeCells(ctx, st, node, shapes, w); err != nil {
				return err
			}
			return w.Flush()
		}
		out, err := present.New(format, w, present.Options{Units: t.WithUnits, Formulas: t.QuoteFormulas})
		if err != nil {
			return err
		}
		if err := out.Begin(node.Schema()); err != nil {
			return err
		}
		if err := exec.Run(ctx, s.execEnv(st), node, out.Batch); err != nil {
			return err
		}
		if rows, _, err = out.End(); err != nil {
			return err
		}
		return w.Flush()
	})
	if err != nil {
		return saveProblem(err, st.at(t.To), t.To.Value)
	}
	s.warnOfInputs(st, t)
	if t.WithProvenance {
		if err := s.saveProvenance(st, t, rows); err != nil {
			return err
		}
	} else {
		noteStaleProvenance(st, t)
	}
	if err := s.saveWarnings(st, t); err != nil {
		return err
	}
	s.say("%s saved to %s, %s", plural(rows, "row"), t.To.Value, st.seconds())
	return nil
}

// prepareSave prepares the query; shapes is set for a file of polyhedra.
func (s *Session) prepareSave(st *statement, t *lang.Save) (plan.Node, *relation.Shapes, error) {
	if strings.ToLower(filepath.Ext(t.To.Value)) == cellsEnding {
		return s.prepareCells(st, t.Query)
	}
	node, err := s.prepare(st, t.Query)
	return node, nil, err
}

// saveProblem words what a format cannot hold; other errors are the file's or pass.
func saveProblem(err error, at problem.Place, name string) error {
	if p := cellsProblem(err, at, name); p != nil {
		return p
	}
	var repeated *present.RepeatedColumnError
	switch {
	case errors.As(err, &repeated):
		return problem.New("column-twice", at, "two columns are called '%s', and '%s' tells columns apart by their names", repeated.Name, name).
			WithHint("give one of them another name with AS").Because(err)
	case errors.Is(err, present.ErrSheetFull):
		return problem.New("file-kind", at, "the result does not fit into '%s': %v", name, err).
			WithHint("a .parquet or .csv file has no such limit").Because(err)
	}
	return fileProblem(err, at, name, "be written")
}

func saveFormat(st *statement, t *lang.Save) (present.Format, error) {
	ending := strings.ToLower(filepath.Ext(t.To.Value))
	format, ok := savable[ending]
	if !ok {
		return "", problem.New("file-kind", st.at(t.To), "the ending of '%s' does not say how to write it", t.To.Value).
			WithHint("end it with .csv, .json, .jsonl, .parquet or .xlsx, or with .vtu for cells")
	}
	switch {
	case t.WithUnits && format != present.AsCSV && format != present.AsXLSX:
		return "", problem.New("clause", st.at(t), "WITH UNITS belongs to .csv and .xlsx files")
	case t.QuoteFormulas && format == present.AsXLSX:
		return "", problem.New("clause", st.at(t), "QUOTE FORMULAS belongs to .csv files; in .xlsx files a text is never a formula")
	case t.QuoteFormulas && format != present.AsCSV:
		return "", problem.New("clause", st.at(t), "QUOTE FORMULAS belongs to .csv files")
	}
	return format, nil
}

// WriteAside fills a temporary file beside path and renames it once it is whole
// and on the disk. The folder is made if it is not there.
func WriteAside(path string, fill func(*os.File) error) (err error) {
	folder := filepath.Dir(path)
	if err := os.MkdirAll(folder, 0o777); err != nil {
		return err
	}
	f, err := os.CreateTemp(folder, "."+filepath.Base(path)+".*")
	if err != nil {
		return err
	}
	defer func() {
		if err != nil {
			f.Close()
			os.Remove(f.Name())
		}
	}()
	if err := fill(f); err != nil {
		return err
	}
	if err := f.Sync(); err != nil {
		return err
	}
	if err := f.Chmod(0o644); err != nil {
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	if err := os.Rename(f.Name(), path); err != nil {
		return err
	}
	if d, err := os.Open(folder); err == nil { // the name is to survive a power cut, too
		_ = d.Sync() // some systems do not know how
		d.Close()
	}
	return nil
}

// fileProblem words an error of the file system; other errors pass.
func fileProblem(err error, at problem.Place, name, verb string) error {
	var pathError *fs.PathError
	var linkError *os.LinkError
	switch {
	case errors.As(err, &pathError):
		return problem.New("file", at, "the file '%s' cannot %s: %v", name, verb, pathError.Err).Because(err)
	case errors.As(err, &linkError):
		return problem.New("file", at, "the file '%s' cannot %s: %v", name, verb, linkError.Err).Because(err)
	}
	return err
}
