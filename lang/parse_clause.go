package lang

import "github.com/alecthomas/participle/v2/lexer"

// clauseParsers reads the clause that begins with a word. A clause word is a stop word.
var clauseParsers [len(wordText)]func(*parser) Clause

func init() {
	clauseParsers = [len(wordText)]func(*parser) Clause{
		kWithin: func(p *parser) Clause { return p.within() }, kUnclipped: (*parser).unclipped,
		kStretched: func(p *parser) Clause { return p.stretched() },
		kFor:       (*parser).forClause, kMethod: (*parser).method, kMeasured: (*parser).measuredIn,
		kOmitting: (*parser).omitting, kKeep: (*parser).keep, kAmong: (*parser).among,
		kExpecting: (*parser).expecting, kAgainst: (*parser).against, kAt: (*parser).atClause,
		kThrough: (*parser).through, kThresholds: (*parser).thresholds, kDistances: (*parser).distances,
		kClearance: (*parser).clearance, kNumber: (*parser).numberClause, kStep: (*parser).step,
		kAcross: (*parser).across, kAbove: (*parser).above, kBelow: (*parser).above, kUntil: (*parser).until,
		kBy: (*parser).by, kEvery: (*parser).every, kStamp: (*parser).stamp, kLongest: (*parser).longestGap,
		kBridging: (*parser).bridging, kWeights: (*parser).weights, kUncertainty: (*parser).uncertainty,
	}
}

// isClauseWord tells whether a clause of a relation begins with the word.
func isClauseWord(t lexer.TokenType) bool {
	return t >= firstStop && t < firstPlain && clauseBegins[t]
}

// clauseBegins is a table of its own because clauseParsers is filled in later.
var clauseBegins = [len(wordText)]bool{kWithin: true, kUnclipped: true, kStretched: true, kFor: true, kMethod: true,
	kMeasured: true, kOmitting: true, kKeep: true, kAmong: true, kExpecting: true, kAgainst: true, kAt: true,
	kThrough: true, kThresholds: true, kDistances: true, kClearance: true, kNumber: true, kStep: true, kAcross: true,
	kAbove: true, kBelow: true, kUntil: true, kBy: true, kEvery: true, kStamp: true, kLongest: true, kBridging: true,
	kWeights: true, kUncertainty: true}

func (p *parser) within() *WithinClause {
	start := p.next().Pos.Offset
	c := &WithinClause{}
	if !p.is(tokLeft) {
		c.Solids = []Solid{p.solid()}
		c.At = p.since(start)
		return c
	}
	// The bracket may hold one solid, and more may follow it, or it may hold zones.
	first := p.start()
	opened := p.next()
	p.enter()
	c.Solids = []Solid{p.solid()}
	for p.take(tokComma) {
		c.Zones = true
		c.Solids = append(c.Solids, p.solid())
	}
	p.leave()
	p.close(opened, "PLUS, MINUS, a comma")
	if !c.Zones {
		c.Solids[0] = p.solidChain(first, c.Solids[0])
	} else if p.isOneOf(kPlus, kMinus) {
		p.refuse("zones cannot be joined by "+wordText[p.kind()], "each zone stands between commas: WITHIN (a, b MINUS c)")
	}
	c.At = p.since(start)
	return c
}

func (p *parser) unclipped() Clause {
	return &UnclippedClause{At: At{tokenSpan(p.next())}}
}

func (p *parser) stretched() *StretchedClause {
	start := p.next().Pos.Offset
	factors := p.point("( and the three factors of the stretch")
	return &StretchedClause{At: p.since(start), X: factors.X, Y: factors.Y, Z: factors.Z}
}

func (p *parser) forClause() Clause {
	start := p.next().Pos.Offset
	if p.is(kEach) && p.beginsList(1) {
		p.next()
		names := p.nameList("the name of a column")
		return &ForEachClause{At: p.since(start), Names: names}
	}
	names := p.nameList("the name of a column, or EACH,")
	return &ForClause{At: p.since(start), Names: names}
}

func (p *parser) method() Clause {
	start := p.next().Pos.Offset
	c := &MethodClause{Name: p.word("the name of a method, such as SIBSON,")}
	if p.is(tokLeft) {
		opened := p.next()
		c.Argument = p.value("a number")
		p.close(opened, "")
	}
	c.At = p.since(start)
	return c
}

func (p *parser) measuredIn() Clause {
	start := p.next().Pos.Offset
	p.needWord(kIn)
	parts := p.nameList("the name of a solid")
	return &MeasuredInClause{At: p.since(start), Parts: parts}
}

func (p *parser) omitting() Clause {
	start := p.next().Pos.Offset
	c := &OmittingClause{IDs: p.texts("an identifier in single quotes")}
	if !p.is(kBecause) {
		p.failHint("BECAUSE and the reason", "what is left out is noted with its reason: OMITTING ('L17') BECAUSE 'moved'")
	}
	p.next()
	c.Because = p.text("the reason as a text in single quotes")
	c.At = p.since(start)
	return c
}

func (p *parser) keep() Clause {
	start := p.next().Pos.Offset
	ids := p.texts("an identifier in single quotes")
	return &KeepClause{At: p.since(start), IDs: ids}
}

func (p *parser) among() Clause {
	start := p.next().Pos.Offset
	o := p.operand("a name or a query in brackets")
	return &AmongClause{At: p.since(start), Operand: o}
}

func (p *parser) expecting() Clause {
	start := p.next().Pos.Offset
	o := p.operand("a name or a query in brackets")
	return &ExpectingClause{At: p.since(start), Operand: o}
}

func (p *parser) against() Clause {
	start := p.next().Pos.Offset
	o := p.operand("the name of a second campaign or a query in brackets")
	return &AgainstClause{At: p.since(start), Operand: o}
}

// atClause reads AT z = 1.1, or AT and what gives points.
func (p *parser) atClause() Clause {
	start := p.next().Pos.Offset
	if isWord(p.kind()) && p.ahead(1) == tokEquals {
		c := &AtPlaneClause{Axis: p.word("x, y or z")}
		p.next()
		c.Value = p.value("a number")
		c.At = p.since(start)
		return c
	}
	o := p.operand("a plane such as z = 1.1, the name of points, or a query in brackets")
	return &AtPointsClause{At: p.since(start), Operand: o}
}

func (p *parser) through() Clause {
	start := p.next().Pos.Offset
	c := &ThroughClause{Point: p.point("a point (x, y, z)")}
	p.needWord(kNormal)
	c.Normal = p.point("a direction (x, y, z)")
	c.At = p.since(start)
	return c
}

func (p *parser) thresholds() Clause {
	start := p.next().Pos.Offset
	v := p.valueList("a threshold")
	return &ThresholdsClause{At: p.since(start), Values: v}
}

func (p *parser) distances() Clause {
	start := p.next().Pos.Offset
	v := p.valueList("a distance")
	return &DistancesClause{At: p.since(start), Values: v}
}

func (p *parser) clearance() Clause {
	start := p.next().Pos.Offset
	v := p.value("a distance")
	return &ClearanceClause{At: p.since(start), Value: v}
}

func (p *parser) numberClause() Clause {
	start := p.next().Pos.Offset
	v := p.value("how many")
	return &NumberClause{At: p.since(start), Value: v}
}

func (p *parser) step() Clause {
	start := p.next().Pos.Offset
	v := p.value("a distance")
	return &StepClause{At: p.since(start), Value: v}
}

func (p *parser) across() Clause {
	start := p.next().Pos.Offset
	c := &AcrossClause{Across: p.value("a distance")}
	p.needWord(kUp)
	c.Up = p.value("a distance")
	c.At = p.since(start)
	return c
}

func (p *parser) above() Clause {
	first := p.next()
	v := p.value("a limit")
	return &AboveClause{At: p.since(tokenStart(first)), Below: first.Type == kBelow, Value: v}
}

func (p *parser) until() Clause {
	start := p.next().Pos.Offset
	if !p.isOneOf(kAbove, kBelow) {
		p.fail("ABOVE or BELOW")
	}
	below := p.next().Type == kBelow
	v := p.value("a limit")
	return &UntilClause{At: p.since(start), Below: below, Value: v}
}

func (p *parser) by() Clause {
	start := p.next().Pos.Offset
	c := &ByClause{Names: p.nameList("the name of a column")}
	if p.take(kOn) {
		c.On = p.name("the name of the column of time")
	}
	c.At = p.since(start)
	return c
}

func (p *parser) every() Clause {
	start := p.next().Pos.Offset
	c := &EveryClause{Value: p.value("a step, such as INTERVAL '15' MINUTE")}
	if p.take(kFrom) {
		c.From = p.value("where to begin")
		p.needWord(kTo)
		c.To = p.value("where to end")
	}
	c.At = p.since(start)
	return c
}

func (p *parser) stamp() Clause {
	start := p.next().Pos.Offset
	p.needWord(kAt)
	w := p.word("START, INSTANT or END")
	return &StampClause{At: p.since(start), Where: w}
}

func (p *parser) longestGap() Clause {
	start := p.next().Pos.Offset
	p.needWord(kGap)
	v := p.value("an interval, such as INTERVAL '30' MINUTE")
	return &LongestGapClause{At: p.since(start), Value: v}
}

func (p *parser) bridging() Clause {
	start := p.next().Pos.Offset
	v := p.value("an interval, such as INTERVAL '30' MINUTE")
	return &BridgingClause{At: p.since(start), Value: v}
}

func (p *parser) weights() Clause {
	start := p.next().Pos.Offset
	w := p.word("the kind of weights, such as AREA,")
	return &WeightsClause{At: p.since(start), Word: w}
}

func (p *parser) uncertainty() Clause {
	start := p.next().Pos.Offset
	c := &UncertaintyClause{}
	if !p.is(tokLeft) {
		c.Column = p.name("the name of a column, or ( and parts such as temp 0.1 EACH,")
		c.At = p.since(start)
		return c
	}
	opened := p.next()
	for {
		c.Parts = append(c.Parts, p.uncertaintyPart())
		if !p.take(tokComma) {
			break
		}
	}
	p.close(opened, "a comma")
	c.At = p.since(start)
	return c
}

func (p *parser) uncertaintyPart() *UncertaintyPart {
	part := &UncertaintyPart{}
	start := p.start()
	literal := p.isOneOf(kInterval, kTimestamp) && p.ahead(1) == tokText
	if isName(p.kind()) && !literal {
		part.Column = p.anyName()
	}
	part.Value = p.value("a number, or a column in parentheses, such as (u),")
	switch {
	case p.take(kEach):
	case p.take(kCommon):
		part.Common = true
	default:
		p.fail("EACH or COMMON")
	}
	part.At = p.since(start)
	return part
}
