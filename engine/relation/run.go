package relation

import (
	"context"
	"errors"
	"strconv"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/solid"
)

// sites is what the relations over sites share: the arranged input and what is
// asked of it.
type sites struct {
	b     *Bound
	env   *Env
	input *column.Table
	order *order
	parts []*Part
	r     Request
	said  *findings
}

func newSites(b *Bound, env *Env, input *column.Table, r Request) (*sites, error) {
	s := &sites{b: b, env: env, input: input, r: r, said: newFindings()}
	s.order = newOrder(b, input)
	s.tellStretch()
	var err error
	s.parts, err = arrange(b, env, input, s.order, s.said)
	if err != nil {
		return nil, err
	}
	if b.policy() == Mean {
		s.input = means(b, input, s.parts)
	}
	if b.policy() != Split {
		for _, p := range s.parts {
			p.keepFirst()
		}
	}
	if len(s.parts) == 0 {
		return s, s.nobody()
	}
	return s, nil
}

// nobody is what an input without any site is: nothing without a solid; with
// one, a space that would belong to nobody.
func (s *sites) nobody() error {
	if len(s.said.outside) > 0 {
		return s.allOutsideZones()
	}
	if s.b.Closed() {
		return problem.New("no-sites", s.b.Place, "there is no site in %s, so %s belongs to nobody", s.b.Name, s.b.Clauses.SolidName)
	}
	s.env.Notes.Add(note.Note, note.Sites, "there is no site in %s, so %s has no rows", s.b.Name, s.b.Title())
	return nil
}

// options are those of the diagram of a part: every diagram is made with them.
func (s *sites) options(p *Part) voronoi.Options { return optionsOf(s.b, s.env, p) }

func optionsOf(b *Bound, env *Env, p *Part) voronoi.Options {
	return voronoi.Options{Solid: p.Solid, Tolerance: b.Clauses.Tolerance, Threads: env.Threads, Memory: env.Memory,
		Stretch: b.Clauses.Stretch}
}

// open gets the diagram of a part and takes note of what its facts say.
func (s *sites) open(ctx context.Context, p *Part) (*diagram.Handle, error) {
	h, err := s.env.Diagrams.Get(ctx, p.Sites, s.options(p))
	if err != nil {
		return nil, s.refused(err, p)
	}
	h.Name(s.b.Name, s.b.Clauses.SolidName)
	f := h.Facts()
	if f.Inside == 0 {
		return nil, s.allOutside(p, f)
	}
	if len(f.Outside) > 0 {
		s.leftOut(p, f)
	}
	if len(f.OnWall) > 0 && s.b.Clauses.Tolerance > 0 {
		s.said.onWall[p.Zone] = max(s.said.onWall[p.Zone], len(f.OnWall))
	}
	return h, nil
}

// refused words the errors of the geometry.
func (s *sites) refused(err error, p *Part) error {
	var notFinite *voronoi.NotFiniteError
	var noVolume *voronoi.NoVolumeError
	var stretch *voronoi.StretchError
	var rigid *solid.StretchError
	var noPieces *voronoi.NoPiecesError
	name := func(site int) string { return idText(s.order.id, int(p.Rows[p.firstRow(int32(site))])) }
	switch {
	case errors.Is(err, context.Canceled), errors.Is(err, context.DeadlineExceeded):
		return err
	case errors.As(err, &notFinite):
		return problem.New("no-position", s.b.Place, "the coordinate %c = %s of site %s is too large to compute with",
			'x'+rune(notFinite.Axis), column.FormatReal(notFinite.X), name(notFinite.Site))
	case errors.As(err, &stretch) && stretch.A >= 0:
		return problem.New("stretched", s.b.Place, "sites %s and %s are so near each other that they are one place when STRETCHED",
			name(stretch.A), name(stretch.B)).WithHint("OMITTING one of them, or factors that are powers of two, which round nothing")
	case errors.As(err, &stretch):
		return problem.New("stretched", s.b.Place, "the factors (%s, %s, %s) of STRETCHED are too large or too small to compute with",
			column.FormatReal(stretch.Factor.X), column.FormatReal(stretch.Factor.Y), column.FormatReal(stretch.Factor.Z))
	case errors.As(err, &rigid):
		return problem.New("stretched", s.b.Place, "%s is a %s, in which stretched distances have no %s yet", s.b.Clauses.SolidName, rigid.Kind, s.b.Def.Noun)
	case errors.As(err, &noPieces) && noPieces.Kind == "":
		return problem.New("no-pieces", s.b.Place, "without a solid cells of %s run to infinity, and cannot be given as polyhedra", s.b.Name).
			WithHint("WITHIN a solid closes them; ENVELOPE OF %s MARGIN 1 is one", s.b.Name)
	case errors.As(err, &noPieces):
		return problem.New("no-pieces", s.b.Place, "%s is a %s, which is not known as convex parts, so that its cells can be measured but not given as polyhedra",
			s.b.Clauses.SolidName, noPieces.Kind).WithHint("a BOX is, and a PRISM with its HOLEs")
	case errors.As(err, &noVolume):
		return problem.New("no-volume", s.b.Place, "%s has no volume", s.b.Clauses.SolidName)
	}
	return problem.At(err, s.b.Place)
}

// firstRow is the first row of a site.
func (p *Part) firstRow(site int32) int {
	for k, x := range p.Site {
		if x == site {
			return k
		}
	}
	return 0
}

func (s *sites) allOutside(p *Part, f voronoi.Facts) error {
	nearest := 0
	for i, d := range f.OutsideDistance {
		if d < f.OutsideDistance[nearest] {
			nearest = i
		}
	}
	row := p.Rows[p.firstRow(f.Outside[nearest])]
	name, far := idText(s.order.id, int(row)), s.length(f.OutsideDistance[nearest])
	e := problem.New("no-sites", s.b.Place, "no site of %s lies in %s%s, so its space belongs to nobody", s.b.Name,
		s.b.Clauses.SolidName, inPart(s.b, s.input, row))
	if len(s.parts) > 1 {
		return e.WithHint("the nearest is %s, %s outside; leave what has no site inside out with OF (SELECT … WHERE …) or OMITTING", name, far)
	}
	return e.WithHint("the nearest is %s, %s outside: do the coordinates and the solid have one origin and one unit?", name, far)
}

func (s *sites) leftOut(p *Part, f voronoi.Facts) {
	far := make(map[int32]float64, len(f.Outside))
	for i, site := range f.Outside {
		far[site] = f.OutsideDistance[i]
	}
	for k, site := range p.Site {
		if d, out := far[site]; out {
			s.said.outside[p.Rows[k]] = d
		}
	}
}

// length writes a distance for messages, to three digits.
func (s *sites) length(d float64) string {
	text := strconv.FormatFloat(d, 'g', 3, 64)
	if u := s.b.Clauses.Unit.String(); u != "" {
		return text + " " + u
	}
	return text
}

// wanted reports whether any row of a part may be shown. A part without one is
// not even built: WHERE t = … of a week asks for one partition.
func (s *sites) wanted(p *Part) bool {
	if s.r.Wanted == nil {
		return true
	}
	for _, row := range p.Rows {
		if column.Bit(s.r.Wanted, int(row)) {
			return true
		}
	}
	return false
}

// shown lists the rows of a part (as indices into its Rows) that have a cell
// and are asked for, and their sites, nil for all.
func (s *sites) shown(p *Part, f voronoi.Facts) (ks, cells []int32) {
	var out []bool
	if len(f.Outside) > 0 {
		out = make([]bool, len(p.Sites))
		for _, site := range f.Outside {
			out[site] = true
		}
	}
	ks = make([]int32, len(p.Rows))
	delaunay.AdviseHugePages(ks)
	ks = ks[:0]
	for k, site := range p.Site {
		if out != nil && out[site] {
			continue
		}
		if s.r.Wanted != nil && !column.Bit(s.r.Wanted, int(p.Rows[k])) {
			continue
		}
		ks = append(ks, int32(k))
	}
	if s.r.Most > 0 && int64(len(ks)) > s.r.Most && !s.b.measuredIn() {
		ks = ks[:s.r.Most]
	}
	if len(ks) == len(p.Rows) {
		return ks, nil
	}
	cells = make([]int32, 0, len(ks))
	last := make([]bool, len(p.Sites))
	for _, k := range ks {
		if site := p.Site[k]; !last[site] {
			last[site] = true
			cells = append(cells, site)
		}
	}
	return ks, cells
}

// progress tells of the cells of a single diagram, or else of the parts.
func (s *sites) progress() func(done, total int) {
	if len(s.parts) == 1 {
		return s.env.Progress
	}
	return nil
}

func (s *sites) partDone(i int) {
	if s.env.Progress != nil && len(s.parts) > 1 {
		s.env.Progress(i+1, len(s.parts))
	}
}

// cost adds up the diagrams that are not alike.
func (s *sites) cost(want voronoi.Measures) (voronoi.Cost, error) {
	var sum voronoi.Cost
	sum.OneByOne = true
	seen := map[diagram.Key]bool{}
	ctx := context.Background()
	for _, p := range s.parts {
		key := diagram.KeyOf(p.Sites, s.options(p))
		if seen[key] || !s.wanted(p) {
			continue
		}
		seen[key] = true
		h, err := s.env.Diagrams.Get(ctx, p.Sites, s.options(p))
		if err != nil {
			return sum, s.refused(err, p)
		}
		_, cells := s.shown(p, h.Facts())
		n := len(cells)
		if cells == nil {
			n = len(p.Sites)
		}
		c := h.Cost(want, n)
		sum.Seconds += c.Seconds
		sum.Bytes = max(sum.Bytes, c.Bytes)
		sum.Cells += c.Cells
		sum.OneByOne = sum.OneByOne && c.OneByOne
	}
	return sum, nil
}
