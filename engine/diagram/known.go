package diagram

import "nearcell/voronoi"

// Known counts the sites whose wanted measures are there already. While others
// compute it does not wait for them and says none.
func (h *Handle) Known(want voronoi.Measures, sites []int32) int {
	var set *cellSet
	return h.counted(sites, func(site int32) bool {
		if set == nil { // under the lock
			var err error
			if set, err = h.set(want, sites); err != nil {
				set = &cellSet{}
			} else {
				h.recall(set, want)
			}
		}
		return set.known != nil && want&^set.known[site] == 0
	})
}

// KnownContacts counts the sites whose contacts are there already, in the way
// of Known.
func (h *Handle) KnownContacts(sites []int32) int {
	return h.counted(sites, func(site int32) bool { return h.contacts != nil && h.contacts[site] != nil })
}

func (h *Handle) counted(sites []int32, there func(site int32) bool) int {
	select {
	case h.busy <- struct{}{}:
	default:
		return 0
	}
	defer func() { <-h.busy }()
	n := 0
	for _, site := range sites {
		if there(site) {
			n++
		}
	}
	return n
}
