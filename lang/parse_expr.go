package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// expr reads an expression. From loosest to tightest: OR; AND; NOT; comparisons with
// BETWEEN, IN, LIKE, and IS behind them; + - ||; * / %; signs; ^; AT TIME ZONE.
func (p *parser) expr() Expr {
	p.enter()
	defer p.leave()
	start, count := p.start(), 0
	left := p.conjunction()
	for p.is(kOr) {
		p.link(&count)
		op := p.next()
		right := p.conjunction()
		left = &Binary{At: p.since(start), Op: Or, OpSpan: tokenSpan(op), Left: left, Right: right}
	}
	return left
}

func (p *parser) conjunction() Expr {
	start, count := p.start(), 0
	left := p.negation()
	for p.is(kAnd) {
		p.link(&count)
		op := p.next()
		right := p.negation()
		left = &Binary{At: p.since(start), Op: And, OpSpan: tokenSpan(op), Left: left, Right: right}
	}
	return left
}

func (p *parser) negation() Expr {
	if !p.is(kNot) {
		return p.comparison()
	}
	p.enter()
	defer p.leave()
	start := p.next().Pos.Offset
	operand := p.negation()
	return &Unary{At: p.since(start), Op: Not, Operand: operand}
}

func isComparison(t lexer.TokenType) bool { return tokEquals <= t && t <= tokGreaterOrEqual }

// comparison reads one comparison at most, and any number of IS behind it.
func (p *parser) comparison() Expr {
	start, count := p.start(), 0
	left := p.sum()
	compared := true
	not := p.is(kNot) && (p.ahead(1) == kBetween || p.ahead(1) == kIn || p.ahead(1) == kLike)
	if not {
		p.next()
	}
	switch t := p.kind(); {
	case p.follows(kNot, kNull):
		p.refuse("NOT NULL alone is no condition", "write IS NOT NULL")
	case isComparison(t):
		op := p.next()
		if all, is := p.quantifier(); is {
			left = p.quantified(start, op, all, left)
			break
		}
		right := p.sum()
		left = &Binary{At: p.since(start), Op: comparisonOps[t], OpSpan: tokenSpan(op), Left: left, Right: right}
	case t == kBetween:
		left = p.between(start, not, left)
	case t == kIn:
		left = p.in(start, not, left)
	case t == kLike:
		left = p.like(start, not, left)
	default:
		compared = false
	}
	for p.is(kIs) {
		p.link(&count)
		left = p.isTest(start, left)
		compared = true
	}
	if compared && (isComparison(p.kind()) || p.isOneOf(kBetween, kIn, kLike)) {
		p.comparisonChain()
	}
	return left
}

// quantifier tells whether ALL, ANY or SOME and a query follow a comparison.
func (p *parser) quantifier() (all, is bool) {
	word := p.tok().Value
	all = p.is(kAll)
	if !all && (p.is(tokQuoted) || !strings.EqualFold(word, "ANY") && !strings.EqualFold(word, "SOME")) {
		return false, false
	}
	if p.ahead(1) == tokLeft && p.opensQuery(p.i+1) {
		return all, true
	}
	if all {
		p.next()
		p.failHint("a query in brackets", "> ALL (SELECT …) compares with every row of a query")
	}
	return false, false
}

func (p *parser) quantified(start int, op *lexer.Token, all bool, operand Expr) Expr {
	p.next()
	e := &Quantified{Op: comparisonOps[op.Type], OpSpan: tokenSpan(op), All: all, Operand: operand}
	e.Query = p.bracketedQuery()
	e.At = p.since(start)
	return e
}

var comparisonOps = map[lexer.TokenType]Op{tokEquals: Equals, tokNotEquals: NotEquals, tokLess: Less,
	tokLessOrEqual: LessOrEqual, tokGreater: Greater, tokGreaterOrEqual: GreaterOrEqual}

func (p *parser) comparisonChain() {
	p.refuse("one comparison cannot follow another", "write a < b AND b < c, or put one of them in brackets")
}

func (p *parser) between(start int, not bool, operand Expr) Expr {
	p.next()
	e := &Between{Not: not, Operand: operand, Low: p.sum()}
	if !p.take(kAnd) {
		p.failHint("AND", "BETWEEN low AND high")
	}
	e.High = p.sum()
	e.At = p.since(start)
	return e
}

func (p *parser) in(start int, not bool, operand Expr) Expr {
	p.next()
	e := &In{Not: not, Operand: operand}
	if p.is(tokLeft) && p.opensQuery(p.i) {
		e.Query = p.bracketedQuery()
	} else {
		if !p.is(tokLeft) {
			p.failHint("( and a list or a query", "IN (1, 2, 3)")
		}
		opened := p.next()
		e.List = p.exprs()
		p.close(opened, "a comma")
	}
	e.At = p.since(start)
	return e
}

func (p *parser) like(start int, not bool, operand Expr) Expr {
	p.next()
	e := &Like{Not: not, Operand: operand, Pattern: p.sum()}
	if p.take(kEscape) {
		e.Escape = p.sum()
	}
	e.At = p.since(start)
	return e
}

func (p *parser) isTest(start int, operand Expr) Expr {
	p.next()
	e := &Is{Not: p.take(kNot), Operand: operand}
	switch {
	case p.take(kNull):
		e.What = IsNull
	case p.take(kTrue):
		e.What = IsTrue
	case p.take(kFalse):
		e.What = IsFalse
	case p.take(kUnknown):
		e.What = IsUnknown
	case p.take(kDistinct):
		p.needWord(kFrom)
		e.What, e.From = IsDistinctFrom, p.sum()
	case p.isOneOf(tokNumber, tokText, tokParam):
		p.failHint("NULL, TRUE, FALSE, UNKNOWN or DISTINCT FROM", "values are compared with =")
	default:
		p.fail("NULL, TRUE, FALSE, UNKNOWN or DISTINCT FROM")
	}
	e.At = p.since(start)
	return e
}

func (p *parser) sum() Expr {
	start, count := p.start(), 0
	left := p.product()
	for {
		var op Op
		switch p.kind() {
		case tokPlus:
			op = Plus
		case tokMinus:
			op = Minus
		case tokConcat:
			op = Concat
		default:
			return left
		}
		p.link(&count)
		sign := p.next()
		right := p.product()
		left = &Binary{At: p.since(start), Op: op, OpSpan: tokenSpan(sign), Left: left, Right: right}
	}
}

func (p *parser) product() Expr {
	start, count := p.start(), 0
	left := p.signed()
	for {
		var op Op
		switch p.kind() {
		case tokStar:
			op = Times
		case tokSlash:
			op = Divide
		case tokPercent:
			op = Modulo
		default:
			return left
		}
		p.link(&count)
		sign := p.next()
		right := p.signed()
		left = &Binary{At: p.since(start), Op: op, OpSpan: tokenSpan(sign), Left: left, Right: right}
	}
}

// signed reads signs and what they belong to: -2 ^ 2 is -(2 ^ 2).
func (p *parser) signed() Expr {
	var op Op
	switch p.kind() {
	case tokPlus:
		op = Plus
	case tokMinus:
		op = Minus
	default:
		return p.power()
	}
	p.enter()
	defer p.leave()
	start := p.next().Pos.Offset
	operand := p.signed()
	return &Unary{At: p.since(start), Op: op, Operand: operand}
}

// power reads a ^ b; the exponent may have a sign and a power of its own, so that
// 2 ^ 3 ^ 2 is 2 ^ (3 ^ 2) and 2 ^ -1 needs no brackets.
func (p *parser) power() Expr {
	start := p.start()
	left := p.zoned()
	if !p.is(tokCaret) {
		return left
	}
	p.enter()
	defer p.leave()
	op := p.next()
	right := p.signed()
	return &Binary{At: p.since(start), Op: Power, OpSpan: tokenSpan(op), Left: left, Right: right}
}

func (p *parser) zoned() Expr {
	start, count := p.start(), 0
	left := p.primary()
	for p.follows(kAt, kTime) && p.ahead(2) == kZone {
		p.link(&count)
		p.i += 3
		zone := p.primary()
		left = &AtTimeZone{At: p.since(start), Operand: left, Zone: zone}
	}
	return left
}

func (p *parser) primary() Expr {
	t := p.tok()
	at := At{tokenSpan(t)}
	switch t.Type {
	case tokNumber:
		return p.number()
	case tokText:
		return p.text("a text")
	case tokParam:
		return p.param()
	case kNull:
		p.next()
		return &Null{At: at}
	case kTrue, kFalse:
		p.next()
		return &Boolean{At: at, Value: t.Type == kTrue}
	case kCase:
		return p.caseExpr()
	case kCast:
		return p.cast()
	case kExists:
		p.next()
		query := p.bracketedQuery()
		return &Exists{At: p.since(at.Pos.Start), Query: query}
	case tokLeft:
		return p.bracketed()
	case kTimestamp, kInterval:
		if p.ahead(1) == tokText || p.ahead(1) == tokNumber {
			return p.timeLiteral()
		}
	}
	if isName(t.Type) {
		return p.columnOrCall()
	}
	p.expectedExpr()
	return nil
}

// expectedExpr stops where an expression should begin.
func (p *parser) expectedExpr() {
	switch t := p.kind(); {
	case t == kSelect:
		p.failHint("a value", "a query used as a value stands in brackets of its own: (SELECT …)")
	case isReserved(t):
		p.failHint("a value", `write "`+p.tok().Value+`" if it is a name`)
	case t == tokStar:
		p.failHint("a value", "* stands for all columns only directly behind SELECT or in COUNT(*)")
	}
	p.fail("a value")
}

func (p *parser) number() *Number {
	t := p.next()
	return &Number{At: At{tokenSpan(t)}, Text: t.Value, IsInteger: !strings.ContainsAny(t.Value, ".eE")}
}

func (p *parser) param() *Param {
	t := p.next()
	return &Param{At: At{tokenSpan(t)}, Name: t.Value[1:]}
}

// timeLiteral reads TIMESTAMP 'text' or INTERVAL 'text' unit.
func (p *parser) timeLiteral() Expr {
	first := p.next()
	if p.is(tokNumber) {
		if first.Type == kTimestamp {
			p.refuse("the time of a TIMESTAMP stands in single quotes", "TIMESTAMP '2031-04-07 08:15:00'")
		}
		p.refuse("the amount of an INTERVAL stands in single quotes", "INTERVAL '"+p.tok().Value+"' MINUTE")
	}
	text := p.text("a text")
	if first.Type == kTimestamp {
		return &Timestamp{At: p.since(tokenStart(first)), Text: text}
	}
	unit := p.word("a unit of time, such as MINUTE,")
	return &Interval{At: p.since(tokenStart(first)), Text: text, Unit: unit}
}

// bracketed reads what begins with "(": a query used as a value, an expression, or the
// first row of OVERLAPS.
func (p *parser) bracketed() Expr {
	start := p.start()
	if p.opensQuery(p.i) {
		query := &Subquery{Query: p.bracketedQuery()}
		query.At = p.since(start)
		if p.follows(kOverlaps, tokLeft) {
			return p.overlaps(start, []Expr{query})
		}
		return query
	}
	opened := p.next()
	values := p.exprs()
	orElse := ""
	if len(values) > 1 {
		orElse = "a comma"
	}
	p.close(opened, orElse)
	if p.follows(kOverlaps, tokLeft) {
		return p.overlaps(start, values)
	}
	if len(values) > 1 {
		p.failHint("OVERLAPS and a second pair", "several values in brackets stand only beside OVERLAPS, behind IN and in VALUES")
	}
	return values[0]
}

// overlaps reads OVERLAPS and the second row behind the first.
func (p *parser) overlaps(start int, first []Expr) Expr {
	left := &Row{At: p.since(start), Values: first}
	p.next()
	right := p.row()
	return &Overlaps{At: p.since(start), Left: left, Right: right}
}

func (p *parser) caseExpr() Expr {
	opened := p.next()
	c := &Case{}
	if !p.is(kWhen) {
		c.Operand = p.expr()
	}
	if !p.is(kWhen) {
		p.fail("WHEN")
	}
	for p.is(kWhen) {
		w := &When{}
		start := p.next().Pos.Offset
		w.Condition = p.expr()
		p.needWord(kThen)
		w.Result = p.expr()
		w.At = p.since(start)
		c.Whens = append(c.Whens, w)
	}
	if p.take(kElse) {
		c.Else = p.expr()
		if !p.is(kEnd) {
			p.failHint("END", "each CASE ends with END")
		}
	} else if !p.is(kEnd) {
		p.failHint("WHEN, ELSE or END", "each CASE ends with END")
	}
	p.next()
	c.At = p.since(tokenStart(opened))
	return c
}

func (p *parser) cast() Expr {
	start := p.next().Pos.Offset
	opened := p.open("( after CAST")
	c := &Cast{Operand: p.expr()}
	if !p.take(kAs) {
		p.failHint("AS and a type", "CAST(value AS REAL)")
	}
	c.Type = p.word("a type, such as REAL,")
	if c.Type.Is("DOUBLE") && strings.EqualFold(p.tok().Value, "PRECISION") {
		p.next()
	}
	if p.is(tokLeft) {
		p.refuse("types have no length and no number of digits here", "a TEXT is as long as it is, and SUBSTRING(x FROM 1 FOR 10) cuts it; ROUND(x, 2) rounds a number")
	}
	p.close(opened, "")
	c.At = p.since(start)
	return c
}

// columnOrCall reads what begins with a name: name, name.name, or word(…).
func (p *parser) columnOrCall() Expr {
	start := p.start()
	if p.ahead(1) == tokLeft {
		return p.aggregate()
	}
	c := &Column{Name: p.anyName()}
	if p.take(tokDot) {
		c.Qualifier = c.Name
		c.Name = p.anyWord("the name of a column after the point")
	}
	if p.is(tokText) && p.toks[p.i-1].Type != tokQuoted {
		switch {
		case c.Name.Is("DATE"), c.Name.Is("TIME"), c.Name.Is("DATETIME"):
			p.refuse("there is no "+strings.ToUpper(c.Name.Text)+" literal", "write TIMESTAMP '2031-04-07 08:15:00'")
		}
	}
	c.At = p.since(start)
	return c
}
