package exec

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// scope evaluates the expressions of one node over the batches of its input
// and says in which row one failed.
type scope struct {
	id int // the column named id, -1: none
}

func scopeOf(input column.Schema) scope { return scope{idColumn(input)} }

// idColumn is the first column named id, -1 where there is none.
func idColumn(schema column.Schema) int {
	for i, f := range schema {
		if strings.EqualFold(f.Name, "id") {
			return i
		}
	}
	return -1
}

func (s scope) eval(w *Worker, e expr.Expr, b *column.Batch, on []uint64) (column.Vector, error) {
	v, err := e.Eval(w.Work(), b, on)
	if err != nil {
		return v, s.fault(w, err, e.Place(), b)
	}
	return v, nil
}

// evalAll computes a list of expressions into dst.
func (s scope) evalAll(w *Worker, dst []column.Vector, list []expr.Expr, b *column.Batch, on []uint64) ([]column.Vector, error) {
	dst = dst[:0]
	for _, e := range list {
		v, err := s.eval(w, e, b, on)
		if err != nil {
			return dst, err
		}
		dst = append(dst, v)
	}
	return dst, nil
}

// fault turns an error of a kernel into a problem at a place that names the
// row, unless it has a place already.
func (s scope) fault(w *Worker, err error, at problem.Place, b *column.Batch) error {
	var told *problem.Problem // by a query inside, which knows its own row
	if _, ours := err.(*expr.RowError); !ours && errors.As(err, &told) {
		return problem.At(err, at)
	}
	row := -1
	var inRow *expr.RowError
	var kernel *function.RowFault
	code, text, hint := "failed", err.Error(), ""
	if errors.As(err, &inRow) {
		row = inRow.Row
	}
	if errors.As(err, &kernel) {
		code, text, hint = kernel.Code, kernel.Message, kernel.Hint
		if row < 0 {
			row = kernel.Row
		}
	}
	var p *problem.Problem
	if errors.As(err, &p) {
		if row < 0 {
			return problem.At(err, at)
		}
		code, text, hint = p.Code, p.Message, p.Hint
		if p.Place.Source != nil {
			at = p.Place
		}
	}
	if row >= 0 {
		text += s.rowName(w, b, row)
	}
	return problem.New(code, at, "%s", text).WithHint("%s", hint).Because(err)
}

// rowName is " in the row with id 'L17'", or by its number: " in row 18".
func (s scope) rowName(w *Worker, b *column.Batch, row int) string {
	if len(b.Cols) == 0 {
		return "" // the only row of a SELECT without FROM
	}
	if s.id >= 0 && s.id < len(b.Cols) && !b.Cols[s.id].IsNull(row) {
		return " in the row with id " + idText(b.Cols[s.id].Value(row))
	}
	if w.row < 0 {
		return " in a row of the join"
	}
	return fmt.Sprintf(" in row %d", w.row+int64(row)+1)
}

// idText writes an identifier as a query would.
func idText(v column.Value) string {
	if v.Type == column.Text {
		return "'" + v.S + "'"
	}
	return v.String()
}
