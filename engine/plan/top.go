package plan

import "math"

// top tells a sort, or the cells of sites, how many of the rows a LIMIT above will
// take. Between them only projections may stand, which give one row for each.
func top(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		l, ok := n.(*Limit)
		if !ok || l.Count <= 0 || l.Offset > math.MaxInt64-l.Count {
			return n, nil
		}
		in, ok := withTop(l.Input, l.Offset+l.Count)
		if !ok {
			return n, nil
		}
		c := *l
		c.Input = in
		return &c, nil
	})
}

func withTop(n Node, rows int64) (Node, bool) {
	switch n := n.(type) {
	case *Sort:
		if n.Top > 0 && n.Top <= rows {
			return n, false
		}
		c := *n
		c.Top = rows
		return &c, true
	case *Relation:
		if n.Bound.Def.Noun != "CELLS" || n.Most > 0 && n.Most <= rows {
			return n, false
		}
		c := *n
		c.Most = rows
		return &c, true
	case *Project:
		in, ok := withTop(n.Input, rows)
		if !ok {
			return n, false
		}
		c := *n
		c.Input = in
		return &c, true
	}
	return n, false
}
