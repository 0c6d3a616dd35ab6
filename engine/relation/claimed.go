package relation

import "nearcell/catalog/column"

// Division is how a closed space was divided: among how many partitions of FOR EACH, and
// how much of their space together no site was given.
type Division struct {
	Partitions int64
	Unclaimed  float64
}

// Divider are rows that know how their space was divided.
type Divider interface {
	// Division counts the partitions with a row of the input among on, nil: all; ok is
	// false where nothing closes the cells.
	Division(on []uint64) (d Division, ok bool)
}

// Division counts what no site was given: zones without a site, parts of MEASURED IN that
// lie outside the solid.
func (s *sites) Division(on []uint64) (d Division, ok bool) {
	if !s.b.Closed() || s.b.Def.Pairs {
		return Division{}, false
	}
	counts := func(rows []int32) bool {
		if on == nil {
			return true
		}
		for _, row := range rows {
			if column.Bit(on, int(row)) {
				return true
			}
		}
		return false
	}
	space, _ := s.b.Space()
	for lo := 0; lo < len(s.parts); {
		hi, some, claimed := lo, false, 0.0
		for ; hi < len(s.parts) && s.parts[hi].Group == s.parts[lo].Group; hi++ {
			some = some || counts(s.parts[hi].Rows)
			claimed += s.b.claimed(s.parts[hi])
		}
		if some {
			d.Partitions++
			d.Unclaimed += max(0, space-claimed)
		}
		lo = hi
	}
	for _, rows := range s.said.lost {
		if counts(rows) {
			d.Partitions++
			d.Unclaimed += space
		}
	}
	return d, true
}

// claimed is how much of the space in which measures count the sites of a part divide.
func (b *Bound) claimed(p *Part) float64 {
	if b.measuredIn() {
		return b.Clauses.Inside[max(0, p.Zone)]
	}
	return p.Solid.Volume()
}
