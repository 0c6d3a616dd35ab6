package expr

import (
	"errors"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Cast is CAST(X AS type).
type Cast struct {
	base
	X        Expr
	implicit bool // INTEGER to REAL where a REAL is wanted; keeps the unit
}

// NewCast is CAST(x AS to). The result has no unit: that is the way to put
// values of different units together.
//
//	INTEGER to REAL   the nearest REAL
//	REAL to INTEGER   the nearest INTEGER, halves away from zero
//	… to TEXT         as results are saved: numbers read back to the same bits
//	TEXT to …         blanks around it do not count; what does not read is an
//	                  error of its row; a time stamp without a zone is UTC
//
// Other pairs have no cast.
func NewCast(x Expr, to column.Type, place problem.Place) (Expr, error) {
	from := x.Type()
	ok := from == to || from == column.Null || to == column.Text || from.Numeric() && to.Numeric() ||
		from == column.Text && to != column.Point
	if to == column.Null || !ok {
		p := problem.New(CodeTypes, at(x, place), "%s cannot be cast to %s", withType(x), to)
		switch {
		case to.Numeric():
			return nil, hintNumber(p, x)
		case to == column.Boolean:
			return nil, p.WithHint("write a condition, such as %s <> 0", x)
		}
		return nil, p
	}
	return &Cast{base{to, nil, place}, x, false}, nil
}

// Children is the operand.
func (e *Cast) Children() []Expr { return []Expr{e.X} }

// With casts another operand.
func (e *Cast) With(c []Expr) Expr { n := *e; n.X = c[0]; return &n }

// CanFail is true of texts that are read and of REAL to INTEGER.
func (e *Cast) CanFail() bool {
	from := e.X.Type()
	return from == column.Text && e.typ != column.Text || from == column.Real && e.typ == column.Integer || e.X.CanFail()
}

// Eval casts.
func (e *Cast) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := e.X.Eval(w, b, on)
	if err != nil {
		return x, err
	}
	switch from := x.Type; {
	case from == e.typ:
		x.Unit = e.unit
		return x, nil
	case from == column.Null:
		return w.nulls(e.typ, e.unit, b.N), nil
	case from == column.Text:
		return e.readTexts(w, &x, on)
	case e.typ == column.Text:
		return writeTexts(w, &x, on), nil
	case e.typ == column.Real:
		out := w.fresh(column.Real, e.unit, b.N)
		out.Valid = x.Valid
		for i, k := range x.I[:b.N] {
			out.F[i] = float64(k)
		}
		return out, nil
	}
	return e.roundReals(w, &x, on)
}

func (e *Cast) roundReals(w *Work, x *column.Vector, on []uint64) (column.Vector, error) {
	out := w.fresh(column.Integer, e.unit, x.N)
	out.Valid = x.Valid
	fits := func(f float64) bool { return f >= -1<<63 && f < 1<<63 }
	suspicious := false
	for i, f := range x.F[:x.N] {
		f = math.Round(f)
		if !fits(f) {
			suspicious, f = true, 0
		}
		out.I[i] = int64(f)
	}
	if suspicious {
		if row := firstActive(on, x, func(i int) bool { return !fits(math.Round(x.F[i])) }); row >= 0 {
			return out, rowError(row, CodeOverflow, e.at, "%s is beyond the 64 bits of an INTEGER", number(x, row))
		}
	}
	return out, nil
}

// readings is what the texts of a dictionary read as, found when first met.
type readings struct {
	state []uint8
	ints  []int64 // also BOOLEAN as 0 and 1
	reals []float64
}

func (e *Cast) readTexts(w *Work, x *column.Vector, on []uint64) (column.Vector, error) {
	out := w.fresh(e.typ, e.unit, x.N)
	out.Valid = x.Valid
	clear(out.I)
	clear(out.F)
	clear(out.Bits)
	texts := x.Dict.Texts
	table := e.readingsOf(w, x.Dict)
	bad := firstActive(on, x, func(i int) bool {
		c := x.C[i]
		if table.state[c] == unknown {
			table.read(c, texts[c], e.typ)
		}
		switch e.typ {
		case column.Real:
			out.F[i] = table.reals[c]
		case column.Boolean:
			out.Bits[i>>6] |= uint64(table.ints[c]) << (i & 63)
		default:
			out.I[i] = table.ints[c]
		}
		return table.state[c] == fails
	})
	if bad >= 0 {
		return out, &RowError{bad, e.unreadable(x.Text(bad))}
	}
	return out, nil
}

func (e *Cast) readingsOf(w *Work, d *column.Dict) *readings {
	key := function.TableKey{Owner: e, Dict: d}
	if t, ok := w.Table(key).(*readings); ok {
		return t
	}
	n := len(d.Texts)
	t := &readings{state: make([]uint8, n)}
	if e.typ == column.Real {
		t.reals = make([]float64, n)
	} else {
		t.ints = make([]int64, n)
	}
	w.SetTable(key, t)
	return t
}

func (t *readings) read(c uint32, text string, to column.Type) {
	text = strings.TrimSpace(text)
	var err error
	switch to {
	case column.Real:
		ok := false
		if t.reals[c], ok = parseReal(text); !ok {
			err = errors.New("not a number")
		}
	case column.Integer:
		ok := false
		if t.ints[c], ok = parseInteger(text); !ok {
			err = errors.New("not a number")
		}
	case column.Boolean:
		switch {
		case strings.EqualFold(text, "TRUE"):
			t.ints[c] = 1
		case !strings.EqualFold(text, "FALSE"):
			err = errors.New("neither")
		}
	case column.Timestamp:
		t.ints[c], _, err = column.ParseTimestamp(text)
	case column.Interval:
		t.ints[c], err = column.ParseInterval(text)
	}
	t.state[c] = holds
	if err != nil {
		t.state[c] = fails
	}
}

// unreadable is the problem of a text that does not read as the type.
func (e *Cast) unreadable(text string) *problem.Problem {
	quoted := quoteText(shorten(text))
	switch e.typ {
	case column.Boolean:
		return problem.New(CodeCast, e.at, "%s is neither TRUE nor FALSE", quoted)
	case column.Timestamp:
		_, _, err := column.ParseTimestamp(strings.TrimSpace(text))
		if errors.Is(err, column.ErrDate) {
			return problem.New(CodeCast, e.at, "%s is no date and time that there is", quoted)
		}
		return problem.New(CodeCast, e.at, "%s is no time stamp", quoted).WithHint("one looks like 2031-04-07 08:15:00")
	case column.Interval:
		return problem.New(CodeCast, e.at, "%s is no interval", quoted).WithHint("one looks like 00:15:00")
	case column.Integer:
		if _, ok := parseReal(strings.TrimSpace(text)); ok {
			return problem.New(CodeOverflow, e.at, "%s is beyond the 64 bits of an INTEGER", quoted)
		}
	}
	p := problem.New(CodeCast, e.at, "%s is no number", quoted)
	if strings.Contains(text, ",") {
		return p.WithHint("the decimal mark of a CAST is a point; DECIMAL MARK ',' says otherwise when a file is read")
	}
	return p.WithHint("NULLIF(%s, %s) would make it NULL", e.X, quoted)
}

func shorten(s string) string {
	if r := []rune(s); len(r) > 40 {
		return string(r[:40]) + "…"
	}
	return s
}

// parseNumber reads a number as the language writes one, with a sign.
func parseNumber(s string) (float64, bool) {
	if strings.Trim(s, "0123456789+-.eE") != "" || s == "" {
		return 0, false
	}
	f, err := strconv.ParseFloat(s, 64)
	return f + 0, err == nil
}

// parseReal reads a number or an infinity. A number beyond the range of REAL
// does not read.
func parseReal(s string) (float64, bool) {
	switch sign, rest := 1, strings.TrimPrefix(s, "-"); {
	case strings.EqualFold(rest, "Infinity"):
		if rest != s {
			sign = -1
		}
		return math.Inf(sign), true
	}
	return parseNumber(s)
}

// parseInteger reads a number and rounds it, as the cast of a REAL does.
func parseInteger(s string) (int64, bool) {
	if i, err := strconv.ParseInt(s, 10, 64); err == nil {
		return i, true
	}
	f, ok := parseNumber(s)
	f = math.Round(f)
	return int64(f), ok && f >= -1<<63 && f < 1<<63
}

// writeTexts is CAST(… AS TEXT).
func writeTexts(w *Work, x *column.Vector, on []uint64) column.Vector {
	out := w.fresh(column.Text, nil, x.N)
	out.Valid = x.Valid
	texts := w.Texts()
	var buf []byte
	active := function.ActiveRows(&w.Arena, w.rows(on, x.N), x.N, x)
	eachRow(active, func(i int) {
		buf = x.AppendValue(buf[:0], i)
		out.C[i] = texts.CodeBytes(buf)
	})
	out.Dict = texts.Finish()
	return out
}
