package engine

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// What CENSORED (dust) makes of a column: dust as it is written, and beside it the
// bounds between which the value lies. An aggregate needs one of them; which one, is
// the question of who asks, not a default (bind/censored.go).

// censoredFields are the columns of the file whose values may be bounds. What UNPIVOT
// makes rows of has the values of the columns that it names.
func (c *clauses) censoredFields() []string {
	if c.censored == nil {
		return nil
	}
	var names []string
	for _, n := range c.censored.Columns {
		if c.unpivot != nil && n.Matches(c.unpivot.Value.Text) {
			for _, from := range c.unpivot.Columns {
				names = append(names, from.Text)
			}
			continue
		}
		names = append(names, n.Text)
	}
	return names
}

// boundColumns puts the two bounds behind each censored column.
func (c *clauses) boundColumns(table *column.Table, origin string) (*column.Table, error) {
	if c.censored == nil {
		return table, nil
	}
	bounds := map[int][2]column.Vector{}
	for _, n := range c.censored.Columns {
		i, err := findColumn(table.Schema, n, c.st.at(&n), origin)
		if err != nil {
			return nil, err
		}
		if bounds[i], err = c.bounds(&table.Cols[i], n); err != nil {
			return nil, err
		}
	}
	out := &column.Table{N: table.N}
	put := func(f column.Field, v column.Vector) error {
		for _, have := range out.Schema {
			if strings.EqualFold(have.Name, f.Name) {
				return problem.New("same-name", c.st.at(c.censored), "CENSORED makes a column '%s', and %s has one already", f.Name, origin).
					WithHint("give the column of the file another name in a query: CREATE TABLE … AS (SELECT %s AS other, …)", f.Name)
			}
		}
		out.Schema, out.Cols = append(out.Schema, f), append(out.Cols, v)
		return nil
	}
	for i, f := range table.Schema {
		pair, censored := bounds[i]
		if !censored {
			if err := put(f, table.Cols[i]); err != nil {
				return nil, err
			}
			continue
		}
		unit := f.Unit
		text := table.Cols[i]
		f.Unit, text.Unit = nil, nil
		f.Meaning = "as written; " + f.Name + "_low and " + f.Name + "_high are its bounds"
		if err := put(f, text); err != nil {
			return nil, err
		}
		for k, end := range []struct{ suffix, meaning string }{{"_low", "the least that it can be: 0 of what is below a limit"},
			{"_high", "the most that it can be: Infinity of what is above a limit"}} {
			pair[k].Unit = unit
			g := column.Field{Name: f.Name + end.suffix, Type: column.Real, Unit: unit, Meaning: end.meaning}
			if err := put(g, pair[k]); err != nil {
				return nil, err
			}
		}
	}
	return out, nil
}

// bounds are those of a column's values. A reader whose files have types of their own
// may give numbers: they are measured values.
func (c *clauses) bounds(v *column.Vector, name lang.Name) (pair [2]column.Vector, err error) {
	for k := range pair {
		pair[k] = column.New(column.Real, nil, v.N)
	}
	mark := byte('.')
	if c.file.DecimalMark != 0 {
		mark = byte(c.file.DecimalMark)
	}
	for i := range v.N {
		if v.IsNull(i) {
			pair[0].SetNull(i)
			pair[1].SetNull(i)
			continue
		}
		b, ok := reader.Bounds{}, true
		switch v.Type {
		case column.Real:
			b = reader.Bounds{Low: v.F[i], High: v.F[i]}
		case column.Integer:
			b = reader.Bounds{Low: float64(v.I[i]), High: float64(v.I[i])}
		case column.Text:
			b, ok = reader.ParseCensored(v.Text(i), mark)
		default:
			ok = false
		}
		if !ok {
			return pair, problem.New("censored", c.st.at(&name), "'%s' in row %d of '%s' is neither a number nor a bound such as <0.1 or >5",
				v.Value(i).String(), i+1, name.Text).WithHint("MISSING '%s' reads it as a missing value", v.Value(i).String())
		}
		pair[0].F[i], pair[1].F[i] = b.Low, b.High
	}
	return pair, nil
}
