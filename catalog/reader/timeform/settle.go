package timeform

import "slices"

// Absent marks a row without a local time.
const Absent = -1 << 63

// Settled is what the order of the rows gave.
type Settled struct {
	Instant   map[int]int64 // of the rows whose local time comes twice
	Undecided []int         // rows whose local time comes twice and whose order does not tell, sorted
	Orderly   bool          // every sequence runs through time without a step back
}

// Settle decides local times that the clock change repeats by the order of the
// rows. group tells which sequence a row belongs to (an instrument); nil is one
// sequence. Each sequence is expected to run through time, forwards or backwards;
// strict says that it has no instant twice.
//
// Of the rows of a sequence that lie within one repeated hour, the local time must
// step back (strict: or stay) exactly once: there the second run begins. Where it
// never does, either run or both may have been recorded, and the rows stay
// undecided: a logger that lost one of the two hours looks the same whichever it
// was. The result is worth something only if Orderly.
func (z *Zone) Settle(local []int64, group []uint32, strict bool) Settled {
	s := settler{zone: z, local: local, strict: strict, out: Settled{Instant: map[int]int64{}, Orderly: true}}
	for _, rows := range sequences(local, group) {
		if descends(local, rows) {
			slices.Reverse(rows)
		}
		s.sequence(rows)
	}
	slices.Sort(s.out.Undecided)
	return s.out
}

// sequences are the rows with a time, by group and in their order.
func sequences(local []int64, group []uint32) [][]int {
	var list [][]int
	at := map[uint32]int{}
	for row, t := range local {
		if t == Absent {
			continue
		}
		g := uint32(0)
		if group != nil {
			g = group[row]
		}
		i, known := at[g]
		if !known {
			i = len(list)
			at[g] = i
			list = append(list, nil)
		}
		list[i] = append(list[i], row)
	}
	return list
}

// descends reports whether a sequence has its newest row first.
func descends(local []int64, rows []int) bool {
	steps := 0
	for i := 1; i < len(rows); i++ {
		switch {
		case local[rows[i]] > local[rows[i-1]]:
			steps++
		case local[rows[i]] < local[rows[i-1]]:
			steps--
		}
	}
	return steps < 0
}

type settler struct {
	zone   *Zone
	local  []int64
	strict bool
	out    Settled
}

// sequence goes through rows that run forwards.
func (s *settler) sequence(rows []int) {
	last := int64(Absent)
	pass := func(at int64) {
		if last != Absent && (at < last || s.strict && at == last) {
			s.out.Orderly = false
		}
		last = at
	}
	for i := 0; i < len(rows); {
		first, _, outcome := s.zone.Instants(s.local[rows[i]])
		switch outcome {
		case OK:
			pass(first)
			i++
		case Skipped:
			i++
		case Repeats:
			end := s.run(rows, i)
			s.decide(rows[i:end], pass)
			i = end
		}
	}
}

// run is where the rows of one repeated hour end.
func (s *settler) run(rows []int, i int) int {
	const day = secondsOfDay * 1_000_000
	begin := s.local[rows[i]]
	for i++; i < len(rows); i++ {
		t := s.local[rows[i]]
		if _, _, outcome := s.zone.Instants(t); outcome != Repeats || t-begin > day || begin-t > day {
			break
		}
	}
	return i
}

// decide divides the rows of one repeated hour between its two runs.
func (s *settler) decide(rows []int, pass func(int64)) {
	turn, turns := 0, 0
	for i := 1; i < len(rows); i++ {
		before, here := s.local[rows[i-1]], s.local[rows[i]]
		if here < before || s.strict && here == before {
			turn = i
			turns++
		}
	}
	if turns != 1 {
		s.out.Orderly = s.out.Orderly && turns == 0
		s.out.Undecided = append(s.out.Undecided, rows...)
		return
	}
	for i, row := range rows {
		first, last, _ := s.zone.Instants(s.local[row])
		at := first
		if i >= turn {
			at = last
		}
		pass(at)
		s.out.Instant[row] = at
	}
}
