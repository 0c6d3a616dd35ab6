package function

import "nearcell/catalog/column"

// Slid is where the values over frames go, one for each row of the table: numbers
// in I or F, or the row whose value it is in Pick (-1: NULL). Null marks numbers that
// are NULL; it is a byte a row, so that workers may write side by side.
type Slid struct {
	Type column.Type // of the result
	I    []int64
	F    []float64
	Pick []int32
	Null []bool
}

// NewSlid makes room for n values of a type; pick: rows are what will be given.
func NewSlid(t column.Type, n int, pick bool) *Slid {
	s := &Slid{Type: t}
	switch {
	case pick:
		s.Pick = make([]int32, n)
		return s
	case t == column.Real:
		s.F = make([]float64, n)
	default:
		s.I = make([]int64, n)
	}
	s.Null = make([]bool, n)
	return s
}

// copy gives row `to` what row `from` has.
func (s *Slid) copy(to, from int32) {
	switch {
	case s.Pick != nil:
		s.Pick[to] = s.Pick[from]
		return
	case s.F != nil:
		s.F[to] = s.F[from]
	default:
		s.I[to] = s.I[from]
	}
	s.Null[to] = s.Null[from]
}

// Rows is what an aggregate over frames is computed of: whole columns, and which
// rows count (FILTER; nil: all).
type Rows struct {
	N      int
	Args   []column.Vector
	Weight *column.Vector
	On     []uint64
}

// Slider computes an aggregate over the frames of one partition: row k of it is row
// rows[k] of the table, and its frame is the rows lo[k]..hi[k]-1 of the partition,
// lo[k] <= hi[k]. Neither lo nor hi ever falls from one row to the next. A Slider
// belongs to one goroutine; the Frame that it was made of is shared. It returns a
// *RowFault whose row is one of the table.
type Slider interface {
	Slide(rows, lo, hi []int32, out *Slid, stop func() error) error
}

// stopEvery is how many rows are done between two looks at whether to go on.
const stopEvery = 4096

// sliding is a Slider over states of one kind. A frame is kept as two parts: of
// the rows in front, the states of the last one, the last two, …; of the rows
// behind, the state of all. A row enters behind, and when the front is used up what is
// behind becomes the front: each row is added twice at most, nothing is ever taken
// off again, and so nothing cancels (the queue made of two stacks).
type sliding[S any] struct {
	add   func(s *S, row int32) error // a row of the table
	merge func(a, b *S)               // b's rows to a's
	give  func(s *S, row int32) error // the value for a row
	front []S
}

func (m *sliding[S]) Slide(rows, lo, hi []int32, out *Slid, stop func() error) error {
	var behind, none, all S
	mid, end := int32(0), int32(0) // behind holds the rows mid..end-1
	base := int32(0)               // front[i] holds the rows base+i..mid-1
	m.front = m.front[:0]
	for k, row := range rows {
		if k%stopEvery == 0 {
			if err := stop(); err != nil {
				return err
			}
		}
		if k > 0 && lo[k] == lo[k-1] && hi[k] == hi[k-1] {
			out.copy(row, rows[k-1])
			continue
		}
		if lo[k] >= end { // nothing of what was is left
			mid, end, base, behind, m.front = lo[k], lo[k], lo[k], none, m.front[:0]
		}
		for ; end < hi[k]; end++ {
			if err := m.add(&behind, rows[end]); err != nil {
				return err
			}
		}
		if lo[k] > mid {
			if err := m.turn(rows, lo[k], end, stop); err != nil {
				return err
			}
			mid, base, behind = end, lo[k], none
		}
		if lo[k] == mid {
			all = behind
		} else {
			all = m.front[lo[k]-base]
			m.merge(&all, &behind)
		}
		if err := m.give(&all, row); err != nil {
			return err
		}
	}
	return nil
}

// turn makes the front of the rows lo..end-1.
func (m *sliding[S]) turn(rows []int32, lo, end int32, stop func() error) error {
	n := int(end - lo)
	if cap(m.front) < n {
		m.front = make([]S, n, n+n/2)
	}
	m.front = m.front[:n]
	var s S
	for i := n - 1; i >= 0; i-- {
		if i%stopEvery == 0 {
			if err := stop(); err != nil {
				return err
			}
		}
		if err := m.add(&s, rows[lo+int32(i)]); err != nil {
			return err
		}
		m.front[i] = s
	}
	return nil
}

// counting reports which rows count: on, with values in all arguments and, where
// there are weights, a weight above 0. It checks all weights. nil: all rows.
func (r *Rows) counting(args []column.Vector) (on []uint64, weights []float64, err error) {
	t := tally{weighted: r.Weight != nil}
	views := make([]*column.Vector, len(args))
	for i := range args {
		views[i] = &args[i]
	}
	on = ActiveRows(&t.arena, r.On, r.N, views...)
	if r.Weight == nil {
		return on, nil, nil
	}
	if weights, err = t.checkWeights(r.On, r.N, r.Weight); err != nil {
		return nil, nil, err
	}
	heavy := make([]uint64, column.Words(r.N))
	for i, w := range weights[:r.N] {
		if w > 0 && (on == nil || column.Bit(on, i)) {
			column.SetBit(heavy, i)
		}
	}
	return heavy, weights, nil
}

func counts(on []uint64, row int32) bool { return on == nil || column.Bit(on, int(row)) }

// atRow gives the fault of a value to the row that it was computed for.
func atRow(err error, row int32) error {
	if f, ok := err.(*GroupFault); ok {
		return &RowFault{Row: int(row), Code: f.Code, Message: f.Message, Hint: f.Hint}
	}
	return err
}
