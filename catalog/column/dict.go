package column

import (
	"slices"
	"strings"
)

// Find is the code of a text. It looks at every text of the dictionary, which
// is what a query with one constant needs; whoever looks up many builds an
// Index.
func (d *Dict) Find(s string) (code uint32, ok bool) {
	for i, t := range d.Texts {
		if t == s {
			return uint32(i), true
		}
	}
	return 0, false
}

// Index maps every text to its code, the first one where a text stands twice.
func (d *Dict) Index() map[string]uint32 {
	m := make(map[string]uint32, len(d.Texts))
	for i, t := range d.Texts {
		if _, ok := m[t]; !ok {
			m[t] = uint32(i)
		}
	}
	return m
}

// Ranks gives each code its place in the order of the texts (by bytes, which
// for UTF-8 is the order of the characters' numbers). Equal texts get equal
// ranks, so that ranks can be compared in place of texts.
func (d *Dict) Ranks() []uint32 {
	order := make([]uint32, len(d.Texts))
	for i := range order {
		order[i] = uint32(i)
	}
	slices.SortFunc(order, func(a, b uint32) int { return strings.Compare(d.Texts[a], d.Texts[b]) })
	ranks := make([]uint32, len(d.Texts))
	r := uint32(0)
	for i, c := range order {
		if i > 0 && d.Texts[c] != d.Texts[order[i-1]] {
			r++
		}
		ranks[c] = r
	}
	return ranks
}

// Unify is a dictionary with the texts of both, and for each code of a and of b
// the code there. Where the two are one, it is that one.
func Unify(a, b *Dict) (d *Dict, fromA, fromB []uint32) {
	if a == b {
		return a, identity(len(a.Texts)), identity(len(a.Texts))
	}
	d = &Dict{}
	index := make(map[string]uint32, len(a.Texts)+len(b.Texts))
	take := func(texts []string) []uint32 {
		codes := make([]uint32, len(texts))
		for i, t := range texts {
			c, ok := index[t]
			if !ok {
				c = uint32(len(d.Texts))
				d.Texts = append(d.Texts, t)
				index[t] = c
			}
			codes[i] = c
		}
		return codes
	}
	fromA = take(a.Texts)
	return d, fromA, take(b.Texts)
}

func identity(n int) []uint32 {
	m := make([]uint32, n)
	for i := range m {
		m[i] = uint32(i)
	}
	return m
}

// Compact is the vector with a dictionary of just the texts in use, in the order
// of their first appearance. Two text vectors of equal values have equal codes
// after it. Vectors of other types are returned as they are.
func Compact(v *Vector) Vector {
	if v.Type != Text {
		return *v
	}
	out := *v
	out.C = make([]uint32, v.N)
	out.Dict = &Dict{}
	codes := make([]uint32, len(v.Dict.Texts)) // code there + 1
	index := map[string]uint32{}
	for i, c := range v.C[:v.N] {
		if v.IsNull(i) {
			continue
		}
		if codes[c] == 0 {
			t := v.Dict.Texts[c]
			n, ok := index[t]
			if !ok {
				n = uint32(len(out.Dict.Texts))
				out.Dict.Texts = append(out.Dict.Texts, t)
				index[t] = n
			}
			codes[c] = n + 1
		}
		out.C[i] = codes[c] - 1
	}
	if v.N > 0 {
		out.Dict = out.Dict.withText()
	}
	return out
}
