package exec

import (
	"context"
	"fmt"
	"math"
	"math/bits"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// tableSource reads a table in memory: chunk c is its rows from c times the rows
// of a chunk on.
type tableSource struct {
	table        *column.Table
	chunk, batch int // rows
}

func newTableSource(env *Env, t *column.Table) *tableSource {
	return &tableSource{t, env.chunkRows(), env.batchRows()}
}

func (s *tableSource) Schema() column.Schema { return s.table.Schema }

func (s *tableSource) Chunks() int { return (s.table.N + s.chunk - 1) / s.chunk }

func (s *tableSource) Read(ctx context.Context, w *Worker, chunk int, emit Emit) error {
	end := min(s.table.N, (chunk+1)*s.chunk)
	for lo := chunk * s.chunk; lo < end; lo += s.batch {
		if err := ctx.Err(); err != nil {
			return err
		}
		b := s.table.Batch(lo, min(lo+s.batch, end))
		w.begin(int64(lo))
		if err := emit(&b); err != nil {
			return err
		}
	}
	return nil
}

// gatherer grows one column out of the active rows of many vectors. Texts of
// one dictionary keep their codes; a second dictionary is merged into it.
type gatherer struct {
	v     column.Vector
	texts textMerge
	idx   []int32
}

func newGatherer(f column.Field) *gatherer {
	return &gatherer{v: column.Vector{Type: f.Type, Unit: f.Unit}}
}

// add appends the rows idx of v.
func (g *gatherer) add(v *column.Vector, idx []int32) {
	from := g.v.N
	g.v.N += len(idx)
	g.addValid(v, idx, from)
	if v.Type == column.Null {
		g.addZeros(len(idx))
		return
	}
	g.check(v)
	switch {
	case v.Type.Counted():
		g.v.I = appendRows(g.v.I, v.I, idx)
	case v.Type == column.Real:
		g.v.F = appendRows(g.v.F, v.F, idx)
	case v.Type == column.Point:
		for _, i := range idx {
			g.v.F = append(g.v.F, v.F[3*i], v.F[3*i+1], v.F[3*i+2])
		}
	case v.Type == column.Text:
		g.v.C = g.texts.add(g.v.C, v, idx)
		g.v.Dict = g.texts.dict
	case v.Type == column.Boolean:
		g.growBits()
		for k, i := range idx {
			if column.Bit(v.Bits, int(i)) {
				column.SetBit(g.v.Bits, from+k)
			}
		}
	}
	g.zeroNulls(v, from)
}

// zeroNulls clears the slots of NULLs that came out of v from row `from` on: an
// expression may leave anything there, and tables with equal values shall have
// equal bytes.
func (g *gatherer) zeroNulls(v *column.Vector, from int) {
	if v.Valid == nil {
		return
	}
	for w := from >> 6; w < len(g.v.Valid); w++ {
		for null := ^g.v.Valid[w]; null != 0; null &= null - 1 {
			if i := w<<6 + bits.TrailingZeros64(null); i >= from && i < g.v.N {
				g.v.SetNull(i)
			}
		}
	}
}

func (g *gatherer) check(v *column.Vector) {
	if v.Type != g.v.Type {
		panic(fmt.Sprintf("exec: a %s vector in a %s column", v.Type, g.v.Type))
	}
}

func appendRows[T any](to, from []T, idx []int32) []T {
	to = widened(nil, to, len(to)+len(idx))
	for _, i := range idx {
		to = append(to, from[i])
	}
	return to
}

// addAll is add for the first n rows of v, as far as they can be copied as they
// lie; it reports whether it did.
func (g *gatherer) addAll(v *column.Vector, n int) bool {
	if v.Type == column.Null || v.Type == column.Boolean || v.Type == column.Text && !g.texts.knows(v.Dict) {
		return false
	}
	g.check(v)
	if v.Valid != nil || g.v.Valid != nil {
		if g.v.N&63 != 0 {
			return false // the bits of the two do not lie alike
		}
		g.copyValid(v, n)
	}
	g.v.N += n
	switch {
	case v.Type.Counted():
		g.v.I = append(g.v.I, v.I[:n]...)
	case v.Type == column.Real:
		g.v.F = append(g.v.F, v.F[:n]...)
	case v.Type == column.Point:
		g.v.F = append(g.v.F, v.F[:3*n]...)
	case v.Type == column.Text:
		g.v.C = append(g.v.C, v.C[:n]...)
		g.v.Dict = g.texts.dict
	}
	g.zeroNulls(v, g.v.N-n)
	return true
}

// copyValid appends the validity of n rows where g ends with a whole word.
func (g *gatherer) copyValid(v *column.Vector, n int) {
	if g.v.Valid == nil {
		g.v.Valid = column.AllOn(g.v.N)
	}
	if v.Valid == nil {
		g.v.Valid = append(g.v.Valid, column.AllOn(n)...)
		return
	}
	g.v.Valid = append(g.v.Valid, v.Valid[:column.Words(n)]...)
	if rest := uint(n) & 63; rest != 0 {
		g.v.Valid[len(g.v.Valid)-1] &= 1<<rest - 1
	}
}

// grow makes room for n more rows at once.
func (g *gatherer) grow(n int) {
	switch {
	case g.v.Type.Counted():
		g.v.I = widened(nil, g.v.I, len(g.v.I)+n)
	case g.v.Type == column.Real:
		g.v.F = widened(nil, g.v.F, len(g.v.F)+n)
	case g.v.Type == column.Point:
		g.v.F = widened(nil, g.v.F, len(g.v.F)+3*n)
	case g.v.Type == column.Text:
		g.v.C = widened(nil, g.v.C, len(g.v.C)+n)
	}
}

func (g *gatherer) growBits() {
	for len(g.v.Bits) < column.Words(g.v.N) {
		g.v.Bits = append(g.v.Bits, 0)
	}
}

func (g *gatherer) addZeros(n int) {
	switch {
	case g.v.Type.Counted():
		g.v.I = append(g.v.I, make([]int64, n)...)
	case g.v.Type == column.Real:
		g.v.F = append(g.v.F, make([]float64, n)...)
	case g.v.Type == column.Point:
		g.v.F = append(g.v.F, make([]float64, 3*n)...)
	case g.v.Type == column.Text:
		g.v.C = append(g.v.C, make([]uint32, n)...)
	case g.v.Type == column.Boolean:
		g.growBits()
	}
}

// addValid appends the validity of the rows idx of v behind the first `from`.
func (g *gatherer) addValid(v *column.Vector, idx []int32, from int) {
	if g.v.Type == column.Null || len(idx) == 0 {
		return
	}
	if g.v.Valid == nil {
		if v.Type != column.Null && v.Valid == nil {
			return
		}
		g.v.Valid = column.AllOn(from)
	}
	for len(g.v.Valid) < column.Words(g.v.N) {
		g.v.Valid = append(g.v.Valid, 0)
	}
	for k, i := range idx {
		if !v.IsNull(int(i)) {
			column.SetBit(g.v.Valid, from+k)
		}
	}
}

// finish is the column. A text column has a dictionary even where it is empty.
func (g *gatherer) finish() column.Vector {
	if g.v.Type == column.Text && g.v.Dict == nil {
		g.v.Dict = &column.Dict{Texts: []string{""}}
	}
	return g.v
}

// textMerge brings texts of several dictionaries into one.
type textMerge struct {
	dict  *column.Dict
	own   bool // dict is ours to grow
	codes map[string]uint32
	from  *column.Dict // the dictionary that remap is about
	remap []uint32     // code + 1, 0: not seen yet
}

// knows reports whether codes of a dictionary can be kept as they are; the
// first dictionary that comes is taken as it is.
func (m *textMerge) knows(d *column.Dict) bool {
	if m.dict == nil && len(d.Texts) > 0 {
		m.dict = d
	}
	return m.dict == d
}

func (m *textMerge) add(to []uint32, v *column.Vector, idx []int32) []uint32 {
	if m.knows(v.Dict) {
		return appendRows(to, v.C, idx)
	}
	if m.from != v.Dict {
		m.from = v.Dict
		m.remap = room(m.remap, len(v.Dict.Texts))
		clear(m.remap)
	}
	for _, i := range idx {
		if v.IsNull(int(i)) {
			to = append(to, 0)
			continue
		}
		c := v.C[i]
		if m.remap[c] == 0 {
			m.remap[c] = m.code(v.Dict.Texts[c]) + 1
		}
		to = append(to, m.remap[c]-1)
	}
	return to
}

// code is the code of a text in a dictionary of our own: the first one was a
// view of somebody else's and is copied before it grows.
func (m *textMerge) code(s string) uint32 {
	if !m.own {
		var texts []string
		if m.dict != nil {
			texts = m.dict.Texts
		}
		m.own = true
		m.dict = &column.Dict{Texts: append(make([]string, 0, 2*len(texts)+16), texts...)}
		m.codes = make(map[string]uint32, len(texts))
		for c, t := range texts {
			m.codes[t] = uint32(c)
		}
	}
	if c, ok := m.codes[s]; ok {
		return c
	}
	c := uint32(len(m.dict.Texts))
	m.dict.Texts = append(m.dict.Texts, s)
	m.codes[s] = c
	return c
}

// tableBuilder grows a table out of batches.
type tableBuilder struct {
	env    *Env
	schema column.Schema
	cols   []*gatherer
	n      int
	idx    []int32
}

func newTableBuilder(env *Env, schema column.Schema) *tableBuilder {
	t := &tableBuilder{env: env, schema: schema, cols: make([]*gatherer, len(schema))}
	for i, f := range schema {
		t.cols[i] = newGatherer(f)
	}
	return t
}

// add appends the active rows of columns that are n long.
func (t *tableBuilder) add(cols []column.Vector, on []uint64, n int) error {
	if on == nil {
		if err := t.addAll(cols, n); err != nil {
			return err
		}
		return t.env.keep(int64(n) * rowBytes(t.schema))
	}
	t.idx = activeRows(t.idx, on, n)
	if err := t.addRows(cols, t.idx); err != nil {
		return err
	}
	return t.env.keep(int64(len(t.idx)) * rowBytes(t.schema))
}

// room refuses more rows than an int32 counts.
func (t *tableBuilder) room(n int) error {
	if t.n+n > math.MaxInt32 {
		return problem.New("too-many-rows", problem.Place{}, "an intermediate result has more than %d rows", math.MaxInt32)
	}
	return nil
}

// addAll appends the first n rows of cols.
func (t *tableBuilder) addAll(cols []column.Vector, n int) error {
	if err := t.room(n); err != nil {
		return err
	}
	listed := false
	for i, g := range t.cols {
		if g.addAll(&cols[i], n) {
			continue
		}
		if !listed {
			t.idx, listed = activeRows(t.idx, nil, n), true
		}
		g.add(&cols[i], t.idx)
	}
	t.n += n
	return nil
}

func (t *tableBuilder) addRows(cols []column.Vector, idx []int32) error {
	if err := t.room(len(idx)); err != nil {
		return err
	}
	for i, g := range t.cols {
		g.add(&cols[i], idx)
	}
	t.n += len(idx)
	return nil
}

// joined is the rows of tables one after another; they were counted against
// the limit of memory when they were gathered.
func joined(stop func() error, env *Env, schema column.Schema, tables []*column.Table) (*column.Table, error) {
	if len(tables) == 1 {
		return tables[0], nil
	}
	total := 0
	for _, t := range tables {
		total += t.N
	}
	all := newTableBuilder(env, schema)
	for _, g := range all.cols {
		g.grow(total)
	}
	for _, t := range tables {
		if err := stop(); err != nil {
			return nil, err
		}
		if err := all.addAll(t.Cols, t.N); err != nil {
			return nil, err
		}
	}
	return all.finish(), nil
}

// finish is the table. The builder must not be used afterwards.
func (t *tableBuilder) finish() *column.Table {
	out := &column.Table{Schema: t.schema, N: t.n, Cols: make([]column.Vector, len(t.cols))}
	for i, g := range t.cols {
		out.Cols[i] = g.finish()
	}
	return out
}

// rowBytes is about what a row of the schema takes.
func rowBytes(schema column.Schema) int64 {
	bytes := int64(0)
	for _, f := range schema {
		switch {
		case f.Type == column.Point:
			bytes += 24
		case f.Type == column.Text:
			bytes += 4
		case f.Type == column.Boolean, f.Type == column.Null:
			bytes++
		default:
			bytes += 8
		}
	}
	return bytes
}

// gatherTable is the rows idx of a table, in that order.
func gatherTable(stop func() error, t *column.Table, idx []int32) (*column.Table, error) {
	out := &column.Table{Schema: t.Schema, N: len(idx), Cols: make([]column.Vector, len(t.Cols))}
	for i := range t.Cols {
		var err error
		if out.Cols[i], err = gatherUntil(stop, &t.Cols[i], idx, false); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// collectSink keeps all rows.
type collectSink struct {
	env    *Env
	schema column.Schema
	parts  []*column.Table
}

func (s *collectSink) Part(int) Part {
	return &collectPart{rows: newTableBuilder(s.env, s.schema)}
}

func (s *collectSink) Merge(p Part) error {
	if rows := p.(*collectPart).rows; rows.n > 0 {
		s.parts = append(s.parts, rows.finish())
	}
	return nil
}

func (s *collectSink) Finish(ctx context.Context) (Source, error) {
	t, err := joined(ctx.Err, s.env, s.schema, s.parts)
	if err != nil {
		return nil, err
	}
	return newTableSource(s.env, t), nil
}

type collectPart struct {
	rows *tableBuilder
}

func (p *collectPart) Consume(_ *Worker, b *column.Batch) error {
	return p.rows.add(b.Cols, b.On, b.N)
}
