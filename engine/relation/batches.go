package relation

import (
	"nearcell/catalog/column"
)

// batches fills batches of a relation's rows and hands over the full ones.
type batches struct {
	columns []column.Vector // of BatchRows values each; type Null: not needed
	n       int
	emit    func(*column.Batch) error
	runs    []run // of the batch at hand, ascending
	roles   []roleColumn
}

// run says where the rows of a batch count, from one of them on.
type run struct {
	from       int
	zone, part int32
}

// noPart is the part of rows that count in the whole solid.
const noPart int32 = -1

// roleColumn is a needed column that says where rows count.
type roleColumn struct {
	column int
	role   Role
	dict   *column.Dict
}

// now says where the rows that follow count.
func (x *batches) now(zone, part int32) {
	if k := len(x.runs) - 1; k >= 0 && x.runs[k].from == x.n {
		x.runs = x.runs[:k]
	}
	x.runs = append(x.runs, run{x.n, zone, part})
}

// roleColumn is the finished column of a role.
func (x *batches) roleColumn(c roleColumn) column.Vector {
	v := column.Vector{Type: column.Text, N: x.n, C: make([]uint32, x.n), Dict: c.dict}
	for k, r := range x.runs {
		to, code := x.n, uint32(r.zone)
		if k+1 < len(x.runs) {
			to = x.runs[k+1].from
		}
		if c.role == PartRole {
			code = uint32(r.part)
		}
		for i := r.from; i < to; i++ {
			v.C[i] = code
		}
	}
	return v
}

// newBatches prepares vectors for the needed computed columns from..to-1 of the
// bound ones.
func newBatches(b *Bound, need []bool, from int, emit func(*column.Batch) error) *batches {
	x := &batches{columns: make([]column.Vector, len(b.Columns)), emit: emit}
	for i, c := range b.Columns {
		if c.Role != NoRole {
			if needed(need, i) {
				x.roles = append(x.roles, roleColumn{i, c.Role, b.regions(c.Role)})
			}
			continue
		}
		if i >= from && needed(need, i) {
			x.columns[i] = column.New(c.Type, c.Unit, BatchRows)
		}
	}
	return x
}

func needed(need []bool, i int) bool { return need == nil || need[i] }

// room is how many rows fit into the batch at hand.
func (x *batches) room() int { return BatchRows - x.n }

// reset makes the batch empty. Vectors keep their memory but not their NULLs.
func (x *batches) reset() {
	x.n = 0
	for i := range x.columns {
		x.columns[i].Valid = nil
		clear(x.columns[i].Bits)
	}
}

// flush hands the rows over; own gives the columns that are gathered from the
// input.
func (x *batches) flush(own func(i int) (column.Vector, bool)) error {
	if x.n == 0 {
		return nil
	}
	out := column.Batch{N: x.n, Cols: make([]column.Vector, len(x.columns))}
	for i := range x.columns {
		if v, ok := own(i); ok {
			out.Cols[i] = v
			continue
		}
		if x.columns[i].Type == column.Null {
			out.Cols[i] = column.Vector{Type: column.Null, N: x.n}
			continue
		}
		out.Cols[i] = head(&x.columns[i], x.n)
	}
	for _, c := range x.roles {
		out.Cols[c.column] = x.roleColumn(c)
	}
	err := x.emit(&out)
	if k := len(x.runs) - 1; k >= 0 {
		last := x.runs[k]
		x.runs = append(x.runs[:0], run{0, last.zone, last.part})
	}
	x.reset()
	return err
}

// head is a view of the first n values, without stray bits behind them.
func head(v *column.Vector, n int) column.Vector {
	h := v.Slice(0, n)
	if r := uint(n) & 63; r != 0 {
		if h.Valid != nil {
			h.Valid[len(h.Valid)-1] &= 1<<r - 1
		}
		if h.Bits != nil {
			h.Bits[len(h.Bits)-1] &= 1<<r - 1
		}
	}
	return h
}
