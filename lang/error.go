package lang

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/alecthomas/participle/v2/lexer"
)

// Error is a fault in a text: the place, what is wrong, and where one is known a way
// out. The same type serves faults that are found later, when names are bound.
type Error struct {
	Span    Span
	Message string
	Hint    string

	// opened is one more than the offset of a bracket that is still open, 0 for none.
	opened int
}

// Error gives the message with the hint in brackets behind it.
func (e *Error) Error() string {
	if e.Hint == "" {
		return e.Message
	}
	return e.Message + " (" + e.Hint + ")"
}

// lexicalFault says what is wrong with a bad token.
func lexicalFault(t *lexer.Token) *Error {
	at, text := tokenStart(t), t.Value
	begin := Span{at, at + 1}
	switch c := text[0]; {
	case strings.HasPrefix(text, "/*"):
		return &Error{Span: Span{at, at + 2}, Message: "this comment is never closed", Hint: "end it with */"}
	case (c == '\'' || c == '"') && !utf8.ValidString(text):
		return &Error{Span: begin, Message: "what is quoted here is not valid UTF-8", Hint: "save the file as UTF-8"}
	case c == '\'':
		return &Error{Span: begin, Message: "this text is never closed", Hint: "end it with '; inside a text write '' for one '"}
	case text == `""`:
		return &Error{Span: tokenSpan(t), Message: "a name cannot be empty", Hint: "an empty text is ''"}
	case c == '"':
		return &Error{Span: begin, Message: "this quoted name is never closed", Hint: `end it with "; inside a name write "" for one "`}
	case isDigit(c) || c == '.':
		return numberFault(t)
	}
	return strayFault(t)
}

func numberFault(t *lexer.Token) *Error {
	text := t.Value
	s := scanner{src: text, end: len(text)}
	s.digits()
	if s.peek(0) == '.' {
		s.at++
		s.digits()
	}
	rest := text[s.at:]
	e := &Error{Span: tokenSpan(t), Message: "'" + cutShort(text) + "' is not a number"}
	switch {
	case rest == "":
		e.Hint = "digits must follow the point: " + text + "0"
	case rest[0] != '.' && rest[0] != '_':
		e.Hint = "units are not written behind numbers; put a blank before a word"
	}
	return e
}

// strayHints are ways out for signs that other habits bring along.
var strayHints = map[string]string{
	"==": "one = compares", "=>": "did you mean >=?", "=<": "did you mean <=?", "&&": "write AND",
	"!": "write NOT, or <> for unequal", "|": "write OR, or || to join texts", "&": "write AND",
	"#": "comments begin with --", "`": `quote names with "`, "[": `quote names with "`, "]": `quote names with "`,
	"‘": "texts stand between straight quotes: '", "’": "texts stand between straight quotes: '",
	"“": `write a straight quote: ' for texts, " for names`, "”": `write a straight quote: ' for texts, " for names`,
	"„": `write a straight quote: ' for texts, " for names`,
	"−": "write the minus of the keyboard: -", "–": "write the minus of the keyboard: -", "—": "write the minus of the keyboard: -",
	"×": "write *", "·": "write *", "÷": "write /", "≤": "write <=", "≥": "write >=", "≠": "write <>", "²": "write ^2", "³": "write ^3",
	"\\": "commands are statements and end with ; : HELP; LIST TABLES; QUIT;",
	":":  "a value set by LET is written :name, without a blank", "°": "a unit is a text: '°C'", "::": "write CAST(x AS type)",
	"$": "a value set by LET is written :name", "@": "a value set by LET is written :name", "?": "a value set by LET is written :name",
}

func strayFault(t *lexer.Token) *Error {
	text := t.Value
	if !utf8.ValidString(text) {
		return &Error{Span: tokenSpan(t), Message: "this byte is not valid UTF-8", Hint: "save the file as UTF-8"}
	}
	sign := "'" + cutShort(text) + "'"
	if r, _ := utf8.DecodeRuneInString(text); !unicode.IsPrint(r) {
		sign = fmt.Sprintf("the invisible character %U", r)
	}
	return &Error{Span: tokenSpan(t), Message: sign + " means nothing here", Hint: strayHints[text]}
}

// finish completes a message that needs the whole text: where the open bracket stands.
func finish(src string, err *Error) *Error {
	if err.opened > 0 {
		line, column := LineColumn(src, err.opened-1)
		place := "column " + itoa(column)
		if first, _ := LineColumn(src, err.Span.Start); first != line {
			place = "line " + itoa(line) + ", " + place
		}
		hint := "the ( in " + place + " is not closed"
		if err.Hint != "" {
			hint += "; " + err.Hint
		}
		err.Hint, err.opened = hint, 0
	}
	return err
}
