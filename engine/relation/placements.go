package relation

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/solid"
)

// placements is PLACEMENTS OF c NUMBER k: one row for each proposed further site.
var placements = &Definition{
	Noun:    "PLACEMENTS",
	RowIs:   "proposed further site, best first",
	Meaning: "where further sites would fill the largest gaps, each chosen with those before it in place",
	Example: `SELECT rank, x, y, z, radius, radius_after FROM PLACEMENTS OF hall NUMBER 5 CLEARANCE 0.3;`,
	Clauses: []string{"NUMBER", "CLEARANCE", "AMONG", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Regions: true,
	Places:  true,
	Open:    openPlacements,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		columns := b.eachColumns(computed)
		return append(columns, computed...)
	},
}

// The computed columns of PLACEMENTS behind those of FOR EACH.
const (
	placementRank = iota
	placementX
	placementY
	placementZ
	placementRadius
	placementAfter
)

func init() {
	placements.Computed = []Column{
		placementRank:   measure("rank", column.Integer, 0, 0, "1 for the first to place"),
		placementX:      measure("x", column.Real, 1, 0, "where it would stand, x"),
		placementY:      measure("y", column.Real, 1, 0, "where it would stand, y"),
		placementZ:      measure("z", column.Real, 1, 0, "where it would stand, z"),
		placementRadius: measure("radius", column.Real, 1, 0, "distance from there to the nearest site, those placed before among them: the gap that it fills; STRETCHED: the true one to the truly nearest"),
		placementAfter:  measure("radius_after", column.Real, 1, 0, "covering radius with it: the largest distance of any place to the nearest site; without a solid, of places among the sites, NULL where none is left"),
	}
}

type placementRows struct {
	*sites
	each          int
	points        *points
	refusedPlaces int // of AMONG: outside, or too near to a wall
	fewest        int // places found in a part that found too few; -1: all had enough
}

func openPlacements(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	if b.Clauses.Clearance > 0 && !b.measuredIn() {
		if err := b.needsSolid("CLEARANCE"); err != nil {
			return nil, err
		}
	}
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	x := &placementRows{sites: s, each: len(b.Clauses.Each), fewest: -1}
	if b.Clauses.Covering.Among {
		x.points = pointsOf(b, r.Beside[0])
	}
	return x, nil
}

func (x *placementRows) Cost() (voronoi.Cost, error) { return x.cost(voronoi.Farthest) }

// Forecast has the number of rows that is asked for.
func (x *placementRows) Forecast(ctx context.Context) (*Forecast, error) {
	f, err := x.forecast(ctx, voronoi.Farthest, false)
	if err != nil {
		return nil, err
	}
	f.Measures, f.Rows = []string{"placements"}, f.Parts*float64(x.b.Choice.Number)
	return f, nil
}

func (x *placementRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer func() { x.tell() }()
	out := newBatches(x.b, x.r.Need, x.each, emit)
	var first []int32
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= x.each || !needed(x.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&x.input.Cols[x.b.Clauses.Each[i]], first), true
		})
		first = first[:0]
		return err
	}
	put := func(p *Part, placed []coverage.Placement) error {
		for rank, at := range placed {
			first = append(first, p.Rows[0])
			columns := out.columns[x.each:]
			if columns[placementRank].Type != column.Null {
				columns[placementRank].I[out.n] = int64(rank + 1)
			}
			for c, value := range map[int]float64{placementX: at.At.X, placementY: at.At.Y, placementZ: at.At.Z, placementRadius: at.Radius, placementAfter: at.After} {
				if c == placementAfter && value == 0 { // no place is left that is a gap
					if columns[c].Type != column.Null {
						columns[c].SetNull(out.n)
					}
					continue
				}
				number(&columns[c], out.n, value)
			}
			out.n++
			if out.room() == 0 {
				if err := flush(); err != nil {
					return err
				}
			}
		}
		return nil
	}
	for i, p := range x.parts {
		if !x.wanted(p) {
			continue
		}
		err := x.b.eachRegion(p, func(region int32, within solid.Solid) error {
			placed, err := x.part(ctx, p, within)
			if err != nil {
				return err
			}
			out.now(p.Zone, region)
			return put(p, placed)
		})
		if err != nil {
			return err
		}
		x.partDone(i)
	}
	return flush()
}

// part proposes sites of one part, or in one region of it.
func (x *placementRows) part(ctx context.Context, p *Part, within solid.Solid) ([]coverage.Placement, error) {
	h, err := x.open(ctx, p)
	if err != nil {
		return nil, err
	}
	o := coverage.PlaceOptions{Options: coverage.Options{Threads: x.env.Threads, Progress: x.progress(), Within: within}, Clearance: x.b.Clauses.Clearance}
	if x.points != nil {
		o.Among = []voronoi.Vec{}
		refused := 0
		allowed := func(at voronoi.Vec) bool {
			if within != nil {
				return coverage.Allowed(within, at, o.Clearance)
			}
			return h.Allowed(at, o.Clearance)
		}
		for row, at := range x.points.at {
			switch {
			case !x.points.has(int32(row)):
			case !allowed(at):
				refused++
			default:
				o.Among = append(o.Among, at)
			}
		}
		x.refusedPlaces = max(x.refusedPlaces, refused)
	}
	placed, err := h.Places(ctx, p.Sites, x.b.Choice.Number, o)
	if err != nil {
		return nil, x.solidKnown(err, p)
	}
	if len(placed) < x.b.Choice.Number && (x.fewest < 0 || len(placed) < x.fewest) {
		x.fewest = len(placed)
	}
	return placed, nil
}

func (x *placementRows) tell() {
	x.sites.tell()
	add := func(rank int, format string, args ...any) { x.env.Notes.Add(note.Note, rank, format, args...) }
	c := &x.b.Clauses
	if x.points != nil && x.points.nowhere > 0 {
		add(note.Sites, "%s of AMONG %s no position", count(x.points.nowhere, "place"), verb(x.points.nowhere, "has", "have"))
	}
	if x.refusedPlaces > 0 && len(c.Zones) == 0 {
		why := "outside " + c.SolidName
		if x.b.measuredIn() {
			_, name := x.b.Space()
			why = "outside " + name
		}
		if c.Clearance > 0 {
			why += ", or nearer to its walls than " + x.length(c.Clearance)
		}
		add(note.Sites, "%s of AMONG %s %s: none is proposed there", count(x.refusedPlaces, "place"), verb(x.refusedPlaces, "lies", "lie"), why)
	}
	if x.fewest >= 0 {
		add(note.Rows, "only %s could be proposed: no place is left but those of sites", count(x.fewest, "place"))
	}
	if len(x.parts) > 0 && !x.b.Closed() && !x.b.measuredIn() {
		add(note.Cells, "without a solid, only places among the sites of %s can be told; WITHIN a solid gives those at its walls too", x.b.Name)
	}
	if x.b.measuredIn() && len(x.parts) > 0 {
		add(note.Cells, "with MEASURED IN each part has proposals of its own, and radius_after is of that part")
	}
	if c.Clearance > 0 && x.points == nil {
		add(note.Cells, "with CLEARANCE, no other place is farther from the sites by more than %s; radius_after counts all of the space, up to the walls",
			percent(coverage.ClearanceWithin))
	}
	if len(x.parts) > 0 {
		add(note.Rows, "a place counts as near to a site although a wall stands between them")
	}
}
