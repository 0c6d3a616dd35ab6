package lang

import "github.com/alecthomas/participle/v2/lexer"

// readingParsers reads the reading clause that begins with a word.
var readingParsers map[lexer.TokenType]func(*parser) Reading

// readingWords are the words for hints.
var readingWords = []string{"ID", "POSITION", "UNITS", "COORDINATES", "WITHIN", "STRETCHED", "DUPLICATES", "TOLERANCE",
	"DELIMITER", "DECIMAL", "MISSING", "REFUSED", "HEADING", "SHEET", "ENCODING", "TIME", "PREAMBLE", "CENSORED", "UNPIVOT"}

func init() {
	readingParsers = map[lexer.TokenType]func(*parser) Reading{
		kWithin:      func(p *parser) Reading { return p.within() },
		kStretched:   func(p *parser) Reading { return p.stretched() },
		kId:          (*parser).idReading,
		kPosition:    (*parser).position,
		kUnits:       (*parser).units,
		kCoordinates: (*parser).coordinates,
		kDuplicates:  (*parser).duplicates,
		kTolerance:   (*parser).tolerance,
		kDelimiter:   (*parser).delimiter,
		kDecimal:     (*parser).decimalMark,
		kMissing:     (*parser).missing,
		kRefused:     (*parser).refused,
		kHeading:     (*parser).heading,
		kSheet:       (*parser).sheet,
		kEncoding:    (*parser).encoding,
		kTime:        (*parser).timeReading,
		kPreamble:    (*parser).preamble,
		kCensored:    (*parser).censored,
		kUnpivot:     (*parser).unpivot,
	}
}

// readings reads reading clauses up to the end of the statement, in any order, each at
// most once: the second one is the fault.
func (p *parser) readings() []Reading {
	var list []Reading
	seen := map[lexer.TokenType]bool{}
	for !p.is(tokEOF) {
		t := p.tok()
		parse, known := readingParsers[t.Type]
		if !known {
			p.failHint("a reading clause or the end of the statement", p.readingHint())
		}
		if seen[t.Type] {
			p.refuse("the clause "+wordText[t.Type]+" stands here a second time", "each at most once")
		}
		seen[t.Type] = true
		list = append(list, parse(p))
	}
	return list
}

func (p *parser) readingHint() string {
	t := p.tok()
	if hint := nearHint(t, readingWords); hint != "" {
		return hint
	}
	if statementWords[t.Type] || t.Type == kSelect {
		return "is a ; missing before it?"
	}
	return ""
}

func (p *parser) idReading() Reading {
	start := p.next().Pos.Offset
	n := p.name("the name of a column")
	return &IDReading{At: p.since(start), Name: n}
}

func (p *parser) position() Reading {
	start := p.next().Pos.Offset
	opened := p.open("( and three coordinates")
	r := &PositionReading{X: p.expr()}
	p.need(tokComma, "a comma and y")
	r.Y = p.expr()
	p.need(tokComma, "a comma and z")
	r.Z = p.expr()
	p.close(opened, "")
	switch {
	case p.take(kGeographic):
		r.Geographic = true
		if p.take(kOrigin) {
			opened := p.open("( and latitude and longitude of the origin")
			r.Latitude = p.expr()
			p.need(tokComma, "a comma and the longitude")
			r.Longitude = p.expr()
			p.close(opened, "")
		}
	case p.take(kIn):
		p.needWord(kFrame)
		r.Frame = p.name("the name of a frame")
	}
	r.At = p.since(start)
	return r
}

func (p *parser) units() Reading {
	start := p.next().Pos.Offset
	opened := p.open("( and a column with its unit")
	r := &UnitsReading{}
	for {
		at := p.start()
		u := &ColumnUnit{Column: p.anyWord("the name of a column")}
		u.Unit = p.text("a unit as a text, such as '°C'")
		u.At = p.since(at)
		r.Units = append(r.Units, u)
		if !p.take(tokComma) {
			break
		}
	}
	p.close(opened, "a comma")
	r.At = p.since(start)
	return r
}

func (p *parser) coordinates() Reading {
	start := p.next().Pos.Offset
	p.needWord(kIn)
	r := &CoordinatesReading{}
	if p.is(tokText) {
		r.Text = p.text("a unit")
	} else {
		r.Word = p.word("a unit of length, such as m,")
	}
	r.At = p.since(start)
	return r
}

func (p *parser) duplicates() Reading {
	start := p.next().Pos.Offset
	r := &DuplicatesReading{}
	switch p.kind() {
	case kSplit, kMean, kFirst, kFail:
		r.Policy = DuplicatesPolicy(wordText[p.next().Type])
	default:
		p.failHint("SPLIT, MEAN, FIRST or FAIL", nearHint(p.tok(), []string{"SPLIT", "MEAN", "FIRST", "FAIL"}))
	}
	r.At = p.since(start)
	return r
}

func (p *parser) tolerance() Reading {
	start := p.next().Pos.Offset
	v := p.value("a distance")
	return &ToleranceReading{At: p.since(start), Value: v}
}

func (p *parser) delimiter() Reading {
	start := p.next().Pos.Offset
	t := p.text("the delimiter as a text, such as ';'")
	return &DelimiterReading{At: p.since(start), Text: t}
}

func (p *parser) decimalMark() Reading {
	start := p.next().Pos.Offset
	p.needWord(kMark)
	t := p.text("the decimal mark as a text, such as ','")
	return &DecimalMarkReading{At: p.since(start), Text: t}
}

func (p *parser) missing() Reading {
	start := p.next().Pos.Offset
	r := &MissingReading{}
	if p.is(tokLeft) {
		r.Marks = p.texts("a text, such as 'n/a'")
	} else {
		r.Marks = []*Text{p.text("a text, such as 'n/a', or several in brackets")}
	}
	r.At = p.since(start)
	return r
}

func (p *parser) refused() Reading {
	start := p.next().Pos.Offset
	p.needWord(kTo)
	f := p.text("the name of a file as a text")
	return &RefusedReading{At: p.since(start), File: f}
}

func (p *parser) heading() Reading {
	start := p.next().Pos.Offset
	p.needWord(kAt)
	p.needWord(kLine)
	v := p.value("the number of a line")
	return &HeadingReading{At: p.since(start), Line: v}
}

func (p *parser) sheet() Reading {
	start := p.next().Pos.Offset
	t := p.text("the name of a sheet as a text")
	return &SheetReading{At: p.since(start), Text: t}
}

func (p *parser) encoding() Reading {
	start := p.next().Pos.Offset
	t := p.text("the encoding as a text, such as 'latin1'")
	return &EncodingReading{At: p.since(start), Text: t}
}

func (p *parser) timeReading() Reading {
	start := p.next().Pos.Offset
	opened := p.open("( and a column with its form")
	r := &TimeReading{}
	for {
		at := p.start()
		c := &TimeColumn{Column: p.name("the name of a column")}
		c.Form = p.text("the form of the time as a text, such as 'DD.MM.YYYY hh:mm:ss'")
		if p.take(kZone) {
			c.Zone = p.text("a time zone as a text, such as 'Europe/Zurich'")
		}
		c.At = p.since(at)
		r.Columns = append(r.Columns, c)
		if !p.take(tokComma) {
			break
		}
	}
	p.close(opened, "ZONE, a comma")
	r.At = p.since(start)
	return r
}

func (p *parser) preamble() Reading {
	start := p.next().Pos.Offset
	opened := p.open("( and a column with the text before it")
	r := &PreambleReading{}
	for {
		at := p.start()
		f := &PreambleField{Column: p.name("the name for a column")}
		p.needWord(kAfter)
		f.After = p.text("the text it stands behind, such as 'Serial:'")
		f.At = p.since(at)
		r.Fields = append(r.Fields, f)
		if !p.take(tokComma) {
			break
		}
	}
	p.close(opened, "a comma")
	r.At = p.since(start)
	return r
}

func (p *parser) censored() Reading {
	start := p.next().Pos.Offset
	n := p.names("the name of a column")
	return &CensoredReading{At: p.since(start), Columns: n}
}

func (p *parser) unpivot() Reading {
	start := p.next().Pos.Offset
	opened := p.open("( and UNPIVOT's columns")
	r := &UnpivotReading{Value: p.name("the name for the column of values")}
	p.needWord(kFor)
	r.Label = p.name("the name for the column of labels")
	p.needWord(kIn)
	r.Columns = p.names("the name of a column")
	p.close(opened, "")
	r.At = p.since(start)
	return r
}
