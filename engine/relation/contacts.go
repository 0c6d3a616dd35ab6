package relation

import (
	"cmp"
	"context"
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/voronoi"
)

// contacts is CONTACTS OF c: one row for each ordered pair of touching cells.
var contacts = &Definition{
	Noun:    "CONTACTS",
	RowIs:   "ordered pair of touching cells, both (a, b) and (b, a)",
	Meaning: "the faces between the cells of two sites",
	Clauses: []string{"WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Open:    openContacts,
	layout:  layoutContacts,
}

// The computed columns of CONTACTS, in their order; those of FOR EACH stand
// before them.
const (
	contactA = iota
	contactB
	contactDistance
	contactArea
	contactX
	contactY
	contactZ
)

func init() {
	contacts.Computed = []Column{
		contactA:        measure("a", column.Text, 0, 0, "identifier of one site"),
		contactB:        measure("b", column.Text, 0, 0, "identifier of the other site"),
		contactDistance: measure("distance", column.Real, 1, 0, "distance between the two sites"),
		contactArea:     measure("area", column.Real, 2, 0, "area of the face that the cells share"),
		contactX:        measure("mx", column.Real, 1, 0, "middle (centroid) of the face, x"),
		contactY:        measure("my", column.Real, 1, 0, "middle (centroid) of the face, y"),
		contactZ:        measure("mz", column.Real, 1, 0, "middle (centroid) of the face, z"),
	}
	contacts.Computed[contactArea].Extensive = true
}

func layoutContacts(b *Bound) []Column {
	computed := b.computed()
	id := b.Input[b.ID]
	for _, i := range []int{contactA, contactB} {
		computed[i].Type, computed[i].Unit = id.Type, id.Unit
	}
	computed[contactA].Site = b.ID // a condition on a says which cells are asked for
	own := b.ownColumns(computed)
	columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
	for _, i := range b.Clauses.Each {
		columns = append(columns, own[i])
	}
	return append(columns, computed...)
}

type contactRows struct {
	*sites
	each int // number of columns of FOR EACH, which come first
}

func openContacts(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &contactRows{sites: s, each: len(b.Clauses.Each)}, nil
}

func (c *contactRows) Cost() (voronoi.Cost, error) { return c.cost(voronoi.Neighbours) }

// pairs is the batch at hand: the rows of the input that a and b stand for.
type pairs struct {
	*batches
	a, b []int32
}

func (c *contactRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() { // where emit has had enough rows, too
		c.said.partial = err != nil
		c.tell()
	}()
	out := &pairs{batches: newBatches(c.b, c.r.Need, c.each+contactDistance, emit)}
	for i, p := range c.parts {
		out.now(p.Zone, noPart)
		if err := c.part(ctx, p, out); err != nil {
			return err
		}
		c.partDone(i)
	}
	return c.flush(out)
}

func (c *contactRows) flush(out *pairs) error {
	err := out.flush(func(i int) (column.Vector, bool) {
		switch {
		case !needed(c.r.Need, i):
			return column.Vector{}, false
		case i < c.each:
			return column.Gather(&c.input.Cols[c.b.Clauses.Each[i]], out.a), true
		case i == c.each+contactA:
			return column.Gather(&c.input.Cols[c.b.ID], out.a), true
		case i == c.each+contactB:
			return column.Gather(&c.input.Cols[c.b.ID], out.b), true
		}
		return column.Vector{}, false
	})
	out.a, out.b = out.a[:0], out.b[:0]
	return err
}

// part emits the contacts of one part: of each shown row in the order of
// identifiers, towards every row of the touching cells in that order.
func (c *contactRows) part(ctx context.Context, p *Part, out *pairs) error {
	if !c.wanted(p) {
		return nil
	}
	h, err := c.open(ctx, p)
	if err != nil {
		return err
	}
	f := h.Facts()
	ks, list := c.shown(p, f)
	if len(ks) == 0 {
		return nil
	}
	of := rowsOfSites(p)
	if p.Share == nil {
		// One row a site, in the order of the sites: rows come as contacts do.
		at := 0
		err = c.contactsIn(p, h)(ctx, list, c.progress(), func(site int32, contacts []voronoi.Contact) error {
			for at < len(ks) && p.Site[ks[at]] < site {
				at++
			}
			if at == len(ks) || p.Site[ks[at]] != site {
				return nil // a site outside the solid
			}
			return c.row(p, of, ks[at], contacts, out)
		})
	} else {
		err = c.sharedPart(ctx, c.contactsIn(p, h), p, of, ks, list, out)
	}
	if err != nil {
		return c.refused(err, p)
	}
	return nil
}

// sharedPart emits a part in which several rows share a site: the contacts of a
// site are needed again for its later rows.
func (c *contactRows) sharedPart(ctx context.Context, contacts contactsFunc, p *Part, of [][]int32, ks, list []int32, out *pairs) error {
	kept := map[int32][]voronoi.Contact{}
	err := contacts(ctx, list, c.progress(), func(site int32, contacts []voronoi.Contact) error {
		kept[site] = slices.Clone(contacts)
		return nil
	})
	if err != nil {
		return err
	}
	for _, k := range ks {
		if err := c.row(p, of, k, kept[p.Site[k]], out); err != nil {
			return err
		}
	}
	return nil
}

type contactsFunc = func(ctx context.Context, sites []int32, progress func(done, total int),
	yield func(site int32, contacts []voronoi.Contact) error) error

// rowsOfSites lists the rows (indices into p.Rows) of each site, nil where each
// site has the row of its own number.
func rowsOfSites(p *Part) [][]int32 {
	if p.Share == nil {
		return nil
	}
	of := make([][]int32, len(p.Sites))
	for k, s := range p.Site {
		of[s] = append(of[s], int32(k))
	}
	return of
}

// touching is a contact towards one row.
type touching struct {
	k       int32
	contact *voronoi.Contact
}

// row emits the contacts of row k.
func (c *contactRows) row(p *Part, of [][]int32, k int32, contacts []voronoi.Contact, out *pairs) error {
	list := make([]touching, 0, len(contacts))
	for i := range contacts {
		x := &contacts[i]
		if of == nil {
			list = append(list, touching{x.Other, x})
			continue
		}
		for _, other := range of[x.Other] {
			list = append(list, touching{other, x})
		}
	}
	slices.SortFunc(list, func(a, b touching) int { return cmp.Or(int(a.k)-int(b.k), int(a.contact.Part)-int(b.contact.Part)) })
	for _, t := range list {
		if c.b.measuredIn() {
			out.now(p.Zone, t.contact.Part)
		}
		c.put(p, k, t, out)
		if out.room() == 0 {
			if err := c.flush(out); err != nil {
				return err
			}
		}
	}
	return nil
}

// put writes one row.
func (c *contactRows) put(p *Part, k int32, t touching, out *pairs) {
	i, open := out.n, math.IsInf(t.contact.Area, 1)
	out.a = append(out.a, p.Rows[k])
	out.b = append(out.b, p.Rows[t.k])
	c.said.contacts++
	if open {
		c.said.openFaces++
	}
	columns := out.columns[c.each:]
	if v := &columns[contactDistance]; v.Type != column.Null {
		v.F[i] = t.contact.Distance
	}
	if v := &columns[contactArea]; v.Type != column.Null {
		v.F[i] = t.contact.Area * p.share(int(k)) * p.share(int(t.k))
	}
	for axis := range 3 {
		v := &columns[contactX+axis]
		switch {
		case v.Type == column.Null:
		case open:
			v.SetNull(i)
		default:
			v.F[i] = component(t.contact.Middle, axis)
		}
	}
	out.n++
}
