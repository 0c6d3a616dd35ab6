package diagram

import (
	"container/list"
	"context"
	"crypto/sha256"
	"encoding/binary"
	"errors"
	"math"
	"sync"

	"nearcell/voronoi"
)

// Key identifies a diagram by its content.
type Key [16]byte

// KeyOf is the key of the diagram that voronoi.New would make. Threads and
// Progress do not count.
func KeyOf(sites []voronoi.Vec, o voronoi.Options) Key {
	h := sha256.New()
	buf := make([]byte, 0, 24*1024)
	number := func(x float64) {
		buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(x+0)) // -0 + 0 is 0
	}
	number(float64(len(sites)))
	for _, p := range sites {
		if len(buf) > 24*1000 {
			h.Write(buf)
			buf = buf[:0]
		}
		number(p.X)
		number(p.Y)
		number(p.Z)
	}
	if o.Solid != nil {
		k := o.Solid.Key()
		buf = append(buf, k[:]...)
		number(o.Tolerance)
	}
	if voronoi.IsStretch(o.Stretch) {
		buf = append(buf, "stretched"...)
		number(o.Stretch.X)
		number(o.Stretch.Y)
		number(o.Stretch.Z)
	}
	h.Write(buf)
	var key Key
	copy(key[:], h.Sum(nil))
	return key
}

// Store holds diagrams. Its methods may be called by many goroutines.
type Store struct {
	mu      sync.Mutex
	limit   int64 // bytes, 0: none
	bytes   int64
	entries map[Key]*Handle
	recent  *list.List // of *Handle, most recently used first
	stats   Stats

	keeper   *Keeper // nil: nothing is kept
	troubles []error // of keeping, since Troubles was last called
}

// Stats count what a store did.
type Stats struct {
	Diagrams   int   // held now
	Bytes      int64 // held now, estimated
	Built      int   // diagrams made
	Found      int   // asked for and there already
	Cells      int64 // cells computed for measures
	Contacts   int64 // cells computed for contacts
	Dropped    int   // diagrams let go for want of memory
	Recalled   int   // diagrams among those made that were kept by an earlier run
	Tetrahedra int   // tetrahedralisations that were kept by an earlier run
}

// NewStore is an empty store that holds about so many bytes; 0: no limit.
func NewStore(limit int64) *Store {
	return &Store{limit: max(limit, 0), entries: map[Key]*Handle{}, recent: list.New()}
}

// SetLimit changes the limit and drops what is beyond it.
func (s *Store) SetLimit(limit int64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.limit = max(limit, 0)
	s.shrink(nil)
}

// Clear drops all diagrams.
func (s *Store) Clear() {
	s.mu.Lock()
	defer s.mu.Unlock()
	clear(s.entries)
	s.recent.Init()
	s.bytes = 0
}

// Stats are the counts so far.
func (s *Store) Stats() Stats {
	s.mu.Lock()
	defer s.mu.Unlock()
	x := s.stats
	x.Diagrams, x.Bytes = len(s.entries), s.bytes
	return x
}

// Get is the diagram of the sites, built unless the store has it. The sites are
// not kept and not changed.
func (s *Store) Get(ctx context.Context, sites []voronoi.Vec, o voronoi.Options) (*Handle, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	key := KeyOf(sites, o)
	h, mine := s.enter(key)
	if mine {
		o.Progress = h.report
		s.build(h, sites, o)
	}
	select {
	case <-h.ready:
		return h, h.err
	case <-ctx.Done():
		return nil, ctx.Err()
	}
}

var errInterrupted = errors.New("diagram: the build was interrupted")

// build makes the diagram of an entry. Should that panic, those who wait are let
// go all the same.
func (s *Store) build(h *Handle, sites []voronoi.Vec, o voronoi.Options) {
	var d *voronoi.Diagram
	err := errInterrupted
	defer func() {
		h.finish(d, err)
		s.settle(h)
	}()
	d = s.recalled(h, len(sites), o)
	if d == nil {
		d, err = voronoi.New(sites, o)
	}
	if d != nil {
		err = nil
		if s.keeps(len(sites)) {
			d.Recall(h.recallTetrahedra)
		}
	}
}

// enter finds the entry of a key or makes it; then the caller builds.
func (s *Store) enter(key Key) (h *Handle, mine bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if h := s.entries[key]; h != nil {
		s.recent.MoveToFront(h.place)
		s.stats.Found++
		return h, false
	}
	h = &Handle{store: s, key: key, ready: make(chan struct{}), busy: make(chan struct{}, 1)}
	h.place = s.recent.PushFront(h)
	s.entries[key] = h
	s.stats.Built++
	return h, true
}

// settle counts a diagram that was built, and forgets one that could not be.
func (s *Store) settle(h *Handle) {
	if h.err == nil {
		s.grow(h, h.base())
		return
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.entries[h.key] == h {
		s.forget(h)
		s.stats.Built--
	}
}

// grow counts bytes more for an entry and drops others beyond the limit.
func (s *Store) grow(h *Handle, bytes int64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.entries[h.key] != h {
		return // dropped meanwhile: whoever holds it, the store does not
	}
	h.bytes += bytes
	s.bytes += bytes
	s.recent.MoveToFront(h.place)
	s.shrink(h)
}

// shrink drops the least recently used entries but keep.
func (s *Store) shrink(keep *Handle) {
	if s.limit == 0 {
		return
	}
	for e := s.recent.Back(); e != nil && s.bytes > s.limit; {
		h, before := e.Value.(*Handle), e.Prev()
		if h != keep && h.built() {
			s.forget(h)
			s.stats.Dropped++
		}
		e = before
	}
}

func (s *Store) forget(h *Handle) {
	delete(s.entries, h.key)
	s.recent.Remove(h.place)
	s.bytes -= h.bytes
	h.bytes = 0
}

func (s *Store) count(cells, contacts int) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.stats.Cells += int64(cells)
	s.stats.Contacts += int64(contacts)
}
