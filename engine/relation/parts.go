package relation

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
)

// Part is the rows of the input that share one diagram: those with one value of
// FOR EACH, or all of them.
//
// Rows stand in the order of their identifiers, whatever their order in the
// input. Several rows may refer to one site (equal coordinates); each then has
// its share of what the site's cell measures.
type Part struct {
	Rows  []int32   // rows of the input
	Site  []int32   // of each row, its site in Sites
	Share []float64 // of each row, 1 / the number of rows of its site; nil: all 1
	Sites []r3.Vec  // distinct places, in the order of their first row
}

// share is the part of its site's measures that row k has.
func (p *Part) share(k int) float64 {
	if p.Share == nil {
		return 1
	}
	return p.Share[k]
}

// arrange sorts the input into parts. It refuses what has no partition:
// missing identifiers and coordinates, identifiers that repeat in a part.
func arrange(b *Bound, env *Env, input *column.Table, order *order) ([]*Part, error) {
	rows, err := admitted(b, env, input)
	if err != nil {
		return nil, err
	}
	order.sort(rows)
	var parts []*Part
	for lo := 0; lo < len(rows); {
		hi := lo + 1
		for hi < len(rows) && order.samePart(rows[lo], rows[hi]) {
			hi++
		}
		if err := distinct(b, input, order, rows[lo:hi]); err != nil {
			return nil, err
		}
		part := &Part{Rows: slices.Clip(rows[lo:hi])}
		place(b, input, part)
		parts = append(parts, part)
		lo = hi
	}
	if err := scattered(b, env, input, order, parts); err != nil {
		return nil, err
	}
	return parts, duplicates(b, env, input, order, parts)
}

// order compares rows of the input by the values of FOR EACH and by their
// identifiers. Texts are compared by the rank of their code.
type order struct {
	each []*column.Vector
	id   *column.Vector
	rank map[*column.Dict][]int32
}

func newOrder(b *Bound, input *column.Table) *order {
	o := &order{id: &input.Cols[b.ID], rank: map[*column.Dict][]int32{}}
	for _, c := range b.Clauses.Each {
		o.each = append(o.each, &input.Cols[c])
	}
	for _, v := range append(o.each[:len(o.each):len(o.each)], o.id) {
		if v.Type == column.Text && o.rank[v.Dict] == nil {
			o.rank[v.Dict] = ranks(v.Dict)
		}
	}
	return o
}

// ranks gives each code the position of its text in code point order (which for
// UTF-8 is the order of the bytes); equal texts have equal ranks.
func ranks(d *column.Dict) []int32 {
	codes := make([]int32, len(d.Texts))
	for i := range codes {
		codes[i] = int32(i)
	}
	slices.SortFunc(codes, func(a, b int32) int { return cmp.Compare(d.Texts[a], d.Texts[b]) })
	rank := make([]int32, len(codes))
	for i, c := range codes {
		if i > 0 && d.Texts[c] == d.Texts[codes[i-1]] {
			rank[c] = rank[codes[i-1]]
		} else {
			rank[c] = int32(i)
		}
	}
	return rank
}

// compare orders two present values of a column.
func (o *order) compare(v *column.Vector, a, b int32) int {
	switch v.Type {
	case column.Integer, column.Timestamp, column.Interval:
		return cmp.Compare(v.I[a], v.I[b])
	case column.Real:
		return cmp.Compare(v.F[a], v.F[b]) // -0 and 0 are equal
	case column.Text:
		rank := o.rank[v.Dict]
		return cmp.Compare(rank[v.C[a]], rank[v.C[b]])
	case column.Boolean:
		x, y := column.Bit(v.Bits, int(a)), column.Bit(v.Bits, int(b))
		switch {
		case x == y:
			return 0
		case y:
			return -1
		}
		return 1
	case column.Point:
		return slices.Compare(v.F[3*a:3*a+3], v.F[3*b:3*b+3])
	}
	return 0
}

func (o *order) part(a, b int32) int {
	for _, v := range o.each {
		if c := o.compare(v, a, b); c != 0 {
			return c
		}
	}
	return 0
}

func (o *order) samePart(a, b int32) bool { return o.part(a, b) == 0 }

func (o *order) sameID(a, b int32) bool { return o.compare(o.id, a, b) == 0 }

// sort orders rows by part, then identifier, then their order in the input.
func (o *order) sort(rows []int32) {
	less := func(a, b int32) int {
		if c := o.part(a, b); c != 0 {
			return c
		}
		return o.compare(o.id, a, b)
	}
	if !slices.IsSortedFunc(rows, less) {
		slices.SortStableFunc(rows, less)
	}
}

// position is the place of a row; -0 counts as 0.
func position(b *Bound, input *column.Table, row int32) r3.Vec {
	return r3.Vec{
		X: coordinate(&input.Cols[b.X], row),
		Y: coordinate(&input.Cols[b.Y], row),
		Z: coordinate(&input.Cols[b.Z], row),
	}
}

func coordinate(v *column.Vector, row int32) float64 {
	if v.Type == column.Integer {
		return float64(v.I[row])
	}
	return v.F[row] + 0 // -0 + 0 is 0
}

// place finds the distinct places of a part's rows.
func place(b *Bound, input *column.Table, p *Part) {
	p.Site = make([]int32, len(p.Rows))
	p.Sites = make([]r3.Vec, 0, len(p.Rows))
	seen := newPlaces(len(p.Rows))
	for k, row := range p.Rows {
		at := position(b, input, row)
		site, isNew := seen.index(at, p.Sites)
		if isNew {
			p.Sites = append(p.Sites, at)
		}
		p.Site[k] = site
	}
	if len(p.Sites) == len(p.Rows) {
		return
	}
	count := make([]int32, len(p.Sites))
	for _, s := range p.Site {
		count[s]++
	}
	p.Share = make([]float64, len(p.Rows))
	for k, s := range p.Site {
		p.Share[k] = 1 / float64(count[s])
	}
}

// places is an open-addressing table of positions.
type places struct {
	slots []int32 // site + 1
	mask  uint64
	n     int32
}

func newPlaces(n int) *places {
	size := 16
	for size < 2*n {
		size *= 2
	}
	return &places{slots: make([]int32, size), mask: uint64(size - 1)}
}

// index is the number of the place, and whether it is new (then the caller
// appends it to sites).
func (t *places) index(at r3.Vec, sites []r3.Vec) (int32, bool) {
	h := math.Float64bits(at.X)
	h = mix(h) ^ math.Float64bits(at.Y)
	h = mix(h) ^ math.Float64bits(at.Z)
	for i := mix(h) & t.mask; ; i = (i + 1) & t.mask {
		switch s := t.slots[i]; {
		case s == 0:
			t.n++
			t.slots[i] = t.n
			return t.n - 1, true
		case sites[s-1] == at:
			return s - 1, false
		}
	}
}

// mix spreads the bits of a word (the finaliser of a multiplicative hash).
func mix(h uint64) uint64 {
	h ^= h >> 32
	h *= 0x9e3779b97f4a7c15
	h ^= h >> 29
	h *= 0xbf58476d1ce4e5b9
	return h ^ h>>32
}
