package lang

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// IsZero tells that no name was given.
func (n Name) IsZero() bool { return n.Text == "" }

// Key gives the text under which the name is looked up: folded for a bare name, as
// written for a quoted one. Two bare names mean the same exactly when their keys are
// equal. To compare a name of the text with a name that something already has (a
// column, a campaign), use Matches.
func (n Name) Key() string {
	if n.Quoted {
		return n.Text
	}
	return Fold(n.Text)
}

// Matches tells whether the name, as the user wrote it, means the thing that is
// called have: a bare name matches whatever the case, a quoted name exactly.
func (n Name) Matches(have string) bool {
	if n.Quoted {
		return n.Text == have
	}
	return strings.EqualFold(n.Text, have)
}

// Is tells whether the name is the given word, bare and in any case.
func (n Name) Is(word string) bool { return !n.Quoted && strings.EqualFold(n.Text, word) }

// Fold brings a text to the one form that all texts share which differ only in case
// (Unicode simple folding, as strings.EqualFold compares). Letters composed in
// different ways stay different.
func Fold(s string) string {
	for i := 0; i < len(s); i++ {
		c := s[i]
		if c >= utf8.RuneSelf {
			return strings.Map(foldRune, s)
		}
		if 'A' <= c && c <= 'Z' {
			return foldASCIIFrom(s, i)
		}
	}
	return s
}

func foldASCIIFrom(s string, first int) string {
	b := []byte(s)
	for i := first; i < len(b); i++ {
		if b[i] >= utf8.RuneSelf {
			return strings.Map(foldRune, s)
		}
		if 'A' <= b[i] && b[i] <= 'Z' {
			b[i] += 'a' - 'A'
		}
	}
	return string(b)
}

// foldRune maps a letter to the lower case of the smallest letter that folds to it,
// so that σ and ς, or s and ſ, come out the same.
func foldRune(r rune) rune {
	least := r
	for other := unicode.SimpleFold(r); other != r; other = unicode.SimpleFold(other) {
		least = min(least, other)
	}
	return unicode.ToLower(least)
}
