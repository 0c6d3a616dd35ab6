package function

// Arena hands out scratch slices that live until Reset. The zero Arena is
// ready. An Arena belongs to one goroutine.
type Arena struct {
	words  pool[uint64]
	ints   pool[int64]
	floats pool[float64]
	codes  pool[uint32]
}

// Words is a scratch bitmap of so many words; its content is anything.
func (a *Arena) Words(n int) []uint64 { return a.words.get(n) }

// Ints is a scratch slice; its content is anything.
func (a *Arena) Ints(n int) []int64 { return a.ints.get(n) }

// Floats is a scratch slice; its content is anything.
func (a *Arena) Floats(n int) []float64 { return a.floats.get(n) }

// Codes is a scratch slice; its content is anything.
func (a *Arena) Codes(n int) []uint32 { return a.codes.get(n) }

// Reset takes all slices back.
func (a *Arena) Reset() {
	a.words.next, a.ints.next, a.floats.next, a.codes.next = 0, 0, 0, 0
}

// pool keeps its slices in the order in which they are asked for: a pipeline
// asks for the same ones batch after batch.
type pool[T any] struct {
	slices [][]T
	next   int
}

func (p *pool[T]) get(n int) []T {
	if p.next == len(p.slices) {
		p.slices = append(p.slices, nil)
	}
	if cap(p.slices[p.next]) < n {
		p.slices[p.next] = make([]T, n)
	}
	s := p.slices[p.next][:n:n]
	p.next++
	return s
}
