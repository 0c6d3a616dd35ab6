package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// openNumber gives the rows of the input with their numbers. It needs them as a
// table: of a stored one only the numbers are new.
func (r *runner) openNumber(ctx context.Context, n *plan.Number) (*pipeline, error) {
	t, err := r.collect(ctx, n.Input)
	if err != nil {
		return nil, err
	}
	m := r.meter(n)
	if err := r.envOf(m).keep(8 * int64(t.N)); err != nil {
		return nil, err
	}
	numbers := column.New(column.Integer, nil, t.N)
	for i := range numbers.I {
		numbers.I[i] = int64(i)
	}
	out := &column.Table{Schema: n.Schema(), N: t.N, Cols: append(t.Cols[:len(t.Cols):len(t.Cols)], numbers)}
	return sourceOnly(newTableSource(r.env, out)), nil
}
