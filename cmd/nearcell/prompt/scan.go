package prompt

import (
	"strings"
	"unicode"
	"unicode/utf8"

	"nearcell/lang"
)

// kind says what a token of a half-written statement is.
type kind uint8

const (
	word   kind = iota // bare, in any case
	quoted             // "…"
	text               // '…'
	number
	param // :name
	mark  // one character
	group // a bracket with all that is in it
	here  // the cursor
)

// token is a piece of a half-written statement. Brackets are one token each,
// with what they hold in inner.
type token struct {
	kind   kind
	text   string // as written; of a group, with its brackets
	open   bool   // a text, name or bracket that is not closed
	inner  []token
	offset int
}

// is tells whether the token is the bare word, in any case.
func (t token) is(w string) bool { return t.kind == word && strings.EqualFold(t.text, w) }

func (t token) isOne(words ...string) bool {
	for _, w := range words {
		if t.is(w) {
			return true
		}
	}
	return false
}

// scanner cuts half-written text up; it never fails. The language's own lexer
// gives no tokens out, and has no use for a cursor.
type scanner struct {
	src    string
	at     int
	cursor int // -1: none, or passed
	// comment is set when the text ends within a comment: '*' for one in
	// brackets, '-' for one to the end of the line.
	comment byte
}

// scan gives the tokens of a statement with the cursor among them. A word that
// touches the cursor is left out: it is what the user is about to complete.
func scan(src string, from, cursor int) []token {
	s := scanner{src: src, at: from, cursor: cursor}
	list, _ := s.list(false)
	return list
}

// list reads tokens up to the closing bracket or the end.
func (s *scanner) list(inside bool) (list []token, closed bool) {
	for {
		s.blanks()
		if s.cursor >= 0 && s.at >= s.cursor {
			list = append(list, token{kind: here, offset: s.cursor})
			s.cursor = -1
		}
		if s.at >= len(s.src) {
			return list, false
		}
		start := s.at
		switch c := s.src[s.at]; {
		case c == '(':
			s.at++
			inner, ok := s.list(true)
			list = append(list, token{kind: group, text: s.src[start:s.at], open: !ok, inner: inner, offset: start})
		case c == ')' && inside:
			s.at++
			return list, true
		default:
			t := s.one()
			t.offset = start
			if s.cursor >= 0 && s.cursor > start && s.cursor <= s.at && t.kind != mark {
				list = append(list, token{kind: here, offset: start})
				s.cursor = -1
				continue
			}
			list = append(list, t)
		}
	}
}

func (s *scanner) blanks() {
	for s.at < len(s.src) {
		rest := s.src[s.at:]
		switch {
		case strings.HasPrefix(rest, "--"):
			s.skip(rest, "\n")
		case strings.HasPrefix(rest, "/*"):
			s.skip(rest, "*/")
		default:
			r, size := utf8.DecodeRuneInString(rest)
			if !unicode.IsSpace(r) {
				return
			}
			s.at += size
		}
	}
}

// skip passes a comment.
func (s *scanner) skip(rest, end string) {
	if n := strings.Index(rest[2:], end); n >= 0 {
		s.at += 2 + n + len(end)
		return
	}
	s.at = len(s.src)
	s.comment = rest[1]
}

// one reads a token that is no bracket.
func (s *scanner) one() token {
	start := s.at
	switch c := s.src[start]; {
	case c == '\'' || c == '"':
		t := token{kind: text, open: !s.quote(c)}
		if c == '"' {
			t.kind = quoted
		}
		t.text = s.src[start:s.at]
		return t
	case c == ':':
		s.at++
		s.word()
		return token{kind: param, text: s.src[start:s.at]}
	case c >= '0' && c <= '9':
		for s.at < len(s.src) && (s.src[s.at] >= '0' && s.src[s.at] <= '9' || s.src[s.at] == '.') {
			s.at++
		}
		return token{kind: number, text: s.src[start:s.at]}
	}
	if s.word(); s.at > start {
		return token{kind: word, text: s.src[start:s.at]}
	}
	_, size := utf8.DecodeRuneInString(s.src[start:])
	s.at += size
	return token{kind: mark, text: s.src[start:s.at]}
}

// quote passes a text or a quoted name and tells whether it is closed.
func (s *scanner) quote(c byte) bool {
	for s.at++; s.at < len(s.src); s.at++ {
		if s.src[s.at] != c {
			continue
		}
		if s.at+1 < len(s.src) && s.src[s.at+1] == c {
			s.at++
			continue
		}
		s.at++
		return true
	}
	return false
}

func (s *scanner) word() {
	for s.at < len(s.src) {
		r, size := utf8.DecodeRuneInString(s.src[s.at:])
		if r != '_' && !unicode.IsLetter(r) && !unicode.IsDigit(r) && !unicode.IsMark(r) {
			return
		}
		s.at += size
	}
}

// unclosed tells what a text ends within: a text ('), a quoted name ("), a
// comment (* or -), or nothing (0).
func unclosed(src string) byte {
	s := scanner{src: src, cursor: -1}
	for {
		s.blanks()
		switch {
		case s.comment != 0:
			return s.comment
		case s.at >= len(src):
			return 0
		}
		if t := s.one(); t.open {
			return t.text[0]
		}
	}
}

// statementAt gives where the statement begins that the cursor is in.
func statementAt(src string, cursor int) int {
	start := 0
	for _, p := range lang.Split(src[:cursor]) {
		if p.Closed {
			start = p.End
			if n := strings.IndexByte(src[start:], ';'); n >= 0 {
				start += n + 1
			}
		}
	}
	return start
}
