package plan

import (
	"nearcell/engine/expr"
	"nearcell/lang"
)

// Registers are the columns of a log that were not read at its stamps: those of what was
// joined to it, by its loggers or by times since and until, such as the places at which
// they hung. What was joined by equal stamps is a log as well. Stamps is the column of the
// stamps. The plan is one that is not optimised yet.
func Registers(n Node, stamps int) []bool {
	at := make([]bool, len(n.Schema()))
	at[stamps] = true
	return registers(n, at, nil)
}

// registers looks at a node of which at are the columns that stamps are made of, and above
// which the conditions hold.
func registers(n Node, at []bool, conds []expr.Expr) []bool {
	found := make([]bool, len(at))
	switch n := n.(type) {
	case *Filter:
		return registers(n.Input, at, append(conds, expr.Conjuncts(n.Cond)...))
	case *Sort, *Limit, *Distinct:
		return registers(n.Inputs()[0], at, nil)
	case *Shared:
		return registers(n.Common.Plan, at, nil)
	case *Project:
		below := registers(n.Input, readBy(n.Exprs, at, len(n.Input.Schema())), nil)
		for i, e := range n.Exprs {
			found[i] = madeOf(e, below)
		}
	case *Aggregate:
		below := registers(n.Input, readBy(n.Keys, at, len(n.Input.Schema())), nil)
		for i, e := range n.Keys {
			found[i] = madeOf(e, below)
		}
	case *Window:
		copy(found, registers(n.Input, at[:len(n.Input.Schema())], nil))
	case *Number:
		copy(found, registers(n.Input, at[:len(n.Input.Schema())], nil))
	case *Join:
		return joinedRegisters(n, at, conds)
	}
	return found
}

// readBy are the input columns that those of a list at the columns at read.
func readBy(list []expr.Expr, at []bool, n int) []bool {
	read := make([]bool, n)
	for i, e := range list {
		if at[i] {
			expr.Columns(e, read)
		}
	}
	return read
}

// madeOf reports whether an expression reads columns of a register, and no others.
func madeOf(e expr.Expr, register []bool) bool {
	read := make([]bool, len(register))
	expr.Columns(e, read)
	some := false
	for i, r := range read {
		if r && !register[i] {
			return false
		}
		some = some || r
	}
	return some
}

func joinedRegisters(n *Join, at []bool, conds []expr.Expr) []bool {
	left := len(n.Left.Schema())
	if n.Kind == Semi || n.Kind == Anti {
		return registers(n.Left, at, conds)
	}
	if n.Rest != nil {
		conds = append(conds, expr.Conjuncts(n.Rest)...)
	}
	for i := range n.LeftKeys {
		conds = append(conds, &expr.Compare{Op: lang.Equals, Left: n.LeftKeys[i], Right: expr.Shift(n.RightKeys[i], left)})
	}
	sides := [2]Node{n.Left, n.Right}
	found := make([]bool, len(at))
	if !some(at) {
		return found
	}
	for side, offset := range [2]int{0, left} {
		width := len(sides[side].Schema())
		mine := make([]bool, width)
		copy(mine, at[offset:offset+width])
		if !some(mine) {
			mine = stampsBeside(at, conds, offset, width)
		}
		if !some(mine) {
			for i := range width {
				found[offset+i] = true
			}
			continue
		}
		copy(found[offset:], registers(sides[side], mine, oneSided(conds, len(at), offset, width)))
	}
	return found
}

// stampsBeside are the columns of one side of a join that are to be equal to the stamps of
// the other side.
func stampsBeside(at []bool, conds []expr.Expr, offset, width int) []bool {
	mine := make([]bool, width)
	for _, c := range conds {
		eq, ok := c.(*expr.Compare)
		if !ok || eq.Op != lang.Equals {
			continue
		}
		for _, pair := range [2][2]expr.Expr{{eq.Left, eq.Right}, {eq.Right, eq.Left}} {
			a, b := make([]bool, len(at)), make([]bool, len(at))
			expr.Columns(pair[0], a)
			expr.Columns(pair[1], b)
			if !meets(a, at) || some(b[:offset]) || some(b[offset+width:]) {
				continue
			}
			for i := range mine {
				mine[i] = mine[i] || b[offset+i]
			}
		}
	}
	return mine
}

// oneSided are the conditions over n columns that speak of the left side of a join alone;
// of the right side none, since joins of more than two tables nest on the left.
func oneSided(conds []expr.Expr, n, offset, width int) []expr.Expr {
	if offset > 0 {
		return nil
	}
	var list []expr.Expr
	for _, c := range conds {
		read := make([]bool, n)
		expr.Columns(c, read)
		if !some(read[width:]) {
			list = append(list, c)
		}
	}
	return list
}

func some(list []bool) bool {
	for _, x := range list {
		if x {
			return true
		}
	}
	return false
}

func meets(a, b []bool) bool {
	for i := range a {
		if a[i] && b[i] {
			return true
		}
	}
	return false
}
