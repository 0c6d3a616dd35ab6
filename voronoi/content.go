package voronoi

import (
	"encoding/binary"
	"math"

	"github.com/cespare/xxhash/v2"
)

// contentKey is a 128-bit key of all that the results depend on: two 64-bit
// hashes with different seeds over the same bytes.
func contentKey(sites []Vec, o Options) [16]byte {
	a, b := xxhash.NewWithSeed(1), xxhash.NewWithSeed(2)
	write := func(buf []byte) {
		a.Write(buf)
		b.Write(buf)
	}
	buf := make([]byte, 0, 24*256)
	number := func(x float64) {
		buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(x))
	}
	number(float64(len(sites)))
	for _, p := range sites {
		p = positive(p)
		number(p.X)
		number(p.Y)
		number(p.Z)
		if len(buf) > 24*250 {
			write(buf)
			buf = buf[:0]
		}
	}
	if o.Solid != nil {
		key := o.Solid.Key()
		buf = append(buf, key[:]...)
		number(o.Tolerance)
	}
	if IsStretch(o.Stretch) {
		number(o.Stretch.X)
		number(o.Stretch.Y)
		number(o.Stretch.Z)
	}
	write(buf)
	var key [16]byte
	binary.LittleEndian.PutUint64(key[:8], a.Sum64())
	binary.LittleEndian.PutUint64(key[8:], b.Sum64())
	return key
}

// distinct finds the sites with equal coordinates among those that take part.
// first[i] is the first site at the place of site i, -1 for a site that takes no
// part.
func distinct(sites []Vec, inside []bool) (first []int32, groups []Group) {
	first = make([]int32, len(sites))
	size := 16
	for size < 2*len(sites) {
		size *= 2
	}
	table := make([]int32, size) // open addressing; site + 1
	groupOf := map[int32]int{}   // only places with more than one site
	for i, p := range sites {
		if !inside[i] {
			first[i] = -1
			continue
		}
		p = positive(p)
		slot := hash(p) & uint64(size-1)
		for table[slot] != 0 && positive(sites[table[slot]-1]) != p {
			slot = (slot + 1) & uint64(size-1)
		}
		if table[slot] == 0 {
			table[slot] = int32(i) + 1
			first[i] = int32(i)
			continue
		}
		f := table[slot] - 1
		first[i] = f
		g, known := groupOf[f]
		if !known {
			g = len(groups)
			groupOf[f] = g
			groups = append(groups, Group{Representative: f, Members: []int32{f}})
		}
		groups[g].Members = append(groups[g].Members, int32(i))
	}
	sortGroups(groups)
	return first, groups
}

func hash(p Vec) uint64 {
	h := math.Float64bits(p.X)*0x9e3779b97f4a7c15 ^ math.Float64bits(p.Y)*0xc2b2ae3d27d4eb4f
	h ^= h >> 32
	h = (h ^ math.Float64bits(p.Z)) * 0x165667b19e3779f9
	h ^= h >> 29
	h *= 0x9e3779b97f4a7c15
	return h ^ h>>32
}
