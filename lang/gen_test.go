package lang

import (
	"pgregory.net/rapid"
)

// gen draws random trees over the whole grammar, in the form in which the parser gives
// them (no bracketed query without a need for the brackets, and the like).
type gen struct {
	t     *rapid.T
	depth int
}

func (g *gen) int(n int) int { return rapid.IntRange(0, n-1).Draw(g.t, "n") }

func (g *gen) coin() bool { return g.int(2) == 0 }

// rarely is true less often the deeper the tree is.
func (g *gen) rarely() bool { return g.int(3+2*g.depth) == 0 }

func pick[T any](g *gen, of ...T) T { return of[g.int(len(of))] }

func some[T any](g *gen, least, most int, make func() T) []T {
	var list []T
	for range least + g.int(most-least+1) {
		list = append(list, make())
	}
	return list
}

// maybe makes something or leaves it out.
func maybe[T any](g *gen, make func() T) (none T) {
	if g.rarely() {
		return make()
	}
	return none
}

var bareWords = append(append([]string{"a", "Temp", "größe", "σ", "x1", "_y", "L17", "l_2"}, StopWords()...), PlainWords()...)

func (g *gen) word() Name { return Name{Text: rapid.SampledFrom(bareWords).Draw(g.t, "word")} }

func (g *gen) name() Name {
	if g.int(4) == 0 {
		return Name{Quoted: true, Text: pick(g, "select", "a b", `say "x"`, "Temp", "1st", "temp°", "FROM", "--", ";")}
	}
	return g.word()
}

func (g *gen) anyWord() Name {
	if g.int(4) == 0 {
		return Name{Text: rapid.SampledFrom(ReservedWords()).Draw(g.t, "reserved")}
	}
	return g.name()
}

func (g *gen) names() []Name { return some(g, 1, 3, g.name) }

func (g *gen) text() *Text {
	return &Text{Value: pick(g, "", "x", "it's", "''", "a;b", "-- no", "/*", `"`, "8 °C", "日本", "a\nb", "2031-04-07")}
}

func (g *gen) texts() []*Text { return some(g, 1, 3, g.text) }

func (g *gen) number() *Number {
	if g.coin() {
		return &Number{Text: pick(g, "0", "1", "42", "007", "99999999999999999999"), IsInteger: true}
	}
	return &Number{Text: pick(g, "0.5", ".5", "1e3", "1.5E-7", "12e+2")}
}

func (g *gen) param() *Param { return &Param{Name: pick(g, "a", "limit", "select", "größe")} }

// deeper runs with the depth counted.
func deeper[T any](g *gen, make func() T) T {
	g.depth++
	defer func() { g.depth-- }()
	return make()
}

func (g *gen) expr() Expr {
	return deeper(g, func() Expr {
		if g.depth > 5 || g.int(3) == 0 {
			return g.atom()
		}
		switch g.int(14) {
		case 0, 1, 2, 3:
			op := pick(g, Or, And, Equals, NotEquals, Less, LessOrEqual, Greater, GreaterOrEqual, Plus, Minus, Concat, Times, Divide, Modulo, Power)
			return &Binary{Op: op, Left: g.expr(), Right: g.expr()}
		case 4:
			return &Unary{Op: pick(g, Plus, Minus, Not), Operand: g.expr()}
		case 5:
			return &Between{Not: g.coin(), Operand: g.expr(), Low: g.expr(), High: g.expr()}
		case 6:
			return g.in()
		case 7:
			return &Like{Not: g.coin(), Operand: g.expr(), Pattern: g.expr(), Escape: maybe(g, g.expr)}
		case 8:
			return g.is()
		case 9:
			return &AtTimeZone{Operand: g.expr(), Zone: g.expr()}
		case 10:
			return g.caseExpr()
		case 11:
			return &Cast{Operand: g.expr(), Type: g.word()}
		case 12:
			return g.subquery()
		}
		return g.call(true)
	})
}

func (g *gen) exprs() []Expr { return some(g, 1, 3, g.expr) }

func (g *gen) atom() Expr {
	switch g.int(9) {
	case 0:
		return g.number()
	case 1:
		return g.text()
	case 2:
		return &Boolean{Value: g.coin()}
	case 3:
		return &Null{}
	case 4:
		return g.param()
	case 5:
		return &Timestamp{Text: g.text()}
	case 6:
		return &Interval{Text: g.text(), Unit: g.word()}
	case 7:
		return &Column{Qualifier: g.name(), Name: g.anyWord()}
	}
	return &Column{Name: g.name()}
}

func (g *gen) in() Expr {
	if g.rarely() {
		return &Quantified{Op: pick(g, Equals, NotEquals, Less, LessOrEqual, Greater, GreaterOrEqual), All: g.coin(), Operand: g.expr(), Query: g.query()}
	}
	e := &In{Not: g.coin(), Operand: g.expr()}
	if g.rarely() {
		e.Query = g.query()
		return e
	}
	e.List = g.exprs()
	if _, lone := e.List[0].(*Subquery); lone && len(e.List) == 1 {
		e.List = append(e.List, g.number()) // IN ((query)) is IN (query)
	}
	return e
}

func (g *gen) is() Expr {
	e := &Is{Not: g.coin(), Operand: g.expr(), What: pick(g, IsNull, IsTrue, IsFalse, IsUnknown, IsDistinctFrom)}
	if e.What == IsDistinctFrom {
		e.From = g.expr()
	}
	return e
}

func (g *gen) caseExpr() Expr {
	return &Case{Operand: maybe(g, g.expr), Else: maybe(g, g.expr),
		Whens: some(g, 1, 2, func() *When { return &When{Condition: g.expr(), Result: g.expr()} })}
}

func (g *gen) subquery() Expr {
	switch {
	case g.rarely():
		return &Subquery{Query: g.query()}
	case g.rarely():
		return &Exists{Query: g.query()}
	case g.rarely():
		return &Overlaps{Left: g.row(), Right: g.row()}
	}
	return g.atom()
}

func (g *gen) row() *Row { return &Row{Values: g.exprs()} }

func (g *gen) call(withMore bool) *Call {
	c := &Call{Name: g.word()}
	for c.Name.Is("VALUES") {
		c.Name.Text = "f"
	}
	switch g.int(5) {
	case 0:
		c.Star = true
	case 1:
	case 2:
		c.Args = []Expr{g.expr()}
		c.Along, c.AtValue = g.expr(), g.expr()
		c.Outside = pick(g, Name{}, Name{Text: "NULL"}, g.word())
	default:
		c.Distinct = g.rarely()
		c.Args = g.exprs()
		for range len(c.Args) - 1 {
			c.Separators = append(c.Separators, pick(g, Comma, Comma, FromWord, ForWord))
		}
		plain := true
		for _, s := range c.Separators {
			plain = plain && s == Comma
		}
		if plain {
			c.Separators = nil
		}
		c.OrderBy = maybe(g, g.keys)
	}
	if withMore {
		c.Filter, c.Weight = maybe(g, g.expr), maybe(g, g.weight)
		c.Over = maybe(g, g.window)
	}
	return c
}

func (g *gen) weight() Expr {
	if g.coin() {
		return g.call(false)
	}
	return g.expr()
}

func (g *gen) keys() []*Key {
	return some(g, 1, 2, func() *Key {
		return &Key{Expr: g.expr(), Descending: g.coin(), Nulls: pick(g, NullsDefault, NullsFirst, NullsLast)}
	})
}

func (g *gen) window() *Window {
	w := &Window{PartitionBy: maybe(g, g.exprs), OrderBy: maybe(g, g.keys)}
	if g.coin() {
		w.Frame = &Frame{Range: g.coin(), Start: g.bound()}
		if g.coin() {
			w.Frame.End = g.bound()
		}
	}
	return w
}

func (g *gen) bound() *Bound {
	b := &Bound{Kind: pick(g, UnboundedPreceding, UnboundedFollowing, CurrentRow, Preceding, Following)}
	if b.Kind == Preceding || b.Kind == Following {
		b.Offset = g.expr()
		if g.int(4) == 0 {
			b.Offset = &Column{Name: Name{Text: "unbounded"}}
		}
	}
	return b
}

func (g *gen) value() Expr {
	if g.coin() {
		return g.number()
	}
	return g.expr()
}

func (g *gen) values() []Expr { return some(g, 1, 3, g.value) }

func (g *gen) query() *Query {
	return deeper(g, func() *Query {
		q := &Query{With: maybe(g, g.with), OrderBy: maybe(g, g.keys), Limit: maybe(g, g.value)}
		if q.Limit != nil {
			q.Offset = maybe(g, g.value)
		}
		q.Body = g.body()
		if inner, bracketed := q.Body.(*Query); bracketed && len(q.With) == 0 && len(q.OrderBy) == 0 && q.Limit == nil {
			return inner
		}
		return q
	})
}

func (g *gen) with() []*CTE {
	return some(g, 1, 2, func() *CTE { return &CTE{Name: g.name(), Columns: maybe(g, g.names), Query: g.query()} })
}

func (g *gen) body() Body {
	return deeper(g, func() Body {
		switch {
		case g.rarely():
			return &SetOp{Kind: pick(g, Union, Except, Intersect), All: g.coin(), Left: g.body(), Right: g.body()}
		case g.rarely():
			return &Values{Rows: some(g, 1, 2, g.row)}
		case g.rarely():
			inner := g.query()
			if len(inner.With) == 0 && len(inner.OrderBy) == 0 && inner.Limit == nil {
				inner.Limit = g.value()
			}
			return inner
		}
		return g.selection()
	})
}

func (g *gen) selection() *Select {
	s := &Select{Distinct: g.rarely(), Items: some(g, 1, 3, g.item), Where: maybe(g, g.expr), Having: maybe(g, g.expr), GroupBy: maybe(g, g.exprs)}
	if g.coin() {
		s.From = some(g, 1, 2, g.source)
	}
	return s
}

func (g *gen) item() *Item {
	switch g.int(5) {
	case 0:
		return &Item{Star: true}
	case 1:
		return &Item{Star: true, Qualifier: g.name()}
	}
	return &Item{Expr: g.expr(), Alias: maybe(g, g.name)}
}

func (g *gen) aliased() (a Aliased) {
	if g.coin() {
		a.Alias, a.Columns = g.name(), maybe(g, g.names)
	}
	return a
}

func (g *gen) source() Source {
	return deeper(g, func() Source {
		switch {
		case g.rarely():
			return &QuerySource{Query: g.query(), Aliased: g.aliased()}
		case g.coin() && g.depth < 6:
			return &RelationSource{Relation: g.relation(), Aliased: g.aliased()}
		case g.rarely():
			j := &JoinSource{Kind: pick(g, InnerJoin, LeftJoin, RightJoin, FullJoin, CrossJoin), Left: g.source(), Right: g.source(), Aliased: g.aliased()}
			if j.Kind != CrossJoin {
				if g.coin() {
					j.On = g.expr()
				} else {
					j.Using = g.names()
				}
			}
			return j
		}
		return &NameSource{Name: g.name(), Aliased: g.aliased()}
	})
}

func (g *gen) operand() Operand {
	return deeper(g, func() Operand {
		switch {
		case g.rarely():
			return g.query()
		case g.rarely():
			return g.relation()
		}
		n := g.name()
		return &n
	})
}

func (g *gen) point() *Point { return &Point{X: g.value(), Y: g.value(), Z: g.value()} }

func (g *gen) relation() *Relation {
	return deeper(g, func() *Relation {
		r := &Relation{Noun: g.word()}
		if g.rarely() {
			r.Noun.Text, r.Between, r.And = "TRANSECT", g.point(), g.point()
		} else {
			r.Operand = g.operand()
		}
		all := g.clauseMakers()
		at := g.int(len(all)) - 1
		for range g.int(5) {
			at += 1 + g.int(5)
			if at >= len(all) {
				break
			}
			r.Clauses = append(r.Clauses, all[at]())
		}
		return r
	})
}
