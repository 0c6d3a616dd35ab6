package relation

import (
	"context"
	"errors"
	"fmt"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// What TETRAHEDRA, TRIANGLES, VERTICES and HULL share: rows made of a
// tetrahedralisation, each with the identifiers of its corners.
//
// Corners of a row ascend in the order of identifiers, and the rows in the order of
// their corners, so that a row of one relation is found in another by its corners.
// Where several sites stand in one place, the first of them is the corner.

// simplex is one row: its corners as sites of the part, ascending, and where it came
// from. A triangle has three corners, the fourth is -1.
type simplex struct {
	corner [4]int32
	tet    int32
	face   int8 // of tet, for a triangle
}

// simplexKind is what tells one of these relations from another.
type simplexKind struct {
	corners int
	ids     int // number of the computed column a
	// list collects the simplices in any order; sites gives the corners' sites.
	list func(t *delaunay.T) []simplex
	// fill writes the computed columns of one row.
	fill func(r *simplexRows, p *Part, t *delaunay.T, s *simplex, out []column.Vector, row int)
	// said tells what there is to say in the end.
	said func(r *simplexRows)
}

type simplexRows struct {
	*sites
	kind *simplexKind
	each int
	site func(int32) int32 // of the part at hand

	flat       map[int]int // parts without tetrahedra by dimension
	coincident int         // vertices that lie where one beside them does
	rows       int
}

// simplexLayout puts the columns of FOR EACH before the computed ones and gives the
// corners the identifier's type.
func simplexLayout(k *simplexKind) func(b *Bound) []Column {
	return func(b *Bound) []Column {
		computed := b.computed()
		id := b.Input[b.ID]
		for i := range k.corners {
			computed[k.ids+i].Type, computed[k.ids+i].Unit = id.Type, id.Unit
		}
		computed[k.ids].Site = b.ID // a condition on a says which rows are asked for
		own := b.ownColumns(computed)
		columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
		for _, i := range b.Clauses.Each {
			columns = append(columns, own[i])
		}
		return append(columns, computed...)
	}
}

func openSimplices(k *simplexKind) func(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	return func(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
		s, err := newSites(b, env, input, r)
		if err != nil {
			return nil, err
		}
		return &simplexRows{sites: s, kind: k, each: len(b.Clauses.Each), flat: map[int]int{}}, nil
	}
}

// Cost is that of the tetrahedralisations, whichever rows are shown.
func (r *simplexRows) Cost() (voronoi.Cost, error) { return r.costOfTetrahedra() }

// costOfTetrahedra is that of the tetrahedralisations of the parts, each diagram once.
func (s *sites) costOfTetrahedra() (voronoi.Cost, error) {
	var sum voronoi.Cost
	for _, g := range s.alike() {
		p := g.parts[0]
		h, err := s.env.Diagrams.Get(context.Background(), p.Sites, s.options(p))
		if err != nil {
			return sum, s.refused(err, p)
		}
		c := h.CostOfTetrahedra()
		sum.Seconds += c.Seconds
		sum.Bytes = max(sum.Bytes, c.Bytes)
		sum.Cells += c.Cells
	}
	return sum, nil
}

// simplexBatch is the batch at hand: the rows of the input that the corners stand for.
type simplexBatch struct {
	*batches
	corner [4][]int32
}

func (r *simplexRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer r.tell() // where emit has had enough rows, too
	out := &simplexBatch{batches: newBatches(r.b, r.r.Need, r.each, emit)}
	for i := range r.kind.corners { // these are gathered from the input
		out.columns[r.each+r.kind.ids+i] = column.Vector{}
	}
	for i, p := range r.parts {
		out.now(p.Zone, noPart)
		if err := r.part(ctx, p, out); err != nil {
			return err
		}
		r.partDone(i)
	}
	return r.flush(out)
}

// SizeText is a number of bytes, rounded up.
func SizeText(n int64) string {
	if n < 10<<20 {
		return fmt.Sprintf("%d KiB", (n+1<<10-1)>>10)
	}
	return fmt.Sprintf("%d MiB", (n+1<<20-1)>>20)
}

func (r *simplexRows) part(ctx context.Context, p *Part, out *simplexBatch) error {
	if !r.wanted(p) {
		return nil
	}
	h, err := r.open(ctx, p)
	if err != nil {
		return err
	}
	t, site, err := h.Tetrahedra(ctx, r.progress())
	var memory *delaunay.MemoryError
	if errors.As(err, &memory) {
		return problem.New("memory", r.b.Place, "the tetrahedralisation of %s needs %s, more than the %s that --memory leaves it",
			r.b.Name, SizeText(memory.Need), SizeText(memory.Limit)).
			WithHint("give more with --memory, or take fewer sites; CELLS OF and CONTACTS OF can do without it")
	}
	if err != nil {
		return r.refused(err, p)
	}
	if d := min(t.Dimension(), h.Facts().Dimension); d < 3 {
		r.flat[d]++
		return nil
	}
	r.site = site
	list := r.kind.list(t)
	for i := range list {
		if i%longLoop == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		r.place(&list[i])
	}
	if err := sortSimplices(ctx, list, len(p.Sites)); err != nil {
		return err
	}
	first := firstRows(p)
	for i := range list {
		s := &list[i]
		if i%BatchRows == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		if r.r.Wanted != nil && !column.Bit(r.r.Wanted, int(p.Rows[first[s.corner[0]]])) {
			continue
		}
		for k := range r.kind.corners {
			out.corner[k] = append(out.corner[k], p.Rows[first[s.corner[k]]])
		}
		r.kind.fill(r, p, t, s, out.columns[r.each:], out.n)
		out.n++
		r.rows++
		if out.room() == 0 {
			if err := r.flush(out); err != nil {
				return err
			}
		}
	}
	return nil
}

// longLoop is after how many rounds a loop over all simplices looks at ctx.
const longLoop = 1 << 13

// place turns the corners into sites of the part, ascending.
func (r *simplexRows) place(s *simplex) {
	corners := s.corner[:r.kind.corners]
	for k, c := range corners {
		corners[k] = r.site(c)
	}
	slices.Sort(corners)
}

// sortSimplices sorts by the corners: by counting for the first, then the few that
// share it.
func sortSimplices(ctx context.Context, list []simplex, sites int) error {
	start := make([]int, sites+1)
	for i := range list {
		start[list[i].corner[0]+1]++
	}
	for s := range sites {
		start[s+1] += start[s]
	}
	next := slices.Clone(start)
	sorted := make([]simplex, len(list))
	for i := range list {
		c := list[i].corner[0]
		sorted[next[c]] = list[i]
		next[c]++
	}
	copy(list, sorted)
	for s := range sites {
		if s%longLoop == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		slices.SortFunc(list[start[s]:start[s+1]], func(a, b simplex) int {
			return slices.Compare(a.corner[:], b.corner[:])
		})
	}
	return nil
}

func (r *simplexRows) flush(out *simplexBatch) error {
	err := out.flush(func(i int) (column.Vector, bool) {
		k := i - r.each - r.kind.ids
		switch {
		case !needed(r.r.Need, i):
			return column.Vector{}, false
		case i < r.each:
			return column.Gather(&r.input.Cols[r.b.Clauses.Each[i]], out.corner[0]), true
		case k >= 0 && k < r.kind.corners:
			return column.Gather(&r.input.Cols[r.b.ID], out.corner[k]), true
		}
		return column.Vector{}, false
	})
	for k := range out.corner {
		out.corner[k] = out.corner[k][:0]
	}
	return err
}

// tell writes the notes.
func (r *simplexRows) tell() {
	r.sites.tell()
	if r.stretched() && r.b.Def != vertices {
		r.env.Notes.Add(note.Note, note.Sites, "which rows %s has is told by stretched distances; what they say of size, shape and spheres is that of the true places", r.b.Title())
	}
	for d, what := range [...]string{"stand in one place", "lie on one line", "lie in one plane"} {
		n := r.flat[d]
		switch {
		case n == 0:
		case len(r.parts) == 1:
			r.env.Notes.Add(note.Note, note.Cells, "the sites of %s %s: there are no tetrahedra, so %s has no rows", r.b.Name, what, r.b.Title())
		default:
			r.env.Notes.Add(note.Note, note.Cells, "in %s of %s the sites %s: there are no tetrahedra, so %s has no rows of them",
				count(n, "partition"), r.b.Name, what, r.b.Title())
		}
	}
	if r.kind.said != nil {
		r.kind.said(r)
	}
}

// number writes a REAL.
func number(v *column.Vector, row int, x float64) {
	if v.Type != column.Null {
		v.F[row] = x
	}
}

// flag writes a BOOLEAN.
func flag(v *column.Vector, row int, x bool) {
	if v.Type != column.Null && x {
		column.SetBit(v.Bits, row)
	}
}

// triangleOf is face k of a tetrahedron.
func triangleOf(v [4]int32, k int) [4]int32 {
	v[k], v[3] = v[3], -1
	return v
}
