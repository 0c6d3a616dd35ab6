package expr

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// base is what every expression has.
type base struct {
	typ  column.Type
	unit *column.Unit
	at   problem.Place
}

func (b *base) Type() column.Type    { return b.typ }
func (b *base) Unit() *column.Unit   { return b.unit }
func (b *base) Place() problem.Place { return b.at }

// Column reads a column of the batch.
type Column struct {
	base
	Index int
	Field column.Field
}

// NewColumn reads column index of the batch.
func NewColumn(index int, f column.Field, at problem.Place) Expr {
	return &Column{base{f.Type, f.Unit, at}, index, f}
}

// Children is empty.
func (e *Column) Children() []Expr { return nil }

// With is e itself.
func (e *Column) With([]Expr) Expr { return e }

// CanFail is false.
func (e *Column) CanFail() bool { return false }

// Eval is a view of the column. A column that nobody asked for, which its
// source left without a type, reads as NULLs.
func (e *Column) Eval(w *Work, b *column.Batch, _ []uint64) (column.Vector, error) {
	v := b.Cols[e.Index]
	if v.Type != e.typ {
		if v.Type != column.Null {
			panic("expr: column " + e.Field.Name + " is " + v.Type.String() + " and was bound as " + e.typ.String())
		}
		return w.nulls(e.typ, e.unit, b.N), nil
	}
	v.Unit = e.unit
	return v, nil
}

// Literal is a constant.
type Literal struct {
	base
	Value column.Value
	// A text may stand in a dictionary beside others that come out of the same
	// expression, so that they need not be put together row by row.
	dict *column.Dict
	code uint32
	// whole says that a REAL was written as an INTEGER: temp > 8.
	whole bool
}

// NewConst is a constant; its unit is v.Unit.
func NewConst(v column.Value, at problem.Place) Expr {
	return &Literal{base: base{v.Type, v.Unit, at}, Value: v}
}

// Children is empty.
func (e *Literal) Children() []Expr { return nil }

// With is e itself.
func (e *Literal) With([]Expr) Expr { return e }

// CanFail is false.
func (e *Literal) CanFail() bool { return false }

// Eval repeats the constant for every row. The vector is kept for the next
// batches, of which it gives as much as they are long; bitmaps are made anew for
// another length, since their bits beyond it are 0.
func (e *Literal) Eval(w *Work, b *column.Batch, _ []uint64) (column.Vector, error) {
	if v, ok := w.repeated[e]; ok {
		switch {
		case v.N == b.N:
			return v, nil
		case v.N > b.N && v.Valid == nil && v.Bits == nil:
			return v.Slice(0, b.N), nil
		}
	}
	v := repeat(e, b.N)
	v.Unit = e.unit
	if w.repeated == nil || len(w.repeated) > 1024 {
		w.repeated = map[*Literal]column.Vector{}
	}
	w.repeated[e] = v
	return v, nil
}

// repeat is a vector of n times the constant.
func repeat(e *Literal, n int) column.Vector {
	x := e.Value
	if x.Null || x.Type == column.Null {
		v := column.New(x.Type, x.Unit, n)
		if x.Type != column.Null {
			v.Valid = make([]uint64, column.Words(n))
		}
		if x.Type == column.Text {
			v.Dict.Texts = []string{""}
		}
		return v
	}
	v := column.New(x.Type, x.Unit, n)
	switch x.Type {
	case column.Integer, column.Timestamp, column.Interval:
		for i := range v.I {
			v.I[i] = x.I
		}
	case column.Real:
		for i := range v.F {
			v.F[i] = x.F
		}
	case column.Text:
		if e.dict == nil {
			v.Dict.Texts = []string{x.S}
			break
		}
		v.Dict = e.dict
		for i := range v.C {
			v.C[i] = e.code
		}
	case column.Boolean:
		if x.I != 0 {
			column.FillOn(v.Bits, n)
		}
	case column.Point:
		for i := range n {
			copy(v.F[3*i:], x.P[:])
		}
	}
	return v
}

// coerce gives e the type: NULL takes any, INTEGER becomes REAL. The unit stays.
func coerce(e Expr, t column.Type) Expr {
	if e.Type() == t {
		return e
	}
	if l, ok := e.(*Literal); ok {
		switch {
		case l.Value.Null:
			return NewConst(column.Value{Type: t, Null: true, Unit: l.unit}, l.at)
		case l.typ == column.Integer && t == column.Real:
			v := column.Value{Type: t, F: float64(l.Value.I), Unit: l.unit}
			return &Literal{base: base{t, l.unit, l.at}, Value: v, whole: true}
		}
	}
	return &Cast{base: base{t, e.Unit(), e.Place()}, X: e, implicit: true}
}

// constant reports whether e reads no column and asks no query.
func constant(e Expr) bool {
	switch e.(type) {
	case *Column, *Outer, *Subquery:
		return false
	}
	for _, c := range e.Children() {
		if !constant(c) {
			return false
		}
	}
	return true
}

// anyFails reports whether one of the expressions can fail.
func anyFails(list []Expr) bool {
	for _, e := range list {
		if e.CanFail() {
			return true
		}
	}
	return false
}

// shareTexts puts the constant texts among the expressions into one dictionary.
func shareTexts(list []Expr) {
	var dict *column.Dict
	for i, e := range list {
		l, ok := e.(*Literal)
		if !ok || l.typ != column.Text || l.Value.Null {
			continue
		}
		if dict == nil {
			dict = &column.Dict{}
		}
		code := slices.Index(dict.Texts, l.Value.S)
		if code < 0 {
			code = len(dict.Texts)
			dict.Texts = append(dict.Texts, l.Value.S)
		}
		shared := *l
		shared.dict, shared.code = dict, uint32(code)
		list[i] = &shared
	}
}

// Coerce gives an argument the type that a function's checker asks for: NULL
// takes any type, INTEGER becomes REAL, and the unit stays.
func Coerce(e Expr, t column.Type) Expr { return coerce(e, t) }
