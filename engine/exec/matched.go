package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// openMatched computes INTERSECT and EXCEPT: the rows of both sides become keys
// of one table, which counts those of the right side.
func (r *runner) openMatched(ctx context.Context, n *plan.Matched) (*pipeline, error) {
	right, err := r.collect(ctx, n.Right)
	if err != nil {
		return nil, err
	}
	left, err := r.collect(ctx, n.Left)
	if err != nil {
		return nil, err
	}
	types := make([]column.Type, len(left.Schema))
	for i, f := range left.Schema {
		types[i] = f.Type
	}
	env := r.envOf(r.meter(n))
	m := &matcher{keys: newKeyTable(types).until(env.stop), node: n}
	m.reader = newKeyReader(m.keys)
	if err := m.each(ctx, right, m.count); err != nil {
		return nil, err
	}
	if err := env.keep(m.keys.bytes()); err != nil {
		return nil, err
	}
	known := m.keys.n
	if err := m.each(ctx, left, m.choose); err != nil {
		return nil, err
	}
	out, err := gatherTable(ctx.Err, &column.Table{Schema: n.Schema(), Cols: left.Cols, N: left.N}, m.rows)
	if err != nil {
		return nil, err
	}
	grown := int64(8*m.keys.width)*int64(m.keys.n-known) + int64(out.N)*rowBytes(out.Schema)
	return sourceOnly(newTableSource(r.env, out)), env.keep(grown)
}

// matcher decides row by row.
type matcher struct {
	node   *plan.Matched
	keys   *keyTable
	reader *keyReader
	ids    []int32
	right  []int64 // rows by key
	came   []bool  // the left side had this key before
	rows   []int32 // of the left side that stay
}

// each calls f with the key of each row of a table, in order.
func (m *matcher) each(ctx context.Context, t *column.Table, f func(row, key int32)) error {
	for lo := 0; lo < t.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return err
		}
		b := t.Batch(lo, min(lo+BatchRows, t.N))
		m.ids = room(m.ids, b.N)
		m.reader.put(b.Cols, nil, b.N, m.ids)
		m.right = widened(ctx.Err, m.right, m.keys.n)[:m.keys.n]
		m.came = widened(ctx.Err, m.came, m.keys.n)[:m.keys.n]
		for i, k := range m.ids[:b.N] {
			f(int32(lo+i), k)
		}
	}
	return nil
}

func (m *matcher) count(_, key int32) { m.right[key]++ }

func (m *matcher) choose(row, key int32) {
	there := m.right[key] > 0
	switch {
	case m.node.All:
		if there {
			m.right[key]--
		}
	case m.came[key]:
		return
	}
	m.came[key] = true
	if there == (m.node.Kind == plan.Intersect) {
		m.rows = append(m.rows, row)
	}
}
