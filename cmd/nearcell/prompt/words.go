package prompt

import (
	"errors"
	"regexp"
	"slices"
	"strings"
	"sync"

	"nearcell/lang"
)

// neutral is a word that the language does not know. Here and there the parser
// says something else of such a word than of one that it knows and that is only a
// name at the place, such as other.
const (
	neutral = "zq"
	other   = "preceding"
)

// probes are texts that tell a word that means something from a name: behind a
// name they do what they do behind any name.
var probes = []string{"", " " + neutral, " (", " 'x'", " 1", " BY", " OF", " AS", " = 1", " BETWEEN 1 AND 2", " (SELECT 1)", " (zq)"}

// known are all words of the language.
var known = sync.OnceValue(func() []string {
	return slices.Concat(lang.ReservedWords(), lang.StopWords(), lang.PlainWords())
})

// fault gives where the parser stops in a text, len(text) for the end or not at all.
func fault(text string) (at int, message string) {
	_, err := lang.ParseStatement(text, lang.Piece{Span: lang.Span{End: len(text)}})
	var e *lang.Error
	if errors.As(err, &e) {
		return e.Span.Start, e.Message
	}
	return len(text), ""
}

// passes tells whether the parser gets past a word behind the text before it,
// which ends in a blank unless it is empty. VALUES means something only before a
// bracket.
func passes(before, word string) bool {
	head := before + word
	if at, _ := fault(head); at >= len(head) {
		return true
	}
	at, _ := fault(head + " (")
	return at >= len(head)
}

// acceptsName tells whether a name of the user's may stand behind a text.
func acceptsName(before string) bool { return passes(before, neutral) }

// blamed marks a probe for which the parser refuses the word before it, as it
// does with a name that it takes for a slip of the pen.
const blamed = -1 << 30

// follows says how the parser fares with each probe behind a word.
func follows(before, word string) []int {
	places := make([]int, len(probes))
	head := before + word
	for i, p := range probes {
		at, message := fault(head + p)
		places[i] = 2 * (at - len(head))
		if message != "" {
			places[i]++
		}
		if at < len(head) {
			places[i] = blamed
		}
	}
	return places
}

// alike tells whether a word fares as a name does.
func alike(places, name []int) bool {
	for i, p := range places {
		if p != blamed && p != name[i] {
			return false
		}
	}
	return true
}

// wordsAt are the words of the language that may stand behind a text, each as
// far as only one word can follow it ("GROUP BY"). Only words that begin with
// prefix are tried. The parser itself is asked, so that this cannot drift from it.
func wordsAt(before, prefix string) []string {
	named := acceptsName(before)
	var likeNeutral, likeOther []int
	if named {
		likeNeutral = follows(before, neutral)
		likeOther = follows(before, other)
	}
	var list []string
	for _, w := range known() {
		if !foldPrefix(w, prefix) || !passes(before, w) {
			continue
		}
		if named {
			if places := follows(before, w); alike(places, likeNeutral) || alike(places, likeOther) {
				continue
			}
		}
		list = append(list, lengthened(before, w))
	}
	slices.Sort(list)
	return list
}

var oneWord = regexp.MustCompile(`^expected ([A-Z]+) but found the end`)

// lengthened adds the words that must follow a word.
func lengthened(before, word string) string {
	for range 3 {
		next := onlyNext(before + word)
		if next == "" || next == onlyNext(before+neutral) {
			break
		}
		word += " " + next
	}
	return word
}

// onlyNext is the one word that must follow a text, or "".
func onlyNext(text string) string {
	_, message := fault(text)
	if m := oneWord.FindStringSubmatch(message); m != nil {
		return m[1]
	}
	return ""
}

// clauseWords are the words with which a clause of a relation begins: those that
// may follow a relation, but not a name that is a source.
var clauseWords = sync.OnceValue(func() map[string]bool {
	const source, relation = "SELECT * FROM " + neutral + " ", "SELECT * FROM " + neutral + " OF " + neutral + " "
	set := map[string]bool{}
	for _, w := range known() {
		if passes(relation, w) && !passes(source, w) {
			set[w] = true
		}
	}
	return set
})

func foldPrefix(s, prefix string) bool {
	return len(s) >= len(prefix) && strings.EqualFold(s[:len(prefix)], prefix)
}
