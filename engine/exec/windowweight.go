package exec

import (
	"fmt"
	"math"
	"sync"

	"nearcell/catalog/column"
	"nearcell/engine/note"
)

// frameWeights is what the weighted answers of a window rest on, over all its frames. It
// is filled by all workers; ranges and counts do not depend on their order.
type frameWeights struct {
	mu                     sync.Mutex
	weight                 *column.Vector
	args                   []*column.Vector
	on                     []uint64 // FILTER, nil: all rows
	frames                 int
	eff, rows, share, lost span
	losing                 int // frames with weight whose values are NULL
}

// frameScratch belongs to one worker: sums of what comes before each row of a partition,
// and the rows that may yet be the heaviest of a frame.
type frameScratch struct {
	sum, squares, none []float64
	count              []int32
	heavy              []int32
}

// at is the weight of a row, and whether it has a value; 0 where it does not count.
func (f *frameWeights) at(row int32) (weight float64, value bool) {
	if f.weight.IsNull(int(row)) || f.on != nil && !column.Bit(f.on, int(row)) {
		return 0, true
	}
	if f.weight.Type == column.Real {
		weight = f.weight.F[row]
	} else {
		weight = float64(f.weight.I[row])
	}
	for _, a := range f.args {
		if a.Type == column.Null || a.IsNull(int(row)) {
			return weight, false
		}
	}
	return weight, true
}

// look takes the frames lo..hi-1 of the rows of a partition, each different one once.
// Neither end ever falls.
func (f *frameWeights) look(s *frameScratch, rows, lo, hi []int32) {
	n := len(rows)
	s.sum, s.squares, s.none, s.count = room(s.sum, n+1), room(s.squares, n+1), room(s.none, n+1), room(s.count, n+1)
	s.sum[0], s.squares[0], s.none[0], s.count[0] = 0, 0, 0, 0
	for k, row := range rows {
		w, value := f.at(row)
		s.sum[k+1], s.squares[k+1], s.none[k+1], s.count[k+1] = s.sum[k], s.squares[k], s.none[k], s.count[k]
		switch {
		case !value:
			s.none[k+1] += w
		case w > 0:
			s.sum[k+1] += w
			s.squares[k+1] += float64(w * w)
			s.count[k+1]++
		}
	}
	var seen frameWeights
	weight := func(k int32) float64 {
		if s.count[k+1] == s.count[k] {
			return 0
		}
		w, _ := f.at(rows[k])
		return w
	}
	s.heavy = s.heavy[:0]
	end := int32(0)
	for k := range rows {
		for ; end < hi[k]; end++ {
			for w := weight(end); len(s.heavy) > 0 && weight(s.heavy[len(s.heavy)-1]) <= w; {
				s.heavy = s.heavy[:len(s.heavy)-1]
			}
			s.heavy = append(s.heavy, end)
		}
		for len(s.heavy) > 0 && s.heavy[0] < lo[k] {
			s.heavy = s.heavy[1:]
		}
		if k > 0 && lo[k] == lo[k-1] && hi[k] == hi[k-1] || lo[k] >= hi[k] {
			continue
		}
		sum, none := s.sum[hi[k]]-s.sum[lo[k]], s.none[hi[k]]-s.none[lo[k]]
		if none > 0 {
			seen.losing++
			seen.lost.add(100 * none / (sum + none))
		}
		if s.count[hi[k]] == s.count[lo[k]] {
			continue
		}
		seen.frames++
		count := float64(s.count[hi[k]] - s.count[lo[k]])
		seen.rows.add(count)
		if eff := sum * (sum / (s.squares[hi[k]] - s.squares[lo[k]])); eff >= 1 { // else of weights that differences lose
			seen.eff.add(math.Min(eff, count))
		}
		seen.share.add(100 * math.Min(1, weight(s.heavy[0])/sum))
	}
	f.mu.Lock()
	defer f.mu.Unlock()
	f.frames, f.losing = f.frames+seen.frames, f.losing+seen.losing
	f.eff.merge(seen.eff)
	f.rows.merge(seen.rows)
	f.share.merge(seen.share)
	f.lost.merge(seen.lost)
}

func (s *span) merge(o span) {
	if o.any {
		s.add(o.low)
		s.add(o.high)
	}
}

// say writes the notes of a weighted call.
func (f *frameWeights) say(notes *note.Notes, call string) {
	if f == nil || f.frames == 0 {
		return
	}
	over := ""
	if f.frames > 1 {
		over = fmt.Sprintf("over %d frames ", f.frames)
	}
	notes.Add(note.Note, note.Weights, "%s: %sn_eff %s of %s %s, largest weight %s %%", call, over, f.eff.text(short), f.rows.text(whole),
		plural(f.rows.high, "value"), f.share.text(percent))
	if f.losing > 0 {
		notes.Add(note.Note, note.Weights, "%s: in %d of %d frames weight was left out, its values are NULL: space nobody spoke for, %s %% of the frame's",
			call, f.losing, max(f.frames, f.losing), f.lost.text(percent))
	}
}
