package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Concat is Left || Right of two texts.
type Concat struct {
	base
	Left, Right Expr
}

// NewConcat is l || r.
func NewConcat(l, r Expr, place problem.Place) (Expr, error) {
	for _, e := range []*Expr{&l, &r} {
		switch (*e).Type() {
		case column.Text:
		case column.Null:
			*e = coerce(*e, column.Text)
		default:
			return nil, wantType("||", column.Text, *e, place)
		}
	}
	return &Concat{base{column.Text, nil, place}, l, r}, nil
}

// Children are the two sides.
func (e *Concat) Children() []Expr { return []Expr{e.Left, e.Right} }

// With joins others.
func (e *Concat) With(c []Expr) Expr { n := *e; n.Left, n.Right = c[0], c[1]; return &n }

// CanFail is that of the sides.
func (e *Concat) CanFail() bool { return e.Left.CanFail() || e.Right.CanFail() }

// Eval joins; with a constant on one side, once for each text of the dictionary.
func (e *Concat) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := w.operand(e.Left, b, on)
	if err != nil {
		return l.v, err
	}
	r, err := w.operand(e.Right, b, on)
	if err != nil {
		return r.v, err
	}
	switch {
	case l.null() || r.null():
		return w.nulls(column.Text, nil, b.N), nil
	case l.one != nil && r.one != nil:
		return NewConst(column.String(l.one.S+r.one.S), e.at).Eval(w, b, on)
	case r.one != nil:
		return w.joinConst(e, &l.v, "", r.one.S), nil
	case l.one != nil:
		return w.joinConst(e, &r.v, l.one.S, ""), nil
	}
	out := w.fresh(column.Text, nil, b.N)
	out.Valid = w.both(l.v.Valid, r.v.Valid, b.N)
	texts := w.Texts()
	var buf []byte
	active := function.ActiveRows(&w.Arena, w.rows(on, b.N), b.N, &l.v, &r.v)
	eachRow(active, func(i int) {
		buf = append(append(buf[:0], l.v.Text(i)...), r.v.Text(i)...)
		out.C[i] = texts.CodeBytes(buf)
	})
	out.Dict = texts.Finish()
	return out, nil
}

// joinConst gives the codes of v a dictionary whose texts are longer by a
// constant.
func (w *Work) joinConst(owner Expr, v *column.Vector, before, after string) column.Vector {
	key := function.TableKey{Owner: owner, Dict: v.Dict}
	dict, ok := w.Table(key).(*column.Dict)
	if !ok {
		dict = &column.Dict{Texts: make([]string, len(v.Dict.Texts))}
		for i, s := range v.Dict.Texts {
			dict.Texts[i] = before + s + after
		}
		w.SetTable(key, dict)
	}
	out := *v
	out.Dict = dict
	return out
}
