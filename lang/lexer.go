package lang

import (
	"io"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/alecthomas/participle/v2/lexer"
)

// scanner cuts a text into tokens, one at a time, without ever failing: what no token
// can begin with, or what never ends, comes out as tokBad, and lexicalFault says what
// is wrong with it when the parser gets there. So a fault in the fifth statement does
// not hide one in the second.
type scanner struct {
	src string
	at  int
	end int // where the statement's text ends
}

// next gives the type and the range of the next token; at the end tokEOF, an empty range.
func (s *scanner) next() (lexer.TokenType, int, int) {
	if unclosed := s.skipBlanks(); unclosed >= 0 {
		return tokBad, unclosed, s.end
	}
	start := s.at
	if start >= s.end {
		return tokEOF, s.end, s.end
	}
	c := s.src[start]
	switch {
	case isWordStart(c):
		s.at = wordEnd(s.src[:s.end], start)
		if s.at > start {
			return wordType(s.src[start:s.at]), start, s.at
		}
		return s.stray(start)
	case isDigit(c), c == '.' && isDigit(s.peek(1)):
		t := s.number()
		return t, start, s.at
	case c == '\'':
		return s.quoted(start, '\'', tokText)
	case c == '"':
		return s.quoted(start, '"', tokQuoted)
	case c == ':':
		s.at = wordEnd(s.src[:s.end], start+1)
		if s.at > start+1 {
			return tokParam, start, s.at
		}
		if s.at = start; s.peek(1) == ':' {
			s.at += 2
			return tokBad, start, s.at
		}
		return s.stray(start)
	}
	return s.mark(start)
}

func (s *scanner) peek(ahead int) byte {
	if s.at+ahead < s.end {
		return s.src[s.at+ahead]
	}
	return 0
}

// skipBlanks passes blanks and comments. It gives where a comment begins that never
// ends, else -1.
func (s *scanner) skipBlanks() (unclosed int) {
	for s.at < s.end {
		c := s.src[s.at]
		switch {
		case c == ' ' || c == '\n' || c == '\t' || c == '\r' || c == '\f' || c == '\v':
			s.at++
		case c == '-' && s.peek(1) == '-':
			if n := strings.IndexByte(s.src[s.at:s.end], '\n'); n >= 0 {
				s.at += n + 1
			} else {
				s.at = s.end
			}
		case c == '/' && s.peek(1) == '*':
			n := strings.Index(s.src[s.at+2:s.end], "*/")
			if n < 0 {
				start := s.at
				s.at = s.end
				return start
			}
			s.at += 2 + n + 2
		case c >= utf8.RuneSelf:
			r, size := utf8.DecodeRuneInString(s.src[s.at:s.end])
			if !unicode.IsSpace(r) && r != '\uFEFF' {
				return -1
			}
			s.at += size
		default:
			return -1
		}
	}
	return -1
}

// isWordStart is only a first look: bytes of longer letters are looked at in wordEnd.
func isWordStart(c byte) bool {
	return 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || c == '_' || c >= utf8.RuneSelf
}

func isDigit(c byte) bool { return '0' <= c && c <= '9' }

// wordEnd gives where the word ends that begins at start; start itself if none does.
func wordEnd(src string, start int) int {
	at := start
	for at < len(src) {
		c := src[at]
		if c < utf8.RuneSelf {
			if 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || c == '_' || isDigit(c) && at > start {
				at++
				continue
			}
			return at
		}
		r, size := utf8.DecodeRuneInString(src[at:])
		if unicode.IsLetter(r) || at > start && (unicode.IsMark(r) || unicode.IsDigit(r)) {
			at += size
			continue
		}
		return at
	}
	return at
}

// number reads a number without a sign. A letter, a point or a digit that touches its
// end makes the whole of it bad: STEP 0.5m would else be read as 0.5 AS m.
func (s *scanner) number() lexer.TokenType {
	t := tokNumber
	s.digits()
	if s.peek(0) == '.' {
		s.at++
		if !isDigit(s.peek(0)) {
			t = tokBad
		}
		s.digits()
	}
	if c := s.peek(0); c == 'e' || c == 'E' {
		sign := 0
		if d := s.peek(1); d == '+' || d == '-' {
			sign = 1
		}
		if isDigit(s.peek(1 + sign)) {
			s.at += 1 + sign
			s.digits()
		}
	}
	for s.at < s.end {
		after := wordEnd(s.src[:s.end], s.at)
		if after == s.at && (s.src[s.at] == '.' || isDigit(s.src[s.at])) {
			after++
		}
		if after == s.at {
			return t
		}
		s.at, t = after, tokBad
	}
	return t
}

func (s *scanner) digits() {
	for s.at < s.end && isDigit(s.src[s.at]) {
		s.at++
	}
}

// quoted reads up to the closing mark; a doubled mark stands for itself. An empty name,
// and whatever does not end, is bad.
func (s *scanner) quoted(start int, mark byte, t lexer.TokenType) (lexer.TokenType, int, int) {
	at := start + 1
	for {
		n := strings.IndexByte(s.src[at:s.end], mark)
		if n < 0 {
			s.at = s.end
			return tokBad, start, s.end
		}
		at += n + 1
		if at < s.end && s.src[at] == mark {
			at++
			continue
		}
		s.at = at
		if t == tokQuoted && at == start+2 || !utf8.ValidString(s.src[start:at]) {
			return tokBad, start, at
		}
		return t, start, at
	}
}

// marks are the operators and brackets of one sign, and pairs those of two. Some pairs
// are bad: they are of other languages, and a hint is known for them.
var (
	marks = [utf8.RuneSelf]lexer.TokenType{'(': tokLeft, ')': tokRight, ',': tokComma, '.': tokDot, ';': tokSemicolon,
		'+': tokPlus, '-': tokMinus, '*': tokStar, '/': tokSlash, '%': tokPercent, '^': tokCaret,
		'=': tokEquals, '<': tokLess, '>': tokGreater}
	pairs = map[string]lexer.TokenType{"<>": tokNotEquals, "!=": tokNotEquals, "<=": tokLessOrEqual, ">=": tokGreaterOrEqual,
		"||": tokConcat, "==": tokBad, "=>": tokBad, "=<": tokBad, "&&": tokBad}
)

// mark reads an operator or a bracket.
func (s *scanner) mark(start int) (lexer.TokenType, int, int) {
	c := s.src[start]
	switch c {
	case '=', '<', '>', '!', '|', '&':
		if start+2 <= s.end {
			if t, known := pairs[s.src[start:start+2]]; known {
				s.at = start + 2
				return t, start, s.at
			}
		}
	}
	if c < utf8.RuneSelf && marks[c] != 0 {
		s.at = start + 1
		return marks[c], start, s.at
	}
	return s.stray(start)
}

// stray takes the one character that begins no token.
func (s *scanner) stray(start int) (lexer.TokenType, int, int) {
	_, size := utf8.DecodeRuneInString(s.src[start:s.end])
	s.at = start + size
	return tokBad, start, s.at
}

// maxOpen is how many brackets may be open at once before the rest of a statement is
// not even cut up. The parser counts a level for every second bracket at least, so that
// it has refused the text long before it gets there.
const maxOpen = 3 * maxDepth

// stream hands the tokens of a range of the text to participle, one at a time.
type stream struct {
	scanner
	open  int
	count int
}

func newStream(src string, piece Span) *stream {
	return &stream{scanner: scanner{src: src, at: piece.Start, end: piece.End}}
}

// Next implements lexer.Lexer. It never fails.
func (s *stream) Next() (lexer.Token, error) {
	s.count++
	t, start, end := s.next()
	switch t {
	case tokLeft:
		if s.open++; s.open > maxOpen {
			t, end = tokEOF, start
			s.at = start
		}
	case tokRight:
		s.open--
	}
	return lexer.Token{Type: t, Value: s.src[start:end], Pos: lexer.Position{Offset: start}}, nil
}

// tokens cuts a range of the text up, with a closing tokEOF.
func tokens(src string, piece Span) []lexer.Token {
	s := newStream(src, piece)
	list := make([]lexer.Token, 0, 8+piece.Len()/4)
	for {
		t, _ := s.Next()
		list = append(list, t)
		if t.Type == tokEOF {
			linkTokens(list)
			return list
		}
	}
}

// linkTokens uses the places in the tokens for what the parser asks. Pos.Offset is the
// byte offset in the whole text; Pos.Line becomes the number of tokens that follow, by
// which a hook of participle finds how many there are; and Pos.Column of a "(" becomes
// the index of the ")" that closes it, 0 when none does. (Line and column for people
// are counted from the offset when a message is made: counting columns for each token
// from the start of its line would take quadratic time.)
func linkTokens(list []lexer.Token) {
	var open []int
	for i := range list {
		t := &list[i]
		t.Pos.Line = len(list) - 1 - i
		switch t.Type {
		case tokLeft:
			open = append(open, i)
		case tokRight:
			if n := len(open); n > 0 {
				list[open[n-1]].Pos.Column = i
				open = open[:n-1]
			}
		}
	}
}

// peekable makes participle's own list of the tokens, and gives it to us too.
func peekable(src string, piece Span) (*lexer.PeekingLexer, []lexer.Token, error) {
	s := newStream(src, piece)
	lex, err := lexer.Upgrade(s)
	if err != nil {
		return nil, nil, err
	}
	list := lex.Range(0, lexer.RawCursor(s.count))
	linkTokens(list)
	return lex, list, nil
}

// definition is our lexer as participle sees it.
type definition struct{}

// Symbols implements lexer.Definition.
func (definition) Symbols() map[string]lexer.TokenType { return symbols }

// Lex implements lexer.Definition.
func (definition) Lex(_ string, r io.Reader) (lexer.Lexer, error) {
	text, err := io.ReadAll(r)
	if err != nil {
		return nil, err
	}
	return newStream(string(text), Span{0, len(text)}), nil
}
