package exec

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
)

// nearCount counts the values that a limit in SHARE(…) or FILTER (WHERE …) can
// hardly tell apart from it.
type nearCount struct {
	limits []expr.Limit
	rows   []expr.NearRows
}

// newNearCount is nil where a call compares nothing with a constant. What can fail
// is left alone: an AND before it may keep it from rows where it would.
func newNearCount(c *plan.Call) *nearCount {
	n := &nearCount{}
	from := []expr.Expr{c.Filter}
	if c.Fn.Name == "SHARE" {
		from = append(from, c.Args...)
	}
	for _, e := range from {
		for _, l := range expr.Limits(e) {
			if !l.X.CanFail() && !expr.HasQuery(l.X) {
				n.limits = append(n.limits, l)
			}
		}
	}
	if n.limits == nil {
		return nil
	}
	n.rows = make([]expr.NearRows, len(n.limits))
	return n
}

func (n *nearCount) look(s scope, w *Worker, b *column.Batch) error {
	if n == nil {
		return nil
	}
	for i, l := range n.limits {
		v, err := s.eval(w, l.X, b, b.On)
		if err != nil {
			return err
		}
		n.rows[i].Look(&v, b.On, b.N, l.At)
	}
	return nil
}

func (n *nearCount) merge(o *nearCount) {
	if n == nil {
		return
	}
	for i := range n.rows {
		n.rows[i].Add(o.rows[i])
	}
}

func (n *nearCount) say(notes *note.Notes, call *plan.Call) {
	if n == nil {
		return
	}
	for i, l := range n.limits {
		if text := function.NearText(call.Text, l.X.String(), l.At, n.rows[i].Near, n.rows[i].Equal); text != "" {
			notes.Add(note.Note, note.Rows, "%s", text)
		}
	}
}
