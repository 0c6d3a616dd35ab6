package lang

import (
	"errors"
	"strings"
	"sync"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"
)

// Piece is the text of one statement within a script, without blanks and comments
// around it and without the semicolon. Closed tells whether a semicolon follows, so
// that a prompt knows whether to ask for more.
type Piece struct {
	Span
	Closed bool
}

// Split cuts a script into its statements at the semicolons that are tokens, not those
// within texts, names or comments. Empty statements are left out. It never fails: what
// is wrong within a piece is found when the piece is parsed.
func Split(src string) []Piece {
	var pieces []Piece
	s := scanner{src: src, end: len(src)}
	start, last := -1, 0
	for {
		t, from, to := s.next()
		if t == tokSemicolon || t == tokEOF {
			if start >= 0 {
				pieces = append(pieces, Piece{Span{start, last}, t == tokSemicolon})
			}
			if t == tokEOF {
				return pieces
			}
			start = -1
			continue
		}
		if start < 0 {
			start = from
		}
		last = to
	}
}

// Parse reads a whole script and stops at the first fault, which is an *Error. An
// empty script has no statements.
func Parse(src string) (*Script, error) {
	script := &Script{}
	for _, piece := range Split(src) {
		statement, err := ParseStatement(src, piece)
		if err != nil {
			return nil, err
		}
		script.Statements = append(script.Statements, statement)
	}
	if n := len(script.Statements); n > 0 {
		script.Pos = Span{script.Statements[0].Span().Start, script.Statements[n-1].Span().End}
	}
	return script, nil
}

// ParseStatement reads one piece of a script; the spans of the tree count in the whole
// script. A fault is an *Error.
func ParseStatement(src string, piece Piece) (Statement, error) {
	statement, fault := parsePiece(src, piece.Span)
	if fault == nil {
		fault = checkHeight(statement)
	}
	if fault != nil {
		return nil, finish(src, fault)
	}
	return statement, nil
}

// ParseQuery reads a text that is one query, without a semicolon.
func ParseQuery(src string) (*Query, error) {
	return parseWhole(src, func(p *parser) *Query {
		query := p.query()
		if !p.is(tokEOF) {
			p.queryEnd("the end of the query", nil)
		}
		return query
	})
}

// ParseExpr reads a text that is one expression.
func ParseExpr(src string) (Expr, error) {
	return parseWhole(src, func(p *parser) Expr {
		expr := p.expr()
		if !p.is(tokEOF) {
			p.queryEnd("the end of the expression", nil)
		}
		return expr
	})
}

// ParseSolid reads a text that is one solid expression.
func ParseSolid(src string) (Solid, error) {
	return parseWhole(src, func(p *parser) Solid {
		solid := p.solid()
		if !p.is(tokEOF) {
			p.fail("PLUS, MINUS or the end of the solid")
		}
		return solid
	})
}

// ParseRelation reads a text that is one relation with its clauses.
func ParseRelation(src string) (*Relation, error) {
	return parseWhole(src, func(p *parser) *Relation {
		relation := p.relation()
		if !p.is(tokEOF) {
			p.failHint("a clause or the end of the relation", nearHint(p.tok(), clauseAndQueryWords))
		}
		return relation
	})
}

func parseWhole[T Node](src string, part func(*parser) T) (T, error) {
	p := parser{toks: tokens(src, Span{0, len(src)}), alias: -1}
	result, fault := read(&p, part)
	if fault == nil {
		fault = checkHeight(result)
	}
	if fault != nil {
		var none T
		return none, finish(src, fault)
	}
	return result, nil
}

// statementGrammars finds the grammar of a statement by its first word.
var statementGrammars = map[lexer.TokenType]func(*lexer.PeekingLexer) (grammarStruct, error){
	kSelect: grammarOf[queryGrammar](), kWith: grammarOf[queryGrammar](), kValues: grammarOf[queryGrammar](),
	tokLeft: grammarOf[queryGrammar](), kCreate: grammarOf[createGrammar](), kDrop: grammarOf[dropGrammar](),
	kLet: grammarOf[letGrammar](), kSave: grammarOf[saveGrammar](), kExplain: grammarOf[explainGrammar](),
	kRequire: grammarOf[requireGrammar](), kList: grammarOf[listGrammar](), kDescribe: grammarOf[describeGrammar](),
	kRun: grammarOf[runGrammar](), kSet: grammarOf[setGrammar](), kHelp: grammarOf[helpGrammar](),
	kQuit: grammarOf[quitGrammar](), kDraw: grammarOf[drawGrammar](), kShow: grammarOf[drawGrammar](),
	kTitle: grammarOf[remarkGrammar](), kText: grammarOf[remarkGrammar](),
}

// statementWords are the words with which a statement begins.
var statementWords = map[lexer.TokenType]bool{kSelect: true, kWith: true, kValues: true, kCreate: true, kDrop: true,
	kLet: true, kSave: true, kExplain: true, kRequire: true, kList: true, kDescribe: true, kRun: true, kSet: true,
	kHelp: true, kQuit: true, kDraw: true, kShow: true, kTitle: true, kText: true}

// StatementWords lists the words with which a statement begins, in the order of HELP.
func StatementWords() []string {
	return []string{"CREATE", "DROP", "LET", "SELECT", "WITH", "VALUES", "SAVE", "DRAW", "SHOW", "TITLE", "TEXT", "EXPLAIN",
		"REQUIRE", "LIST", "DESCRIBE", "RUN", "SET", "HELP", "QUIT"}
}

// grammarOf gives participle's parser of one kind of statement, built when first used.
// With a lookahead of 0 an alternative holds as soon as one of its tokens has matched,
// so that a fault is reported where it is.
func grammarOf[G any, P interface {
	*G
	grammarStruct
}]() func(*lexer.PeekingLexer) (grammarStruct, error) {
	build := sync.OnceValue(func() *participle.Parser[G] {
		return participle.MustBuild[G](participle.Lexer(definition{}), participle.UseLookahead(0))
	})
	return func(lex *lexer.PeekingLexer) (grammarStruct, error) {
		g, err := build().ParseFromLexer(lex)
		return P(g), err
	}
}

func parsePiece(src string, piece Span) (Statement, *Error) {
	lex, toks, err := peekable(src, piece)
	if err != nil {
		return nil, &Error{Span: piece, Message: err.Error()}
	}
	first := &toks[0]
	grammar, known := statementGrammars[first.Type]
	if !known {
		return nil, noStatement(first)
	}
	g, err := grammar(lex)
	if err != nil {
		return nil, ourFault(toks, err)
	}
	last := toks[max(len(toks)-2, 0)]
	return g.tree(At{Span{tokenStart(first), tokenEnd(&last)}})
}

func noStatement(t *lexer.Token) *Error {
	if t.Type == tokBad {
		return lexicalFault(t)
	}
	e := &Error{Span: tokenSpan(t), Message: "no statement begins with " + shown(t), Hint: nearHint(t, StatementWords())}
	switch strings.ToUpper(t.Value) {
	case "INSERT", "UPDATE", "DELETE", "MERGE":
		e.Hint = "tables are made of files and of queries and not changed: CREATE OR REPLACE TABLE t AS (SELECT … FROM t UNION ALL VALUES (…))"
	}
	if e.Hint == "" {
		e.Hint = "HELP lists the statements"
		if t.Value == "/" || t.Value == "." || t.Value == "\\" {
			e.Hint = "commands are statements, too, and end with ; : HELP; LIST TABLES; QUIT;"
		}
	}
	if t.Type == tokEOF {
		e.Message, e.Hint = "expected a statement but found nothing", ""
	}
	return e
}

// ourFault turns participle's error into one of ours. A part read by hand speaks for
// itself; what participle itself missed is put in words by expectation.
func ourFault(toks []lexer.Token, err error) *Error {
	var fault *Error
	if errors.As(err, &fault) {
		return fault
	}
	var at lexer.Position
	var positioned participle.Error
	if errors.As(err, &positioned) {
		at = positioned.Position()
	}
	p := parser{toks: toks, i: max(len(toks)-1-at.Line, 0), alias: -1}
	what, words := expectation(toks, p.i)
	fault = p.fault(what)
	if p.is(tokRight) && what == statementEnd {
		fault.Message = "this ) closes no ("
	}
	if before := p.drawOptionBefore(); before != "" && isClauseWord(p.kind()) {
		fault.Message = p.clauseWords() + " is a clause of the relation and stands directly behind it, before " + before
	}
	if fault.Hint == "" {
		fault.Hint = nearHint(p.tok(), words)
	}
	if fault.Hint == "" && toks[0].Type == kDrop && p.i == 1 && isName(p.kind()) {
		fault.Hint = "say what it is: DROP TABLE " + p.tok().Value + ", DROP CAMPAIGN " + p.tok().Value + " …"
	}
	if fault.Hint == "" && statementWords[p.kind()] && strings.HasSuffix(what, statementEnd) {
		fault.Hint = "is a ; missing before it?"
	}
	return fault
}
