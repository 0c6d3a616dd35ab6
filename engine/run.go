package engine

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/present"
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
		fmt.Fprintf(s.o.Err, "the script '%s' cannot be read: %v\n", name, err)
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

// settings are the names that SET knows.
var settings = []string{"DIGITS", "ROWS"}

var plannedSettings = []string{"CACHE"}

// set is SET name value.
func (s *Session) set(st *statement, t *lang.Set) error {
	word := strings.ToUpper(t.Name.Text)
	switch {
	case word == "DIGITS":
		return s.setCount(st, t, &s.digits, present.MaxDigits)
	case word == "ROWS":
		return s.setCount(st, t, &s.rowLimit, present.MaxTableRows)
	case slices.Contains(plannedSettings, word):
		return problem.NotThereYet(st.at(t), "SET "+word)
	}
	p := problem.New("setting", st.at(t.Name), "there is no setting '%s'", t.Name.Text)
	if near := lang.Nearest(word, settings); near != "" {
		return p.WithHint("did you mean %s?", near)
	}
	return p.WithHint("SET knows %s", listed(settings, 10))
}

// setCount sets a whole number from 1 to most.
func (s *Session) setCount(st *statement, t *lang.Set, to *int, most int64) error {
	refusal := func(at lang.Node) error {
		return problem.New("setting", st.at(at), "SET %s takes a whole number from 1 to %d", strings.ToUpper(t.Name.Text), most)
	}
	if t.Value == nil {
		return refusal(t)
	}
	v, err := s.constant(st, t.Value)
	if err != nil {
		return err
	}
	if v.Null || v.Type != column.Integer || v.I < 1 || v.I > most {
		return refusal(t.Value)
	}
	*to = int(v.I)
	return nil
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
