package engine

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// unpivotTable is UNPIVOT (value FOR label IN (a, b, c)): every row becomes as
// many rows as columns are named, in that order, each with the name of its column
// as the label. Missing values stay, as NULL.
func (c *clauses) unpivotTable(read *column.Table, origin string) (*column.Table, error) {
	u := c.unpivot
	taken := make([]bool, len(read.Cols))
	var columns []int
	for _, name := range u.Columns {
		i, err := findColumn(read.Schema, name, c.st.at(name), origin)
		if err != nil {
			return nil, err
		}
		if taken[i] {
			return nil, problem.New("clause", c.st.at(name), "UNPIVOT names the column '%s' twice", name.Text)
		}
		taken[i] = true
		columns = append(columns, i)
	}
	kind, unit, err := c.unpivotType(read, columns)
	if err != nil {
		return nil, err
	}
	out := &column.Table{N: read.N * len(columns)}
	add := func(f column.Field, v column.Vector) {
		f.Type, f.Unit = v.Type, v.Unit
		out.Schema, out.Cols = append(out.Schema, f), append(out.Cols, v)
	}
	for i := range read.Cols {
		if taken[i] {
			continue
		}
		b := column.NewBuilder(read.Cols[i].Type, read.Cols[i].Unit)
		for row := range read.N {
			for range columns {
				b.AppendRow(&read.Cols[i], row)
			}
		}
		add(read.Schema[i], b.Finish())
	}
	labels, values := column.NewBuilder(column.Text, nil), column.NewBuilder(kind, unit)
	for row := range read.N {
		for _, i := range columns {
			labels.AppendText(read.Schema[i].Name)
			values.AppendRow(&read.Cols[i], row)
		}
	}
	add(column.Field{Name: u.Label.Text}, labels.Finish())
	add(column.Field{Name: u.Value.Text}, values.Finish())
	return out, distinctUnpivot(out, c.st.at(u))
}

// unpivotType is the type and the unit that the columns have in common.
func (c *clauses) unpivotType(read *column.Table, columns []int) (column.Type, *column.Unit, error) {
	first := columns[0]
	kind, unit := read.Schema[first].Type, read.Schema[first].Unit
	for k, i := range columns[1:] {
		f := read.Schema[i]
		numbers := (kind == column.Real || kind == column.Integer) && (f.Type == column.Real || f.Type == column.Integer)
		switch {
		case f.Type == kind:
		case numbers:
			kind = column.Real
		default:
			return 0, nil, problem.New("clause", c.st.at(c.unpivot.Columns[k+1]), "UNPIVOT makes one column of '%s' (%s) and '%s' (%s)",
				read.Schema[first].Name, kind, f.Name, f.Type).WithHint("they must be of one type")
		}
		if !column.SameUnit(unit, f.Unit) {
			return 0, nil, problem.New("clause", c.st.at(c.unpivot.Columns[k+1]), "UNPIVOT makes one column of '%s' (%s) and '%s' (%s)",
				read.Schema[first].Name, unitOrNone(unit), f.Name, unitOrNone(f.Unit)).WithHint("they must have one unit")
		}
	}
	return kind, unit, nil
}

func unitOrNone(u *column.Unit) string {
	if u == nil {
		return "no unit"
	}
	return u.String()
}

// distinctUnpivot refuses a new column with the name of one that stays.
func distinctUnpivot(t *column.Table, at problem.Place) error {
	seen := map[string]bool{}
	for _, f := range t.Schema {
		key := lang.Fold(f.Name)
		if seen[key] {
			return problem.New("column-twice", at, "two columns are called '%s'", f.Name).WithHint("give UNPIVOT's columns other names")
		}
		seen[key] = true
	}
	return nil
}
