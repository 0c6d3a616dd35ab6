package relation

import (
	"context"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/section"
)

// sectionOf is SECTION OF c AT z = h: one row for each cell that the plane passes through.
var sectionOf = &Definition{
	Noun:    "SECTION",
	RowIs:   "cell cut by the plane",
	Meaning: "what a plane cuts out of each cell: the share of a floor plan instead of the room",
	Example: `SELECT SHARE(temp > 8) WEIGHTED BY area FROM SECTION OF hall AT z = 1.1;`,
	Clauses: []string{"AT", "THROUGH", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Own:     true,
	Zoned:   true,
	Open:    openSection,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		return append(b.ownColumns(computed), computed...)
	},
}

// The computed columns of SECTION behind the sites' own.
const (
	sectionArea = iota
	sectionOutline
)

func init() {
	sectionOf.Computed = []Column{
		sectionArea:    measure("area", column.Real, 2, voronoi.Area, "area of the cell in the plane, inside the solid"),
		sectionOutline: measure("outline", column.Text, 0, 0, "its outline as WKT, POLYGON Z or MULTIPOLYGON Z with holes, in the coordinates of the sites"),
	}
	sectionOf.Computed[sectionArea].Extensive = true
}

type sectionRows struct {
	*sites
	own            int
	open           int
	faces, walls   bool
	missing, plane bool // the plane misses a solid, and meets one
}

func openSection(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &sectionRows{sites: s, own: len(b.Input)}, nil
}

func (s *sectionRows) Cost() (voronoi.Cost, error) { return s.cost(voronoi.Volume) }

func (s *sectionRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() {
		s.said.partial = err != nil
		s.tell()
	}()
	out := newBatches(s.b, s.r.Need, s.own, emit)
	outlines := needed(s.r.Need, s.own+sectionOutline)
	out.columns[s.own+sectionOutline] = column.Vector{} // made of texts
	var rows []int32
	var texts []string
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			switch {
			case !needed(s.r.Need, i):
				return column.Vector{}, false
			case i < s.own:
				return column.Gather(&s.input.Cols[i], rows), true
			case i == s.own+sectionOutline:
				return textVector(texts), true
			}
			return column.Vector{}, false
		})
		rows, texts = rows[:0], texts[:0]
		return err
	}
	for i, p := range s.parts {
		cut, by, err := s.cut(ctx, p, outlines)
		if err != nil {
			return err
		}
		for _, k := range by.rows {
			for _, at := range by.of[p.Site[k]] {
				piece := &cut.Pieces[at]
				out.now(p.Zone, piece.Part)
				rows = append(rows, p.Rows[k])
				if outlines {
					texts = append(texts, wkt(piece.Polygons, s.digits(p)))
				}
				if piece.Open {
					s.open++
				}
				number(&out.columns[s.own+sectionArea], out.n, piece.Area*p.share(int(k)))
				out.n++
				if out.room() == 0 {
					if err := flush(); err != nil {
						return err
					}
				}
			}
		}
		s.partDone(i)
	}
	return flush()
}

// cutRows are the rows of a part to show, and by site its pieces.
type cutRows struct {
	rows []int32
	of   map[int32][]int32
}

// cut cuts the diagram of a part.
func (s *sectionRows) cut(ctx context.Context, p *Part, outlines bool) (*section.Section, cutRows, error) {
	by := cutRows{of: map[int32][]int32{}}
	if !s.wanted(p) {
		return nil, by, nil
	}
	h, err := s.sites.open(ctx, p)
	if err != nil {
		return nil, by, err
	}
	ks, list := s.shown(p, h.Facts())
	if len(ks) == 0 {
		return nil, by, nil
	}
	o := section.Options{Threads: s.env.Threads, Progress: s.progress(), Outlines: outlines}
	for _, r := range s.b.Clauses.Measured {
		o.Within = append(o.Within, r.Solid)
	}
	cut, err := h.Section(ctx, s.b.Clauses.Plane, list, o)
	if err != nil {
		return nil, by, s.solidKnown(err, p)
	}
	for i := range cut.Pieces {
		site := cut.Pieces[i].Site
		by.of[site] = append(by.of[site], int32(i))
	}
	by.rows = ks
	s.said.rows += len(ks)
	s.faces, s.walls = s.faces || cut.InFaces, s.walls || cut.InWalls
	if cut.Area == 0 {
		s.missing = true
	} else {
		s.plane = true
	}
	return cut, by, nil
}

// digits are the decimals that outlines are written with: all that mean something at the
// size of the coordinates.
func (s *sectionRows) digits(p *Part) int {
	size := 1.0
	grow := func(v voronoi.Vec) { size = max(size, math.Abs(v.X), math.Abs(v.Y), math.Abs(v.Z)) }
	if p.Solid != nil {
		lo, hi := p.Solid.Bounds()
		grow(lo)
		grow(hi)
	}
	for _, q := range p.Sites {
		grow(q)
	}
	return max(0, 13-int(math.Ceil(math.Log10(size))))
}

// wkt writes polygons as well-known text; "" where there is none. Rings end with their first corner.
func wkt(list []section.Polygon, digits int) string {
	if len(list) == 0 {
		return ""
	}
	var out []byte
	coordinate := func(x float64) {
		text := strconv.FormatFloat(x, 'f', digits, 64)
		if strings.Contains(text, ".") {
			text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
		}
		if text == "-0" {
			text = "0"
		}
		out = append(out, text...)
	}
	polygon := func(p section.Polygon) {
		out = append(out, '(')
		for i, ring := range p {
			if i > 0 {
				out = append(out, ", "...)
			}
			out = append(out, '(')
			for k := range len(ring) + 1 {
				if k > 0 {
					out = append(out, ", "...)
				}
				c := ring[k%len(ring)]
				coordinate(c.X)
				out = append(out, ' ')
				coordinate(c.Y)
				out = append(out, ' ')
				coordinate(c.Z)
			}
			out = append(out, ')')
		}
		out = append(out, ')')
	}
	if len(list) == 1 {
		out = append(out, "POLYGON Z "...)
		polygon(list[0])
		return string(out)
	}
	out = append(out, "MULTIPOLYGON Z ("...)
	for i, p := range list {
		if i > 0 {
			out = append(out, ", "...)
		}
		polygon(p)
	}
	return string(append(out, ')'))
}

// textVector is texts as a column; an empty one is NULL.
func textVector(texts []string) column.Vector {
	v := column.Vector{Type: column.Text, N: len(texts), C: make([]uint32, len(texts)), Dict: &column.Dict{}}
	for i, t := range texts {
		if t == "" {
			v.SetNull(i)
			continue
		}
		v.C[i] = uint32(len(v.Dict.Texts))
		v.Dict.Texts = append(v.Dict.Texts, t)
	}
	if len(v.Dict.Texts) == 0 {
		v.Dict.Texts = []string{""}
	}
	return v
}

func (s *sectionRows) tell() {
	s.sites.tell()
	add := func(format string, args ...any) { s.env.Notes.Add(note.Note, note.Cells, format, args...) }
	plane := s.b.Clauses.PlaneText
	if s.faces {
		add("the plane %s lies in faces between cells of %s: what it cuts there counts to the cell above", plane, s.b.Name)
	}
	if s.walls {
		add("the plane %s lies in walls of %s: it is seen from above, and from below where the solid ends there", plane, s.b.Clauses.SolidName)
	}
	if s.missing && !s.plane {
		add("the plane %s does not meet %s", plane, s.b.Clauses.SolidName)
	}
	if s.open > 0 {
		add("%s of %s %s without end in the plane %s: the area is Infinity and the outline NULL; WITHIN a solid ends them", count(s.open, "cell"), s.b.Name,
			verb(s.open, "is", "are"), plane)
	}
}
