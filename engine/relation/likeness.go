package relation

import (
	"context"
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/spatial"
	"nearcell/voronoi"
)

// What AUTOCORRELATION and CLUSTERS share: the readings of a part on the graph of the cells
// that touch, and what there is to say of it.

// Ways to weigh cells that touch.
const (
	byConductance = "CONDUCTANCE"
	byArea        = "AREA"
	byContact     = "CONTACT"
)

// Permutations behind a probability, and their seed.
const (
	permutations    = 999
	permutationSeed = 1
)

type likeness struct {
	*sites
	of int // the attribute

	missing  int // rows without a reading, most in one part
	doubled  int // rows that share a place with another, most in one part
	alone    int // sites that touch no other, most in one part
	few      int // parts with fewer than four sites
	constant int // parts in which all readings are equal
	silent   int // parts without any reading
	complete int // parts in which every arrangement gives the same
	defined  int // parts with an answer
	smooth   int // of them, with neighbours more alike than by chance
}

// graph is the readings of one part: by place, in the order of its sites.
type graph struct {
	*spatial.Graph
	values []float64
	place  []int32 // of each site of the part, -1: it has none
}

// linked makes the graph of a part: sites with a reading divide the space among
// themselves, and those whose cells touch are linked. Rows in one place are one site with
// their mean. A site that touches no other is left out.
func (l *likeness) linked(ctx context.Context, p *Part) (*graph, error) {
	if err := l.notInfinite(p, l.of); err != nil {
		return nil, err
	}
	read := l.readingsOf(p, l.of)
	l.missing = max(l.missing, read.rows)
	doubled := 0
	var heard []int32
	for site, n := range read.count {
		if n > 0 {
			heard = append(heard, int32(site))
		}
		if n > 1 {
			doubled += int(n)
		}
	}
	l.doubled = max(l.doubled, doubled)
	if len(heard) == 0 {
		l.silent++
		return nil, nil
	}
	h, err := l.heardBy(ctx, p, heard)
	if err != nil || h == nil {
		return nil, err
	}
	links, err := l.links(ctx, p, h, heard)
	if err != nil {
		return nil, err
	}
	return l.placed(p, h, read, heard, links), nil
}

// heardBy is the diagram of some sites of a part, nil where all of them lie outside.
func (l *likeness) heardBy(ctx context.Context, p *Part, heard []int32) (*diagram.Handle, error) {
	if len(heard) == len(p.Sites) {
		return l.open(ctx, p)
	}
	places := make([]voronoi.Vec, len(heard))
	for i, site := range heard {
		places[i] = p.Sites[site]
	}
	h, err := l.env.Diagrams.Get(ctx, places, l.options(p))
	if err != nil {
		return nil, l.refused(err, p)
	}
	if h.Facts().Inside == 0 {
		l.silent++
		return nil, nil
	}
	return h, nil
}

// links are those between numbers in heard.
func (l *likeness) links(ctx context.Context, p *Part, h *diagram.Handle, heard []int32) ([]spatial.Link, error) {
	var links []spatial.Link
	err := h.Contacts(ctx, nil, l.progress(), func(site int32, contacts []voronoi.Contact) error {
		for _, c := range contacts {
			if c.Other < site {
				continue // each once
			}
			w := 1.0
			if l.b.Clauses.Weights != byContact {
				w = c.Area
			}
			if math.IsInf(w, 1) {
				return problem.New("no-solid", l.b.Place, "the cells of %s end nowhere, so that some touch along an infinite face", l.b.Name).
					WithHint("WITHIN a solid, or WEIGHTS CONTACT, by which all that touch count alike")
			}
			if l.b.Clauses.Weights == byConductance {
				w /= c.Distance
			}
			if w > 0 {
				links = append(links, spatial.Link{A: site, B: c.Other, Weight: w})
			}
		}
		return nil
	})
	if err != nil {
		return nil, l.refused(err, p)
	}
	return links, nil
}

// placed numbers the sites that touch another.
func (l *likeness) placed(p *Part, h *diagram.Handle, read *readings, heard []int32, links []spatial.Link) *graph {
	g := &graph{place: make([]int32, len(p.Sites))}
	for i := range g.place {
		g.place[i] = -1
	}
	touches := make([]bool, len(heard))
	for _, k := range links {
		touches[k.A], touches[k.B] = true, true
	}
	number := make([]int32, len(heard))
	for i, site := range heard {
		if touches[i] {
			number[i] = int32(len(g.values))
			g.place[site] = number[i]
			g.values = append(g.values, read.value[site])
		}
	}
	l.alone = max(l.alone, h.Facts().Distinct-len(g.values))
	for i := range links {
		links[i].A, links[i].B = number[links[i].A], number[links[i].B]
	}
	g.Graph = spatial.NewGraph(len(g.values), links)
	switch low, high := extent(g.values); {
	case len(g.values) < 4:
		l.few++
	case low == high:
		l.constant++
	}
	return g
}

func extent(values []float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, v := range values {
		low, high = min(low, v), max(high, v)
	}
	return low, high
}

// options of the permutations.
func (l *likeness) permuted(needed bool) spatial.Options {
	o := spatial.Options{Seed: permutationSeed, Threads: max(1, l.env.Threads)}
	if needed {
		o.Permutations = permutations
	}
	return o
}

// forecastOf is that of the contacts.
func (l *likeness) likely(ctx context.Context, rows func(f *Forecast) float64, work ...string) (*Forecast, error) {
	f, err := l.forecast(ctx, voronoi.Neighbours, true)
	if err != nil {
		return nil, err
	}
	f.Rows, f.Measures = rows(f), append([]string{"contacts"}, work...)
	return f, nil
}

// orNull writes a number, NaN as NULL.
func orNull(v *column.Vector, at int, x float64) {
	switch {
	case v.Type == column.Null:
	case math.IsNaN(x):
		v.SetNull(at)
	default:
		v.F[at] = x
	}
}

// tell says what the statistics rest on and where there are none.
func (l *likeness) tell() {
	l.sites.tell()
	name := l.b.Input[l.of].Name
	add := func(rank int, format string, args ...any) { l.env.Notes.Add(note.Note, rank, format, args...) }
	where := func(n int) string {
		if len(l.parts) < 2 {
			return ""
		}
		return " in " + count(n, "partition")
	}
	most := ""
	if len(l.parts) > 1 {
		most = " in a partition at most"
	}
	if n := l.missing; n > 0 {
		add(note.Sites, "%s is missing at %s of %s%s: the others divide the space among themselves, and touch where it would lie", name, count(n, "site"), l.b.Name, most)
	}
	if n := l.doubled; n > 0 {
		add(note.Sites, "%s of %s %s a place with another%s: each place counts once, with the mean of its readings, since nothing lies between them", count(n, "site"), l.b.Name,
			verb(n, "shares", "share"), most)
	}
	if n := l.alone; n > 0 {
		add(note.Cells, "%s of %s %s no other%s and %s left out", count(n, "site"), l.b.Name, verb(n, "touches", "touch"), most, are(n))
	}
	if n := l.silent; n > 0 {
		add(note.Cells, "no site of %s has a value of %s%s: there is no answer", l.b.Name, name, where(n))
	}
	if n := l.constant; n > 0 {
		add(note.Cells, "all readings of %s are equal%s: nothing is more or less alike, and the answers are NULL", name, where(n))
	}
	if n := l.few; n > 0 {
		add(note.Cells, "fewer than four sites of %s touch one another%s: that says nothing of chance, and variance, z_score and p_value are NULL", l.b.Name, where(n))
	}
	if n := l.complete; n > 0 {
		add(note.Cells, "all cells of %s touch one another alike%s: every arrangement of the readings gives the same, and z_score is NULL", l.b.Name, where(n))
	}
	if l.defined == 0 {
		return
	}
	weights := map[string]string{byConductance: "the area of their contact over their distance", byArea: "the area of their contact", byContact: "1, all alike"}
	add(note.Cells, "cells that touch count with a weight of %s (WEIGHTS %s)", weights[l.b.Clauses.Weights], l.b.Clauses.Weights)
}

// tellChance says what the probabilities are.
func (l *likeness) tellChance(of string) {
	l.env.Notes.Add(note.Note, note.Weights, "p_value counts %d permutations (seed %d) %s, two-sided: none below %g exists", permutations, permutationSeed, of, 1.0/(1+permutations))
}
