package diagram

import (
	"container/list"
	"context"
	"sync/atomic"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
)

// Handle is a diagram of the store with the measures that were computed so far.
// Its methods may be called by many goroutines.
type Handle struct {
	store *Store
	key   Key
	place *list.Element // in store.recent
	bytes int64         // under store.mu

	ready chan struct{} // closed when d and err are set
	d     *voronoi.Diagram
	err   error

	progress atomic.Pointer[func(done, total int)]

	of, within string // what it is made for; under store.mu

	busy     chan struct{}       // held by who computes; guards what follows
	measured [2]cellSet          // one by one, and with the tetrahedralisation
	indexed  bool                // what voronoi.New made of it is kept
	contacts [][]voronoi.Contact // nil: not computed
	kept     int64               // bytes of a tetrahedralisation
	gaps     *[]coverage.Gap     // nil: not looked for
	regions  map[Key]*inRegions  // by the key of the regions
	gapsIn   map[Key][]coverage.Gap
}

// Bytes that a diagram without measures, a contact and its list take.
const (
	bytesPerSite    = 96
	bytesPerContact = 48
	meanContacts    = 16
	// rememberedContacts is the share of the limit that the contacts of one
	// diagram may take to be remembered.
	rememberedContacts = 4
	unlimitedContacts  = 1 << 30
)

func (h *Handle) finish(d *voronoi.Diagram, err error) {
	h.d, h.err = d, err
	close(h.ready)
}

func (h *Handle) built() bool {
	select {
	case <-h.ready:
		return true
	default:
		return false
	}
}

func (h *Handle) base() int64 { return 1024 + bytesPerSite*int64(h.d.Len()) }

func (h *Handle) report(done, total int) {
	if f := h.progress.Load(); f != nil {
		(*f)(done, total)
	}
}

// Key identifies the diagram.
func (h *Handle) Key() Key { return h.key }

// Facts are what is known of the diagram without computing a cell.
func (h *Handle) Facts() voronoi.Facts { return h.d.Facts() }

// Len is the number of sites.
func (h *Handle) Len() int { return h.d.Len() }

// Cost estimates what the measures of n cells take if none is known yet.
func (h *Handle) Cost(want voronoi.Measures, n int) voronoi.Cost { return h.d.Cost(want, n) }

// lock waits until nobody else computes. While it is held, progress is told to
// the given function.
func (h *Handle) lock(ctx context.Context, progress func(done, total int)) error {
	select {
	case h.busy <- struct{}{}:
	case <-ctx.Done():
		return ctx.Err()
	}
	if err := ctx.Err(); err != nil {
		<-h.busy
		return err
	}
	if progress != nil {
		h.progress.Store(&progress)
	}
	return nil
}

func (h *Handle) unlock() {
	h.progress.Store(nil)
	<-h.busy
}

// Hidden estimates what the given sites (nil: all) do not see of their cells, as
// voronoi.Diagram.Hidden does. It is not kept.
func (h *Handle) Hidden(ctx context.Context, sites []int32, progress func(done, total int)) (*voronoi.Sight, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	defer h.grown(ctx)
	return h.d.Hidden(ctx, sites)
}

// Contacts calls yield for each of the given sites in their order (nil: all). The
// contacts are not to be changed or kept.
func (h *Handle) Contacts(ctx context.Context, sites []int32, progress func(done, total int),
	yield func(site int32, contacts []voronoi.Contact) error) error {
	n := h.d.Len()
	if !h.remember(len(sites), sites == nil) {
		// Not under the lock: yield may take as long as it likes.
		if progress != nil {
			h.progress.Store(&progress)
			defer h.progress.Store(nil)
		}
		defer h.book(ctx)
		return h.d.Contacts(ctx, sites, yield)
	}
	lists, err := h.lists(ctx, sites, progress)
	if err != nil {
		return err
	}
	if sites == nil {
		for s := range int32(n) {
			if err := yield(s, lists[s]); err != nil {
				return err
			}
		}
		return nil
	}
	for _, s := range sites {
		if err := yield(s, lists[s]); err != nil {
			return err
		}
	}
	return nil
}

// remember tells whether so many sites' contacts are few enough to be kept.
func (h *Handle) remember(sites int, all bool) bool {
	if all {
		sites = h.d.Len()
	}
	h.store.mu.Lock()
	limit := h.store.limit
	h.store.mu.Unlock()
	if limit == 0 {
		limit = unlimitedContacts
	}
	need := int64(sites)*meanContacts*bytesPerContact + 24*int64(h.d.Len())
	return need <= limit/rememberedContacts
}

// lists are the contacts by site, computed as far as they are not known.
func (h *Handle) lists(ctx context.Context, sites []int32, progress func(done, total int)) ([][]voronoi.Contact, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	n := h.d.Len()
	var bytes int64
	if h.contacts == nil {
		h.contacts = make([][]voronoi.Contact, n)
		bytes += 24 * int64(n)
	}
	var missing []int32
	if sites == nil {
		for s := range int32(n) {
			if h.contacts[s] == nil {
				missing = append(missing, s)
			}
		}
	} else {
		for _, s := range sites {
			if h.contacts[s] == nil {
				missing = append(missing, s)
			}
		}
		missing = distinctSites(missing, n)
	}
	if len(missing) > 0 {
		done := 0
		err := h.d.Contacts(ctx, missing, func(site int32, contacts []voronoi.Contact) error {
			kept := make([]voronoi.Contact, len(contacts)) // never nil: nil is unknown
			copy(kept, contacts)
			h.contacts[site] = kept
			bytes += bytesPerContact * int64(len(contacts))
			done++
			return nil
		})
		h.store.count(0, done)
		if err != nil {
			h.store.grow(h, bytes)
			return nil, err
		}
	}
	h.store.grow(h, bytes)
	h.grown(ctx)
	return h.contacts, nil
}

// PiecesOf gives the cells of the given sites (nil: all) as convex polyhedra, as
// voronoi.Diagram.Pieces does. They are not kept.
func (h *Handle) PiecesOf(ctx context.Context, sites []int32, progress func(done, total int)) ([][]voronoi.Piece, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	defer h.grown(ctx)
	return h.d.Pieces(ctx, sites)
}
