package engine

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// runFile is RUN 'other.ncell': the statements of another script, whose relative
// paths start at its own folder.
func (s *Session) runFile(ctx context.Context, st *statement, t *lang.Run) error {
	path := st.path(t.File.Value)
	whole, err := filepath.Abs(path)
	if err != nil {
		return err
	}
	if slices.Contains(s.running, whole) {
		return problem.New("run-cycle", st.at(t.File), "'%s' is running already: the scripts RUN each other in a circle", t.File.Value)
	}
	source, err := openSource(st, t.File)
	if err != nil {
		return err
	}
	s.running = append(s.running, whole)
	defer func() { s.running = s.running[:len(s.running)-1] }()
	return s.runText(ctx, t.File.Value, string(source.Data), filepath.Dir(path))
}

// RunFile runs a script file; name is what errors call it.
func (s *Session) RunFile(ctx context.Context, name string) error {
	data, err := os.ReadFile(name)
	if err != nil {
		var pathError *os.PathError
		if errors.As(err, &pathError) {
			err = pathError.Err
		}
		text := fmt.Sprintf("the script '%s' cannot be read: %v", name, err)
		fmt.Fprintln(s.o.Err, text)
		s.report.failed(text, true)
		return ErrFailed
	}
	whole, err := filepath.Abs(name)
	if err != nil {
		return err
	}
	s.running = []string{whole}
	defer func() { s.running = nil }()
	return s.Run(ctx, name, string(data), filepath.Dir(name))
}

// Check parses and binds scripts and computes nothing. Statements that create
// things are bound against the files that they name, into a catalog that is
// thrown away, so that the queries after them know their columns.
func (s *Session) Check(ctx context.Context, names []string) error {
	overlay, err := overlayOf(s.catalog)
	if err != nil {
		return err
	}
	checked := *s
	checked.catalog = overlay
	checked.checkOnly = true
	checked.report = nil
	checked.params = map[string]column.Value{}
	for n, v := range s.params {
		checked.params[n] = v
	}
	failed := false
	for _, name := range names {
		err := checked.RunFile(ctx, name)
		if ctx.Err() != nil {
			return ctx.Err()
		}
		failed = failed || err != nil
	}
	if failed {
		return ErrFailed
	}
	return nil
}

// overlayOf is a catalog in memory with everything that another one has.
func overlayOf(c *catalog.Catalog) (*catalog.Catalog, error) {
	list, err := c.List()
	if err != nil {
		return nil, err
	}
	overlay := catalog.Memory()
	for _, o := range list {
		whole, err := c.Get(o.Key)
		if err != nil {
			continue // a damaged object is told of when a statement uses it
		}
		if err := overlay.Put(*whole, false); err != nil {
			return nil, err
		}
	}
	return overlay, nil
}
