package diagram

import (
	"context"

	"nearcell/voronoi"
)

// Keep makes the store keep large diagrams from run to run, and look there first.
func (s *Store) Keep(k *Keeper) { s.keeper = k }

// Keeper is what keeps the store's diagrams, nil for nobody.
func (s *Store) Keeper() *Keeper { return s.keeper }

// Troubles are the errors of reading and keeping diagrams since it was last called.
// None of them kept a diagram from being computed.
func (s *Store) Troubles() []error {
	s.mu.Lock()
	defer s.mu.Unlock()
	list := s.troubles
	s.troubles = nil
	return list
}

// trouble takes note of an error once. That a folder is not to be written is none.
func (s *Store) trouble(err error) {
	if err == nil || mayNotWrite(err) {
		return
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, e := range s.troubles {
		if e.Error() == err.Error() {
			return
		}
	}
	s.troubles = append(s.troubles, err)
}

// keeps tells whether a diagram of so many sites is kept.
func (s *Store) keeps(sites int) bool { return s.keeper != nil && sites >= s.keeper.from }

// recalled is the diagram that an earlier run has kept, nil if there is none.
func (s *Store) recalled(h *Handle, sites int, o voronoi.Options) *voronoi.Diagram {
	if !s.keeps(sites) {
		return nil
	}
	d, err := s.keeper.diagram(h.key, sites, o)
	if err != nil {
		s.trouble(err)
	}
	if d != nil {
		h.indexed = true // nobody else has the handle yet
		s.mu.Lock()
		s.stats.Recalled++
		s.mu.Unlock()
	}
	return d
}

// KnownDistinct tells whether an earlier run has kept a diagram of exactly these sites
// and found each inside and at a place of its own. It is a quick look before repeated
// places are searched for: false says nothing, and below KeptFrom sites it always is.
func (s *Store) KnownDistinct(sites []voronoi.Vec, o voronoi.Options) bool {
	if !s.keeps(len(sites)) {
		return false
	}
	return s.keeper.distinct(KeyOf(sites, o), len(sites))
}

// Name says what the diagram is made for: a campaign, and the solid that closes it.
func (h *Handle) Name(of, within string) {
	h.store.mu.Lock()
	defer h.store.mu.Unlock()
	if h.of == "" {
		h.of, h.within = of, within
	}
}

// wayNames are the ways in the names of parts.
var wayNames = map[bool]string{false: "single.", true: "whole."}

// recall takes over those of the wanted measures that are kept of all cells.
func (h *Handle) recall(c *cellSet, want voronoi.Measures) {
	n := h.d.Len()
	if !h.store.keeps(n) || want&^c.sought == 0 {
		return
	}
	var found voronoi.Measures
	for _, p := range measureParts {
		if want&^c.sought&p.measure == 0 {
			continue
		}
		arrays, err := h.store.keeper.find(h.key, wayNames[c.whole]+p.name)
		if err == nil && arrays != nil && !c.knows(p.measure) {
			if err = takeArrays(p.measure, arrays, n, &c.cells); err == nil {
				found |= p.measure
			}
		}
		h.store.trouble(err)
	}
	c.sought |= want
	if found == 0 {
		return
	}
	c.kept |= found
	bytes := c.begin(n)
	c.cells.Inside, c.cells.Multiplicity = h.d.Presence() // of those, too, of which nothing was known
	for s := range c.known {
		c.known[s] |= found
	}
	h.store.grow(h, bytes+5*int64(n))
}

// knows tells whether anything is known of a measure: then its array is in use.
func (c *cellSet) knows(m voronoi.Measures) bool {
	for _, k := range c.known {
		if k&m != 0 {
			return true
		}
	}
	return false
}

// retain keeps the wanted measures, now known of all cells, and the diagram itself if it
// is not kept yet.
func (h *Handle) retain(ctx context.Context, c *cellSet, want voronoi.Measures) {
	more := want &^ c.kept
	if !h.store.keeps(h.d.Len()) || c.strays || more == 0 && h.indexed {
		return
	}
	var parts []part
	if !h.indexed {
		parts = append(parts, part{indexPart, storedArrays(h.d.Store())})
	}
	for _, p := range measureParts {
		if more&p.measure != 0 {
			parts = append(parts, part{wayNames[c.whole] + p.name, measureArrays(p.measure, &c.cells)})
		}
	}
	c.kept |= want   // or tried: not at every statement again
	h.indexed = true // or tried
	if err := h.store.keeper.keep(ctx, h, parts); err != nil {
		h.store.trouble(&KeepError{err})
	}
}

// KeepError says why a diagram was not kept.
type KeepError struct{ Err error }

func (e *KeepError) Error() string { return "the diagram is not kept: " + e.Err.Error() }
func (e *KeepError) Unwrap() error { return e.Err }
