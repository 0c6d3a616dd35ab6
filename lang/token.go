package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// Token types. Every word that the language knows is a type of its own, so that the
// parser compares numbers and participle's statement structs name words directly.
const (
	tokEOF            = lexer.EOF
	tokBad            = lexer.TokenType(1 + iota) // what no token can begin with, or never ends
	tokWord                                       // a word that the language does not know
	tokQuoted                                     // "a name"
	tokText                                       // 'a text'
	tokNumber                                     // 12, 0.5, 1e-3
	tokParam                                      // :name
	tokLeft                                       // (
	tokRight                                      // )
	tokComma                                      // ,
	tokDot                                        // .
	tokSemicolon                                  // ;
	tokEquals                                     // =
	tokNotEquals                                  // <> and !=
	tokLess                                       // <
	tokLessOrEqual                                // <=
	tokGreater                                    // >
	tokGreaterOrEqual                             // >=
	tokPlus                                       // +
	tokMinus                                      // -
	tokConcat                                     // ||
	tokStar                                       // *
	tokSlash                                      // /
	tokPercent                                    // %
	tokCaret                                      // ^
)

// The three classes of known words lie in ranges of their own.
const (
	firstReserved = lexer.TokenType(100)
	firstStop     = lexer.TokenType(200)
	firstPlain    = lexer.TokenType(300)
)

// symbols are the names by which participle's structs refer to token types.
var symbols = makeSymbols()

func makeSymbols() map[string]lexer.TokenType {
	all := map[string]lexer.TokenType{
		"EOF": tokEOF, "Bad": tokBad, "Word": tokWord, "Quoted": tokQuoted, "Literal": tokText,
		"Numeral": tokNumber, "Parameter": tokParam, "Left": tokLeft, "Right": tokRight,
		"Comma": tokComma, "Dot": tokDot, "Equals": tokEquals, "Dash": tokMinus,
	}
	for t, text := range wordText {
		if text != "" {
			all[text] = lexer.TokenType(t)
		}
	}
	return all
}

// wordTypes finds the type of a known word from its upper-case spelling.
var wordTypes = makeWordTypes()

var longestWord int

func makeWordTypes() map[string]lexer.TokenType {
	all := make(map[string]lexer.TokenType, 256)
	for t, text := range wordText {
		if text != "" {
			all[text] = lexer.TokenType(t)
			longestWord = max(longestWord, len(text))
		}
	}
	return all
}

// wordType tells which known word the text is, or tokWord.
func wordType(text string) lexer.TokenType {
	var upper [16]byte
	if len(text) > longestWord || len(text) > len(upper) {
		return tokWord
	}
	for i := 0; i < len(text); i++ {
		c := text[i]
		if 'a' <= c && c <= 'z' {
			c -= 'a' - 'A'
		}
		upper[i] = c
	}
	if t, known := wordTypes[string(upper[:len(text)])]; known {
		return t
	}
	return tokWord
}

func isReserved(t lexer.TokenType) bool { return firstReserved <= t && t < firstStop }

// isWord tells whether the token can be a word by its place (a noun, a method, a unit).
func isWord(t lexer.TokenType) bool { return t == tokWord || t >= firstStop }

// isName tells whether the token can name something.
func isName(t lexer.TokenType) bool { return t == tokQuoted || isWord(t) }

// isAnyWord tells whether the token is a word at all, reserved or quoted too.
func isAnyWord(t lexer.TokenType) bool { return isName(t) || isReserved(t) }

// isBareAlias tells whether the token can be an alias without AS.
func isBareAlias(t lexer.TokenType) bool {
	return t == tokWord || t == tokQuoted || t >= firstPlain
}

// ReservedWords lists the words that must be quoted to be a name, in upper case.
func ReservedWords() []string { return wordRange(firstReserved, firstStop) }

// StopWords lists the words that are names everywhere but need AS to be an alias.
func StopWords() []string { return wordRange(firstStop, firstPlain) }

// PlainWords lists the words that mean something in one place only.
func PlainWords() []string { return wordRange(firstPlain, lexer.TokenType(len(wordText))) }

func wordRange(from, to lexer.TokenType) []string {
	var words []string
	for t := from; t < to && int(t) < len(wordText); t++ {
		if wordText[t] != "" {
			words = append(words, wordText[t])
		}
	}
	return words
}

// tokenStart and tokenEnd give a token's byte offsets in the script.
func tokenStart(t *lexer.Token) int { return t.Pos.Offset }
func tokenEnd(t *lexer.Token) int   { return t.Pos.Offset + len(t.Value) }

func tokenSpan(t *lexer.Token) Span { return Span{tokenStart(t), tokenEnd(t)} }

// shown describes a token in a message.
func shown(t *lexer.Token) string {
	switch {
	case t.Type == tokEOF:
		return "the end of the statement"
	case t.Type == tokText:
		return "the text " + cutShort(t.Value)
	case t.Type == tokQuoted:
		return "the name " + cutShort(t.Value)
	case t.Type == tokNumber:
		return "the number " + cutShort(t.Value)
	case isReserved(t.Type):
		return strings.ToUpper(t.Value)
	}
	return "'" + cutShort(t.Value) + "'"
}

// cutShort keeps what a message quotes to one line of bearable length.
func cutShort(text string) string {
	const most = 40
	text = strings.Join(strings.Fields(text), " ")
	if runes := []rune(text); len(runes) > most {
		return string(runes[:most]) + "…"
	}
	return text
}
