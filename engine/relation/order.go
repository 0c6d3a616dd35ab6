package relation

import (
	"cmp"
	"encoding/binary"
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/voronoi/delaunay"
)

// order compares rows of the input by the values of FOR EACH and by their
// identifiers. Every value has a key: unsigned numbers in the order of the
// values, equal only for equal values.
type order struct {
	id   *column.Vector
	each [][]uint64 // by column (three for a point), then by row
	ids  []uint64   // by row
}

func newOrder(b *Bound, input *column.Table) *order {
	o := &order{id: &input.Cols[b.ID]}
	for _, c := range b.Clauses.Each {
		o.each = append(o.each, sortKeys(&input.Cols[c])...)
	}
	o.ids = sortKeys(o.id)[0]
	return o
}

// sortKeys are the keys of a column; those of NULLs mean nothing.
func sortKeys(v *column.Vector) [][]uint64 {
	keys := make([]uint64, v.N)
	delaunay.AdviseHugePages(keys)
	switch v.Type {
	case column.Integer, column.Timestamp, column.Interval:
		for i, x := range v.I[:v.N] {
			keys[i] = uint64(x) ^ 1<<63
		}
	case column.Real:
		for i, x := range v.F[:v.N] {
			keys[i] = realKey(x)
		}
	case column.Text:
		rank := ranks(v.Dict)
		for i, c := range v.C[:v.N] {
			keys[i] = uint64(rank[c])
		}
	case column.Boolean:
		for i := range keys {
			if column.Bit(v.Bits, i) {
				keys[i] = 1
			}
		}
	case column.Point:
		x, y, z := keys, make([]uint64, v.N), make([]uint64, v.N)
		for i := range keys {
			x[i], y[i], z[i] = realKey(v.F[3*i]), realKey(v.F[3*i+1]), realKey(v.F[3*i+2])
		}
		return [][]uint64{x, y, z}
	}
	return [][]uint64{keys}
}

// realKey orders float64 as numbers; -0 and 0 are equal.
func realKey(x float64) uint64 {
	bits := math.Float64bits(x + 0) // -0 + 0 is 0
	if bits>>63 != 0 {
		return ^bits
	}
	return bits | 1<<63
}

// ranks gives each code the position of its text in code point order (which for
// UTF-8 is the order of the bytes); equal texts have equal ranks.
func ranks(d *column.Dict) []uint32 {
	if rank := ascending(d.Texts); rank != nil {
		return rank
	}
	type entry struct {
		prefix uint64 // the first eight bytes decide most comparisons
		code   uint32
	}
	entries := make([]entry, len(d.Texts))
	for i, s := range d.Texts {
		var first [8]byte
		copy(first[:], s)
		entries[i] = entry{binary.BigEndian.Uint64(first[:]), uint32(i)}
	}
	slices.SortFunc(entries, func(a, b entry) int {
		if a.prefix != b.prefix {
			return cmp.Compare(a.prefix, b.prefix)
		}
		return cmp.Compare(d.Texts[a.code], d.Texts[b.code])
	})
	rank := make([]uint32, len(entries))
	for i, e := range entries {
		if i > 0 && d.Texts[e.code] == d.Texts[entries[i-1].code] {
			rank[e.code] = rank[entries[i-1].code]
		} else {
			rank[e.code] = uint32(i)
		}
	}
	return rank
}

// ascending gives texts that stand in their order already, as identifiers mostly do,
// their numbers; nil where they do not.
func ascending(texts []string) []uint32 {
	for i := 1; i < len(texts); i++ {
		if texts[i-1] >= texts[i] {
			return nil
		}
	}
	rank := make([]uint32, len(texts))
	delaunay.AdviseHugePages(rank)
	for i := range rank {
		rank[i] = uint32(i)
	}
	return rank
}

// part compares the values of FOR EACH.
func (o *order) part(a, b int32) int {
	for _, k := range o.each {
		if k[a] != k[b] {
			return cmp.Compare(k[a], k[b])
		}
	}
	return 0
}

func (o *order) samePart(a, b int32) bool { return o.part(a, b) == 0 }

func (o *order) sameID(a, b int32) bool { return o.ids[a] == o.ids[b] }

func (o *order) byID(a, b int32) int { return cmp.Compare(o.ids[a], o.ids[b]) }

// sort orders rows by part, then identifier, then as they stood.
func (o *order) sort(rows []int32) {
	less := func(a, b int32) int {
		if c := o.part(a, b); c != 0 {
			return c
		}
		return o.byID(a, b)
	}
	switch {
	case slices.IsSortedFunc(rows, less):
	case len(rows) < 512:
		slices.SortStableFunc(rows, less)
	default:
		spare := make([]int32, len(rows))
		rows = radix(rows, spare, o.ids)
		for i := len(o.each) - 1; i >= 0; i-- {
			rows = radix(rows, spare, o.each[i])
		}
	}
}

// radix sorts rows by their keys, byte by byte from the lowest; equal keys keep
// their order. Bytes that are the same in all keys cost one look.
func radix(rows, spare []int32, keys []uint64) []int32 {
	var differ uint64
	for _, r := range rows {
		differ |= keys[r] ^ keys[rows[0]]
	}
	from, to := rows, spare
	for shift := 0; shift < 64; shift += 8 {
		if differ>>shift&0xff == 0 {
			continue
		}
		var at [256]int32
		for _, r := range from {
			at[keys[r]>>shift&0xff]++
		}
		next := int32(0)
		for i, n := range at {
			at[i], next = next, next+n
		}
		for _, r := range from {
			b := keys[r] >> shift & 0xff
			to[at[b]] = r
			at[b]++
		}
		from, to = to, from
	}
	if &from[0] != &rows[0] {
		copy(rows, from)
	}
	return rows
}

// distinct is one row for each identifier, in the order of identifiers.
func (o *order) distinct(rows []int32) []int32 {
	rows = slices.Clone(rows)
	if len(rows) < 512 {
		slices.SortStableFunc(rows, o.byID)
	} else {
		radix(rows, make([]int32, len(rows)), o.ids)
	}
	return slices.CompactFunc(rows, o.sameID)
}

// names are the distinct identifiers of rows, in their order.
func (o *order) names(rows []int32) []string {
	rows = o.distinct(rows)
	names := make([]string, len(rows))
	for i, r := range rows {
		names[i] = idText(o.id, int(r))
	}
	return names
}
