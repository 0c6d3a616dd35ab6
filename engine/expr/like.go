package expr

import (
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// Like is X [NOT] LIKE Pattern [ESCAPE Escape]: % stands for any characters,
// _ for one; the escape character makes either stand for itself. Upper and
// lower case differ.
type Like struct {
	base
	X, Pattern Expr
	Escape     Expr // may be nil
	Not        bool
	compiled   likePattern // of a constant pattern, else nil
}

// NewLike is x [NOT] LIKE pattern [ESCAPE escape]; escape may be nil.
func NewLike(x, pattern, escape Expr, not bool, place problem.Place) (Expr, error) {
	parts := []*Expr{&x, &pattern}
	if escape != nil {
		parts = append(parts, &escape)
	}
	for _, p := range parts {
		switch (*p).Type() {
		case column.Text:
		case column.Null:
			*p = coerce(*p, column.Text)
		default:
			return nil, wantType("LIKE", column.Text, *p, place)
		}
	}
	e := &Like{base: base{column.Boolean, nil, place}, X: x, Pattern: pattern, Escape: escape, Not: not}
	if err := e.compile(); err != nil {
		return nil, problem.New(CodeArguments, at(pattern, place), "%s", err.Error())
	}
	return e, nil
}

// compile reads a constant pattern once.
func (e *Like) compile() error {
	e.compiled = nil
	p, ok := Const(e.Pattern)
	if !ok || p.Null {
		return nil
	}
	mark := ""
	if e.Escape != nil {
		m, ok := Const(e.Escape)
		if !ok || m.Null {
			return nil
		}
		if utf8.RuneCountInString(m.S) != 1 {
			return errEscapeLength
		}
		mark = m.S
	}
	compiled, err := compileLike(p.S, mark)
	e.compiled = compiled
	return err
}

// Children are the operand, the pattern and, where given, the escape.
func (e *Like) Children() []Expr {
	if e.Escape == nil {
		return []Expr{e.X, e.Pattern}
	}
	return []Expr{e.X, e.Pattern, e.Escape}
}

// With asks the same of others.
func (e *Like) With(c []Expr) Expr {
	n := *e
	n.X, n.Pattern = c[0], c[1]
	if e.Escape != nil {
		n.Escape = c[2]
	}
	if err := n.compile(); err != nil {
		n.compiled = nil // a row will say so
	}
	return &n
}

// CanFail is true where the pattern is read row by row.
func (e *Like) CanFail() bool { return e.compiled == nil || anyFails(e.Children()) }

// Eval matches: with a constant pattern once for each text of the dictionary.
func (e *Like) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := e.X.Eval(w, b, on)
	if err != nil {
		return x, err
	}
	out := column.Vector{Type: column.Boolean, N: b.N, Bits: w.blank(b.N), Valid: x.Valid}
	if e.compiled != nil {
		w.lookUp(caller{e, 0}, &x, out.Bits, e.compiled.matches)
	} else if err := e.rowByRow(w, b, on, &x, &out); err != nil {
		return out, err
	}
	valid := w.present(&operand{v: out})
	for i, bits := range out.Bits {
		if e.Not {
			bits = ^bits
		}
		out.Bits[i] = bits & valid[i]
	}
	return out, nil
}

func (e *Like) rowByRow(w *Work, b *column.Batch, on []uint64, x, out *column.Vector) error {
	pattern, err := e.Pattern.Eval(w, b, on)
	if err != nil {
		return err
	}
	out.Valid = w.both(x.Valid, pattern.Valid, b.N)
	var escape column.Vector
	if e.Escape != nil {
		if escape, err = e.Escape.Eval(w, b, on); err != nil {
			return err
		}
		out.Valid = w.both(out.Valid, escape.Valid, b.N)
	}
	var compiled likePattern
	last, lastMark := "", ""
	bad := firstActive(on, out, func(i int) bool {
		p, mark := pattern.Text(i), ""
		if e.Escape != nil {
			if mark = escape.Text(i); utf8.RuneCountInString(mark) != 1 {
				err = errEscapeLength
				return true
			}
		}
		if compiled == nil || p != last || mark != lastMark {
			if compiled, err = compileLike(p, mark); err != nil {
				return true
			}
			last, lastMark = p, mark
		}
		if compiled.matches(x.Text(i)) {
			column.SetBit(out.Bits, i)
		}
		return false
	})
	if bad >= 0 {
		return rowError(bad, CodeArguments, e.at, "%s", err.Error())
	}
	return nil
}

type likeError string

func (e likeError) Error() string { return string(e) }

const (
	errEscapeLength = likeError("the ESCAPE of LIKE is one character")
	errEscaped      = likeError("in a LIKE pattern the escape character stands before %, _ or itself only")
)

// likePattern is a pattern as steps: a character, anyOne or anyNumber. It is
// never nil, also for the empty pattern.
type likePattern []rune

const (
	anyOne    rune = -1
	anyNumber rune = -2
)

func compileLike(pattern, escape string) (likePattern, error) {
	p := make(likePattern, 0, len(pattern))
	mark, _ := utf8.DecodeRuneInString(escape)
	escaped := false
	for _, r := range pattern {
		switch {
		case escaped:
			if r != '%' && r != '_' && r != mark {
				return nil, errEscaped
			}
			escaped = false
			p = append(p, r)
		case escape != "" && r == mark:
			escaped = true
		case r == '%':
			p = append(p, anyNumber)
		case r == '_':
			p = append(p, anyOne)
		default:
			p = append(p, r)
		}
	}
	if escaped {
		return nil, errEscaped
	}
	return p, nil
}

// matches goes back to the last % where a character does not fit: at worst the
// product of the two lengths, never exponential.
func (p likePattern) matches(s string) bool {
	i, retry, from := 0, -1, 0
	for at := 0; at < len(s); {
		r, size := utf8.DecodeRuneInString(s[at:])
		switch {
		case i < len(p) && p[i] == anyNumber:
			retry, from = i, at
			i++
			continue
		case i < len(p) && (p[i] == r || p[i] == anyOne):
			i++
			at += size
			continue
		case retry < 0:
			return false
		}
		_, size = utf8.DecodeRuneInString(s[from:])
		from += size
		i, at = retry+1, from
	}
	for i < len(p) && p[i] == anyNumber {
		i++
	}
	return i == len(p)
}
