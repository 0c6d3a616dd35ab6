package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// grammarStruct is what participle filled in; tree makes the statement of it.
type grammarStruct interface {
	tree(at At) (Statement, *Error)
}

func nameOf(n *namePart) Name {
	if n == nil {
		return Name{}
	}
	return n.Name
}

func fileOf(f *filePart) *Text {
	if f == nil {
		return nil
	}
	return f.Text
}

func (g *queryGrammar) tree(at At) (Statement, *Error) {
	return &QueryStatement{At: at, Query: g.Query.Query}, nil
}

func (g *createGrammar) tree(at At) (Statement, *Error) {
	switch {
	case g.Data != nil:
		s := &CreateData{At: at, Kind: ObjectKind(strings.ToUpper(g.Data.Kind)), Replace: g.Replace, Name: g.Data.Name.Name,
			File: fileOf(g.Data.File), Files: fileOf(g.Data.Files), Readings: g.Data.Readings.list}
		if g.Data.Query != nil {
			s.Query = g.Data.Query.Query
		}
		return s, nil
	case g.Solid != nil:
		return &CreateSolid{At: at, Replace: g.Replace, Name: g.Solid.Name.Name, Solid: g.Solid.Solid.Solid, Frame: nameOf(g.Solid.Frame)}, nil
	case g.View != nil:
		return &CreateView{At: at, Replace: g.Replace, Name: g.View.Name.Name, Query: g.View.Query.Query}, nil
	}
	return &CreateFrame{At: at, Replace: g.Replace, Name: g.Frame.Name.Name, File: g.Frame.File.Text}, nil
}

func (g *dropGrammar) tree(at At) (Statement, *Error) {
	if g.Diagrams {
		return &Drop{At: at, Kind: Diagrams}, nil
	}
	return &Drop{At: at, Kind: ObjectKind(strings.ToUpper(g.Kind)), Name: nameOf(g.Name)}, nil
}

func (g *letGrammar) tree(at At) (Statement, *Error) {
	return &Let{At: at, Name: g.Name.Name, Value: g.Value.Expr}, nil
}

func (g *saveGrammar) tree(at At) (Statement, *Error) {
	s := &Save{At: at, Query: g.Query.Query, To: g.To.Text}
	for i := range g.Options {
		o := &g.Options[i]
		var set *bool
		switch word := strings.ToUpper(o.Word); word {
		case "OVERWRITE":
			set = &s.Overwrite
		case "UNITS":
			set = &s.WithUnits
		case "PROVENANCE":
			set = &s.WithProvenance
		case "FORMULAS":
			set = &s.QuoteFormulas
		}
		if *set {
			return nil, secondTime(o.Tokens)
		}
		*set = true
	}
	return s, nil
}

// secondTime points at an option that was given before. Only its known words are named.
func secondTime(tokens []lexer.Token) *Error {
	var words []string
	end := 0
	for i := range tokens {
		if t := &tokens[i]; i < 2 && t.Type >= firstReserved {
			words, end = append(words, strings.ToUpper(t.Value)), tokenEnd(t)
		}
	}
	return &Error{Span: Span{tokenStart(&tokens[0]), end}, Message: strings.Join(words, " ") + " stands here a second time", Hint: "each at most once"}
}

func (g *explainGrammar) tree(at At) (Statement, *Error) {
	return &Explain{At: at, Measured: g.Measured, Query: g.Query.Query}, nil
}

func (g *requireGrammar) tree(at At) (Statement, *Error) {
	s := &Require{At: at, Label: g.Label.Text}
	if g.None != nil {
		s.None = g.None.Query
	} else {
		s.Condition = g.Condition.Expr
	}
	return s, nil
}

func (g *listGrammar) tree(at At) (Statement, *Error) { return &List{At: at, What: g.What.Name}, nil }

func (g *describeGrammar) tree(at At) (Statement, *Error) {
	s := &Describe{At: at, File: fileOf(g.File)}
	if g.Name != nil {
		s.Name = g.Name.Name
	}
	if g.Operand != nil {
		s.Operand = g.Operand.Operand
		if s.Name.Quoted || isReserved(wordType(s.Name.Text)) {
			return nil, &Error{Span: s.Name.Pos, Message: "what stands before OF is a relation such as CELLS, without quotes"}
		}
	}
	return s, nil
}

func (g *runGrammar) tree(at At) (Statement, *Error) { return &Run{At: at, File: g.File.Text}, nil }

func (g *setGrammar) tree(at At) (Statement, *Error) {
	return &Set{At: at, Name: g.Name.Name, Value: g.Value.value, Word: g.Value.word}, nil
}

func (g *helpGrammar) tree(at At) (Statement, *Error) {
	s := &Help{At: at}
	for _, word := range g.Topic {
		s.Topic = append(s.Topic, word.Name)
	}
	return s, nil
}

func (g *quitGrammar) tree(at At) (Statement, *Error) { return &Quit{At: at}, nil }

func (g *drawGrammar) tree(at At) (Statement, *Error) {
	s := &Draw{At: at, Show: strings.EqualFold(g.Verb, "SHOW"), Relation: g.Relation.Relation, To: fileOf(g.To), Overwrite: g.Overwrite}
	for i := range g.Options {
		o := &g.Options[i]
		second := false
		switch {
		case o.Shaded != nil:
			second, s.Shaded = !s.Shaded.IsZero(), o.Shaded.Name
		case o.Along != nil:
			second, s.Along = !s.Along.IsZero(), o.Along.Name
		case o.Weight != nil:
			second, s.Weight = s.Weight != nil, o.Weight.Expr
		case len(o.Limits) > 0:
			second = len(s.Limits) > 0
			for _, v := range o.Limits {
				s.Limits = append(s.Limits, v.Expr)
			}
		case len(o.Seen) > 0:
			second = len(s.Seen) > 0
			for _, v := range o.Seen {
				s.Seen = append(s.Seen, v.Expr)
			}
		default:
			second = len(s.Showing) > 0
			for _, n := range o.Showing {
				s.Showing = append(s.Showing, n.Name)
			}
		}
		if second {
			return nil, secondTime(o.Tokens)
		}
	}
	return s, nil
}

func (g *remarkGrammar) tree(at At) (Statement, *Error) {
	return &Remark{At: at, Title: strings.EqualFold(g.Verb, "TITLE"), Text: g.Text.Text}, nil
}
