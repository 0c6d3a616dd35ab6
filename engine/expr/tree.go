package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Const is the value of an expression that reads no column, where it can be
// computed, with the expression's unit.
func Const(e Expr) (column.Value, bool) {
	l, ok := Fold(e).(*Literal)
	if !ok {
		return column.Value{}, false
	}
	return l.Value, true
}

// Fold replaces each part that is constant and can be computed by its value,
// and leaves out the sides of AND and OR that decide nothing. A constant part
// whose computation fails stays as it is: a row may never reach it.
func Fold(e Expr) Expr {
	return Rewrite(e, func(e Expr) Expr {
		if l, ok := e.(*Logic); ok {
			e = foldLogic(l)
		}
		if _, ok := e.(*Literal); ok || !constant(e) {
			return e
		}
		var w Work
		v, err := e.Eval(&w, &column.Batch{N: 1}, nil)
		if err != nil {
			return e
		}
		x := v.Value(0)
		x.Type, x.Unit = e.Type(), e.Unit()
		return NewConst(x, e.Place())
	})
}

// foldLogic leaves out TRUE of an AND and FALSE of an OR, and gives FALSE or
// TRUE where the left side decides alone, or the right side does and the left
// cannot fail.
func foldLogic(e *Logic) Expr {
	neutral := e.Op == lang.And
	sides := [2]Expr{e.Left, e.Right}
	for i, side := range sides {
		l, ok := side.(*Literal)
		if !ok || l.Value.Null {
			continue
		}
		if (l.Value.I != 0) == neutral {
			return sides[1-i]
		}
		if i == 0 || !e.Left.CanFail() {
			return side
		}
	}
	return e
}

// AsColumn is the index of the column that e simply reads.
func AsColumn(e Expr) (index int, ok bool) {
	c, ok := e.(*Column)
	if !ok {
		return 0, false
	}
	return c.Index, true
}

// Columns marks in set (len: number of columns of the batch) the columns that
// e reads. A nil expression reads none.
func Columns(e Expr, set []bool) {
	Walk(e, func(e Expr) {
		if c, ok := e.(*Column); ok {
			set[c.Index] = true
		}
	})
}

// Remap gives every column i of e the index to[i]. It panics where to[i] < 0.
func Remap(e Expr, to []int) Expr {
	return Rewrite(e, func(e Expr) Expr {
		c, ok := e.(*Column)
		if !ok || to[c.Index] == c.Index {
			return e
		}
		if to[c.Index] < 0 {
			panic("expr: column " + c.Field.Name + " is no longer there")
		}
		n := *c
		n.Index = to[c.Index]
		return &n
	})
}

// Shift adds by to every column index.
func Shift(e Expr, by int) Expr {
	if by == 0 {
		return e
	}
	return Rewrite(e, func(e Expr) Expr {
		c, ok := e.(*Column)
		if !ok {
			return e
		}
		n := *c
		n.Index += by
		return &n
	})
}

// Walk calls visit for e and everything below, parents first. A nil expression
// has nothing to visit.
func Walk(e Expr, visit func(Expr)) {
	if e == nil {
		return
	}
	visit(e)
	for _, c := range e.Children() {
		Walk(c, visit)
	}
}

// Rewrite replaces, bottom up, each part by what f makes of it. What f gives
// has the type of what it was given. A nil expression stays nil.
func Rewrite(e Expr, f func(Expr) Expr) Expr {
	if e == nil {
		return nil
	}
	old := e.Children()
	var fresh []Expr
	for i, c := range old {
		n := Rewrite(c, f)
		if n != c && fresh == nil {
			fresh = append([]Expr(nil), old...)
		}
		if fresh != nil {
			fresh[i] = n
		}
	}
	if fresh != nil {
		e = e.With(fresh)
	}
	return f(e)
}

// Conjuncts are the parts of an AND, from left to right; e alone where it is none.
func Conjuncts(e Expr) []Expr {
	if l, ok := e.(*Logic); ok && l.Op == lang.And {
		return append(Conjuncts(l.Left), Conjuncts(l.Right)...)
	}
	return []Expr{e}
}

// AndAll is the conjunction of the conditions, nil of none.
func AndAll(list []Expr) Expr {
	var all Expr
	for _, e := range list {
		if all == nil {
			all = e
			continue
		}
		all = &Logic{base{column.Boolean, nil, problem.Place{}}, lang.And, all, e}
	}
	return all
}

// Equal reports whether two expressions compute the same in the same way: same
// operators, functions, columns and constants, whatever their places.
func Equal(a, b Expr) bool {
	if a == nil || b == nil {
		return a == nil && b == nil
	}
	if a.Type() != b.Type() || !column.SameUnit(a.Unit(), b.Unit()) || !sameNode(a, b) {
		return false
	}
	x, y := a.Children(), b.Children()
	if len(x) != len(y) {
		return false
	}
	for i := range x {
		if !Equal(x[i], y[i]) {
			return false
		}
	}
	return true
}

// sameNode compares what two expressions are beside their children.
func sameNode(a, b Expr) bool {
	switch a := a.(type) {
	case *Column:
		b, ok := b.(*Column)
		return ok && a.Index == b.Index
	case *Literal:
		b, ok := b.(*Literal)
		return ok && sameValue(a.Value, b.Value)
	case *Neg:
		return sameKind(a, b)
	case *Arith:
		b, ok := b.(*Arith)
		return ok && a.Op == b.Op && a.kernel == b.kernel
	case *Concat:
		return sameKind(a, b)
	case *Compare:
		b, ok := b.(*Compare)
		return ok && a.Op == b.Op
	case *Logic:
		b, ok := b.(*Logic)
		return ok && a.Op == b.Op
	case *Not:
		return sameKind(a, b)
	case *Is:
		b, ok := b.(*Is)
		return ok && a.What == b.What && a.Not == b.Not
	case *Distinct:
		b, ok := b.(*Distinct)
		return ok && a.Not == b.Not
	case *Between:
		b, ok := b.(*Between)
		return ok && a.Not == b.Not
	case *In:
		b, ok := b.(*In)
		return ok && a.Not == b.Not
	case *Like:
		b, ok := b.(*Like)
		return ok && a.Not == b.Not
	case *Case:
		b, ok := b.(*Case)
		return ok && (a.Operand == nil) == (b.Operand == nil)
	case *Cast, *Coalesce, *NullIf, *MakePoint, *Overlaps:
		return sameType(a, b)
	case *Call:
		b, ok := b.(*Call)
		return ok && a.Fn == b.Fn
	case *Outer:
		b, ok := b.(*Outer)
		return ok && a.Index == b.Index
	case *Subquery:
		b, ok := b.(*Subquery)
		return ok && a.Kind == b.Kind && a.Not == b.Not && a.Query.Same(b.Query)
	}
	return false
}

func sameKind[T Expr](_ T, b Expr) bool { _, ok := b.(T); return ok }

func sameType(a, b Expr) bool {
	switch a.(type) {
	case *Cast:
		_, ok := b.(*Cast)
		return ok
	case *Coalesce:
		_, ok := b.(*Coalesce)
		return ok
	case *NullIf:
		_, ok := b.(*NullIf)
		return ok
	case *MakePoint:
		_, ok := b.(*MakePoint)
		return ok
	case *Overlaps:
		_, ok := b.(*Overlaps)
		return ok
	}
	return false
}

func sameValue(a, b column.Value) bool {
	a.Unit, b.Unit = nil, nil // compared with the expression
	return a == b
}
