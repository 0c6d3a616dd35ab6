package relation

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/voronoi"
)

// tellStretch says what the distances between sites are taken to be.
func (s *sites) tellStretch() {
	if !s.stretched() {
		return
	}
	k := s.b.Clauses.Stretch
	unit := s.b.Clauses.Unit.String()
	if unit != "" {
		unit = " " + unit
	}
	var says []string
	for i, f := range [3]float64{k.X, k.Y, k.Z} {
		if f != 1 {
			says = append(says, "1"+unit+[...]string{" along x", " along y", " up"}[i]+" counts as "+column.FormatReal(f)+unit)
		}
	}
	s.env.Notes.Add(note.Note, note.Sites, "the space nearest to each site of %s is told by stretched distances: %s; all results are in true units",
		s.b.Name, strings.Join(says, ", "))
}

// stretched tells whether distances are.
func (s *sites) stretched() bool { return voronoi.IsStretch(s.b.Clauses.Stretch) }
