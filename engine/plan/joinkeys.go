package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/lang"
)

// joinKeys makes keys out of equalities between the two sides of a join, so
// that it need not look at every pair. Both say the same: NULL equals nothing,
// and a key compares an INTEGER with a REAL as exactly as = does.
//
// A key is computed for rows without a partner too. One that can fail, as a CAST or a
// division can, is therefore guarded: where it does fail, the join goes back to pairs,
// and the row fails, or does not, as it would have without keys. Such an equality in a
// condition above inner joins, which may not move below what might fail before it, is a
// key of theirs all the same; the condition stays, and decides.
//
// Where the rows on the left are known to be so few that looking at every pair costs
// less than building the table of keys, there are none.
func joinKeys(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		switch n := n.(type) {
		case *Join:
			return joinWithKeys(n), nil
		case *Filter:
			j, ok := n.Input.(*Join)
			if !ok {
				return n, nil
			}
			for _, e := range expr.Conjuncts(n.Cond) {
				j = keyFromAbove(j, e)
			}
			if j == n.Input {
				return n, nil
			}
			c := *n
			c.Input = j
			return &c, nil
		}
		return n, nil
	})
}

func joinWithKeys(j *Join) Node {
	if j.Rest == nil || loopIsCheaper(j) {
		return j
	}
	c := *j
	left, right := len(j.Left.Schema()), len(j.Right.Schema())
	var rest []expr.Expr
	for _, e := range expr.Conjuncts(j.Rest) {
		l, r, ok := keyPair(e, left, right)
		if !ok {
			rest = append(rest, e)
			continue
		}
		c.addKey(l, r)
		c.Guarded = c.Guarded || e.CanFail()
	}
	c.Rest = expr.AndAll(rest)
	if c.Guarded && !j.Guarded { // one that is has its whole condition already
		c.Whole = whole(j)
	}
	return &c
}

func (j *Join) addKey(l, r expr.Expr) {
	j.LeftKeys = append(j.LeftKeys[:len(j.LeftKeys):len(j.LeftKeys)], l)
	j.RightKeys = append(j.RightKeys[:len(j.RightKeys):len(j.RightKeys)], r)
}

// keyFromAbove gives the inner join that both sides of an equality meet in the key that
// it is. What cannot fail is there already: it has been pushed down.
func keyFromAbove(j *Join, e expr.Expr) *Join {
	if j.Kind != Inner || !e.CanFail() {
		return j
	}
	left, right := len(j.Left.Schema()), len(j.Right.Schema())
	if l, r, ok := keyPair(e, left, right); ok {
		c := *j
		if !c.Guarded {
			c.Guarded, c.Whole = true, whole(j)
		}
		c.addKey(l, r)
		return &c
	}
	toLeft, toRight := sides(left, right)
	c := *j
	switch in := (Node)(nil); {
	case readsOnly(e, toLeft):
		if in, _ = j.Left.(*Join); in == (*Join)(nil) {
			return j
		}
		c.Left = keyFromAbove(in.(*Join), e)
		if c.Left == in {
			return j
		}
	case readsOnly(e, toRight):
		if in, _ = j.Right.(*Join); in == (*Join)(nil) {
			return j
		}
		c.Right = keyFromAbove(in.(*Join), expr.Remap(e, toRight))
		if c.Right == in {
			return j
		}
	default:
		return j
	}
	return &c
}

// whole is the condition of a join with its keys.
func whole(j *Join) expr.Expr {
	left := len(j.Left.Schema())
	to := make([]int, len(j.Right.Schema()))
	for i := range to {
		to[i] = left + i
	}
	var all []expr.Expr
	for i, l := range j.LeftKeys {
		eq, err := expr.NewCompare(lang.Equals, l, expr.Remap(j.RightKeys[i], to), l.Place())
		if err != nil {
			panic(err) // it was compared before
		}
		all = append(all, eq)
	}
	if j.Rest != nil {
		all = append(all, j.Rest)
	}
	return expr.AndAll(all)
}

// keyPair takes an equality apart into what the left and what the right side
// computes.
func keyPair(e expr.Expr, left, right int) (l, r expr.Expr, ok bool) {
	eq, is := keyEquality(e)
	if !is || e.CanFail() && (expr.HasQuery(e) || expr.HasOuter(e)) {
		return nil, nil, false
	}
	toLeft, toRight := sides(left, right)
	l, r = eq.Left, eq.Right
	if readsOnly(l, toRight) {
		l, r = r, l
	}
	if !readsOnly(l, toLeft) || !readsOnly(r, toRight) {
		return nil, nil, false
	}
	return l, expr.Remap(r, toRight), true
}

// keyEquality is a condition that may be a key, whichever side computes what.
func keyEquality(e expr.Expr) (*expr.Compare, bool) {
	eq, is := e.(*expr.Compare)
	return eq, is && eq.Op == lang.Equals && keyTypes(eq.Left.Type(), eq.Right.Type())
}

func keyTypes(a, b column.Type) bool {
	return a != column.Null && (a == b || a.Numeric() && b.Numeric())
}

// costOfPair is that of a pair in a nested loop, in rows that are read.
const costOfPair = 4

// loopIsCheaper reports whether the left side is known to have so few rows that looking
// at all pairs is less work than a table of the right side's keys. An estimate will not
// do: where it is wrong, a nested loop may never end.
func loopIsCheaper(j *Join) bool {
	if _, shared := j.Right.(*Shared); shared { // its table may serve others
		return false
	}
	e := &Estimator{known: map[Node]Estimate{}, counted: map[counted]values{}}
	if e.walk(j.Left) != nil || !e.known[j.Left].Exact || e.walk(j.Right) != nil {
		return false
	}
	left, right := e.known[j.Left].Rows, e.known[j.Right].Rows
	return left*right*costOfPair < costOfBuilding*right+left
}
