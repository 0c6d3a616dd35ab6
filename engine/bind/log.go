package bind

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

func init() {
	rowClauses["SERIES"] = (*binder).seriesClauses
	rowClauses["AUDIT"] = (*binder).auditClauses
	rowClauses["EPISODES"] = (*binder).episodeClauses
}

// Examples of what the relations over a log cannot do without.
const (
	exampleBy    = "BY logger ON t"
	exampleEvery = "EVERY INTERVAL '15' MINUTE"
)

func (b *binder) seriesClauses(rel *relation.Bound, r *lang.Relation, in bound) ([]plan.Node, error) {
	if err := b.logClauses(rel, r, in); err != nil {
		return nil, err
	}
	c := &rel.Log
	if c.Every == 0 {
		return nil, b.needsClause(rel, r, "EVERY", exampleEvery)
	}
	if c.Method == "" {
		c.Method = "LINEAR"
	}
	if c.Stamp == "" {
		c.Stamp = "START"
		if c.Method == "LINEAR" || c.Method == "HOLD" {
			c.Stamp = "INSTANT"
		}
	}
	return nil, nil
}

func (b *binder) auditClauses(rel *relation.Bound, r *lang.Relation, in bound) ([]plan.Node, error) {
	if err := b.logClauses(rel, r, in); err != nil {
		return nil, err
	}
	for i := range rel.Input {
		if !slices.Contains(rel.Clauses.By, i) && !slices.Contains(rel.Clauses.On, i) {
			rel.Log.Readings = append(rel.Log.Readings, i)
		}
	}
	for _, c := range r.Clauses {
		if c, ok := c.(*lang.ExpectingClause); ok {
			n, err := b.expecting(rel, c)
			return []plan.Node{n}, err
		}
	}
	return nil, nil
}

func (b *binder) episodeClauses(rel *relation.Bound, r *lang.Relation, in bound) ([]plan.Node, error) {
	if err := b.logClauses(rel, r, in); err != nil {
		return nil, err
	}
	switch {
	case len(rel.Clauses.For) == 0:
		return nil, b.needsClause(rel, r, "FOR, the reading", "FOR temp ABOVE 8")
	}
	var limit *lang.AboveClause
	var until *lang.UntilClause
	for _, c := range r.Clauses {
		switch c := c.(type) {
		case *lang.AboveClause:
			limit = c
		case *lang.UntilClause:
			until = c
		}
	}
	if limit == nil {
		return nil, b.needsClause(rel, r, "ABOVE or BELOW, the limit", "FOR temp ABOVE 8")
	}
	return nil, b.returns(rel, limit, until)
}

// returns checks that an excursion above a limit ends below another that is not above
// it, and the reverse.
func (b *binder) returns(rel *relation.Bound, limit *lang.AboveClause, until *lang.UntilClause) error {
	c := &rel.Log
	if until == nil {
		return nil
	}
	over, back := "above", "below"
	if limit.Below {
		over, back = back, over
	}
	switch {
	case limit.Below == until.Below:
		return problem.New("clauses", b.at(until), "an excursion %s %s ends %s a limit, not %s one", over, column.FormatReal(c.Limit), back, over).
			WithHint("write UNTIL %s", strings.ToUpper(back))
	case !limit.Below && c.Until > c.Limit, limit.Below && c.Until < c.Limit:
		return problem.New("clauses", b.at(until), "an excursion %s %s cannot end at %s, farther %s", over, column.FormatReal(c.Limit),
			column.FormatReal(c.Until), over).WithHint("UNTIL takes the limit itself or one on the way back from it")
	}
	return nil
}

// logClauses binds the clauses that the relations over a log share.
func (b *binder) logClauses(rel *relation.Bound, r *lang.Relation, in bound) error {
	// FOR first: limits are in the unit of the reading
	for _, first := range []bool{true, false} {
		for _, c := range r.Clauses {
			if _, reading := c.(*lang.ForClause); reading != first {
				continue
			}
			if err := b.logClause(rel, c); err != nil {
				return err
			}
		}
	}
	if len(rel.Clauses.By) == 0 {
		return b.needsClause(rel, r, "BY, what tells the loggers apart, and ON, the time of the readings", exampleBy)
	}
	b.carried(rel, in.node)
	return nil
}

func (b *binder) logClause(rel *relation.Bound, c lang.Clause) error {
	log := &rel.Log
	var err error
	switch c := c.(type) {
	case *lang.ByClause:
		err = b.byClause(rel, c)
	case *lang.ForClause:
		err = b.forClause(rel, c)
	case *lang.EveryClause:
		err = b.everyClause(rel, c)
	case *lang.MethodClause:
		log.Method, err = b.word(&c.Name, "a method of SERIES", "LINEAR", "HOLD", "MEAN", "MAX", "MIN")
		if err == nil && c.Argument != nil {
			err = problem.New("arguments", b.at(c), "METHOD %s takes no value", log.Method)
		}
	case *lang.StampClause:
		log.Stamp, err = b.word(&c.Where, "a place of a stamp", "START", "INSTANT", "END")
	case *lang.LongestGapClause:
		log.LongestGap, err = b.duration(c.Value, "LONGEST GAP")
	case *lang.BridgingClause:
		log.Bridging, err = b.duration(c.Value, "BRIDGING")
	case *lang.AboveClause:
		log.Below = c.Below
		log.Limit, err = b.limitOf(rel, c.Value, clauseName(c))
	case *lang.UntilClause:
		log.HasUntil = true
		log.Until, err = b.limitOf(rel, c.Value, "UNTIL")
	}
	return err
}

func (b *binder) byClause(rel *relation.Bound, c *lang.ByClause) error {
	for i := range c.Names {
		at, err := b.column(rel, &c.Names[i])
		if err != nil {
			return err
		}
		if slices.Contains(rel.Clauses.By, at) {
			return problem.New("same-name", b.at(&c.Names[i]), "BY names '%s' twice", c.Names[i].Text)
		}
		switch f := rel.Input[at]; f.Type {
		case column.Null, column.Point, column.Real:
			return problem.New("types", b.at(&c.Names[i]), "'%s' of %s is %s, which tells no loggers apart", f.Name, rel.Name, f.Type).
				WithHint("BY takes the column with the name or the number of the logger")
		}
		rel.Clauses.By = append(rel.Clauses.By, at)
	}
	if c.On.Text == "" {
		return problem.New("needs-clause", b.at(c), "%s needs ON, the time of the readings", rel.Def.Noun).WithHint("for example BY %s ON t", c.Names[0].Text)
	}
	at, err := b.column(rel, &c.On)
	if err != nil {
		return err
	}
	switch f := rel.Input[at]; {
	case f.Type != column.Timestamp:
		return problem.New("types", b.at(&c.On), "'%s' of %s is %s, not a TIMESTAMP", f.Name, rel.Name, f.Type).
			WithHint("CREATE TABLE … TIME (%s 'DD.MM.YYYY hh:mm:ss') reads time stamps of any form", f.Name)
	case slices.Contains(rel.Clauses.By, at):
		return problem.New("same-name", b.at(&c.On), "'%s' cannot be the logger and the time at once", c.On.Text)
	}
	rel.Clauses.On = []int{at}
	return nil
}

// forClause is the one reading that the relation is about.
func (b *binder) forClause(rel *relation.Bound, c *lang.ForClause) error {
	if len(c.Names) > 1 {
		return problem.New("clauses", b.at(c), "%s is about one reading, and FOR names %d", rel.Def.Noun, len(c.Names))
	}
	at, err := b.column(rel, &c.Names[0])
	if err != nil {
		return err
	}
	if f := rel.Input[at]; !f.Type.Numeric() || f.Type.Counted() && f.Type != column.Integer {
		return problem.New("types", b.at(&c.Names[0]), "'%s' of %s is %s, not a number", f.Name, rel.Name, f.Type)
	}
	rel.Clauses.For = []int{at}
	return nil
}

func (b *binder) everyClause(rel *relation.Bound, c *lang.EveryClause) error {
	log := &rel.Log
	var err error
	if log.Every, err = b.duration(c.Value, "EVERY"); err != nil || c.From == nil {
		return err
	}
	log.Ranged = true
	if log.From, err = b.instant(c.From, "FROM"); err != nil {
		return err
	}
	if log.To, err = b.instant(c.To, "TO"); err != nil {
		return err
	}
	if log.To <= log.From {
		return problem.New("clauses", b.spanning(c.From, c.To), "FROM … TO … is empty: it ends at %s and begins at %s",
			column.FormatTimestamp(log.To), column.FormatTimestamp(log.From)).WithHint("the end itself does not belong to it any more")
	}
	return nil
}

// maxTime is as far from 1970 as clauses of time reach, in microseconds.
const maxTime = 1 << 60

// duration is the value of a constant that must be an INTERVAL above 0.
func (b *binder) duration(e lang.Expr, clause string) (int64, error) {
	v, err := b.value(e)
	switch {
	case err != nil:
		return 0, err
	case v.Null || v.Type != column.Interval:
		return 0, problem.New("types", b.at(e), "%s needs an INTERVAL, not %s", clause, typeOrNull(v)).WithHint("write INTERVAL '15' MINUTE")
	case v.I <= 0 || v.I > maxTime:
		return 0, problem.New("clauses", b.at(e), "%s needs a time above 0, not %s", clause, v)
	}
	return v.I, nil
}

func (b *binder) instant(e lang.Expr, clause string) (int64, error) {
	v, err := b.value(e)
	switch {
	case err != nil:
		return 0, err
	case v.Null || v.Type != column.Timestamp:
		return 0, problem.New("types", b.at(e), "%s needs a TIMESTAMP, not %s", clause, typeOrNull(v)).WithHint("write TIMESTAMP '2031-04-07 08:15:00'")
	}
	return v.I, nil
}

func typeOrNull(v column.Value) string {
	if v.Null {
		return "NULL"
	}
	return v.Type.String()
}

// limitOf is a limit of a reading, in the reading's unit where it has one.
func (b *binder) limitOf(rel *relation.Bound, e lang.Expr, clause string) (float64, error) {
	f, err := b.real(e, clause)
	if err != nil {
		return 0, err
	}
	v, err := b.value(e)
	if err == nil && v.Unit != nil && len(rel.Clauses.For) > 0 {
		if u := rel.Input[rel.Clauses.For[0]].Unit; u != nil && !column.SameUnit(u, v.Unit) {
			return 0, problem.New("units", b.at(e), "%s is in %s and the reading in %s", clause, v.Unit, u)
		}
	}
	return f, err
}

// word is one of the words that may stand in a place.
func (b *binder) word(n *lang.Name, what string, words ...string) (string, error) {
	for _, w := range words {
		if n.Is(w) {
			return w, nil
		}
	}
	p := problem.New("clauses", b.at(n), "'%s' is not %s", n.Text, what)
	if near := lang.Nearest(strings.ToUpper(n.Text), words); near != "" {
		return "", p.WithHint("did you mean %s?", near)
	}
	return "", p.WithHint("it is one of %s", strings.Join(words, ", "))
}

// carried finds the columns that come from a campaign or a register while the stamps come
// from elsewhere: where a logger hangs is known whatever it measured.
func (b *binder) carried(rel *relation.Bound, in plan.Node) {
	times := plan.ScanOf(in, rel.Clauses.On[0])
	for i, register := range plan.Registers(in, rel.Clauses.On[0]) {
		s := plan.ScanOf(in, i)
		register = register || s != nil && s != times && s.Kind == "campaign"
		if register && !slices.Contains(rel.Clauses.By, i) && i != rel.Clauses.On[0] {
			rel.Log.Carried = append(rel.Log.Carried, i)
		}
	}
}

// expecting binds the loggers that were to report, in the order of BY: found by their
// names or, where there are as many columns, by their places.
func (b *binder) expecting(rel *relation.Bound, c *lang.ExpectingClause) (plan.Node, error) {
	in, _, err := b.sites(&lang.Relation{At: c.At, Operand: c.Operand})
	if err != nil {
		return nil, err
	}
	schema := fields(in.scope)
	project := &plan.Project{Input: in.node}
	for k, by := range rel.Clauses.By {
		want := rel.Input[by]
		hits := named(schema, lang.Fold(want.Name))
		at := k
		switch {
		case len(hits) == 1:
			at = hits[0]
		case len(schema) != len(rel.Clauses.By):
			return nil, problem.New("no-column", b.at(c.Operand), "EXPECTING gives no column '%s'", want.Name).
				WithHint("EXPECTING (SELECT %s FROM …) names the loggers", want.Name)
		}
		if schema[at].Type != want.Type {
			return nil, problem.New("types", b.at(c.Operand), "'%s' of EXPECTING is %s, '%s' of %s is %s", schema[at].Name, schema[at].Type,
				want.Name, rel.Name, want.Type).WithHint("CAST(%s AS %s) AS %s", schema[at].Name, want.Type, want.Name)
		}
		project.Exprs = append(project.Exprs, expr.NewColumn(at, schema[at], b.at(c.Operand)))
		project.Fields = append(project.Fields, schema[at])
	}
	rel.Beside = []relation.Beside{{Name: b.operandName(c.Operand), Input: project.Fields, Clause: "EXPECTING"}}
	return project, nil
}
