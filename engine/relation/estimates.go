package relation

import (
	"context"
	"fmt"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/field"
)

// estimates is ESTIMATES OF c AT points: one row for each point, with every number that
// the sites carry estimated there.
var estimates = &Definition{
	Noun:    "ESTIMATES",
	RowIs:   "row of points",
	Meaning: "what the readings let one expect at other places: every numeric attribute, from one set of weights",
	Example: `SELECT x, y, z, temp, nearest, distance
FROM ESTIMATES OF hall AT (GRID OF air STEP 2) ORDER BY temp DESC LIMIT 5;`,
	Clauses: []string{"AT", "METHOD", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openEstimates,
	layout:  layoutEstimates,
}

// The computed columns of ESTIMATES behind those of FOR EACH, the points and the
// attributes.
const (
	estimateNearest = iota
	estimateDistance
	estimateNeighbours
	estimateInHull
	estimateColumns
)

func init() {
	estimates.Computed = []Column{
		estimateNearest:    measure("nearest", column.Text, 0, 0, "identifier of the nearest site"),
		estimateDistance:   measure("distance", column.Real, 1, 0, "distance to the nearest site"),
		estimateNeighbours: measure("neighbours", column.Integer, 0, 0, "sites whose cells the point's own cell would touch"),
		estimateInHull:     measure("in_hull", column.Boolean, 0, 0, "the point lies in the convex hull of the sites: among them, not beyond"),
	}
}

func layoutEstimates(b *Bound) []Column {
	var more []Column
	for _, i := range b.Attributes() {
		f := b.Input[i]
		f.Type = column.Real
		f.Meaning = fmt.Sprintf("%s as estimated at the point", f.Name)
		more = append(more, Column{Field: f, Site: -1, From: 1 + i})
	}
	computed := b.computed()
	id := b.Input[b.ID]
	computed[estimateNearest].Type, computed[estimateNearest].Unit = id.Type, id.Unit
	return b.pointLayout(append(more, apart(more, computed)...))
}

// apart renames computed columns that an attribute has the name of.
func apart(attributes, computed []Column) []Column {
	for i := range computed {
		for isComputed(attributes, computed[i].Name) {
			computed[i].Name = "site_" + computed[i].Name
		}
	}
	return computed
}

type estimateRows struct {
	*sites
	points  *points
	from    int // columns of FOR EACH and of the points
	behind  int // where those behind the attributes begin
	reached reached
}

func openEstimates(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	e := &estimateRows{sites: s, points: pointsOf(b, r.Beside[0]), from: len(b.Clauses.Each) + len(b.Beside[0].Input)}
	e.behind = len(b.Columns) - estimateColumns
	for _, c := range b.Columns {
		if c.Role != NoRole {
			e.behind--
		}
	}
	return e, nil
}

// attributes are the needed attributes: the column of the relation and that of the
// input of each.
func (e *estimateRows) attributes() (columns, inputs []int) {
	for i := e.from; i < e.behind; i++ {
		if c := &e.b.Columns[i]; c.From > 0 && needed(e.r.Need, i) {
			columns, inputs = append(columns, i), append(inputs, c.From-1)
		}
	}
	return columns, inputs
}

// tail is the column of a computed one behind the attributes.
func (e *estimateRows) tail(i int) int { return e.behind + i }

func (e *estimateRows) wants(i int) bool { return needed(e.r.Need, e.tail(i)) }

func (e *estimateRows) Cost() (voronoi.Cost, error) {
	f, err := e.Forecast(context.Background())
	if err != nil {
		return voronoi.Cost{}, err
	}
	return f.Cost, nil
}

// Seconds of an estimate on one core of a small machine, by method.
const (
	secondsPerNatural = 30e-6
	secondsPerNearest = 1.5e-6
)

// Forecast counts points and partitions; the sites' cells are not looked at.
func (e *estimateRows) Forecast(context.Context) (*Forecast, error) {
	_, inputs := e.attributes()
	f := &Forecast{RowsExact: true, Counted: true}
	seen := map[diagram.Key]bool{}
	for _, p := range e.parts {
		if !e.wanted(p) {
			continue
		}
		f.Parts++
		f.Rows += float64(e.points.table.N)
		seen[diagram.KeyOf(p.Sites, e.options(p))] = true
	}
	f.Diagrams = float64(len(seen))
	if len(inputs) > 0 {
		f.Measures = append(f.Measures, e.b.Clauses.MethodText+" weights")
	}
	if e.wants(estimateNearest) || e.wants(estimateDistance) {
		f.Measures = append(f.Measures, "nearest site")
	}
	if e.wants(estimateNeighbours) {
		f.Measures = append(f.Measures, "neighbours")
	}
	if e.wants(estimateInHull) {
		f.Measures = append(f.Measures, "hull")
	}
	f.Cost.OneByOne = true
	f.Cost.Cells = int(f.Rows)
	seconds := secondsPerNearest
	if m := e.b.Clauses.Method.Method; len(inputs) > 0 && (m == field.Sibson || m == field.Laplace) || e.wants(estimateNeighbours) {
		seconds = secondsPerNatural
	}
	f.Cost.Seconds = f.Rows * seconds / float64(max(1, e.env.Threads))
	return f, nil
}

// blockPoints is how many points are worked on before their rows are handed over.
const blockPoints = 32 * BatchRows

func (e *estimateRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer func() { // where emit has had enough rows, too
		e.sites.tell()
		e.reached.nowhere = e.points.nowhere
		e.reached.tell(e.sites, "point")
		e.reached.tellMissed(e.sites)
	}()
	return e.visit(e.points, func(i int, p *Part, of chosen, n int) error {
		defer e.partDone(i)
		return e.part(ctx, p, of, n, emit)
	}, func(p *Part, of chosen, vacant int) error {
		e.reached.vacant += vacant
		e.reached.solid.Add(int64(len(of) - vacant - e.points.nowhere))
		return e.without(p, of, emit)
	})
}

// asked is one attribute of a part with what its estimates rest on.
type asked struct {
	column   int
	readings *readings
	from     *speaking
}

func (e *estimateRows) part(ctx context.Context, p *Part, of chosen, n int, emit func(*column.Batch) error) error {
	if n == 0 {
		return nil
	}
	h, err := e.open(ctx, p)
	if err != nil {
		return err
	}
	groups, err := e.groups(ctx, p, h, n)
	if err != nil {
		return err
	}
	var around *field.Field
	if e.wants(estimateNeighbours) || e.wants(estimateInHull) {
		if around, err = e.fieldOf(ctx, p, h, field.Options{}, n); err != nil {
			return err
		}
	}
	for lo := 0; lo < n; lo += blockPoints {
		k := e.newBlock(p, of, lo, min(n, lo+blockPoints))
		k.h, k.groups, k.around = h, groups, around
		if n <= blockPoints {
			k.run.Progress = e.progress()
		}
		if err := k.fill(ctx); err != nil {
			return err
		}
		if err := k.hand(emit); err != nil {
			return err
		}
	}
	return nil
}

// without emits the rows of points without any estimate.
func (e *estimateRows) without(p *Part, of chosen, emit func(*column.Batch) error) error {
	for lo := 0; lo < len(of); lo += blockPoints {
		k := e.newBlock(p, of, lo, min(len(of), lo+blockPoints))
		k.nobody = true
		none := make([]bool, k.n)
		for i := range k.out {
			if k.out[i].N > 0 {
				nullWhere(&k.out[i], none)
			}
		}
		if err := k.hand(emit); err != nil {
			return err
		}
	}
	return nil
}

// groups are the needed attributes by the sites that have a value of them: each group
// has one set of weights.
func (e *estimateRows) groups(ctx context.Context, p *Part, all *diagram.Handle, places int) ([][]asked, error) {
	speakers := e.speakers(p, all, places)
	columns, inputs := e.attributes()
	var groups [][]asked
	at := map[*speaking]int{}
	for i, input := range inputs {
		if err := e.notInfinite(p, input); err != nil {
			return nil, err
		}
		r := e.readingsOf(p, input)
		if r.n > 0 {
			e.reached.missed(e.sites, input, r.rows)
		}
		from, err := speakers.of(ctx, func(site int32) bool { return r.count[site] > 0 })
		if err != nil {
			return nil, err
		}
		if from.field == nil {
			e.env.Notes.Add(note.Note, note.Sites, "no site of %s%s has a value of %s: its estimates are NULL", e.b.Name,
				inPart(e.b, e.input, p.Rows[0]), e.b.Input[input].Name)
			continue
		}
		k, known := at[from]
		if !known {
			k = len(groups)
			at[from] = k
			groups = append(groups, nil)
		}
		groups[k] = append(groups[k], asked{columns[i], r, from})
	}
	return groups, nil
}

// block is some points of a part and what is estimated there.
type block struct {
	*estimateRows
	p       *Part
	of      chosen
	lo, n   int
	nobody  bool // the points lie in no zone with a site
	h       *diagram.Handle
	groups  [][]asked
	around  *field.Field
	run     field.Run
	out     []column.Vector // by column; N is 0 where it is not needed
	nearest []int32         // rows of the input, by point; -1: none
	places  []voronoi.Vec   // of those with a position
	index   []int32         // of each place: its number in the block
}

func (e *estimateRows) newBlock(p *Part, of chosen, lo, hi int) *block {
	k := &block{estimateRows: e, p: p, of: of, lo: lo, n: hi - lo, run: field.Run{Threads: e.env.Threads}}
	k.out = make([]column.Vector, len(e.b.Columns))
	for i := e.from; i < len(k.out); i++ {
		if c := &e.b.Columns[i]; needed(e.r.Need, i) && i != e.tail(estimateNearest) && c.Role == NoRole {
			k.out[i] = column.New(c.Type, c.Unit, k.n)
		}
	}
	k.nearest = make([]int32, k.n)
	for i := range k.n {
		k.nearest[i] = -1
		if row := k.row(i); e.points.has(row) {
			k.places, k.index = append(k.places, e.points.at[row]), append(k.index, int32(i))
		}
	}
	return k
}

// row is the row of the points of number i of the block.
func (k *block) row(i int) int32 {
	if k.of == nil {
		return int32(k.lo + i)
	}
	return k.of[k.lo+i]
}

// fill computes what is needed.
func (k *block) fill(ctx context.Context) error {
	estimated := make([]bool, len(k.out))
	for _, g := range k.groups {
		ok := make([]bool, k.n)
		err := g[0].from.field.EachAt(ctx, k.places, k.run, func(i int, at field.Place, weights []field.Weight) error {
			if !k.reached.has(at) {
				return nil
			}
			row := k.index[i]
			ok[row] = true
			for _, a := range g {
				k.out[a.column].F[row] = field.Estimate(weights, func(s int32) float64 { return a.readings.value[a.from.site(s)] })
			}
			return nil
		})
		if err != nil {
			return k.refused(err, k.p)
		}
		for _, a := range g {
			estimated[a.column] = true
			nullWhere(&k.out[a.column], ok)
		}
	}
	for i := k.from; i < k.behind; i++ {
		if !estimated[i] && k.out[i].N > 0 { // nobody has a value of it
			nullWhere(&k.out[i], make([]bool, k.n))
		}
	}
	if err := k.findNearest(ctx); err != nil {
		return err
	}
	if err := k.countNeighbours(ctx); err != nil {
		return err
	}
	return k.markHull(ctx)
}

// countNeighbours fills the column neighbours.
func (k *block) countNeighbours(ctx context.Context) error {
	v := &k.out[k.tail(estimateNeighbours)]
	if v.N == 0 {
		return nil
	}
	ok := make([]bool, k.n)
	err := k.around.EachCell(ctx, k.places, k.run, func(i, neighbours int) error {
		if neighbours >= 0 {
			v.I[k.index[i]], ok[k.index[i]] = int64(neighbours), true
		}
		return nil
	})
	if err != nil {
		return k.refused(err, k.p)
	}
	nullWhere(v, ok)
	return nil
}

// markHull fills the column in_hull.
func (k *block) markHull(ctx context.Context) error {
	v := &k.out[k.tail(estimateInHull)]
	if v.N == 0 {
		return nil
	}
	ok, in := make([]bool, k.n), make([]bool, k.n)
	err := field.EachOf(ctx, len(k.places), k.run, func(i int) (err error) {
		row := k.index[i]
		ok[row] = true
		in[row], err = k.around.InHull(ctx, k.places[i])
		return err
	})
	if err != nil {
		return k.refused(err, k.p)
	}
	for row, is := range in {
		if is {
			column.SetBit(v.Bits, row)
		}
	}
	nullWhere(v, ok)
	return nil
}

// findNearest finds the nearest site of each point and how far it is.
func (k *block) findNearest(ctx context.Context) error {
	if !k.wants(estimateNearest) && !k.wants(estimateDistance) {
		return nil
	}
	first := firstRows(k.p)
	distance := &k.out[k.tail(estimateDistance)]
	ok := make([]bool, k.n)
	err := field.EachOf(ctx, len(k.places), k.run, func(i int) error {
		site, d := k.h.Nearest(k.places[i])
		row := k.index[i]
		k.nearest[row], ok[row] = k.p.Rows[first[site]], true
		if distance.N > 0 {
			distance.F[row] = d
		}
		return nil
	})
	if err != nil {
		return k.refused(err, k.p)
	}
	if distance.N > 0 {
		nullWhere(distance, ok)
	}
	return nil
}

// nullWhere makes values NULL that are not there.
func nullWhere(v *column.Vector, ok []bool) {
	for i, there := range ok {
		if !there {
			v.SetNull(i)
		}
	}
}

// hand emits the rows in batches.
func (k *block) hand(emit func(*column.Batch) error) error {
	for from := 0; from < k.n; from += BatchRows {
		b := k.batch(from, min(k.n, from+BatchRows))
		if err := emit(b); err != nil {
			return err
		}
	}
	return nil
}

func (k *block) batch(from, to int) *column.Batch {
	b := &column.Batch{N: to - from, Cols: make([]column.Vector, len(k.b.Columns))}
	rows := make([]int32, b.N)
	for i := range rows {
		rows[i] = k.row(from + i)
	}
	each := len(k.b.Clauses.Each)
	for i := range b.Cols {
		switch {
		case !needed(k.r.Need, i):
			b.Cols[i] = column.Vector{Type: column.Null, N: b.N}
		case i < each:
			b.Cols[i] = column.Gather(&k.input.Cols[k.b.Clauses.Each[i]], slices.Repeat([]int32{k.p.Rows[0]}, b.N))
		case i < k.from && k.of == nil:
			b.Cols[i] = k.points.table.Cols[i-each].Slice(k.lo+from, k.lo+to)
		case i < k.from:
			b.Cols[i] = column.Gather(&k.points.table.Cols[i-each], rows)
		case i == k.tail(estimateNearest):
			b.Cols[i] = column.Gather(&k.input.Cols[k.b.ID], k.nearest[from:to])
		case k.b.Columns[i].Role != NoRole:
			v := column.New(column.Text, nil, b.N)
			v.Dict = k.b.regions(k.b.Columns[i].Role)
			for j := range v.C {
				if k.nobody {
					v.SetNull(j)
				} else {
					v.C[j] = uint32(k.p.Zone)
				}
			}
			b.Cols[i] = v
		default:
			b.Cols[i] = k.out[i].Slice(from, to)
		}
	}
	return b
}
