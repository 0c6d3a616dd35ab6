package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

const (
	statementEnd = "the end of the statement"
	objectKinds  = "CAMPAIGN, TABLE, SOLID, VIEW or FRAME"
)

// expected says, for each statement by its first word, what stands behind a word of it.
// The entry for tokEOF holds everywhere else in the statement.
var expected = map[lexer.TokenType]map[lexer.TokenType]string{
	kCreate: {kCreate: objectKinds, kReplace: objectKinds, kOr: "REPLACE", kIn: "FRAME and a name"},
	kDrop:   {kDrop: "CAMPAIGN, TABLE, SOLID, VIEW, FRAME or DIAGRAMS", tokEOF: statementEnd},
	kLet:    {tokEOF: "= and a value"},
	kSave: {kWith: "UNITS or PROVENANCE", kQuote: "FORMULAS",
		tokEOF: "OVERWRITE, WITH UNITS, WITH PROVENANCE, QUOTE FORMULAS or " + statementEnd},
	kRequire:  {tokEOF: "a closing ) and " + statementEnd},
	kDescribe: {tokEOF: "OF or " + statementEnd},
	kHelp:     {tokEOF: "a word or " + statementEnd},
	kDraw: {kShaded: "BY and the name of a column", kWeighted: "BY and a weight", kLimits: "( and the limits", kSeen: "FROM and a direction",
		tokEOF: "a clause, SHADED BY, LIMITS, ALONG, SHOWING, WEIGHTED BY, SEEN FROM, TO or " + statementEnd},
}

// expectation says what a statement could have gone on with at token i where participle
// found nothing that fits, and the words for a hint.
func expectation(toks []lexer.Token, i int) (what string, words []string) {
	first, before := toks[0].Type, lexer.TokenType(tokEOF)
	if first == kShow {
		first = kDraw
	}
	if i > 0 {
		before = toks[i-1].Type
	}
	what = expected[first][before]
	if what == "" && first == kCreate {
		what = createExpectation(toks, i)
	}
	if what == "" {
		what = expected[first][tokEOF]
	}
	if what == "" {
		what = statementEnd
	}
	return what, strings.FieldsFunc(what, func(r rune) bool { return r < 'A' || r > 'Z' })
}

// drawOptionBefore names the first option of DRAW or SHOW before the token at hand.
func (p *parser) drawOptionBefore() string {
	if first := p.toks[0].Type; first != kDraw && first != kShow {
		return ""
	}
	depth := 0
	for _, t := range p.toks[:p.i] {
		switch t.Type {
		case tokLeft:
			depth++
		case tokRight:
			depth--
		case kShaded, kLimits, kAlong, kShowing, kWeighted:
			if depth == 0 {
				return wordText[t.Type]
			}
		}
	}
	return ""
}

// createExpectation goes by the kind of thing that is made.
func createExpectation(toks []lexer.Token, i int) string {
	kind := 1
	if toks[1].Type == kOr {
		kind = 3
	}
	if kind >= len(toks) {
		return objectKinds
	}
	behindName := i == kind+2
	switch toks[kind].Type {
	case kCampaign, kTable:
		if behindName {
			return "FROM 'file', FROM FILES 'files' or AS (query)"
		}
		if toks[i-1].Type == kAs {
			return "( and a query"
		}
		return "a closing )"
	case kView:
		if behindName {
			return "AS (query)"
		}
		if toks[i-1].Type == kAs {
			return "( and a query"
		}
	case kSolid:
		if behindName {
			return "AS and a solid"
		}
		return "PLUS, MINUS, IN FRAME or " + statementEnd
	case kFrame:
		if behindName {
			return "MATCHING and the name of a file"
		}
	}
	return statementEnd
}
