package lang

import "strings"

import (
	"strconv"
)

func itoa(n int) string { return strconv.Itoa(n) }

// Nearest gives the candidate that the word most likely was meant to be, or "" when
// none is near. Near is one slip (a letter left out, added, exchanged, or two
// neighbours swapped) for every three letters, at least one, at most three, and never
// as many as either word has letters; case does not count. Of equally near ones the first is taken.
// A word that is itself a candidate gives that candidate.
//
// The distance is the restricted edit distance with transpositions (Damerau 1964).
func Nearest(word string, candidates []string) string {
	a := []rune(Fold(word))
	limit := min(max(len(a)/3, 1), 3)
	best, bestDistance := "", limit+1
	for _, candidate := range candidates {
		b := []rune(Fold(candidate))
		if len(a)-len(b) >= bestDistance || len(b)-len(a) >= bestDistance {
			continue
		}
		if d := editDistance(a, b); d < bestDistance && d < min(len(a), len(b)) {
			best, bestDistance = candidate, d
		}
	}
	return best
}

// Shortened finds what a word is the beginning of, or what is the beginning of a
// word: 'vol' for 'volume', 'temperature' for 'temp'; the shortest of several, "" where
// there is none. Beginnings have at least three letters; case does not count.
func Shortened(word string, candidates []string) string {
	const least = 3
	a, best := Fold(word), ""
	for _, candidate := range candidates {
		b := Fold(candidate)
		if min(len(a), len(b)) < least || !strings.HasPrefix(a, b) && !strings.HasPrefix(b, a) {
			continue
		}
		if best == "" || len(candidate) < len(best) {
			best = candidate
		}
	}
	return best
}

func editDistance(a, b []rune) int {
	before, last, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			change := 1
			if a[i-1] == b[j-1] {
				change = 0
			}
			d := min(last[j]+1, row[j-1]+1, last[j-1]+change)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				d = min(d, before[j-2]+1)
			}
			row[j] = d
		}
		before, last, row = last, row, before
	}
	return last[len(b)]
}
