package exec

import (
	"fmt"
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// spreads adds up, by group, what the instruments' part of a weighted mean rests on
// where each instrument has an uncertainty u of its own: Σ w²u² of the independent
// errors, and Σ wu of each that all of them share.
type spreads struct {
	of            plan.Instruments
	rows, missing int64 // with weight and value, and those of them without an uncertainty
	groups        []spread
}

type spread struct {
	squares volumeSum
	shared  []volumeSum // by column of of.Common
	beyond  bool        // a square is beyond what can be told
}

// spreads are those that a part keeps, by the number of the call: of a call that two
// parts of the clause speak of there is one entry, since they are of one reading.
func (s *aggregateSink) spreads() map[int]*spreads {
	found := map[int]*spreads{}
	for _, m := range plan.Uncertainties(s.node) {
		if m.ByColumn() && len(m.Lost) == 0 && !m.Merged {
			found[m.Call] = &spreads{of: m}
		}
	}
	return found
}

// add counts the rows that are on and have a weight and a value; the weights have been
// checked. A negative or an infinite uncertainty is a fault of its row.
func (s *spreads) add(b *column.Batch, on []uint64, groups []int32, args []column.Vector, weight *column.Vector) (by int, fault error) {
	if s == nil {
		return 0, nil
	}
	columns := append(append(make([]int, 0, len(s.of.Each)+len(s.of.Common)), s.of.Each...), s.of.Common...)
	u := make([]float64, len(columns))
	forEachOn(on, b.N, func(i int) {
		w, counts := number(weight, i)
		if _, valued := number(&args[0], i); fault != nil || !counts || !valued || w == 0 {
			return
		}
		s.rows++
		known := true
		for k, at := range columns {
			x, some := number(&b.Cols[at], i)
			known = known && some
			if some && !(x >= 0 && x <= math.MaxFloat64) {
				by, fault = k, &function.RowFault{Row: i, Code: "no-value",
					Message: fmt.Sprintf("a standard uncertainty is a finite number of 0 or more, and '%s' is %s", s.by(k).Name, column.FormatReal(x)),
					Hint:    "leave the row out with WHERE, or give it another one in OF (SELECT …), with CASE"}
				return
			}
			u[k] = x
		}
		if !known {
			s.missing++
			return
		}
		s.group(groups[i]).add(w, u, len(s.of.Each))
	})
	return by, fault
}

// number is the value of a row of a numeric column; ok is false where it is NULL.
func number(v *column.Vector, i int) (x float64, ok bool) {
	switch {
	case v.Type == column.Null || v.IsNull(i):
		return 0, false
	case v.Type == column.Real:
		return v.F[i], true
	}
	return float64(v.I[i]), true
}

// add takes in a row of weight w, of whose uncertainties the first are its own.
func (g *spread) add(w float64, u []float64, own int) {
	for k, x := range u {
		p := float64(w * x)
		if k >= own {
			g.shared[k-own].add(p)
			g.beyond = g.beyond || p == 0 && x > 0
			continue
		}
		square := float64(p * p)
		g.beyond = g.beyond || x > 0 && !(square > 0x1p-960 && square < 0x1p960)
		g.squares.add(square)
	}
}

// by is the column k of uncertainties: each one's own come first.
func (s *spreads) by(k int) relation.UncertainBy {
	if own := s.of.Of.EachBy; k < len(own) {
		return own[k]
	}
	return s.of.Of.CommonBy[k-len(s.of.Of.EachBy)]
}

// bytes is what the sums by group take, at a guess of their headers.
func (s *spreads) bytes() int64 {
	if s == nil {
		return 0
	}
	return int64(len(s.groups)) * int64(48+16*len(s.of.Common))
}

func (s *spreads) group(g int32) *spread {
	for int(g) >= len(s.groups) {
		s.groups = append(s.groups, spread{shared: make([]volumeSum, len(s.of.Common))})
	}
	return &s.groups[g]
}

// merge takes in another part's, whose group g is to[g] here.
func (s *spreads) merge(o *spreads, to []int32) {
	if s == nil {
		return
	}
	s.rows += o.rows
	s.missing += o.missing
	for g := range o.groups {
		into, from := s.group(to[g]), &o.groups[g]
		into.squares.merge(from.squares)
		into.beyond = into.beyond || from.beyond
		for k := range from.shared {
			into.shared[k].merge(from.shared[k])
		}
	}
}

// parts are those of a group with the sum of weights sum: of independent errors and of
// shared ones; the parts that are numbers are not in them.
func (s *spreads) parts(g int, sum float64) (own, shared float64, ok bool) {
	if s == nil || g >= len(s.groups) {
		return 0, 0, true
	}
	of := &s.groups[g]
	own = math.Sqrt(of.squares.value()) / sum
	for k := range of.shared {
		shared = math.Hypot(shared, of.shared[k].value()/sum)
	}
	return own, shared, !of.beyond && own+shared <= math.MaxFloat64
}
