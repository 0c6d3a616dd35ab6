package plan

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// joinOrder puts the tables of inner joins into another order where the one that is
// written costs more than twice as much: tables that nothing ties together yet, which
// would be paired row by row with all that came before, and large tables on the right
// side, which is the one kept in memory.
//
// The rows come in the order that was written all the same: where it matters, the rows
// of each table are numbered before and put in order by these numbers after the joins.
// It does not matter below groups whose aggregates do not depend on the order. Safe:
// only conditions that cannot fail, and that ask no query, are moved.
func joinOrder(n Node) (Node, error) { return reordered(n, false), nil }

// reordered gives a node with the joins in it put in order. free: nobody above looks
// at the order of its rows.
func reordered(n Node, free bool) Node {
	switch x := n.(type) {
	case *Join:
		if x.Kind == Inner && len(x.LeftKeys) == 0 {
			if out, ok := reorderedTree(x, free); ok {
				return out
			}
		}
		free = free && (x.Rest == nil || !x.Rest.CanFail())
	case *Project:
		free = free && !anyFails(x.Exprs)
	case *Filter:
		free = free && !x.Cond.CanFail()
	case *Aggregate:
		free = anyOrder(x)
	case *Distinct:
	default:
		free = false
	}
	in := n.Inputs()
	if len(in) == 0 {
		return n
	}
	out := make([]Node, len(in))
	for i, child := range in {
		out[i] = reordered(child, free)
	}
	return withInputs(n, out)
}

// anyOrder reports whether an aggregate gives the same of its rows in any order.
func anyOrder(n *Aggregate) bool {
	if anyFails(exprsOf(n)) {
		return false
	}
	for i := range n.Calls {
		c := &n.Calls[i]
		if len(c.OrderBy) > 0 || c.Weight != nil && len(n.Keys) == 0 { // one is named as the largest
			return false
		}
		switch c.Fn.Name {
		case "COUNT", "MIN", "MAX", "SHARE", "MEDIAN", "QUANTILE":
		case "SUM", "AVG":
			if c.Distinct && c.Args[0].Type() == column.Real {
				return false
			}
		default:
			return false
		}
	}
	return true
}

// joinTree is the tables of inner joins and the conditions between them, over the
// columns of all tables one after another.
type joinTree struct {
	leaves []Node
	start  []int // first column of each leaf
	width  int
	conds  []expr.Expr
	fixed  bool // something may not be moved
}

// add takes a node apart and gives the place of each of its columns.
func (t *joinTree) add(n Node) []int {
	switch x := n.(type) {
	case *Join:
		if x.Kind == Inner && len(x.LeftKeys) == 0 {
			to := append(t.add(x.Left), t.add(x.Right)...)
			if x.Rest == nil {
				return to
			}
			for _, c := range expr.Conjuncts(x.Rest) {
				t.fixed = t.fixed || c.CanFail() || expr.HasQuery(c) || expr.HasOuter(c)
				t.conds = append(t.conds, expr.Remap(c, to))
			}
			return to
		}
	case *Project:
		if at, ok := handsThrough(x); ok && joinsBelow(x) {
			in := t.add(x.Input)
			to := make([]int, len(at))
			for i, c := range at {
				to[i] = in[c]
			}
			return to
		}
	}
	t.leaves = append(t.leaves, n)
	t.start = append(t.start, t.width)
	to := make([]int, len(n.Schema()))
	for i := range to {
		to[i] = t.width + i
	}
	t.width += len(to)
	return to
}

// handsThrough gives the columns of a projection that computes nothing.
func handsThrough(p *Project) ([]int, bool) {
	at := make([]int, len(p.Exprs))
	for i, e := range p.Exprs {
		c, ok := expr.AsColumn(e)
		if !ok {
			return nil, false
		}
		at[i] = c
	}
	return at, true
}

// joinsBelow reports whether only projections stand between p and an inner join.
func joinsBelow(p *Project) bool {
	switch x := p.Input.(type) {
	case *Join:
		return x.Kind == Inner && len(x.LeftKeys) == 0
	case *Project:
		return joinsBelow(x)
	}
	return false
}

// Costs of a row, in rows that are read: of one that is put into the table of a hash
// join, and of one that is numbered and put back in order.
const (
	costOfBuilding = 6
	costOfOrdering = 3
	costWorthIt    = 50_000 // below this nobody feels it, and plans stay as written
	timesBetter    = 2
)

// reorderedTree gives the joins in a better order, if there is one.
func reorderedTree(j *Join, free bool) (Node, bool) {
	t := &joinTree{}
	to := t.add(j)
	if t.fixed {
		return nil, false
	}
	g := newJoinGraph(t)
	written := make([]int, len(t.leaves))
	for i := range written {
		written[i] = i
	}
	before, _ := g.cost(written)
	if before < costWorthIt {
		return nil, false
	}
	best, after := g.best()
	if !free {
		_, rows := g.cost(best)
		after += costOfOrdering * rows
		for _, n := range g.rows {
			after += n / 2
		}
	}
	if after*timesBetter > before || slices.Equal(best, written) {
		return nil, false
	}
	return t.build(j.Schema(), to, best, free), true
}

// joinGraph is what is known of the sizes of a joinTree.
type joinGraph struct {
	rows  []float64
	share [][]float64 // of the pairs of two tables that the conditions between them leave
	tied  [][]bool    // by an equality
}

func newJoinGraph(t *joinTree) *joinGraph {
	n := len(t.leaves)
	g := &joinGraph{rows: make([]float64, n), share: make([][]float64, n), tied: make([][]bool, n)}
	e := &Estimator{known: map[Node]Estimate{}, counted: map[counted]values{}}
	local, leafOf := make([]int, t.width), make([]int, t.width)
	for i, leaf := range t.leaves {
		if e.walk(leaf) != nil { // nobody looks at sites, so that nothing fails
			e.known[leaf] = Estimate{}
		}
		g.rows[i] = max(1, e.known[leaf].Rows)
		g.share[i], g.tied[i] = make([]float64, n), make([]bool, n)
		for k := range n {
			g.share[i][k] = 1
		}
		for c := range leaf.Schema() {
			local[t.start[i]+c], leafOf[t.start[i]+c] = c, i
		}
	}
	for _, c := range t.conds {
		used := leavesOf(c, leafOf, n)
		if len(used) != 2 {
			continue
		}
		a, b := used[0], used[1]
		share := shareOfOther
		if l, r, ok := equality(c, leafOf, n); ok {
			x := e.values(expr.Remap(l, local), t.leaves[leavesOf(l, leafOf, n)[0]])
			y := e.values(expr.Remap(r, local), t.leaves[leavesOf(r, leafOf, n)[0]])
			share = 1 / max(1, x.count, y.count)
			g.tied[a][b], g.tied[b][a] = true, true
		}
		g.share[a][b] *= share
		g.share[b][a] = g.share[a][b]
	}
	return g
}

// leavesOf lists the tables that an expression reads.
func leavesOf(e expr.Expr, leafOf []int, n int) []int {
	used := make([]bool, len(leafOf))
	expr.Columns(e, used)
	var list []int
	for c, u := range used {
		if u && !slices.Contains(list, leafOf[c]) {
			list = append(list, leafOf[c])
		}
	}
	return list
}

// equality is the two sides of a condition that can be a key of a join.
func equality(c expr.Expr, leafOf []int, n int) (l, r expr.Expr, ok bool) {
	eq, is := keyEquality(c)
	if !is || len(leavesOf(eq.Left, leafOf, n)) != 1 || len(leavesOf(eq.Right, leafOf, n)) != 1 {
		return nil, nil, false
	}
	return eq.Left, eq.Right, true
}

// cost is that of joining the tables in an order, one after another, and the rows
// that come out.
func (g *joinGraph) cost(order []int) (cost, rows float64) {
	s := g.begin(order[0])
	for _, next := range order[1:] {
		s.add(next)
	}
	return s.cost, s.rows
}

// joining is an order in the making.
type joining struct {
	g          *joinGraph
	cost, rows float64
	share      []float64 // for each table, of the pairs with what is joined so far
	tied, in   []bool
}

func (g *joinGraph) begin(first int) *joining {
	n := len(g.rows)
	s := &joining{g: g, rows: g.rows[first], cost: g.rows[first], share: slices.Repeat([]float64{1}, n), tied: make([]bool, n), in: make([]bool, n)}
	s.meet(first)
	return s
}

func (s *joining) meet(next int) {
	s.in[next] = true
	for k := range s.share {
		s.share[k] *= s.g.share[next][k]
		s.tied[k] = s.tied[k] || s.g.tied[next][k]
	}
}

// step is what joining a table next would cost and give.
func (s *joining) step(next int) (cost, rows float64) {
	right := s.g.rows[next]
	pairs := s.rows * right
	rows = pairs * s.share[next]
	if s.tied[next] {
		return costOfBuilding*right + s.rows + rows, rows
	}
	return right + pairs + rows, rows
}

func (s *joining) add(next int) {
	cost, rows := s.step(next)
	s.cost, s.rows = s.cost+cost, rows
	s.meet(next)
}

// best is the cheapest of the orders that begin with each table and go on with the
// one that leaves the fewest rows, tied ones first.
func (g *joinGraph) best() ([]int, float64) {
	var best []int
	least := math.Inf(1)
	for first := range g.rows {
		s := g.begin(first)
		order := []int{first}
		for len(order) < len(g.rows) && s.cost < least {
			next, fewest, cheapest, tied := -1, 0.0, 0.0, false
			for k := range g.rows {
				if s.in[k] {
					continue
				}
				cost, rows := s.step(k)
				better := next < 0 || s.tied[k] && !tied
				if s.tied[k] == tied && next >= 0 {
					better = rows < fewest || rows == fewest && cost < cheapest
				}
				if better {
					next, fewest, cheapest, tied = k, rows, cost, s.tied[k]
				}
			}
			s.add(next)
			order = append(order, next)
		}
		if len(order) == len(g.rows) && (best == nil || s.cost < least) {
			best, least = order, s.cost
		}
	}
	return best, least
}

// build joins the tables in the order given; to is where the columns of the result
// are among those of all tables.
func (t *joinTree) build(schema column.Schema, to, order []int, free bool) Node {
	now := make([]int, t.width) // where each column stands now
	numberAt := make([]int, len(t.leaves))
	var joined Node
	width := 0
	done := make([]bool, len(t.conds))
	for _, leaf := range order {
		n := reordered(t.leaves[leaf], free)
		for c := range n.Schema() {
			now[t.start[leaf]+c] = width + c
		}
		if !free {
			n = numberRows(n)
			numberAt[leaf] = width + len(n.Schema()) - 1
		}
		width += len(n.Schema())
		if joined == nil {
			joined = n
		} else {
			joined = &Join{Kind: Inner, Left: joined, Right: n}
		}
		t.place(joined, order, leaf, now, done)
	}
	if !free {
		s := &Sort{Input: joined}
		all := joined.Schema()
		for _, at := range numberAt {
			s.Keys = append(s.Keys, SortKey{Expr: expr.NewColumn(at, all[at], noPlace)})
		}
		joined = s
	}
	p := &Project{Input: joined, Fields: schema}
	all := joined.Schema()
	for _, c := range to {
		p.Exprs = append(p.Exprs, expr.NewColumn(now[c], all[now[c]], noPlace))
	}
	return p
}

// place gives the newest join the conditions whose tables are now all there.
func (t *joinTree) place(joined Node, order []int, newest int, now []int, done []bool) {
	j, ok := joined.(*Join)
	if !ok || j.Kind != Inner || len(order) == 0 || newest == order[0] {
		return
	}
	there := make([]bool, t.width)
	for _, leaf := range order[:slices.Index(order, newest)+1] {
		for c := range t.leaves[leaf].Schema() {
			there[t.start[leaf]+c] = true
		}
	}
	var rest []expr.Expr
	for i, c := range t.conds {
		used := make([]bool, t.width)
		expr.Columns(c, used)
		ready := !done[i]
		for at, u := range used {
			ready = ready && (!u || there[at])
		}
		if ready {
			done[i] = true
			rest = append(rest, expr.Remap(c, now))
		}
	}
	j.Rest = expr.AndAll(rest)
}

// numberRows numbers the rows of a node, below its filters, so that nothing is
// numbered that has been copied for it.
func numberRows(n Node) Node {
	if f, ok := n.(*Filter); ok {
		return &Filter{Input: numberRows(f.Input), Cond: f.Cond, Clause: f.Clause}
	}
	name := "row"
	if s, ok := n.(*Scan); ok {
		name += " of " + s.Name
	}
	return &Number{Input: n, Field: column.Field{Name: name, Type: column.Integer}}
}
