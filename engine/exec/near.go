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
	on     []uint64
}

// newNearCount is nil where a call compares nothing.
func newNearCount(c *plan.Call) *nearCount {
	n := &nearCount{}
	from := []expr.Expr{c.Filter}
	if c.Fn.Name == "SHARE" {
		from = append(from, c.Args...)
	}
	for _, e := range from {
		for _, l := range expr.Limits(e) {
			if !expr.HasQuery(l.X) && !expr.HasQuery(l.When) {
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
		on := b.On
		if l.When != nil {
			when, err := s.eval(w, l.When, b, on)
			if err != nil {
				return err
			}
			n.on = trueRows(n.on, &when, b.On, b.N)
			on = n.on
		}
		v, err := s.eval(w, l.X, b, on)
		if err != nil {
			return err
		}
		if l.Against == nil {
			n.rows[i].Look(&v, nil, on, b.N, l.At)
			continue
		}
		against, err := s.eval(w, l.Against, b, on)
		if err != nil {
			return err
		}
		n.rows[i].Look(&v, &against, on, b.N, 0)
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
		if text := function.NearText(call.Text, l.X.String(), l.Text(), n.rows[i].Near, n.rows[i].Equal); text != "" {
			notes.Add(note.Note, note.Rows, "%s", text)
		}
	}
}
