package engine

import (
	"context"
	"fmt"
	"io"

	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// prepare binds a query and improves its plan.
func (s *Session) prepare(st *statement, q *lang.Query) (plan.Node, error) {
	return prepareIn(s.bindEnv(st), q)
}

func prepareIn(env *bind.Env, q *lang.Query) (plan.Node, error) {
	node, err := bind.Query(env, q)
	if err != nil {
		return nil, err
	}
	return plan.Optimise(node)
}

// query runs a query and prints its result.
func (s *Session) query(ctx context.Context, st *statement, t *lang.QueryStatement) error {
	node, err := s.prepare(st, t.Query)
	if err != nil || s.checkOnly {
		return err
	}
	return s.show(st, func(w present.Writer) error {
		if err := w.Begin(node.Schema()); err != nil {
			return err
		}
		return exec.Run(ctx, s.execEnv(st), node, w.Batch)
	})
}

// showTable prints a table that the engine made itself (LIST, DESCRIBE).
func (s *Session) showTable(st *statement, t *column.Table) error {
	if s.checkOnly {
		return nil
	}
	return s.show(st, func(w present.Writer) error {
		if err := w.Begin(t.Schema); err != nil {
			return err
		}
		b := t.Batch(0, t.N)
		return w.Batch(&b)
	})
}

// show prints one result: an empty line between it and the one before, the
// rows, and below them how many there were.
func (s *Session) show(st *statement, fill func(present.Writer) error) error {
	w, err := s.writer(st)
	if err != nil {
		return err
	}
	if err := fill(w); err != nil {
		return err
	}
	rows, unwritten, err := w.End()
	if err != nil {
		return err
	}
	s.results++
	s.noteLeftOut(st, w, rows, unwritten)
	s.say("%s, %s", plural(rows, "row"), st.seconds())
	return nil
}

// lateSeparator writes the empty line between two results before the first
// byte of the second one, so that a failing query leaves none behind.
type lateSeparator struct {
	w       io.Writer
	pending bool
}

func (l *lateSeparator) Write(p []byte) (int, error) {
	if l.pending && len(p) > 0 {
		l.pending = false
		if _, err := io.WriteString(l.w, "\n"); err != nil {
			return 0, err
		}
	}
	return l.w.Write(p)
}

// plural counts things: 1 row, 54 rows, 1,200 rows are written without marks.
func plural[N int | int64](n N, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// constant computes an expression without columns.
func (s *Session) constant(st *statement, e lang.Expr) (column.Value, error) {
	return bind.Value(s.bindEnv(st), e)
}

// Let sets a value from outside the script (--let name=value): it wins over LET.
// The value is read as an expression of the language; what is none is a text.
func (s *Session) Let(name, text string) error {
	source := &problem.Source{Name: "--let " + name, Text: text}
	st := &statement{source: source, notes: &note.Notes{}}
	value := column.String(text)
	if e, err := lang.ParseExpr(text); err == nil && isLiteral(e) {
		v, err := s.constant(st, e)
		if err != nil {
			return err
		}
		value = v
	}
	s.params[lang.Fold(name)] = value
	s.fixed[lang.Fold(name)] = true
	return nil
}

// isLiteral reports whether an expression stands for a value by itself, so that
// --let site=hall is the text 'hall' and --let limit=8 the number 8.
func isLiteral(e lang.Expr) bool {
	found := true
	lang.Walk(e, func(n lang.Node) bool {
		switch n.(type) {
		case *lang.Column, *lang.Call, *lang.Param, *lang.Subquery, *lang.Exists:
			found = false
		}
		return found
	})
	return found
}
