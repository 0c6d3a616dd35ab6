package present

import (
	"encoding/json"
	"io"
	"slices"
	"strings"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/compress/zstd"

	"nearcell/catalog/column"
)

// parquetWriter writes an Apache Parquet file: INTEGER as int64, REAL as double
// with its infinities, TEXT as string, TIMESTAMP as microseconds in UTC, NULL as
// null. The format has no type for the others: an INTERVAL is an int64 of
// microseconds and a POINT three columns, p.x, p.y and p.z. Units stand in the
// file's metadata under the key "units", as a JSON object of column and unit.
type parquetWriter struct {
	w      io.Writer
	out    *parquet.GenericWriter[any]
	leaves []parquetLeaf
	at     []int // of each leaf, its index in the schema of the file
	row    []parquet.Value
	rows   int64
}

// parquetLeaf is a column of the file: one of the result, or a part of a POINT.
type parquetLeaf struct {
	name   string
	column int
	axis   int
}

// groupOfColumns is a group whose fields stay in the order of the result.
// parquet.Group alone sorts them by name.
type groupOfColumns struct {
	parquet.Group
	fields []parquet.Field
}

func (g groupOfColumns) Fields() []parquet.Field { return g.fields }

func (p *parquetWriter) Begin(s column.Schema) error {
	group := parquet.Group{}
	units := map[string]string{}
	for i, f := range s {
		for axis, name := range parquetNames(s, f) {
			if _, taken := group[name]; taken {
				return &RepeatedColumnError{Name: name}
			}
			group[name] = parquet.Optional(parquetNode(f.Type))
			p.leaves = append(p.leaves, parquetLeaf{name, i, axis})
			if unit := f.Unit.ASCII(); unit != "" {
				units[name] = unit
			}
			if f.Type == column.Interval {
				units[name] = "us"
			}
		}
	}
	fields := group.Fields()
	slices.SortFunc(fields, func(a, b parquet.Field) int { return p.order(a.Name()) - p.order(b.Name()) })
	schema := parquet.NewSchema("rows", groupOfColumns{group, fields})
	for _, leaf := range p.leaves {
		found, _ := schema.Lookup(leaf.name)
		p.at = append(p.at, found.ColumnIndex)
	}
	options := []parquet.WriterOption{schema, parquet.Compression(&zstd.Codec{}), parquet.CreatedBy("nearcell", "", "")}
	if len(units) > 0 {
		text, err := json.Marshal(units) // keys come out sorted
		if err != nil {
			return err
		}
		options = append(options, parquet.KeyValueMetadata("units", string(text)))
	}
	p.out = parquet.NewGenericWriter[any](p.w, options...)
	p.row = make([]parquet.Value, len(p.leaves))
	return nil
}

// order is where a leaf of that name stands among the result's columns.
func (p *parquetWriter) order(name string) int {
	return slices.IndexFunc(p.leaves, func(l parquetLeaf) bool { return l.name == name })
}

// parquetNames are the columns of the file that a column of the result takes.
func parquetNames(s column.Schema, f column.Field) []string {
	if f.Type != column.Point {
		return []string{f.Name}
	}
	names := []string{f.Name + ".x", f.Name + ".y", f.Name + ".z"}
	for _, other := range s {
		for i := range names {
			for other.Name == names[i] { // a column that is called so
				names[i] += "_"
			}
		}
	}
	return names
}

func parquetNode(t column.Type) parquet.Node {
	switch t {
	case column.Integer, column.Interval:
		return parquet.Int(64)
	case column.Real, column.Point:
		return parquet.Leaf(parquet.DoubleType)
	case column.Boolean:
		return parquet.Leaf(parquet.BooleanType)
	case column.Timestamp:
		return parquet.Timestamp(parquet.Microsecond)
	}
	return parquet.String()
}

func (p *parquetWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		p.rows++
		for i, leaf := range p.leaves {
			at := p.at[i]
			v := &b.Cols[leaf.column]
			if v.IsNull(row) {
				p.row[at] = parquet.NullValue().Level(0, 0, at)
				continue
			}
			p.row[at] = parquetValue(v, row, leaf.axis).Level(0, 1, at)
		}
		_, err := p.out.WriteRows([]parquet.Row{p.row})
		return err
	})
}

func parquetValue(v *column.Vector, row, axis int) parquet.Value {
	switch v.Type {
	case column.Integer, column.Interval, column.Timestamp:
		return parquet.Int64Value(v.I[row])
	case column.Real:
		return parquet.DoubleValue(v.F[row])
	case column.Point:
		return parquet.DoubleValue(v.F[3*row+axis])
	case column.Boolean:
		return parquet.BooleanValue(column.Bit(v.Bits, row))
	}
	return parquet.ByteArrayValue([]byte(strings.ToValidUTF8(v.Text(row), "\uFFFD")))
}

func (p *parquetWriter) End() (rows, unwritten int64, err error) {
	return p.rows, 0, p.out.Close()
}
