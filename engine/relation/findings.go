package relation

import (
	"cmp"
	"fmt"
	"maps"
	"slices"

	"nearcell/engine/note"
)

// findings collects what the parts of one relation have to say, so that each
// thing is said once and not for every instant.
type findings struct {
	outside map[int32]float64 // rows of the input left out, and how far outside
	onWall  map[int32]int     // by zone, the largest number of sites on walls in one part
	shared  map[int32][]int32 // rows on a wall of several zones: these zones, the row's own first
	vacant  []int             // by zone, partitions without a site in it
	groups  int               // partitions of FOR EACH
	lost    [][]int32         // those whose sites lie outside every zone

	rows      int // shown
	unbounded int // of them, without an end
	unshaped  int // cells without counts of edges and vertices
	empty     int // cells without any part in the solid

	contacts  int // shown
	openFaces int // of them, without an end

	partial bool // not all of them were asked for
}

func newFindings() *findings {
	return &findings{outside: map[int32]float64{}, onWall: map[int32]int{}, shared: map[int32][]int32{}}
}

// computed counts cells or contacts; those that nobody asked for are not among
// them.
func (f *findings) computed(n int, noun string) string {
	if f.partial {
		noun = "computed " + noun
	}
	return count(n, noun)
}

// tell writes the notes.
func (s *sites) tell() {
	f, b := s.said, s.b
	if len(f.outside) > 0 {
		s.tellOutside()
	}
	s.tellZones()
	onWall := 0
	for _, n := range f.onWall {
		onWall += n
	}
	if onWall > 0 {
		s.env.Notes.Add(note.Note, note.Sites, "%s of %s %s on the surface of %s or within the tolerance %s of it and %s part",
			count(onWall, "site"), b.Name, verb(onWall, "stands", "stand"), b.Clauses.SolidName, s.length(b.Clauses.Tolerance),
			verb(onWall, "takes", "take"))
	}
	if f.unbounded > 0 {
		s.env.Notes.Add(note.Note, note.Cells, "%d of %s of %s %s unbounded (no solid): volume, area and farthest are Infinity, "+
			"cx, cy, cz NULL; WITHIN a solid closes them", f.unbounded, f.computed(f.rows, "cell"), b.Name, verb(f.unbounded, "is", "are"))
	}
	if f.unshaped > 0 {
		s.env.Notes.Add(note.Note, note.Cells, "%s of %s %s cut by a re-entrant part of %s: edges and vertices are NULL there, faces = contacts + walls",
			count(f.unshaped, "cell"), b.Name, verb(f.unshaped, "is", "are"), b.Clauses.SolidName)
	}
	if f.empty > 0 {
		s.env.Notes.Add(note.Warning, note.Cells, "%s of %s %s no part in %s: volume 0", count(f.empty, "cell"), b.Name,
			verb(f.empty, "has", "have"), b.Clauses.SolidName)
	}
	if f.openFaces > 0 {
		s.env.Notes.Add(note.Note, note.Cells, "%d of %s of %s %s unbounded (no solid): area is Infinity, mx, my, mz NULL; WITHIN a solid closes them",
			f.openFaces, f.computed(f.contacts, "contact"), b.Name, verb(f.openFaces, "is", "are"))
	}
}

// tellOutside names the sites that were left out, each once with the farthest
// that it lies outside in any part.
func (s *sites) tellOutside() {
	rows := slices.SortedFunc(maps.Keys(s.said.outside), func(a, b int32) int {
		return cmp.Or(s.order.byID(a, b), cmp.Compare(s.said.outside[b], s.said.outside[a]))
	})
	rows = slices.CompactFunc(rows, s.order.sameID)
	names := make([]string, len(rows))
	for i, r := range rows {
		names[i] = fmt.Sprintf("%s (%s)", idText(s.order.id, int(r)), s.length(s.said.outside[r]))
	}
	n := len(rows)
	s.env.Notes.Add(note.Note, note.Sites, "%s of %s %s outside %s and %s left out of the partition: %s", count(n, "site"), s.b.Name,
		verb(n, "lies", "lie"), s.b.Clauses.SolidName, verb(n, "is", "are"), someOf(names))
}

func verb(n int, one, many string) string {
	if n == 1 {
		return one
	}
	return many
}
