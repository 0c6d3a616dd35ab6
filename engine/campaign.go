package engine

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi/solid"
)

// campaignTable makes the sites of a campaign out of what was read: id, x, y, z,
// then the attributes. A column that serves as identifier or coordinate as it
// stands is read under that name only; there is no second copy.
func (s *Session) campaignTable(st *statement, t *lang.CreateData, c *clauses, read *column.Table, origin string,
	object *catalog.Object) (*column.Table, error) {
	id, idColumn, err := c.identifiers(read, t, origin)
	if err != nil {
		return nil, err
	}
	placed, used, err := s.placedTable(st, c, read, origin)
	if err != nil {
		return nil, problem.At(err, originPlace(st, t))
	}
	if s.checkOnly && placed.N == 0 && t.Query != nil {
		return campaignLayout(placed, id, idColumn, used), nil
	}
	if placed.N == 0 {
		return nil, problem.New("no-sites", originPlace(st, t), "%s has no rows, and a campaign needs a site", origin)
	}
	if err := checkPlaces(st, t, placed, &id, origin); err != nil {
		return nil, err
	}
	unit, err := c.length(placed)
	if err != nil {
		return nil, err
	}
	object.Options = catalog.CampaignOptions{
		LengthUnit: unit, Within: c.within, Zones: c.zones, Stretched: c.stretched, Duplicates: c.duplicates, Tolerance: c.tolerance,
	}
	table := campaignLayout(placed, id, idColumn, used)
	for i := 1; i <= 3; i++ {
		table.Schema[i].Unit = column.ParseUnit(unit)
		table.Cols[i].Unit = table.Schema[i].Unit
	}
	if missing := missingNote(table); missing != "" {
		text := fmt.Sprintf("%s: missing values: %s", origin, missing)
		st.notes.Add(note.Note, note.Import, "%s", text)
		object.Notes = append(object.Notes, text)
	}
	s.noteOutside(st, c, table)
	return table, nil
}

// originPlace is where the statement says what the data come from.
func originPlace(st *statement, t *lang.CreateData) problem.Place {
	switch {
	case t.File != nil:
		return st.at(t.File)
	case t.Files != nil:
		return st.at(t.Files)
	}
	return st.at(t.Query)
}

// campaignLayout orders the columns: id, x, y, z, the rest. placed has x, y, z first.
func campaignLayout(placed *column.Table, id column.Vector, idColumn int, used []bool) *column.Table {
	t := &column.Table{N: placed.N}
	add := func(f column.Field, v column.Vector) {
		t.Schema = append(t.Schema, f)
		t.Cols = append(t.Cols, v)
	}
	add(column.Field{Name: "id", Type: id.Type, Meaning: "identifier of the site"}, id)
	for i := range placed.Schema {
		if i >= 3 && (i-3 == idColumn || used[i-3]) {
			continue
		}
		add(placed.Schema[i], placed.Cols[i])
	}
	return t
}

// identifiers are the values of the column that ID names, of a column id, or
// the row numbers.
func (c *clauses) identifiers(read *column.Table, t *lang.CreateData, origin string) (column.Vector, int, error) {
	index := -1
	at := c.st.at(t.Name)
	if c.id != nil {
		at = c.st.at(c.id.Name)
		i, err := findColumn(read.Schema, c.id.Name, at, origin)
		if err != nil {
			return column.Vector{}, 0, err
		}
		index = i
	} else {
		for i, f := range read.Schema {
			if lang.Fold(f.Name) == "id" {
				index = i
			}
		}
	}
	if index < 0 {
		v := column.New(column.Integer, nil, read.N)
		for i := range v.I {
			v.I[i] = int64(i) + 1
		}
		return v, -1, nil
	}
	v := read.Cols[index]
	name := read.Schema[index].Name
	if v.Type != column.Integer && v.Type != column.Text {
		return v, 0, problem.New("id-type", at, "the identifier '%s' is %s; it must be TEXT or INTEGER", name, v.Type)
	}
	if err := uniqueIdentifiers(&v, name, at, origin); err != nil {
		return v, 0, err
	}
	v.Unit = nil
	return v, index, nil
}

// uniqueIdentifiers refuses a missing identifier and one that stands twice.
func uniqueIdentifiers(v *column.Vector, name string, at problem.Place, origin string) error {
	first := make(map[string]int, v.N)
	for i := 0; i < v.N; i++ {
		if v.IsNull(i) {
			return problem.New("id-missing", at, "row %d of %s has no identifier in column '%s'", i+1, origin, name).
				WithHint("mend the file, or leave such rows out: AS (SELECT … WHERE %s IS NOT NULL)", name)
		}
		text := identifierText(v, i)
		if j, twice := first[text]; twice {
			return problem.New("id-twice", at, "the identifier %s stands in row %d and again in row %d of %s",
				text, j+1, i+1, origin).
				WithHint("a campaign has one row a site; readings over time belong to a TABLE, joined by the identifier")
		}
		first[text] = i
	}
	return nil
}

func identifierText(v *column.Vector, row int) string {
	if v.Type == column.Integer {
		return strconv.FormatInt(v.I[row], 10)
	}
	return "'" + v.Text(row) + "'"
}

// placedTable puts x, y, z before the columns of a table, by POSITION or by the
// names of its columns; used tells which columns they were taken from as they stand.
func (s *Session) placedTable(st *statement, c *clauses, read *column.Table, origin string) (*column.Table, []bool, error) {
	out := &column.Table{N: read.N}
	used := make([]bool, len(read.Cols))
	var exprs [3]lang.Expr
	if c.position != nil {
		exprs = [3]lang.Expr{c.position.X, c.position.Y, c.position.Z}
	}
	for k, axis := range [3]string{"x", "y", "z"} {
		v, from, system, err := s.coordinate(st, exprs[k], axis, read, origin)
		if err != nil {
			return nil, nil, err
		}
		if from >= 0 {
			used[from] = true
		}
		out.Schema = append(out.Schema, column.Field{Name: axis, Type: column.Real, Unit: v.Unit, Meaning: "position of the site", System: system})
		out.Cols = append(out.Cols, v)
	}
	if c.position != nil && (c.position.Geographic || !c.position.Frame.IsZero()) {
		for i, f := range read.Schema { // what positions came from stays, but for its names
			name := lang.Fold(f.Name)
			used[i] = name == "x" || name == "y" || name == "z"
		}
	}
	if err := s.bringToSite(st, c, out, origin); err != nil {
		return nil, nil, err
	}
	if c.kind == catalog.Table {
		return tableLayout(out, read, used), used, nil
	}
	out.Schema = append(out.Schema, read.Schema...)
	out.Cols = append(out.Cols, read.Cols...)
	return out, used, nil
}

// tableLayout is the table with its coordinates first and every other column once.
func tableLayout(axes, read *column.Table, used []bool) *column.Table {
	t := &column.Table{N: read.N, Schema: axes.Schema, Cols: axes.Cols}
	for i, f := range read.Schema {
		if name := lang.Fold(f.Name); used[i] || name == "x" || name == "y" || name == "z" {
			continue
		}
		t.Schema = append(t.Schema, f)
		t.Cols = append(t.Cols, read.Cols[i])
	}
	return t
}

// coordinate computes one axis as REAL and tells which column it is, or -1, and what it
// counts from.
func (s *Session) coordinate(st *statement, e lang.Expr, axis string, read *column.Table, origin string) (column.Vector, int, *column.System, error) {
	if e == nil {
		at := problem.Place{}
		i, err := findColumn(read.Schema, lang.Name{Text: axis}, at, origin)
		if err != nil {
			return column.Vector{}, 0, nil, problem.New("no-position", at, "%s has no column '%s'", origin, axis).
				WithHint("POSITION (…, …, …) names the three coordinates; there is %s", listed(columnNames(read.Schema), 12))
		}
		v, err := realColumn(&read.Cols[i], read.Schema[i].Name, at, origin)
		return v, i, read.Schema[i].System, err
	}
	bound, err := bind.OverSchema(s.bindEnv(st), e, read.Schema, origin)
	if err != nil {
		return column.Vector{}, 0, nil, err
	}
	if i, plain := expr.AsColumn(bound); plain {
		v, err := realColumn(&read.Cols[i], read.Schema[i].Name, st.at(e), origin)
		return v, i, read.Schema[i].System, err
	}
	var work expr.Work
	batch := read.Batch(0, read.N)
	v, err := bound.Eval(&work, &batch, nil)
	if err != nil {
		return column.Vector{}, 0, nil, problem.At(err, st.at(e))
	}
	v, err = realColumn(&v, axis, st.at(e), origin)
	return ownCopy(v), -1, bind.SystemOf(bound), err
}

func columnNames(schema column.Schema) []string {
	names := make([]string, len(schema))
	for i, f := range schema {
		names[i] = f.Name
	}
	return names
}

// realColumn is a column of numbers as REAL; a REAL one is returned as it is.
func realColumn(v *column.Vector, name string, at problem.Place, origin string) (column.Vector, error) {
	switch v.Type {
	case column.Real:
		return *v, nil
	case column.Integer:
		r := column.New(column.Real, v.Unit, v.N)
		for i, x := range v.I {
			r.F[i] = float64(x)
		}
		r.Valid = v.Valid
		return r, nil
	}
	return *v, notANumber(v, name, at, origin)
}

// decimalComma is a number whose decimal mark is a comma.
var decimalComma = regexp.MustCompile(`^\s*[-+]?[0-9]*,[0-9]+\s*$`)

// notANumber tells which value keeps a coordinate from being a number.
func notANumber(v *column.Vector, name string, at problem.Place, origin string) error {
	p := problem.New("position-type", at, "the coordinate '%s' of %s is %s, not a number", name, origin, v.Type)
	if v.Type != column.Text {
		return p
	}
	for i := 0; i < v.N; i++ {
		value := v.Text(i)
		if _, err := strconv.ParseFloat(strings.TrimSpace(value), 64); err == nil || v.IsNull(i) {
			continue
		}
		if decimalComma.MatchString(value) {
			return p.WithHint("row %d has %s: DECIMAL MARK ',' reads decimal commas", i+1, quoted(value))
		}
		return p.WithHint("row %d has %s; MISSING %s reads it as missing", i+1, quoted(value), quoted(value))
	}
	return p
}

// ownCopy copies a vector of REAL out of scratch memory.
func ownCopy(v column.Vector) column.Vector {
	v.F = append([]float64(nil), v.F...)
	if v.Valid != nil {
		v.Valid = append([]uint64(nil), v.Valid...)
	}
	return v
}

// checkPlaces refuses sites without a whole position.
func checkPlaces(st *statement, t *lang.CreateData, placed *column.Table, id *column.Vector, origin string) error {
	for i := 0; i < placed.N; i++ {
		for k := 0; k < 3; k++ {
			v := &placed.Cols[k]
			if v.IsNull(i) || math.IsNaN(v.F[i]) || math.IsInf(v.F[i], 0) {
				return problem.New("no-place", st.at(t.Name), "the site %s (row %d of %s) has no finite %s coordinate",
					identifierText(id, i), i+1, origin, placed.Schema[k].Name).
					WithHint("give it one, or leave the row out: REFUSED TO for a file, WHERE … IS NOT NULL for a query")
			}
		}
	}
	return nil
}

// length is the unit of the coordinates: said, or in the headings, or metres.
func (c *clauses) length(placed *column.Table) (string, error) {
	unit := ""
	for k := 0; k < 3; k++ {
		u := placed.Schema[k].Unit.String()
		if u == "" {
			continue
		}
		if unit != "" && u != unit {
			return "", problem.New("length-unit", problem.Place{}, "the coordinates come in %s and in %s", unit, u).
				WithHint("bring them to one unit in POSITION (…)")
		}
		unit = u
	}
	switch {
	case c.lengthUnit == "" && unit == "":
		return "m", nil
	case c.lengthUnit == "":
		return unit, nil
	case unit != "" && unit != c.lengthUnit:
		return "", problem.New("length-unit", c.st.at(c.unitAt), "the headings say %s, COORDINATES IN says %s", unit, c.lengthUnit)
	}
	return c.lengthUnit, nil
}

// noteOutside tells at once which sites the solid of the campaign leaves out.
func (s *Session) noteOutside(st *statement, c *clauses, t *column.Table) {
	if len(c.spaces) == 0 {
		return
	}
	what := "the solid"
	if len(c.zones) > 0 {
		what = "all zones"
		c.noteVacant(t)
	}
	var names []string
	for i := 0; i < t.N; i++ {
		if away, out := c.outside(t, i); out {
			names = append(names, fmt.Sprintf("%s (%s %s outside)", identifierText(&t.Cols[0], i), s.number(away), t.Schema[1].Unit))
		}
	}
	if len(names) == 0 {
		return
	}
	if len(names) == t.N {
		st.notes.Add(note.Warning, note.Sites, "all %d sites lie outside %s: are its coordinates in the same unit and frame?", t.N, what)
		return
	}
	verb := "lie"
	if len(names) == 1 {
		verb = "lies"
	}
	st.notes.Add(note.Warning, note.Sites, "%s of %d %s outside %s and will be left out of its partition: %s",
		plural(len(names), "site"), t.N, verb, what, listed(names, 5))
}

// outside tells whether a site lies in none of the campaign's solids, and how far from
// the nearest.
func (c *clauses) outside(t *column.Table, row int) (away float64, out bool) {
	p := r3.Vec{X: t.Cols[1].F[row], Y: t.Cols[2].F[row], Z: t.Cols[3].F[row]}
	away = math.Inf(1)
	for _, space := range c.spaces {
		if space.Solid.Side(p, c.tolerance) != solid.Outside {
			return 0, false
		}
		away = min(away, space.Solid.Distance(p))
	}
	return away, true
}

// noteVacant names zones that no site lies in.
func (c *clauses) noteVacant(t *column.Table) {
	for _, zone := range c.spaces {
		one := clauses{spaces: []relation.Region{zone}, tolerance: c.tolerance}
		vacant := true
		for i := 0; i < t.N && vacant; i++ {
			_, vacant = one.outside(t, i)
		}
		if vacant {
			c.st.notes.Add(note.Warning, note.Sites, "no site lies in the zone %s: its space belongs to nobody", zone.Name)
		}
	}
}
