package relation

import (
	"cmp"
	"context"
	"errors"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/overlay"
)

// overlays is OVERLAY OF c AGAINST c2: one row for each pair of cells that share space.
var overlays = &Definition{
	Noun:    "OVERLAY",
	RowIs:   "pair of cells that share space",
	Meaning: "what two campaigns say of the same space: the cells of one laid over those of the other",
	Example: "SELECT SUM(ABS(other_temp - temp) * volume) / SUM(volume) AS mean_abs_change,\n  SHARE(other_temp > temp + 0.5) WEIGHTED BY volume AS warmer\nFROM OVERLAY OF hall AGAINST hall;",
	Clauses: []string{"AGAINST", "WITHIN", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Pairs:   true,
	Open:    openOverlay,
	layout:  layoutOverlay,
}

// The computed columns of OVERLAY, which stand first.
const (
	overlayA = iota
	overlayB
	overlayVolume
	overlayColumns
)

// otherPrefix is what the names of the other campaign's attributes begin with.
const otherPrefix = "other_"

func init() {
	overlays.Computed = []Column{
		overlayA:      measure("a", column.Text, 0, 0, "identifier of the site of the campaign OF"),
		overlayB:      measure("b", column.Text, 0, 0, "identifier of the site of the campaign AGAINST; its other columns carry the prefix other_"),
		overlayVolume: measure("volume", column.Real, 3, 0, "volume of the space that the two cells share"),
	}
	overlays.Computed[overlayVolume].Extensive = true
}

func layoutOverlay(b *Bound) []Column {
	computed := b.computed()
	id, other := b.Input[b.ID], b.Other.Input[b.Other.ID]
	computed[overlayA].Type, computed[overlayA].Unit, computed[overlayA].Site = id.Type, id.Unit, b.ID
	computed[overlayB].Type, computed[overlayB].Unit = other.Type, other.Unit
	columns := slices.Clone(computed)
	taken := slices.Clone(computed)
	for i, c := range b.ownColumns(computed) {
		if i == b.ID {
			continue
		}
		c.From = 1 + i
		columns, taken = append(columns, c), append(taken, c)
	}
	for _, i := range b.Other.shownBeside() {
		f := b.Other.Input[i]
		if b.Other.policy() == Mean && b.Other.averaged(i) {
			f.Type = column.Real
		}
		f.Name = otherPrefix + f.Name
		for isComputed(taken, f.Name) {
			f.Name = otherPrefix + f.Name
		}
		c := Column{Field: f, Site: -1}
		columns, taken = append(columns, c), append(taken, c)
	}
	return columns
}

// shownBeside are the columns of AGAINST that rows show, in their order: all but the
// identifier, which is b, and those of FOR EACH, which are the same on both sides.
func (b *Bound) shownBeside() []int {
	var list []int
	for i := range b.Input {
		if i != b.ID && !slices.Contains(b.Clauses.Each, i) {
			list = append(list, i)
		}
	}
	return list
}

type overlayRows struct {
	*sites
	other  *sites
	beside []int // columns of the other input, those behind the own ones
	behind int   // where they begin
	single int   // values of FOR EACH without a counterpart
}

func openOverlay(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	o, err := newSites(b.Other, env, r.Beside[0], Request{})
	if err != nil {
		return nil, err
	}
	x := &overlayRows{sites: s, other: o, beside: b.Other.shownBeside()}
	x.behind = len(b.Columns) - len(b.roles()) - len(x.beside)
	return x, nil
}

func (x *overlayRows) Cost() (voronoi.Cost, error) {
	f, err := x.Forecast(context.Background())
	if err != nil {
		return voronoi.Cost{}, err
	}
	return f.Cost, nil
}

// Of random sites a cell shares space with about so many, and finding each takes about so
// long on one core of a small machine.
const (
	piecesPerCell   = 10
	secondsPerPiece = 15e-6
)

// Forecast is that of the cells of both, and of the pieces that are usual.
func (x *overlayRows) Forecast(ctx context.Context) (*Forecast, error) {
	f, err := x.forecast(ctx, voronoi.Neighbours, false)
	if err != nil {
		return nil, err
	}
	o, err := x.other.forecast(ctx, voronoi.Neighbours, false)
	if err != nil {
		return nil, err
	}
	f.Measures = []string{"pieces"}
	cells := float64(f.Cost.Cells + f.Known)
	f.Rows, f.RowsExact = f.Rows*piecesPerCell, false
	f.Diagrams += o.Diagrams
	f.Cost.Cells += o.Cost.Cells
	f.Cost.Seconds += o.Cost.Seconds + cells*piecesPerCell*secondsPerPiece/float64(max(1, x.env.Threads))
	f.Cost.OneByOne = f.Cost.OneByOne && o.Cost.OneByOne
	return f, nil
}

// couples is the batch at hand: the rows of both inputs that a and b stand for.
type couples struct {
	*batches
	a, b []int32
}

func (x *overlayRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() { // where emit has had enough rows, too
		x.said.partial = err != nil
		x.tell()
	}()
	out := &couples{batches: newBatches(x.b, x.r.Need, overlayVolume, emit)}
	// Columns of both sides are gathered from the inputs.
	for i := range out.columns {
		if i != overlayVolume {
			out.columns[i] = column.Vector{Type: column.Null}
		}
	}
	against := x.byEach()
	for i, p := range x.parts {
		if x.wanted(p) {
			list := against[x.eachKey(p)]
			if len(list) == 0 {
				x.single++
			} else if err := x.part(ctx, p, list, out); err != nil {
				return err
			}
		}
		x.partDone(i)
	}
	return x.flush(out)
}

// byEach are the partitions of the other side by their values of FOR EACH.
func (x *overlayRows) byEach() map[string][]*Part {
	found := map[string][]*Part{}
	for _, p := range x.other.parts {
		key := eachText(x.other.b, x.other.input, p)
		found[key] = append(found[key], p)
	}
	return found
}

// eachKey tells which partitions of the other side a partition is held against.
func (x *overlayRows) eachKey(p *Part) string {
	if len(x.other.b.Clauses.Each) == 0 {
		return ""
	}
	return eachText(x.b, x.input, p)
}

func eachText(b *Bound, input *column.Table, p *Part) string {
	var text strings.Builder
	for _, c := range b.Clauses.Each {
		text.WriteString(input.Cols[c].Value(int(p.Rows[0])).String())
		text.WriteByte(0)
	}
	return text.String()
}

// couple is a row that is to come: row k of a partition with row l of one of the others.
type couple struct {
	other  *Part
	l      int32
	region int32
	volume float64
}

// part emits the pairs of one partition with those that it is held against: of each shown
// row in the order of identifiers, with the others in theirs.
func (x *overlayRows) part(ctx context.Context, p *Part, against []*Part, out *couples) error {
	h, err := x.open(ctx, p)
	if err != nil {
		return err
	}
	ks, _ := x.shown(p, h.Facts())
	if len(ks) == 0 {
		return nil
	}
	var asked []int32 // nil: all sites of the partition
	if len(ks) < len(p.Rows) {
		for _, k := range ks {
			asked = append(asked, p.Site[k])
		}
		slices.Sort(asked)
		asked = slices.Compact(asked)
	}
	shared := make([][]couple, len(p.Sites))
	for _, q := range against {
		if err := x.lay(ctx, p, q, asked, shared); err != nil {
			return err
		}
	}
	for _, k := range ks {
		for _, c := range shared[p.Site[k]] {
			out.now(p.Zone, c.region)
			x.put(p, k, c, out)
			if out.room() == 0 {
				if err := x.flush(out); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// lay finds what the asked sites of a partition share with one of the others.
func (x *overlayRows) lay(ctx context.Context, p, q *Part, asked []int32, shared [][]couple) error {
	h, err := x.open(ctx, p)
	if err != nil {
		return err
	}
	g, err := x.other.open(ctx, q)
	if err != nil {
		return err
	}
	var o overlay.Options
	if x.b.measuredIn() {
		o.Parts = x.b.dividedParts()
	}
	lists, err := h.Overlay(ctx, g, asked, o, x.progress())
	if err != nil {
		return x.laid(err, p, q)
	}
	of := rowsOfSites(q)
	for i, list := range lists {
		site := int32(i)
		if asked != nil {
			site = asked[i]
		}
		for _, piece := range list {
			region := noPart
			if x.b.measuredIn() {
				region = piece.Part
			}
			if of == nil {
				shared[site] = append(shared[site], couple{q, piece.B, region, piece.Volume})
				continue
			}
			for _, l := range of[piece.B] {
				shared[site] = append(shared[site], couple{q, l, region, piece.Volume})
			}
		}
		slices.SortStableFunc(shared[site], func(c, d couple) int {
			return cmp.Or(x.other.order.byID(c.other.Rows[c.l], d.other.Rows[d.l]), cmp.Compare(c.region, d.region))
		})
	}
	return nil
}

// laid words what keeps two partitions from being laid over one another.
func (x *overlayRows) laid(err error, p, q *Part) error {
	if errors.Is(err, overlay.ErrUndivided) {
		name := func(b *Bound, p *Part) string {
			if p.Zone >= 0 {
				return b.Clauses.Zones[p.Zone].Name
			}
			return b.Clauses.SolidName
		}
		return problem.New("failed", x.b.Place, "what %s and %s share cannot be told: their surfaces do not fit together", name(x.b, p), name(x.other.b, q)).
			WithHint("WITHIN one of them, which then holds for both campaigns")
	}
	return x.refused(err, p)
}

func (x *overlayRows) put(p *Part, k int32, c couple, out *couples) {
	out.a, out.b = append(out.a, p.Rows[k]), append(out.b, c.other.Rows[c.l])
	if v := &out.columns[overlayVolume]; v.Type != column.Null {
		v.F[out.n] = c.volume * p.share(int(k)) * c.other.share(int(c.l))
	}
	out.n++
}

func (x *overlayRows) flush(out *couples) error {
	err := out.flush(func(i int) (column.Vector, bool) {
		c := x.b.Columns[i]
		switch {
		case !needed(x.r.Need, i) || i == overlayVolume || c.Role != NoRole:
			return column.Vector{}, false
		case i == overlayA:
			return column.Gather(&x.input.Cols[x.b.ID], out.a), true
		case i == overlayB:
			return column.Gather(&x.other.input.Cols[x.other.b.ID], out.b), true
		case i >= x.behind:
			return column.Gather(&x.other.input.Cols[x.beside[i-x.behind]], out.b), true
		}
		return column.Gather(&x.input.Cols[c.From-1], out.a), true
	})
	out.a, out.b = out.a[:0], out.b[:0]
	return err
}

// tell says what was left out on either side, and which space only one of them has.
func (x *overlayRows) tell() {
	x.sites.tell()
	if !x.b.sameSpace(x.other.b) {
		x.tellRemainders()
	}
	if n := x.single; n > 0 {
		x.env.Notes.Add(note.Note, note.Sites, "%s of %s %s no counterpart in %s with the same %s and %s in no row", count(n, "partition"), x.b.Name, verb(n, "has", "have"),
			x.other.b.Name, x.b.Input[x.b.Clauses.Each[0]].Name, are(n))
	}
	x.other.tell()
}

// spaces are the solids that the cells of a campaign end at.
func (b *Bound) spaces() []Region {
	if b.Clauses.Solid != nil {
		return []Region{{Name: b.Clauses.SolidName, Solid: b.Clauses.Solid}}
	}
	return b.Clauses.Zones
}

func (b *Bound) sameSpace(o *Bound) bool {
	return slices.EqualFunc(b.spaces(), o.spaces(), func(p, q Region) bool { return p.Solid.Key() == q.Solid.Key() })
}

// tellRemainders says how much of each side's space the other has not.
func (x *overlayRows) tellRemainders() {
	var common, of, against voronoi.Sum
	known := true
	for _, p := range x.b.spaces() {
		of.Add(p.Solid.Volume())
		for _, q := range x.other.b.spaces() {
			v, ok := overlay.Common(p.Solid, q.Solid)
			known = known && ok
			common.Add(v)
		}
	}
	for _, q := range x.other.b.spaces() {
		against.Add(q.Solid.Volume())
	}
	if !known {
		return
	}
	_, name := x.b.Space()
	if x.b.measuredIn() {
		name = x.b.Clauses.SolidName
	}
	other := x.other.b.Clauses.SolidName
	if name == other {
		name, other = name+" of "+x.b.Name, other+" of "+x.other.b.Name
	}
	level := note.Note
	if common.Value() == 0 {
		level = note.Warning
	}
	rest := func(whole float64) string {
		left := whole - common.Value()
		if left < 1e-9*whole {
			left = 0
		}
		if left == 0 {
			return "nothing"
		}
		return x.volume(left)
	}
	x.env.Notes.Add(level, note.Cells, "%s and %s share %s: %s of %s and %s of %s belong to one campaign alone and are in no row", name, other, x.volume(common.Value()),
		rest(of.Value()), name, rest(against.Value()), other)
}
