package expr

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// In is X [NOT] IN (List): TRUE where X equals an item, NULL where it does not
// but X or an item is NULL.
type In struct {
	base
	X    Expr
	List []Expr
	Not  bool
	as   []Expr // X as it is compared with each item
	set  *constants
}

// constants are the values of a list that is all constants of X's own type.
type constants struct {
	ints  []int64 // sorted
	reals []float64
	texts []string
	null  bool // there is a NULL among them
}

// NewIn is x [NOT] IN (list).
func NewIn(x Expr, list []Expr, not bool, place problem.Place) (Expr, error) {
	if len(list) == 0 {
		return nil, problem.New(CodeArguments, place, "IN () lists nothing")
	}
	if _, err := commonUnit("compared with", append([]Expr{x}, list...), place); err != nil {
		return nil, err
	}
	e := &In{base: base{column.Boolean, nil, place}, X: x, List: make([]Expr, len(list)), as: make([]Expr, len(list)), Not: not}
	for i, item := range list {
		var err error
		if e.as[i], e.List[i], err = comparable(lang.Equals, x, Fold(item), place); err != nil {
			return nil, err
		}
	}
	e.set = constantsOf(x.Type(), e.List)
	return e, nil
}

// constantsOf collects the list where it is all constants of type t, else nil.
func constantsOf(t column.Type, list []Expr) *constants {
	if !t.Counted() && t != column.Real && t != column.Text {
		return nil
	}
	s := &constants{}
	for _, e := range list {
		l, ok := e.(*Literal)
		switch {
		case !ok || l.typ != t:
			return nil
		case l.Value.Null:
			s.null = true
		case t.Counted():
			s.ints = append(s.ints, l.Value.I)
		case t == column.Real:
			s.reals = append(s.reals, l.Value.F)
		default:
			s.texts = append(s.texts, l.Value.S)
		}
	}
	slices.Sort(s.ints)
	slices.Sort(s.reals)
	slices.Sort(s.texts)
	return s
}

// Children are the operand, then the list.
func (e *In) Children() []Expr { return append([]Expr{e.X}, e.List...) }

// With asks the same of others.
func (e *In) With(c []Expr) Expr {
	n := *e
	n.X, n.List = c[0], c[1:]
	n.as = make([]Expr, len(n.List))
	for i := range n.as {
		n.as[i] = c[0]
		if c[0].Type() != e.as[i].Type() {
			n.as[i] = coerce(c[0], e.as[i].Type())
		}
	}
	n.set = constantsOf(c[0].Type(), n.List)
	return &n
}

// CanFail is that of the parts.
func (e *In) CanFail() bool { return anyFails(e.Children()) }

// Eval looks for X in the list.
func (e *In) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := w.operand(e.X, b, on)
	if err != nil {
		return x.v, err
	}
	var yes, no []uint64
	if e.set != nil && x.one == nil && !x.null() {
		yes, no = e.lookUp(w, &x.v)
	} else if yes, no, err = e.oneByOne(w, &x, b, on); err != nil {
		return column.Vector{}, err
	}
	if e.Not {
		yes, no = no, yes
	}
	return w.boolean(yes, no, b.N), nil
}

// lookUp finds a vector's values in the set of constants.
func (e *In) lookUp(w *Work, x *column.Vector) (yes, no []uint64) {
	yes = w.blank(x.N)
	s := e.set
	switch {
	case x.Type.Counted():
		member(x.I[:x.N], s.ints, yes)
	case x.Type == column.Real:
		member(x.F[:x.N], s.reals, yes)
	default:
		w.lookUp(caller{e, 0}, x, yes, func(t string) bool {
			_, ok := slices.BinarySearch(s.texts, t)
			return ok
		})
	}
	no = w.blank(x.N)
	valid := w.present(&operand{v: *x})
	for i := range yes {
		yes[i] &= valid[i]
		if !s.null {
			no[i] = valid[i] &^ yes[i]
		}
	}
	return yes, no
}

// member sets the bits of the values that are in a sorted set.
func member[T int64 | float64](a, set []T, out []uint64) {
	if len(set) <= 8 {
		for i, x := range a {
			var found uint64
			for _, s := range set {
				found |= bit(x == s)
			}
			out[i>>6] |= found << (i & 63)
		}
		return
	}
	for i, x := range a {
		_, ok := slices.BinarySearch(set, x)
		out[i>>6] |= bit(ok) << (i & 63)
	}
}

// oneByOne compares with item after item, each for the rows that are not yet
// found equal to one.
func (e *In) oneByOne(w *Work, x *operand, b *column.Batch, on []uint64) (yes, no []uint64, err error) {
	k := column.Words(b.N)
	yes, no = w.blank(b.N), w.Words(k)
	column.FillOn(no, b.N)
	open := w.rows(on, b.N)
	for i, item := range e.List {
		same, err := w.compareWith(caller{e, i + 1}, lang.Equals, x, e.as[i], item, b, open)
		if err != nil {
			return nil, nil, err
		}
		equal, different := w.truth(&same)
		for j := range k {
			yes[j] |= equal[j] & open[j]
			no[j] &= different[j] | ^open[j]
		}
		if open = w.minus(open, equal); none(open) {
			break
		}
	}
	for j := range k {
		no[j] &^= yes[j]
	}
	return yes, no, nil
}
