package reader

import (
	"strings"

	"nearcell/catalog/column"
)

// Join makes one Result of those of single files, their rows one after the other. They
// must have the same columns, in any order, of the same types; INTEGER and REAL become
// REAL, and a column without any value takes the type that it has in another file.
func Join(parts []*Result, o *Options) (*Result, error) {
	if len(parts) == 1 {
		return parts[0], nil
	}
	first := parts[0]
	out := &Result{Facts: first.Facts, Table: &column.Table{}}
	schema := append(column.Schema(nil), first.Table.Schema...)
	order := make([][]int, len(parts))
	faults := &Faults{File: first.Files[0].Name}
	for k, part := range parts {
		order[k] = matchColumns(schema, part, first.Files[0].Name, faults)
	}
	if len(faults.List) > 0 {
		return nil, faults
	}
	for i := range schema {
		if x, ok := commonType(i, parts, order); !ok {
			return nil, &Faults{File: first.Files[0].Name, List: []Fault{x}}
		} else {
			schema[i].Type = x.Want
		}
	}
	for i, f := range schema {
		b := column.NewBuilder(f.Type, f.Unit)
		for k, part := range parts {
			v := &part.Table.Cols[order[k][i]]
			if v.NullCount() == v.N && v.Type != f.Type {
				for range v.N {
					b.AppendNull()
				}
				continue
			}
			b.AppendVector(v, nil)
		}
		out.Table.Cols = append(out.Table.Cols, b.Finish())
	}
	out.Table.Schema = schema
	for k, part := range parts {
		out.Table.N += part.Table.N
		out.Files = append(out.Files, part.Files...)
		if k > 0 {
			out.Facts.add(&part.Facts)
		}
	}
	out.Facts.Missing = nil
	for i := range out.Table.Cols {
		out.Facts.Missing = append(out.Facts.Missing, out.Table.Cols[i].NullCount())
	}
	out.Facts.AllMissing = nil
	for i, n := range out.Facts.Missing {
		if n == out.Table.N && n > 0 {
			out.Facts.AllMissing = append(out.Facts.AllMissing, schema[i].Name)
		}
	}
	return out, nil
}

// matchColumns finds the columns of a part that the first file's columns are.
func matchColumns(schema column.Schema, part *Result, firstName string, faults *Faults) []int {
	have := map[string]int{}
	for j, f := range part.Table.Schema {
		have[strings.ToLower(f.Name)] = j
	}
	var order []int
	for _, f := range schema {
		j, ok := have[strings.ToLower(f.Name)]
		if !ok {
			faults.List = append(faults.List, Fault{File: part.Files[0].Name, Kind: ColumnMissing, Text: f.Name, Detail: firstName})
			continue
		}
		delete(have, strings.ToLower(f.Name))
		if g := part.Table.Schema[j]; !column.SameUnit(f.Unit, g.Unit) {
			faults.List = append(faults.List, Fault{File: part.Files[0].Name, Kind: UnitsDiffer, FieldName: f.Name, Text: g.Unit.String(), Detail: f.Unit.String()})
		}
		order = append(order, j)
	}
	for _, f := range part.Table.Schema {
		if _, left := have[strings.ToLower(f.Name)]; left {
			faults.List = append(faults.List, Fault{File: part.Files[0].Name, Kind: ColumnAdded, Text: f.Name, Detail: firstName})
		}
	}
	return order
}

// commonType is the type of column i in all parts, in Want; else the fault.
func commonType(i int, parts []*Result, order [][]int) (Fault, bool) {
	t := column.Null
	for k, part := range parts {
		v := &part.Table.Cols[order[k][i]]
		switch {
		case v.NullCount() == v.N && v.N > 0:
		case t == column.Null, t == v.Type:
			t = v.Type
		case t.Numeric() && v.Type.Numeric():
			t = column.Real
		default:
			return Fault{File: part.Files[0].Name, Kind: TypesDiffer, FieldName: part.Table.Schema[order[k][i]].Name, Text: v.Type.String(), Detail: t.String()}, false
		}
	}
	if t == column.Null {
		t = parts[0].Table.Cols[order[0][i]].Type
	}
	return Fault{Want: t}, true
}

// add takes the facts of a further file.
func (f *Facts) add(g *Facts) {
	f.Rows += g.Rows
	f.Bytes += g.Bytes
	f.Lines += g.Lines
	f.Blank += g.Blank
	f.Refused += g.Refused
	f.Unread += g.Unread
	for _, name := range g.NaiveTimes {
		known := false
		for _, have := range f.NaiveTimes {
			known = known || have == name
		}
		if !known {
			f.NaiveTimes = append(f.NaiveTimes, name)
		}
	}
	for _, n := range g.Columns {
		f.AddNote(n)
	}
}

// AddNote notes what became of a column; the counts of the same kind are summed.
func (f *Facts) AddNote(n ColumnNote) {
	for i := range f.Columns {
		if x := &f.Columns[i]; x.Column == n.Column && x.Kind == n.Kind {
			x.Count += n.Count
			return
		}
	}
	f.Columns = append(f.Columns, n)
}

// OfTable is the Result of one file whose columns need no inference.
func OfTable(src *Source, t *column.Table, o *Options) *Result {
	r := &Result{Table: t, Facts: Facts{Rows: t.N, Bytes: src.Size(), SHA256: src.SHA256()}}
	r.Files = []FileFacts{{Name: src.Name, SHA256: r.Facts.SHA256, Bytes: r.Facts.Bytes, Rows: t.N}}
	for i := range t.Cols {
		n := t.Cols[i].NullCount()
		r.Facts.Missing = append(r.Facts.Missing, n)
		if n == t.N && n > 0 {
			r.Facts.AllMissing = append(r.Facts.AllMissing, t.Schema[i].Name)
		}
	}
	return r
}

// ApplyUnits gives columns the units of Options.Units.
func (r *Result) ApplyUnits(o *Options) {
	for _, u := range o.Units {
		found := false
		for i := range r.Table.Schema {
			f := &r.Table.Schema[i]
			if !strings.EqualFold(f.Name, u.Column) {
				continue
			}
			found = true
			if f.Unit != nil && !column.SameUnit(f.Unit, u.Unit) {
				r.Facts.UnitConflicts = append(r.Facts.UnitConflicts, UnitsConflict{Column: f.Name, Heading: f.Unit, Said: u.Unit})
			}
			f.Unit, r.Table.Cols[i].Unit = u.Unit, u.Unit
		}
		if !found {
			r.Facts.UnknownUnits = append(r.Facts.UnknownUnits, u.Column)
		}
	}
	for _, name := range o.TextColumns {
		found := false
		for _, f := range r.Table.Schema {
			found = found || strings.EqualFold(f.Name, name)
		}
		if !found {
			r.Facts.UnknownText = append(r.Facts.UnknownText, name)
		}
	}
}

// EachFile reads files one by one and joins them; it is ReadFiles for formats whose
// files carry their types.
func EachFile(sources []*Source, o *Options, read func(*Source) (*Result, error)) (*Result, error) {
	var parts []*Result
	for _, src := range sources {
		r, err := read(src)
		if err != nil {
			return nil, err
		}
		parts = append(parts, r)
	}
	r, err := Join(parts, o)
	if err != nil {
		return nil, err
	}
	r.ApplyUnits(o)
	return r, nil
}

// One is the Faults of one fault of a file.
func One(src *Source, f Fault) *Faults {
	f.File = src.Name
	return &Faults{File: src.Name, List: []Fault{f}}
}
