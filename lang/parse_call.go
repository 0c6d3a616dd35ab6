package lang

// call reads word(…) without what may follow the bracket.
func (p *parser) call() *Call {
	start := p.start()
	switch p.kind() {
	case tokQuoted:
		p.refuse("the name of a function stands without quotes", "")
	case kValues:
		p.refuse("VALUES makes rows and is no function", "VALUES (…), (…) stands where a SELECT could")
	}
	c := &Call{Name: p.word("the name of a function")}
	opened := p.next()
	switch {
	case p.is(tokRight):
	case p.take(tokStar):
		c.Star = true
		p.close(opened, "")
		c.At = p.since(start)
		return c
	default:
		if c.Distinct = p.take(kDistinct); !c.Distinct {
			p.take(kAll) // all rows, as without it
		}
		c.Args = []Expr{p.expr()}
		if p.is(kAlong) && !c.Distinct {
			p.alongAt(c)
		} else {
			p.arguments(c)
		}
	}
	p.close(opened, "a comma")
	c.At = p.since(start)
	return c
}

// arguments reads the rest of the arguments behind the first, and the order.
func (p *parser) arguments(c *Call) {
	plain := true
	var separators []Separator
	for {
		var s Separator
		switch p.kind() {
		case tokComma:
			s = Comma
		case kFrom:
			s = FromWord
		case kFor:
			s = ForWord
		}
		if s == "" {
			break
		}
		p.next()
		plain = plain && s == Comma
		separators = append(separators, s)
		c.Args = append(c.Args, p.expr())
	}
	if !plain {
		c.Separators = separators
	}
	if p.take(kOrder) {
		p.needWord(kBy)
		c.OrderBy = p.keys()
	}
}

// alongAt reads ALONG x AT v [OUTSIDE NULL | word].
func (p *parser) alongAt(c *Call) {
	p.next()
	c.Along = p.expr()
	p.needWord(kAt)
	c.AtValue = p.expr()
	if p.take(kOutside) {
		if p.is(kNull) {
			c.Outside = p.anyName()
		} else {
			c.Outside = p.word("NULL, HOLD or FAIL")
		}
	}
}

// aggregate reads a call and what may follow an aggregate: FILTER and WEIGHTED BY in
// either order, each once, then OVER.
func (p *parser) aggregate() Expr {
	start := p.start()
	c := p.call()
	for {
		switch {
		case p.is(kWeighted):
			if c.Weight != nil {
				p.refuse("WEIGHTED BY stands twice behind one aggregate", "")
			}
			p.next()
			p.needWord(kBy)
			c.Weight = p.weight()
			continue
		case p.is(kFilter):
			if c.Filter != nil {
				p.refuse("FILTER stands twice behind one aggregate", "join the conditions with AND")
			}
			p.next()
			opened := p.open("( and WHERE after FILTER")
			p.needWord(kWhere)
			c.Filter = p.expr()
			p.close(opened, "")
			continue
		case p.is(kOver):
			p.next()
			c.Over = p.window()
			if p.isOneOf(kWeighted, kFilter) {
				p.refuse(wordText[p.kind()]+" stands before OVER", "")
			}
		}
		c.At = p.since(start)
		return c
	}
}

// weight reads a name, a number, a value set by LET, a call, or anything in brackets.
// It stops there, so that AVG(t) WEIGHTED BY v - AVG(t) is a difference of means.
func (p *parser) weight() Expr {
	switch t := p.kind(); {
	case t == tokNumber:
		return p.number()
	case t == tokParam:
		return p.param()
	case t == tokLeft && p.opensQuery(p.i):
		return p.bracketed()
	case t == tokLeft:
		opened := p.next()
		e := p.expr()
		p.close(opened, "")
		return e
	case isName(t) && p.ahead(1) == tokLeft:
		return p.call()
	case isName(t):
		return p.columnOrCall()
	}
	p.failHint("a weight", "a name, a number, a call, or anything in brackets")
	return nil
}

func (p *parser) window() *Window {
	start := p.start()
	if isName(p.kind()) {
		p.failHint("( after OVER", "each OVER says its window itself: OVER (PARTITION BY … ORDER BY …)")
	}
	opened := p.open("( after OVER")
	w := &Window{}
	if p.takeBoth(kPartition, kBy) {
		w.PartitionBy = p.exprs()
	}
	if p.takeBoth(kOrder, kBy) {
		w.OrderBy = p.keys()
	}
	if p.isOneOf(kRows, kRange) {
		w.Frame = p.frame()
	}
	if !p.is(tokRight) {
		p.close(opened, "PARTITION BY, ORDER BY, ROWS, RANGE")
	}
	p.next()
	w.At = p.since(start)
	return w
}

func (p *parser) frame() *Frame {
	first := p.next()
	f := &Frame{Range: first.Type == kRange}
	if p.take(kBetween) {
		f.Start = p.bound()
		p.needWord(kAnd)
		f.End = p.bound()
	} else {
		f.Start = p.bound()
	}
	f.At = p.since(tokenStart(first))
	return f
}

func (p *parser) bound() *Bound {
	start := p.start()
	b := &Bound{}
	switch {
	case p.takeBoth(kUnbounded, kPreceding):
		b.Kind = UnboundedPreceding
	case p.takeBoth(kUnbounded, kFollowing):
		b.Kind = UnboundedFollowing
	case p.takeBoth(kCurrent, kRow):
		b.Kind = CurrentRow
	default:
		b.Offset = p.sum()
		switch {
		case p.take(kPreceding):
			b.Kind = Preceding
		case p.take(kFollowing):
			b.Kind = Following
		default:
			p.failHint("PRECEDING or FOLLOWING", "a bound is UNBOUNDED PRECEDING, n PRECEDING, CURRENT ROW, n FOLLOWING or UNBOUNDED FOLLOWING")
		}
	}
	b.At = p.since(start)
	return b
}
