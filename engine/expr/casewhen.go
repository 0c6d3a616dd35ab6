package expr

import (
	"math/bits"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// When is one arm of a CASE.
type When struct{ Cond, Result Expr }

// Case is CASE [Operand] WHEN … THEN … [ELSE …] END. Each arm is computed only
// for the rows that reach it, each result only for those that it is chosen for.
type Case struct {
	base
	Operand   Expr // may be nil; else the arms' Cond are compared with it
	Whens     []When
	Otherwise Expr   // never nil: NULL where there is no ELSE
	as        []Expr // Operand as it is compared with each arm
	written   bool   // ELSE was written
}

// NewCase is CASE [operand] WHEN … THEN … [ELSE …] END; operand and otherwise
// may be nil.
func NewCase(operand Expr, whens []When, otherwise Expr, place problem.Place) (Expr, error) {
	e := &Case{base: base{at: place}, Operand: operand, Whens: make([]When, len(whens)), Otherwise: otherwise, written: otherwise != nil}
	copy(e.Whens, whens)
	for i := range e.Whens {
		if err := e.checkArm(&e.Whens[i]); err != nil {
			return nil, err
		}
	}
	if otherwise == nil {
		otherwise = NewConst(column.NullOf(column.Null), place)
	}
	results := make([]Expr, 0, len(whens)+1)
	for _, arm := range e.Whens {
		results = append(results, arm.Result)
	}
	results, unit, err := alike("a result of CASE beside", append(results, otherwise), place)
	if err != nil {
		return nil, err
	}
	shareTexts(results)
	e.typ, e.unit = results[0].Type(), unit
	for i := range e.Whens {
		e.Whens[i].Result = results[i]
	}
	e.Otherwise = results[len(whens)]
	return e, nil
}

func (e *Case) checkArm(arm *When) error {
	if e.Operand == nil {
		c, err := wantCondition("WHEN", arm.Cond, e.at)
		arm.Cond = c
		return err
	}
	as, c, err := comparable(lang.Equals, e.Operand, arm.Cond, e.at)
	e.as = append(e.as, as)
	arm.Cond = c
	return err
}

// Children are the operand if there is one, the arms' conditions and results
// in turn, and the ELSE.
func (e *Case) Children() []Expr {
	var c []Expr
	if e.Operand != nil {
		c = append(c, e.Operand)
	}
	for _, arm := range e.Whens {
		c = append(c, arm.Cond, arm.Result)
	}
	return append(c, e.Otherwise)
}

// With is the same choice among others.
func (e *Case) With(c []Expr) Expr {
	n := *e
	if e.Operand != nil {
		n.Operand = c[0]
		n.as = make([]Expr, len(e.as))
		for i := range n.as {
			n.as[i] = c[0]
			if c[0].Type() != e.as[i].Type() {
				n.as[i] = coerce(c[0], e.as[i].Type())
			}
		}
		c = c[1:]
	}
	n.Whens = make([]When, len(e.Whens))
	for i := range n.Whens {
		n.Whens[i] = When{c[2*i], c[2*i+1]}
	}
	n.Otherwise = c[2*len(n.Whens)]
	return &n
}

// CanFail is that of the parts.
func (e *Case) CanFail() bool { return anyFails(e.Children()) }

// Eval goes through the arms with the rows that are left.
func (e *Case) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	var x operand
	if e.Operand != nil {
		var err error
		if x, err = w.operand(e.Operand, b, on); err != nil {
			return x.v, err
		}
	}
	out := w.blender(e.typ, e.unit, b.N)
	left := w.rows(on, b.N)
	for i, arm := range e.Whens {
		var cond column.Vector
		var err error
		if e.Operand == nil {
			cond, err = arm.Cond.Eval(w, b, left)
		} else {
			cond, err = w.compareWith(caller{e, i}, lang.Equals, &x, e.as[i], arm.Cond, b, left)
		}
		if err != nil {
			return cond, err
		}
		hit := w.True(&cond, left)
		if none(hit) {
			continue
		}
		if err := out.add(arm.Result, b, hit); err != nil {
			return column.Vector{}, err
		}
		if left = w.minus(left, hit); none(left) {
			return out.finish(), nil
		}
	}
	if err := out.add(e.Otherwise, b, left); err != nil {
		return column.Vector{}, err
	}
	return out.finish(), nil
}

// Coalesce is the first of its arguments that is not NULL; each is computed
// only for the rows that come to it.
type Coalesce struct {
	base
	Args []Expr
}

func newCoalesce(args []Expr, place problem.Place) (Expr, error) {
	args, unit, err := alike("an alternative to", args, place)
	if err != nil {
		return nil, err
	}
	shareTexts(args)
	return &Coalesce{base{args[0].Type(), unit, place}, args}, nil
}

// Children are the arguments.
func (e *Coalesce) Children() []Expr { return e.Args }

// With chooses among others.
func (e *Coalesce) With(c []Expr) Expr { n := *e; n.Args = c; return &n }

// CanFail is that of the arguments.
func (e *Coalesce) CanFail() bool { return anyFails(e.Args) }

// Eval goes through the arguments with the rows that are still NULL.
func (e *Coalesce) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	out := w.blender(e.typ, e.unit, b.N)
	left := w.rows(on, b.N)
	for _, arg := range e.Args {
		v, err := arg.Eval(w, b, left)
		if err != nil {
			return v, err
		}
		has := w.present(&operand{v: v})
		hit := w.Words(len(left))
		for i := range hit {
			hit[i] = left[i] & has[i]
		}
		out.take(&v, hit)
		if left = w.minus(left, hit); none(left) {
			break
		}
	}
	return out.finish(), nil
}

// NullIf is NULL where Left equals Right, else Left.
type NullIf struct {
	base
	Left, Right Expr
	as          Expr // Left as it is compared
}

func newNullIf(l, r Expr, place problem.Place) (Expr, error) {
	as, r, err := comparable(lang.Equals, l, r, place)
	if err != nil {
		return nil, err
	}
	if l.Type() == column.Null {
		l = as
	}
	return &NullIf{base{l.Type(), l.Unit(), place}, l, r, as}, nil
}

// Children are the two arguments.
func (e *NullIf) Children() []Expr { return []Expr{e.Left, e.Right} }

// With compares others.
func (e *NullIf) With(c []Expr) Expr {
	n := *e
	n.Left, n.Right = c[0], c[1]
	n.as = coerce(c[0], e.as.Type())
	return &n
}

// CanFail is that of the arguments.
func (e *NullIf) CanFail() bool { return e.Left.CanFail() || e.Right.CanFail() }

// Eval compares and takes the equal ones out.
func (e *NullIf) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := e.Left.Eval(w, b, on)
	if err != nil {
		return l, err
	}
	same, err := w.compareWith(caller{e, 0}, lang.Equals, &operand{v: l}, e.as, e.Right, b, on)
	if err != nil {
		return same, err
	}
	keep := w.minus(w.present(&operand{v: l}), w.True(&same, nil))
	out := w.blender(e.typ, e.unit, b.N)
	out.take(&l, keep)
	return out.finish(), nil
}

// blender puts one vector together from parts of others. Rows that no part
// gives are NULL and zero.
type blender struct {
	w     *Work
	v     column.Vector
	texts *function.TextBuilder // once two dictionaries meet
}

func (w *Work) blender(t column.Type, unit *column.Unit, n int) *blender {
	v := w.nulls(t, unit, n)
	v.Dict = nil
	return &blender{w: w, v: v}
}

// add computes e for the rows of on and takes them.
func (m *blender) add(e Expr, b *column.Batch, on []uint64) error {
	v, err := e.Eval(m.w, b, on)
	if err == nil {
		m.take(&v, on)
	}
	return err
}

// take copies the rows of on, NULLs as NULLs.
func (m *blender) take(v *column.Vector, on []uint64) {
	if v.Type == column.Null || m.v.Type == column.Null {
		return
	}
	valid := m.w.Words(len(on))
	copy(valid, on)
	if v.Valid != nil {
		for i := range valid {
			valid[i] &= v.Valid[i]
		}
	}
	for i, x := range valid {
		m.v.Valid[i] |= x
	}
	switch m.v.Type {
	case column.Integer, column.Timestamp, column.Interval:
		copyRows(m.v.I, v.I, valid)
	case column.Real:
		copyRows(m.v.F, v.F, valid)
	case column.Text:
		m.takeTexts(v, valid)
	case column.Boolean:
		for i, x := range valid {
			m.v.Bits[i] |= x & v.Bits[i]
		}
	case column.Point:
		eachRow(valid, func(i int) { copy(m.v.F[3*i:3*i+3], v.F[3*i:3*i+3]) })
	}
}

func copyRows[T int64 | float64 | uint32](to, from []T, on []uint64) {
	for k, x := range on {
		if x == ^uint64(0) {
			copy(to[k<<6:k<<6+64], from[k<<6:k<<6+64])
			continue
		}
		for ; x != 0; x &= x - 1 {
			i := k<<6 + bits.TrailingZeros64(x)
			to[i] = from[i]
		}
	}
}

func eachRow(on []uint64, f func(i int)) {
	for k, x := range on {
		for ; x != 0; x &= x - 1 {
			f(k<<6 + bits.TrailingZeros64(x))
		}
	}
}

// takeTexts shares the first dictionary as long as there is only one, and
// makes a new one of both when a second comes.
func (m *blender) takeTexts(v *column.Vector, on []uint64) {
	if none(on) {
		return
	}
	if m.v.Dict == nil {
		m.v.Dict = v.Dict
	}
	if m.texts == nil && m.v.Dict == v.Dict {
		copyRows(m.v.C, v.C, on)
		return
	}
	if m.texts == nil {
		m.texts = m.w.Texts()
		old := m.v.Dict.Texts
		taken := m.w.minus(m.v.Valid[:len(on)], on)
		eachRow(taken, func(i int) { m.v.C[i] = m.texts.Code(old[m.v.C[i]]) })
	}
	texts := v.Dict.Texts
	eachRow(on, func(i int) { m.v.C[i] = m.texts.Code(texts[v.C[i]]) })
}

func (m *blender) finish() column.Vector {
	if m.v.Type != column.Text {
		return m.v
	}
	switch {
	case m.texts != nil:
		m.v.Dict = m.texts.Finish()
	case m.v.Dict == nil || len(m.v.Dict.Texts) == 0:
		m.v.Dict = emptyDict
	}
	return m.v
}
