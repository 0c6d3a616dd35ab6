package expr

import "nearcell/catalog/column"

// Const is the value of an expression that uses no column and cannot fail to
// compute, with the expression's unit.
func Const(e Expr) (column.Value, bool) { return column.Value{}, false }

// Fold replaces each part that is constant and can be computed by its value.
func Fold(e Expr) Expr { return e }

// AsColumn is the index of the column that e simply reads.
func AsColumn(e Expr) (index int, ok bool) { return 0, false }

// Columns adds the indices of the columns that e reads to set (len: number of
// columns of the batch).
func Columns(e Expr, set []bool) {}

// Remap gives every column i of e the index to[i]. It panics where to[i] < 0.
func Remap(e Expr, to []int) Expr { return e }

// Shift adds by to every column index.
func Shift(e Expr, by int) Expr { return e }

// Equal reports whether two expressions are written alike: same operators,
// same columns, same constants, whatever their places.
func Equal(a, b Expr) bool { return false }

// Conjuncts are the parts of an AND, one by one.
func Conjuncts(e Expr) []Expr { return []Expr{e} }

// AndAll is the conjunction of the conditions, nil of none.
func AndAll(list []Expr) Expr { return nil }

// Walk calls visit for e and everything below, parents first.
func Walk(e Expr, visit func(Expr)) {}

// Rewrite replaces, bottom up, each part by what f makes of it.
func Rewrite(e Expr, f func(Expr) Expr) Expr { return e }
