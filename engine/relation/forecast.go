package relation

import (
	"context"
	"runtime"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/voronoi"
)

// Forecast is what is known of a relation's rows and work before it runs.
type Forecast struct {
	Rows      float64 // that it will give
	RowsExact bool    // else estimated
	Parts     float64 // partitions with a row to show
	Diagrams  float64 // different ones among them
	Known     int     // cells whose measures are kept from before, not in Cost
	Measures  []string
	Cost      voronoi.Cost // of the cells that have to be built
	Counted   bool         // parts, diagrams and cells are counted, not estimated
}

// Per is what the work is counted in: the cells of a relation of cells, the points of
// one of points, the sites of others, which need all of them.
func (b *Bound) Per() string {
	if len(b.Beside) > 0 && b.Beside[0].Clause == "AT" {
		return "point"
	}
	if b.Def.Own || b.Def == contacts {
		return "cell"
	}
	return "site"
}

// Forecaster is implemented by rows that can tell more than their Cost.
type Forecaster interface {
	Forecast(ctx context.Context) (*Forecast, error)
}

// ForecastOf is what rows say of themselves. Of rows that only know their cost
// the usual number is taken.
func ForecastOf(ctx context.Context, b *Bound, rows Rows, need []bool) (*Forecast, error) {
	if f, ok := rows.(Forecaster); ok {
		return f.Forecast(ctx)
	}
	c, err := rows.Cost()
	if err != nil {
		return nil, err
	}
	f := &Forecast{Rows: float64(c.Cells), Parts: 1, Diagrams: 1, Measures: b.Work(need), Cost: c}
	if s, ok := rows.(interface{ base() *sites }); ok {
		f.Rows, f.Parts = 0, 0
		groups := s.base().alike()
		f.Diagrams = float64(len(groups))
		for _, g := range groups {
			f.Parts += float64(len(g.parts))
			f.Rows += g.rows
		}
	}
	if many := rowsPerSite[b.Def.Noun]; many > 0 {
		f.Rows *= many
	}
	return f, nil
}

func (s *sites) base() *sites { return s }

// rowsPerSite are the usual numbers of rows of relations whose rows are not
// sites: of random sites in space there are 24π²/35 tetrahedra for each, of which
// two share a triangle (Meijering 1953). Gaps were counted in random sets.
var rowsPerSite = map[string]float64{"TETRAHEDRA": 6.77, "VERTICES": 6.77, "TRIANGLES": 13.54, "GAPS": 2}

// Estimates of what is not looked at.
const (
	// typicalContacts is the mean number of faces of the cells of random sites in
	// space (Meijering 1953): 2 + 48π²/35.
	typicalContacts = 15.54
	// typicalCell is about what a cell of an ordinary set of sites takes, in
	// seconds on one core of a small machine (see voronoi.Diagram.Cost).
	typicalCell = 30e-6
	// Diagrams of FOR EACH are looked at as far as they have lookedSites sites
	// together, and the time of a cell is measured in probedDiagrams of them, spread
	// evenly; the others are taken to be like these.
	lookedSites    = 1 << 18
	probedDiagrams = 4
)

// Guess is a forecast of a relation over a query that is not looked at: of so
// many rows, of which a share is shown, in so many partitions. Whether
// partitions are alike is not known, so that its work is an upper bound.
func (b *Bound) Guess(rows, shown, parts float64, need []bool, threads int) *Forecast {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	parts = max(1, min(parts, rows))
	f := &Forecast{Rows: rows * shown, Parts: parts, Diagrams: parts, Measures: b.Work(need)}
	f.Cost.OneByOne = true
	if b.Def == contacts {
		f.Rows *= max(0, min(rows/parts-1, typicalContacts))
	}
	if b.Def == contacts || b.Measures(need) != 0 {
		f.Cost.Cells = int(rows*shown + 0.5)
		f.Cost.Seconds = rows * shown * typicalCell / float64(threads)
	}
	return f
}

// Work names what the geometry has to compute for the needed columns, in the
// order of the columns; none: which sites have a cell is all that is asked.
func (b *Bound) Work(need []bool) []string {
	if b.Def == contacts {
		return []string{"contacts"}
	}
	if !b.Def.Own {
		return []string{strings.ToLower(b.Def.Noun)}
	}
	var names []string
	for i, c := range b.Columns {
		if c.Measures != 0 && needed(need, i) {
			names = append(names, c.Name)
		}
	}
	return names
}

// Measures are those behind the needed columns of CELLS.
func (b *Bound) Measures(need []bool) (want voronoi.Measures) {
	for i, c := range b.Columns {
		if needed(need, i) {
			want |= c.Measures
		}
	}
	return want
}

// Measuring names the columns that measures are behind.
func (d *Definition) Measuring(m voronoi.Measures) []string {
	var names []string
	for _, c := range d.Computed {
		if c.Measures&m != 0 {
			names = append(names, c.Name)
		}
	}
	return names
}

// Forecast counts the rows exactly, unless there are many partitions.
func (c *cellRows) Forecast(ctx context.Context) (*Forecast, error) {
	return c.forecast(ctx, c.want, false)
}

// Forecast counts the cells exactly, unless there are many partitions, and
// takes the number of contacts of a cell to be the usual one.
func (c *contactRows) Forecast(ctx context.Context) (*Forecast, error) {
	return c.forecast(ctx, voronoi.Neighbours, true)
}

// alike are the parts that share a diagram.
type alike struct {
	parts []*Part
	rows  float64  // asked for, those outside the solid among them
	sites []uint64 // asked for in any of the parts
	// of those that were looked at
	handle *diagram.Handle
	cells  int // to be built
}

func (s *sites) forecast(ctx context.Context, want voronoi.Measures, faces bool) (*Forecast, error) {
	f := &Forecast{Measures: s.b.Work(s.r.Need), RowsExact: !faces && !s.b.measuredIn(), Counted: true}
	f.Cost.OneByOne = true
	groups := s.alike()
	f.Diagrams = float64(len(groups))
	var seen, all float64 // rows
	var looked []*alike
	step := stepOver(groups)
	for i, g := range groups {
		f.Parts += float64(len(g.parts))
		all += g.rows
		if i%step > 0 {
			continue
		}
		seen += g.rows
		looked = append(looked, g)
		if err := s.look(ctx, f, g, want, faces); err != nil {
			return nil, err
		}
	}
	s.probe(f, looked, want)
	if step > 1 && seen > 0 {
		f.Counted, f.RowsExact = false, false
		f.scale(all / seen)
	}
	return f, nil
}

// stepOver is how many diagrams to go on after each one that is looked at.
func stepOver(groups []*alike) int {
	total := 0
	for _, g := range groups {
		total += len(g.parts[0].Sites)
	}
	return max(1, min(len(groups), (total+lookedSites-1)/lookedSites))
}

func (f *Forecast) scale(by float64) {
	f.Rows *= by
	f.Known = int(float64(f.Known)*by + 0.5)
	f.Cost.Cells = int(float64(f.Cost.Cells)*by + 0.5)
	f.Cost.Seconds *= by
	f.Cost.Bytes = int64(float64(f.Cost.Bytes) * by)
}

// probe sets the time that the cells of a forecast take.
func (s *sites) probe(f *Forecast, looked []*alike, want voronoi.Measures) {
	var probed voronoi.Cost
	step := max(1, (len(looked)+probedDiagrams-1)/probedDiagrams)
	cells := 0
	for i := 0; i < len(looked) && f.Cost.Cells > 0; i += step {
		g := looked[i]
		if g.cells == 0 {
			step = 1 // all known: the next may not be
			continue
		}
		c := g.handle.Cost(want, g.cells)
		cells += g.cells
		probed.Seconds += c.Seconds
		probed.Bytes += c.Bytes
		f.Cost.OneByOne = f.Cost.OneByOne && c.OneByOne
		f.Cost.Slow = f.Cost.Slow || c.Slow
	}
	if cells > 0 {
		f.Cost.Seconds = probed.Seconds * float64(f.Cost.Cells) / float64(cells)
		f.Cost.Bytes = probed.Bytes * int64(f.Cost.Cells) / int64(cells)
	}
}

// alike are the diagrams of the parts with something to show, each once, in the
// order of their first parts.
func (s *sites) alike() []*alike {
	var groups []*alike
	at := map[diagram.Key]*alike{}
	for _, p := range s.parts {
		if !s.wanted(p) {
			continue
		}
		key := diagram.KeyOf(p.Sites, s.options(p))
		g := at[key]
		if g == nil {
			g = &alike{sites: make([]uint64, column.Words(len(p.Sites)))}
			at[key] = g
			groups = append(groups, g)
		}
		g.parts = append(g.parts, p)
		for k, row := range p.Rows {
			if s.r.Wanted == nil || column.Bit(s.r.Wanted, int(row)) {
				g.rows++
				column.SetBit(g.sites, int(p.Site[k]))
			}
		}
	}
	return groups
}

// look adds what a diagram says of its parts. It is built, its cells are not.
func (s *sites) look(ctx context.Context, f *Forecast, g *alike, want voronoi.Measures, faces bool) error {
	first := g.parts[0]
	h, err := s.env.Diagrams.Get(ctx, first.Sites, s.options(first))
	if err != nil {
		return s.refused(err, first)
	}
	facts := h.Facts()
	if facts.Inside == 0 {
		return s.allOutside(first, facts)
	}
	rows := g.rows
	if len(facts.Outside) > 0 {
		rows = s.rowsInside(g, facts)
	}
	if faces {
		rows *= max(0, min(float64(facts.Inside-1), typicalContacts))
	}
	f.Rows += rows
	if want == 0 {
		return nil
	}
	for _, site := range facts.Outside {
		column.ClearBit(g.sites, int(site))
	}
	cells := make([]int32, 0, column.Count(g.sites))
	for site := range int32(len(first.Sites)) {
		if column.Bit(g.sites, int(site)) {
			cells = append(cells, site)
		}
	}
	known := h.Known(want, cells)
	if faces {
		known = h.KnownContacts(cells)
	}
	g.handle, g.cells = h, len(cells)-known
	f.Known += known
	f.Cost.Cells += g.cells
	return nil
}

// rowsInside counts the rows of all parts of a diagram that have a cell.
func (s *sites) rowsInside(g *alike, facts voronoi.Facts) float64 {
	rows := 0
	for _, p := range g.parts {
		ks, _ := s.shown(p, facts)
		rows += len(ks)
	}
	return float64(rows)
}

// First is the forecast of the first rows alone: as many cells, at most.
func (f *Forecast) First(most int64) *Forecast {
	c := *f
	c.Rows = min(c.Rows, float64(most))
	c.Known = int(min(int64(c.Known), most))
	if all, left := int64(c.Cost.Cells), most-int64(c.Known); all > left {
		c.Cost.Seconds *= float64(left) / float64(all)
		c.Cost.Cells = int(left)
	}
	return &c
}

// MeasuredIn reports whether a site has a row for each of several parts.
func (b *Bound) MeasuredIn() bool { return b.measuredIn() }
