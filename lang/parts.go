package lang

import "github.com/alecthomas/participle/v2/lexer"

// The parts below are where participle's statement structs hand over to the parser
// that descends by hand. Each implements participle.Parseable.

type namePart struct{ Name }

func (n *namePart) Parse(lex *lexer.PeekingLexer) (err error) {
	n.Name, err = readPart(lex, func(p *parser) Name { return p.name("a name") })
	return err
}

type wordPart struct{ Name }

func (w *wordPart) Parse(lex *lexer.PeekingLexer) (err error) {
	w.Name, err = readPart(lex, func(p *parser) Name { return p.word("a word") })
	return err
}

type anyWordPart struct{ Name }

func (w *anyWordPart) Parse(lex *lexer.PeekingLexer) (err error) {
	w.Name, err = readPart(lex, func(p *parser) Name { return p.anyWord("a name") })
	return err
}

type textPart struct{ *Text }

func (t *textPart) Parse(lex *lexer.PeekingLexer) (err error) {
	t.Text, err = readPart(lex, func(p *parser) *Text { return p.text("a text in single quotes") })
	return err
}

type filePart struct{ *Text }

func (f *filePart) Parse(lex *lexer.PeekingLexer) (err error) {
	f.Text, err = readPart(lex, func(p *parser) *Text { return p.text("the name of a file as a text in single quotes") })
	return err
}

// queryPart is a query in brackets of which participle reads the brackets.
type queryPart struct{ *Query }

func (q *queryPart) Parse(lex *lexer.PeekingLexer) (err error) {
	q.Query, err = readPart(lex, func(p *parser) *Query {
		query := p.query()
		if !p.is(tokRight) {
			p.queryEnd("a closing )", &p.toks[p.first-1])
		}
		return query
	})
	return err
}

// lastQueryPart is a query with which the statement ends.
type lastQueryPart struct{ *Query }

func (q *lastQueryPart) Parse(lex *lexer.PeekingLexer) (err error) {
	q.Query, err = readPart(lex, func(p *parser) *Query {
		query := p.query()
		if !p.is(tokEOF) {
			p.queryEnd("the end of the query", nil)
		}
		return query
	})
	return err
}

// savedQueryPart is a query before TO.
type savedQueryPart struct{ *Query }

func (q *savedQueryPart) Parse(lex *lexer.PeekingLexer) (err error) {
	q.Query, err = readPart(lex, func(p *parser) *Query {
		query := p.query()
		if !p.is(kTo) {
			p.queryEnd("TO and the name of a file", nil)
		}
		return query
	})
	return err
}

// lastExprPart is an expression with which the statement ends.
type lastExprPart struct{ Expr }

func (e *lastExprPart) Parse(lex *lexer.PeekingLexer) (err error) {
	e.Expr, err = readPart(lex, func(p *parser) Expr {
		expr := p.expr()
		if !p.is(tokEOF) {
			p.queryEnd("the end of the statement", nil)
		}
		return expr
	})
	return err
}

type valuePart struct{ Expr }

func (v *valuePart) Parse(lex *lexer.PeekingLexer) (err error) {
	v.Expr, err = readPart(lex, func(p *parser) Expr { return p.value("a number") })
	return err
}

type weightPart struct{ Expr }

func (w *weightPart) Parse(lex *lexer.PeekingLexer) (err error) {
	w.Expr, err = readPart(lex, (*parser).weight)
	return err
}

type solidPart struct{ Solid }

func (s *solidPart) Parse(lex *lexer.PeekingLexer) (err error) {
	s.Solid, err = readPart(lex, (*parser).solid)
	return err
}

type relationPart struct{ *Relation }

func (r *relationPart) Parse(lex *lexer.PeekingLexer) (err error) {
	r.Relation, err = readPart(lex, (*parser).relation)
	return err
}

type operandPart struct{ Operand }

func (o *operandPart) Parse(lex *lexer.PeekingLexer) (err error) {
	o.Operand, err = readPart(lex, func(p *parser) Operand { return p.operand("a name or a query in brackets") })
	return err
}

// readingsPart is all reading clauses up to the end of the statement.
type readingsPart struct{ list []Reading }

func (r *readingsPart) Parse(lex *lexer.PeekingLexer) (err error) {
	r.list, err = readPart(lex, (*parser).readings)
	return err
}

// settingPart is what SET sets a word to: a value, a text or a word.
type settingPart struct {
	value Expr
	word  Name
}

func (s *settingPart) Parse(lex *lexer.PeekingLexer) (err error) {
	*s, err = readPart(lex, func(p *parser) settingPart {
		switch t := p.kind(); {
		case t == tokText:
			return settingPart{value: p.text("a text")}
		case isWord(t) && !(p.isOneOf(kTimestamp, kInterval) && p.ahead(1) == tokText):
			return settingPart{word: p.word("a word")}
		}
		if p.tok().Value == "=" {
			p.failHint("a value, a text or a word", "without the =: SET DIGITS 8")
		}
		return settingPart{value: p.value("a value, a text or a word")}
	})
	return err
}
