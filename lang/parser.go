package lang

import (
	"slices"
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

const (
	// maxDepth is how deep expressions, queries, sources, solids and relations may be
	// nested in each other. It keeps a hostile text from using up the stack.
	maxDepth = 200
	// maxChain is how many operators of one precedence may follow each other. They
	// make a tree that is deep on its left, which everything that walks it pays for.
	maxChain = 2000
	// maxHeight is how many nodes may stand one below another in a tree, however they
	// came to it. Those who walk a tree may recurse without fear.
	maxHeight = 4000
)

// parser reads the parts that participle's statement structs hand over: queries,
// expressions, relations, solids and the lists in between. It descends by hand, looks
// ahead at most as far as a run of brackets, and stops at the first fault by a panic
// of type *Error, which only read recovers.
type parser struct {
	toks  []lexer.Token
	i     int
	first int // the token at which participle handed over
	depth int
	// alias is the index of the last alias that was taken without AS, -1 for none: a
	// misspelt keyword is taken for one.
	alias int
	// afterRelation is set while a relation was read in the query at hand, for hints.
	afterRelation bool
}

// readPart runs one of the parser's methods at participle's place in the tokens and moves participle
// behind what was read. On a fault it moves participle to the fault, so that the
// alternative counts as begun and the fault is not lost among others.
func readPart[T any](lex *lexer.PeekingLexer, part func(*parser) T) (result T, err error) {
	at := int(lex.RawCursor())
	p := parser{toks: lex.Range(0, lexer.RawCursor(at+lex.RawPeek().Pos.Line+1)), i: at, first: at, alias: -1}
	result, fault := read(&p, part)
	if p.i > at {
		lex.FastForward(lexer.RawCursor(p.i - 1))
	}
	if fault != nil {
		return result, fault
	}
	return result, nil
}

// read runs a part and turns its panic back into an error.
func read[T any](p *parser, part func(*parser) T) (result T, fault *Error) {
	defer func() {
		if stop := recover(); stop != nil {
			var known bool
			if fault, known = stop.(*Error); !known {
				panic(stop)
			}
		}
	}()
	return part(p), nil
}

func (p *parser) tok() *lexer.Token         { return &p.toks[p.i] }
func (p *parser) kind() lexer.TokenType     { return p.toks[p.i].Type }
func (p *parser) is(t lexer.TokenType) bool { return p.toks[p.i].Type == t }

// ahead looks at a later token; behind the end it sees the end.
func (p *parser) ahead(n int) lexer.TokenType { return p.toks[min(p.i+n, len(p.toks)-1)].Type }

// follows tells whether the next two tokens are these.
func (p *parser) follows(first, second lexer.TokenType) bool {
	return p.is(first) && p.ahead(1) == second
}

func (p *parser) next() *lexer.Token {
	t := &p.toks[p.i]
	if t.Type != tokEOF {
		p.i++
	}
	return t
}

// take passes a token if it is the one asked for.
func (p *parser) take(t lexer.TokenType) bool {
	if p.is(t) {
		p.i++
		return true
	}
	return false
}

// takeBoth passes two tokens if they are the ones asked for.
func (p *parser) takeBoth(first, second lexer.TokenType) bool {
	if p.follows(first, second) {
		p.i += 2
		return true
	}
	return false
}

// need passes a token that must stand here.
func (p *parser) need(t lexer.TokenType, what string) *lexer.Token {
	if !p.is(t) {
		p.fail(what)
	}
	return p.next()
}

// needWord passes a known word that must stand here.
func (p *parser) needWord(t lexer.TokenType) *lexer.Token {
	if !p.is(t) {
		p.fail(wordText[t])
	}
	return p.next()
}

// start gives where the next token begins, end where the last one ended.
func (p *parser) start() int { return tokenStart(p.tok()) }

func (p *parser) end() int {
	if p.i == 0 {
		return p.start()
	}
	return tokenEnd(&p.toks[p.i-1])
}

// since makes the place of a node that began at start and ends before the next token.
func (p *parser) since(start int) At { return At{Span{start, p.end()}} }

// enter counts one level of nesting; leave must follow.
func (p *parser) enter() {
	if p.depth++; p.depth > maxDepth {
		panic(&Error{Span: tokenSpan(p.tok()), Message: "this is nested more than " + itoa(maxDepth) + " levels deep",
			Hint: "split it up with WITH, a view, or LET"})
	}
}

func (p *parser) leave() { p.depth-- }

// checkHeight refuses a tree in which more than maxHeight nodes stand one below another:
// chains within chains can pile up although each of them is short enough. Of a short
// text no such tree can come, since each node but the first few takes a byte at least.
func checkHeight(root Node) *Error {
	if root.Span().Len() < maxHeight/2 {
		return nil
	}
	var fault *Error
	var visit func(n Node, height int)
	visit = func(n Node, height int) {
		if fault == nil && height > maxHeight {
			fault = &Error{Span: n.Span(), Message: "more than " + itoa(maxHeight) + " operators and brackets stand one within another here",
				Hint: "split it up with WITH, a view, or LET"}
		}
		if fault == nil {
			each(n, func(child Node) { visit(child, height+1) })
		}
	}
	visit(root, 1)
	return fault
}

// link counts one operator of a chain.
func (p *parser) link(count *int) {
	if *count++; *count > maxChain {
		panic(&Error{Span: tokenSpan(p.tok()), Message: "more than " + itoa(maxChain) + " operators follow each other here",
			Hint: "a long list of values is better asked for with IN (…) or a join"})
	}
}

// open passes a "(" and gives its token for close.
func (p *parser) open(what string) *lexer.Token { return p.need(tokLeft, what) }

// close passes the ")" that closes a bracket.
func (p *parser) close(opened *lexer.Token, orElse string) {
	if p.take(tokRight) {
		return
	}
	what := "a closing )"
	if orElse != "" {
		what = orElse + " or a closing )"
	}
	err := p.fault(what)
	if p.kind() != tokBad {
		err.opened = tokenStart(opened) + 1
	}
	panic(err)
}

// fail stops at the next token: something else was expected here.
func (p *parser) fail(what string) { panic(p.fault(what)) }

// failHint stops likewise, with a way out.
func (p *parser) failHint(what, hint string) {
	err := p.fault(what)
	if err.Hint == "" {
		err.Hint = hint
	}
	panic(err)
}

// refuse stops at the next token with a sentence of its own.
func (p *parser) refuse(message, hint string) {
	if p.is(tokBad) {
		panic(lexicalFault(p.tok()))
	}
	panic(&Error{Span: tokenSpan(p.tok()), Message: message, Hint: hint})
}

// fault makes the message "expected … but found …". A bad token speaks for itself. An
// alias just before the place may be a misspelt keyword, and is blamed then.
func (p *parser) fault(what string) *Error {
	t := p.tok()
	if t.Type == tokBad {
		return lexicalFault(t)
	}
	if p.alias >= 0 && p.alias == p.i-1 {
		suspect := &p.toks[p.alias]
		if near := Nearest(suspect.Value, afterItemWords); near != "" && suspect.Type != tokQuoted {
			return &Error{Span: tokenSpan(suspect), Message: "expected " + near + " but found '" + cutShort(suspect.Value) + "'",
				Hint: "did you mean " + near + "?"}
		}
	}
	err := &Error{Span: tokenSpan(t), Message: "expected " + what + " but found " + shown(t)}
	if p.i > 0 && p.toks[p.i-1].Type == tokText && tokenEnd(&p.toks[p.i-1]) == tokenStart(t) && isAnyWord(t.Type) {
		err.Hint = "inside a text write '' for one '"
	}
	if t.Type == tokQuoted && strings.Contains(what, "text") && !strings.Contains(what, "name") {
		err.Hint = "texts stand in single quotes: '" + strings.ReplaceAll(strings.Trim(t.Value, `"`), "'", "''") + "'"
	}
	return err
}

// afterItemWords are the words that may follow an item, a source or a condition. A
// misspelt one is hinted at.
var afterItemWords = []string{"FROM", "WHERE", "GROUP", "HAVING", "ORDER", "LIMIT", "OFFSET", "UNION", "EXCEPT", "INTERSECT",
	"JOIN", "LEFT", "RIGHT", "FULL", "INNER", "CROSS", "USING", "AS", "BETWEEN", "AND", "LIKE", "WEIGHTED", "FILTER", "OVER"}

// nearHint gives the hint for a token that is nearly one of the words, or "".
func nearHint(t *lexer.Token, words []string) string {
	if !isWord(t.Type) {
		return ""
	}
	if near := Nearest(t.Value, words); near != "" && !strings.EqualFold(near, t.Value) {
		return "did you mean " + near + "?"
	}
	return ""
}

// name reads a name: bare (any word that is not reserved) or quoted.
func (p *parser) name(what string) Name {
	t := p.tok()
	if !isName(t.Type) {
		if isReserved(t.Type) {
			p.refuse("expected "+what+" but found the reserved word "+strings.ToUpper(t.Value),
				`write "`+t.Value+`" if it is a name`)
		}
		if t.Type == tokText {
			p.failHint(what, "names stand without quotes or in double ones")
		}
		p.fail(what)
	}
	return p.anyName()
}

// word reads a bare word that is not reserved.
func (p *parser) word(what string) Name {
	if !isWord(p.kind()) {
		if p.is(tokQuoted) {
			p.failHint(what, "it stands without quotes")
		}
		p.fail(what)
	}
	return p.anyName()
}

// anyWord reads any word, reserved or quoted too.
func (p *parser) anyWord(what string) Name {
	if !isAnyWord(p.kind()) {
		p.fail(what)
	}
	return p.anyName()
}

func (p *parser) anyName() Name {
	t := p.next()
	n := Name{At: At{tokenSpan(t)}, Text: t.Value}
	if t.Type == tokQuoted {
		n.Text, n.Quoted = unquote(t.Value, `"`), true
	}
	return n
}

// unquote takes the outer marks away and makes doubled ones single.
func unquote(text, mark string) string {
	inner := text[1 : len(text)-1]
	if strings.Contains(inner, mark) {
		inner = strings.ReplaceAll(inner, mark+mark, mark)
	}
	return inner
}

// text reads a text in single quotes.
func (p *parser) text(what string) *Text {
	if !p.is(tokText) {
		if isWord(p.kind()) {
			bare := p.touching()
			p.refuse("expected "+what+" but found "+bare+" without quotes", "write "+QuoteText(bare))
		}
		p.fail(what)
	}
	t := p.next()
	return &Text{At: At{tokenSpan(t)}, Value: unquote(t.Value, "'")}
}

// touching gives the next word with all that touches it, such as hall.csv.
func (p *parser) touching() string {
	var b strings.Builder
	for i := p.i; i < len(p.toks); i++ {
		if t := &p.toks[i]; i == p.i || tokenStart(t) == tokenEnd(&p.toks[i-1]) && t.Type != tokRight && t.Type != tokComma {
			b.WriteString(t.Value)
			continue
		}
		break
	}
	return cutShort(b.String())
}

// texts reads one or more texts in brackets.
func (p *parser) texts(what string) []*Text {
	opened := p.open("( and " + what)
	list := []*Text{p.text(what)}
	for p.take(tokComma) {
		list = append(list, p.text(what))
	}
	p.close(opened, "a comma")
	return list
}

// names reads one or more names in brackets.
func (p *parser) names(what string) []Name {
	opened := p.open("( and " + what)
	list := []Name{p.name(what)}
	for p.take(tokComma) {
		list = append(list, p.name(what))
	}
	p.close(opened, "a comma")
	return list
}

// nameList reads one name, or several in brackets.
func (p *parser) nameList(what string) []Name {
	if p.is(tokLeft) {
		return p.names(what)
	}
	return []Name{p.name(what)}
}

// isOneOf tells whether the next token is one of some.
func (p *parser) isOneOf(types ...lexer.TokenType) bool { return slices.Contains(types, p.kind()) }
