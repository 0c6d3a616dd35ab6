package engine

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// What a requirement comes to.
const (
	pass       = "PASS"
	fail       = "FAIL"
	notDecided = "NOT DECIDED"
)

// verdict is what one REQUIRE came to.
type verdict struct {
	label    string
	result   string
	rows     int64 // that offend, of NONE
	none     bool
	reason   string
	script   string
	line     int
	tree     *lang.Require
	text     string // of the statement
	warnings []string
}

// require decides a requirement, says so and remembers it for VERDICTS.
func (s *Session) require(ctx context.Context, st *statement, t *lang.Require) error {
	v := verdict{label: t.Label.Value, none: t.None != nil, script: st.source.Name, tree: t,
		line: 1 + strings.Count(st.source.Text[:t.Span().Start], "\n"),
		text: st.source.Text[t.Span().Start:t.Span().End]}
	if strings.TrimSpace(v.label) == "" {
		return problem.New("clause", st.at(t.Label), "a requirement needs a name").WithHint("REQUIRE 'A1 nothing above 8 °C' …")
	}
	var err error
	if v.none {
		err = s.requireNone(ctx, st, t, &v)
	} else {
		err = s.requireCondition(ctx, st, t, &v)
	}
	if err != nil || s.checkOnly {
		return err
	}
	for _, l := range st.notes.Lines() {
		if l.Level == note.Warning {
			v.warnings = append(v.warnings, l.Text)
		}
	}
	if v.result == notDecided {
		st.notes.Add(note.Warning, note.Output, "'%s' is not decided: %s", v.label, v.reason)
	}
	s.verdicts = append(s.verdicts, v)
	s.report.decided(&v)
	text := v.result + ": " + v.label
	if v.result == fail {
		text += " (" + v.reason + ")"
	}
	fmt.Fprintln(s.o.Err, text)
	return nil
}

// FailedRequirements is the number of requirements that were not met so far.
func (s *Session) FailedRequirements() int {
	n := 0
	for i := range s.verdicts {
		if s.verdicts[i].result == fail {
			n++
		}
	}
	return n
}

// requireCondition decides REQUIRE 'what' condition.
func (s *Session) requireCondition(ctx context.Context, st *statement, t *lang.Require, v *verdict) error {
	at := lang.At{Pos: t.Condition.Span()}
	items := []*lang.Item{{At: at, Expr: t.Condition}}
	compared, isComparison := t.Condition.(*lang.Binary)
	if isComparison = isComparison && comparisons[compared.Op]; isComparison {
		items = append(items, &lang.Item{At: at, Expr: compared.Left}, &lang.Item{At: at, Expr: compared.Right})
	}
	q := &lang.Query{At: at, Body: &lang.Select{At: at, Items: items}}
	written, err := bind.Query(s.bindEnv(st), q)
	if err != nil {
		return err
	}
	if f := written.Schema()[0]; f.Type != column.Boolean && f.Type != column.Null {
		return problem.New("types", st.at(t.Condition), "REQUIRE needs a condition, and this is %s", f.Type).
			WithHint("compare it: (SELECT MAX(temp) FROM log) <= 8")
	}
	node, err := plan.Optimise(written)
	if err != nil || s.checkOnly {
		return err
	}
	table, err := exec.Collect(ctx, s.execEnv(st), node)
	if err != nil {
		return err
	}
	value := table.Cols[0].Value(0)
	looks, err := s.lookAt(ctx, st, v, queriesIn(written))
	if err != nil {
		return err
	}
	switch {
	case value.Null:
		v.result, v.reason = notDecided, "the condition is neither TRUE nor FALSE, since a value in it is missing"
		return nil
	case value.I == 0:
		v.result, v.reason = fail, "the condition is FALSE"
		if isComparison {
			s.nearComparison(st, v, compared, table)
			v.reason = fmt.Sprintf("%s %s %s is FALSE", s.valueText(&table.Cols[1]), compared.Op, s.valueText(&table.Cols[2]))
		}
		return nil
	}
	if isComparison {
		s.nearComparison(st, v, compared, table)
	}
	v.result = pass
	return s.examine(ctx, st, v, looks)
}

// nearComparison notes a value that its limit can hardly tell apart.
func (s *Session) nearComparison(st *statement, v *verdict, t *lang.Binary, table *column.Table) {
	value, limit := &table.Cols[1], &table.Cols[2]
	if t.Op == lang.Equals || t.Op == lang.NotEquals || value.Type != column.Real && limit.Type != column.Real {
		return
	}
	var n expr.NearRows
	n.Look(value, limit, nil, 1, 0)
	if text := function.NearText("'"+v.label+"'", st.source.Text[t.Left.Span().Start:t.Left.Span().End], s.valueText(limit), n.Near, n.Equal); text != "" {
		st.notes.Add(note.Note, note.Rows, "%s", text)
	}
}

var comparisons = map[lang.Op]bool{lang.Equals: true, lang.NotEquals: true, lang.Less: true, lang.LessOrEqual: true,
	lang.Greater: true, lang.GreaterOrEqual: true}

// valueText is the first value of a column, with its unit.
func (s *Session) valueText(c *column.Vector) string {
	value := c.Value(0)
	text := value.String()
	if value.Type == column.Real && !value.Null {
		text = s.number(value.F)
		// what looks like a number that it is not must not look so beside a verdict
		if f, err := strconv.ParseFloat(text, 64); err == nil && f != value.F && math.Abs(f-value.F) <= function.NearLimit {
			text = column.FormatReal(value.F)
		}
	}
	if u := c.Unit.String(); u != "" {
		text += " " + u
	}
	return text
}

// queriesIn are the plans of the queries in a condition that do not depend on a
// row outside them.
func queriesIn(n plan.Node) []plan.Node {
	var list []plan.Node
	plan.Everywhere(n, func(n plan.Node) {
		for _, q := range plan.QueriesOf(n) {
			if inside := q.Query.(*plan.Query); len(q.Outer) == 0 && !plan.ReadsOuter(inside.Plan) {
				list = append(list, inside.Plan)
			}
		}
	})
	return list
}

// requireNone decides REQUIRE 'what' NONE (query).
func (s *Session) requireNone(ctx context.Context, st *statement, t *lang.Require, v *verdict) error {
	written, err := bind.Query(s.bindEnv(st), t.None)
	if err != nil {
		return err
	}
	node, err := plan.Optimise(written)
	if err != nil || s.checkOnly {
		return err
	}
	first := ""
	err = exec.Run(ctx, s.execEnv(st), node, func(b *column.Batch) error {
		if v.rows == 0 && b.N > 0 {
			first = s.rowText(node.Schema(), b)
		}
		v.rows += int64(b.N)
		return nil
	})
	if err != nil {
		return err
	}
	looks, err := s.lookAt(ctx, st, v, []plan.Node{written})
	if err != nil {
		return err
	}
	switch {
	case v.rows > 1:
		v.result, v.reason = fail, plural(v.rows, "row")+", the first: "+first
		return nil
	case v.rows == 1:
		v.result, v.reason = fail, "1 row: "+first
		return nil
	}
	v.result = pass
	return s.examine(ctx, st, v, looks)
}

// rowText is the first row of a batch, as far as it tells which it is.
func (s *Session) rowText(schema column.Schema, b *column.Batch) string {
	const shown = 4
	var parts []string
	for i := range b.Cols {
		if len(parts) == shown {
			parts = append(parts, "…")
			break
		}
		value := b.Cols[i].Value(0)
		if value.Null {
			continue
		}
		c := b.Cols[i]
		c.Unit = schema[i].Unit
		parts = append(parts, schema[i].Name+" = "+s.valueText(&c))
	}
	return strings.Join(parts, ", ")
}

// examine turns a PASS that rests on no row at all into NOT DECIDED.
func (s *Session) examine(ctx context.Context, st *statement, v *verdict, looks []looked) error {
	for _, c := range looks {
		from := plan.SourceName(c.at.Input)
		switch {
		case c.rows == 0:
			quiet, err := s.quiet(ctx, st, c.at.Input)
			if err != nil {
				return err
			}
			if !quiet {
				v.result, v.reason = notDecided, "no row of "+from+" came as far as the condition"
				return nil
			}
		case c.unknown == c.rows:
			v.result, v.reason = notDecided, fmt.Sprintf("values are missing in all %s of %s, so it is not known of any whether it offends",
				plural(c.rows, "row"), from)
			return nil
		case c.unknown > 0:
			st.notes.Add(note.Note, note.Rows, "'%s': of %d of the %s of %s it is not known whether they offend, since values are missing",
				v.label, c.unknown, plural(c.rows, "row"), from)
		}
	}
	return nil
}

// quiet reports whether an input without a row comes from a relation that looked
// at rows and found nothing, such as an excursion.
func (s *Session) quiet(ctx context.Context, st *statement, n plan.Node) (bool, error) {
	for _, in := range plan.Quiet(n) {
		c, err := s.look(ctx, st, plan.Examined{Input: in})
		if err != nil || c.rows > 0 {
			return err == nil, err
		}
	}
	return false, nil
}

// looked is what was counted of rows before a condition.
type looked struct {
	at            plan.Examined
	rows, unknown int64
	near          []expr.NearRows // of each of the limits
}

// look counts the rows of an input, of how many a condition is unknown, and how
// many lie at its limits. What it computes has been computed for the answer, whose
// notes tell of it.
func (s *Session) look(ctx context.Context, st *statement, x plan.Examined) (looked, error) {
	limits := expr.Limits(x.Cond)
	c := looked{at: x, near: make([]expr.NearRows, len(limits))}
	p := &plan.Project{Input: x.Input}
	add := func(e expr.Expr) {
		p.Exprs = append(p.Exprs, e)
		p.Fields = append(p.Fields, column.Field{Name: fmt.Sprint("c", len(p.Fields)), Type: e.Type()})
	}
	if x.Cond == nil {
		add(expr.NewConst(column.Bool(true), problem.Place{}))
	} else {
		add(x.Cond)
	}
	for _, l := range limits {
		if err := addNear(add, l); err != nil {
			return c, err
		}
	}
	node, err := plan.Optimise(plan.Apart(p))
	if err != nil {
		return c, err
	}
	env := s.execEnv(st)
	env.Notes = &note.Notes{}
	err = exec.Run(ctx, env, node, func(b *column.Batch) error {
		c.rows += int64(b.N)
		c.unknown += int64(b.Cols[0].NullCount())
		for i, l := range limits {
			against := &b.Cols[2*i+2]
			if l.Against == nil {
				against = nil
			}
			c.near[i].Look(&b.Cols[2*i+1], against, nil, b.N, l.At)
		}
		return nil
	})
	return c, err
}

// addNear adds what a limit compares, and with what, where the comparison is come to.
func addNear(add func(expr.Expr), l expr.Limit) error {
	against := l.Against
	if against == nil {
		against = expr.NewConst(column.Float(l.At), problem.Place{})
	}
	for _, e := range []expr.Expr{l.X, against} {
		if l.When != nil {
			var err error
			if e, err = expr.NewCase(nil, []expr.When{{Cond: l.When, Result: e}}, nil, problem.Place{}); err != nil {
				return err
			}
		}
		add(e)
	}
	return nil
}

// lookAt looks at what queries put their conditions to, and notes the readings
// that the limits in them can hardly tell apart.
func (s *Session) lookAt(ctx context.Context, st *statement, v *verdict, queries []plan.Node) ([]looked, error) {
	var all []looked
	for _, q := range queries {
		for _, x := range plan.ExaminedBy(q) {
			c, err := s.look(ctx, st, x)
			if err != nil {
				return nil, err
			}
			all = append(all, c)
			for i, l := range expr.Limits(x.Cond) {
				if text := function.NearText("'"+v.label+"'", l.X.String(), l.Text(), c.near[i].Near, c.near[i].Equal); text != "" {
					st.notes.Add(note.Note, note.Rows, "%s", text)
				}
			}
		}
	}
	return all, nil
}
