package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// beginsRelation tells whether a relation stands here: a word followed by OF, or
// TRANSECT BETWEEN.
func (p *parser) beginsRelation() bool {
	return isName(p.kind()) && p.ahead(1) == kOf || p.follows(kTransect, kBetween)
}

// relation reads a relation with its clauses, each at most once, in any order.
func (p *parser) relation() *Relation {
	p.enter()
	defer p.leave()
	start := p.start()
	r := &Relation{}
	if !p.beginsRelation() {
		if p.i > 0 && p.toks[p.i-1].Type == kShow && isName(p.kind()) {
			switch word := strings.ToUpper(p.tok().Value); word {
			case "TABLES", "CAMPAIGNS", "SOLIDS", "VIEWS", "FRAMES", "DIAGRAMS", "GEOMETRY", "FUNCTIONS", "VALUES":
				p.failHint("a relation", "LIST "+word+"; lists them")
			case "COLUMNS", "DATABASES", "SCHEMAS", "ALL":
				p.failHint("a relation", "LIST TABLES; and LIST CAMPAIGNS; list what there is, DESCRIBE name; its columns")
			}
		}
		p.failHint("a relation", "for example CELLS OF hall, or TRANSECT BETWEEN (x, y, z) AND (x, y, z)")
	}
	r.Noun = p.word("what to make, such as CELLS,")
	if p.take(kBetween) {
		r.Between = p.point("a point (x, y, z)")
		p.needWord(kAnd)
		r.And = p.point("a point (x, y, z)")
	} else {
		p.needWord(kOf)
		r.Operand = p.operand("a name or a query in brackets")
	}
	var seen [len(wordText)]bool
	for {
		first := p.kind()
		if !isClauseWord(first) {
			break
		}
		id := first
		if p.follows(kFor, kEach) && p.beginsList(2) {
			id = kEach
		}
		if first == kBelow {
			id = kAbove
		}
		if seen[id] {
			p.refuse("a relation has the clause "+p.clauseWords()+" only once", "")
		}
		seen[id] = true
		r.Clauses = append(r.Clauses, clauseParsers[first](p))
	}
	r.At = p.since(start)
	return r
}

// beginsList tells whether a name or a bracket stands so many tokens ahead.
func (p *parser) beginsList(n int) bool { return isName(p.ahead(n)) || p.ahead(n) == tokLeft }

// operand reads a name, or a query or a relation in brackets.
func (p *parser) operand(what string) Operand {
	switch {
	case p.is(tokLeft) && p.opensQuery(p.i):
		return p.bracketedQuery()
	case p.is(tokLeft):
		p.enter()
		defer p.leave()
		opened := p.next()
		outer := p.afterRelation
		var inner Operand
		if p.is(tokLeft) {
			inner = p.operand(what)
		} else {
			inner = p.relation()
			if !p.is(tokRight) && !p.is(tokEOF) && isAnyWord(p.kind()) {
				p.operandEnd(opened)
			}
		}
		p.close(opened, "")
		p.afterRelation = outer
		return inner
	case p.beginsRelation():
		p.refuse("an inner relation stands in brackets", "write ("+strings.ToUpper(p.tok().Value)+" OF …)")
	case p.beginsQuery(p.i):
		p.refuse("a query stands in brackets here", "write (SELECT …)")
	}
	name := p.name(what)
	return &name
}

// operandEnd stops behind an inner relation at a word that is no clause.
func (p *parser) operandEnd(opened *lexer.Token) {
	t := p.tok()
	err := p.fault("a clause or a closing )")
	err.Hint = nearHint(t, wordRange(kWithin, firstPlain))
	if t.Type == kAs {
		err.Hint = "an inner relation has no alias"
	}
	err.opened = tokenStart(opened) + 1
	panic(err)
}

func (p *parser) point(what string) *Point {
	start := p.start()
	opened := p.open(what)
	pt := &Point{X: p.value("x")}
	p.need(tokComma, "a comma and y")
	pt.Y = p.value("y")
	p.need(tokComma, "a comma and z")
	pt.Z = p.value("z")
	p.close(opened, "")
	pt.At = p.since(start)
	return pt
}

// value reads a number, a value set by LET, either with a sign, anything in brackets,
// or a literal of time. It is narrower than an expression, so that what follows a
// clause is never taken for its end.
func (p *parser) value(what string) Expr {
	start := p.start()
	switch p.kind() {
	case tokPlus, tokMinus:
		op := Plus
		if p.next().Type == tokMinus {
			op = Minus
		}
		operand := p.unsignedValue(what)
		return &Unary{At: p.since(start), Op: op, Operand: operand}
	case kTimestamp, kInterval:
		if p.ahead(1) == tokText || p.ahead(1) == tokNumber {
			return p.timeLiteral()
		}
	}
	return p.unsignedValue(what)
}

func (p *parser) unsignedValue(what string) Expr {
	switch t := p.kind(); {
	case t == tokNumber:
		return p.number()
	case t == tokParam:
		return p.param()
	case t == tokLeft && p.opensQuery(p.i):
		return p.bracketed()
	case t == tokLeft:
		p.enter()
		defer p.leave()
		opened := p.next()
		e := p.expr()
		p.close(opened, "")
		return e
	case isName(t):
		p.failHint(what, "anything but a number stands in brackets here, or is set by LET and written :name")
	}
	p.fail(what)
	return nil
}

// valueList reads one or more values in brackets.
func (p *parser) valueList(what string) []Expr {
	opened := p.open("( and " + what)
	list := []Expr{p.value(what)}
	for p.take(tokComma) {
		list = append(list, p.value(what))
	}
	p.close(opened, "a comma")
	return list
}
