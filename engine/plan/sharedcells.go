package plan

import (
	"nearcell/engine/relation"
	"nearcell/voronoi"
)

// sharedCells tells each use of CELLS which measures others ask for of the same sites,
// solid and stretch: a cell is built once, and measured for all of them.
//
// Safe: measures that nobody reads change no row, and each measure of a cell has the same
// bits whatever else is measured. Where uses look alike and are not, measures are
// computed for nothing.
func sharedCells(n Node) (Node, error) {
	also := askedBeside(n)
	if len(also) == 0 {
		return n, nil
	}
	o := newOptimiser()
	o.apply = func(n Node) (Node, error) {
		n, err := o.inside(n)
		if err != nil {
			return nil, err
		}
		return rewrite(n, func(n Node) (Node, error) {
			r, ok := n.(*Relation)
			if !ok || also[r.Bound] == 0 {
				return n, nil
			}
			c := *r
			c.Also = also[r.Bound]
			return &c, nil
		})
	}
	return o.apply(n)
}

// askedBeside is what other uses of the same cells ask for beside each of them.
func askedBeside(n Node) map[*relation.Bound]voronoi.Measures {
	own := map[*relation.Bound]voronoi.Measures{}
	uses := map[string][]*relation.Bound{}
	union := map[string]voronoi.Measures{}
	Everywhere(n, func(n Node) {
		r, ok := n.(*Relation)
		if !ok || r.Bound.Def.Noun != "CELLS" || r.Bound.MeasuredIn() || own[r.Bound] != 0 || ReadsOuter(r) {
			return
		}
		want := r.Bound.Measures(r.Need)
		if want == 0 {
			return
		}
		sites := sitesOf(r)
		own[r.Bound] = want
		uses[sites] = append(uses[sites], r.Bound)
		union[sites] |= want
	})
	also := map[*relation.Bound]voronoi.Measures{}
	for sites, list := range uses {
		for _, b := range list {
			if more := union[sites] &^ own[b]; more != 0 {
				also[b] = more
			}
		}
	}
	return also
}

// sitesOf describes what a relation partitions: the plan of the columns alone that the
// partition rests on, and the clauses.
func sitesOf(r *Relation) string {
	need := make([]bool, len(r.Bound.Input))
	for _, c := range r.Bound.Reads() {
		need[c] = true
	}
	in, _ := pruned(r.Input, need)
	return Format(in) + clauses(r.Bound)
}
