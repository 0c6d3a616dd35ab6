package engine

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/engine/bind"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// clauses are the reading clauses of a CREATE statement after their values
// have been looked at.
type clauses struct {
	s           *Session
	st          *statement
	kind        catalog.Kind
	id          *lang.IDReading
	position    *lang.PositionReading
	units       *lang.UnitsReading
	name        lang.Name        // of what is made
	within      string           // canonical text of the solid
	solids      []catalog.Object // solids from files, which are kept under names of their own
	zones       []string         // canonical texts of the solids of WITHIN (a, b)
	spaces      []relation.Region
	withinAt    *lang.WithinClause
	lengthUnit  string
	unitAt      lang.Node
	duplicates  string
	tolerance   float64
	stretched   [3]float64
	system      string   // catalog.Object.System
	placedNotes []string // how positions came about
	file        reader.Options
	fileClause  lang.Node   // one of the clauses that only a file can have
	fileClauses []lang.Node // all of them
	refusedTo   *lang.Text
	times       *lang.TimeReading
	unpivot     *lang.UnpivotReading
	censored    *lang.CensoredReading
}

// readClauses looks at every clause; what belongs to a later day is refused by name.
func (s *Session) readClauses(st *statement, t *lang.CreateData) (*clauses, error) {
	c := &clauses{s: s, st: st, kind: kindOf(t.Kind), name: t.Name}
	for _, r := range t.Readings {
		if err := c.read(r); err != nil {
			return nil, err
		}
	}
	if c.units != nil {
		for _, u := range c.units.Units {
			c.file.Units = append(c.file.Units, reader.ColumnUnit{Column: u.Column.Text, Unit: column.ParseUnit(u.Unit.Value)})
		}
	}
	if c.file.DecimalMark != 0 && c.file.DecimalMark == c.file.Delimiter {
		return nil, problem.New("clause", st.at(c.fileClause), "the decimal mark and the delimiter are the same character")
	}
	return c, nil
}

func (c *clauses) read(r lang.Reading) (err error) {
	if err := c.belongs(r); err != nil {
		return err
	}
	switch r := r.(type) {
	case *lang.IDReading:
		c.id = r
	case *lang.PositionReading:
		c.position = r
	case *lang.UnitsReading:
		c.units = r
	case *lang.CoordinatesReading:
		c.unitAt = r
		c.lengthUnit = r.Word.Text
		if r.Text != nil {
			c.lengthUnit = r.Text.Value
		}
	case *lang.WithinClause:
		c.withinAt = r
		err = c.readWithin(r)
	case *lang.StretchedClause:
		c.stretched, err = bind.Stretch(c.s.bindEnv(c.st), r)
	case *lang.DuplicatesReading:
		c.duplicates = string(r.Policy)
	case *lang.ToleranceReading:
		c.tolerance, err = c.toleranceOf(r)
	default:
		return c.readFile(r)
	}
	return err
}

// belongs refuses a clause of campaigns on a table.
func (c *clauses) belongs(r lang.Reading) error {
	if c.kind == catalog.Campaign {
		return nil
	}
	name := ""
	switch r.(type) {
	case *lang.IDReading:
		name = "ID"
	case *lang.CoordinatesReading:
		name = "COORDINATES IN"
	case *lang.WithinClause:
		name = "WITHIN"
	case *lang.StretchedClause:
		name = "STRETCHED"
	case *lang.DuplicatesReading:
		name = "DUPLICATES"
	case *lang.ToleranceReading:
		name = "TOLERANCE"
	}
	if name == "" {
		return nil
	}
	return problem.New("clause", c.st.at(r), "%s belongs to a campaign, and this is a table", name).
		WithHint("CREATE CAMPAIGN makes a set of sites")
}

// readFile reads the clauses that say how a file is written.
func (c *clauses) readFile(r lang.Reading) (err error) {
	c.fileClause, c.fileClauses = r, append(c.fileClauses, r)
	switch r := r.(type) {
	case *lang.DelimiterReading:
		c.file.Delimiter, err = c.oneCharacter(r.Text, "DELIMITER")
	case *lang.DecimalMarkReading:
		c.file.DecimalMark, err = c.oneCharacter(r.Text, "DECIMAL MARK")
		if err == nil && c.file.DecimalMark != '.' && c.file.DecimalMark != ',' {
			err = problem.New("clause", c.st.at(r.Text), "the decimal mark is '.' or ','")
		}
	case *lang.MissingReading:
		for _, m := range r.Marks {
			c.file.Missing = append(c.file.Missing, m.Value)
		}
	case *lang.RefusedReading:
		c.refusedTo = r.File
	case *lang.HeadingReading:
		c.file.Heading, err = c.wholeNumber(r.Line, "HEADING AT LINE", 1, math.MaxInt32)
	case *lang.SheetReading:
		if c.file.Sheet = r.Text.Value; c.file.Sheet == "" {
			err = problem.New("clause", c.st.at(r.Text), "SHEET is the name of a sheet, or its number such as '2'")
		}
	case *lang.EncodingReading:
		err = c.readEncoding(r)
	case *lang.TimeReading:
		err = c.readTimes(r)
	case *lang.PreambleReading:
		err = c.readPreamble(r)
	case *lang.CensoredReading:
		c.censored = r
	case *lang.UnpivotReading:
		c.unpivot = r
	default:
		err = problem.NotThereYet(c.st.at(r), "this clause")
	}
	return err
}

// refuseFileClauses is for CREATE … AS (query), which reads no file.
func (c *clauses) refuseFileClauses() error {
	if c.fileClause == nil {
		return nil
	}
	return problem.New("clause", c.st.at(c.fileClause), "%s says how a file is read, and AS (query) reads none", clauseWord(c.fileClause))
}

// clauseWord is how a clause of a file begins.
func clauseWord(n lang.Node) string {
	text := lang.Print(n)
	word, _, _ := strings.Cut(text, " ")
	return word
}

// readWithin makes the solid of the campaign, or its zones, to see that they can be.
func (c *clauses) readWithin(r *lang.WithinClause) error {
	var texts []string
	for _, tree := range r.Solids {
		kept, text, err := c.s.solid(c.st, tree)
		if err != nil {
			return err
		}
		if kept.Table != nil {
			if text, err = c.named(tree, kept, text); err != nil {
				return err
			}
		}
		texts = append(texts, text)
		c.spaces = append(c.spaces, relation.Region{Name: text, Solid: kept.Body})
	}
	if !r.Zones {
		c.within = texts[0]
		return nil
	}
	c.zones = texts
	var err error
	c.spaces, err = bind.Zones(c.s.bindEnv(c.st), r.Solids)
	return err
}

func (c *clauses) toleranceOf(r *lang.ToleranceReading) (float64, error) {
	v, err := c.s.constant(c.st, r.Value)
	if err != nil {
		return 0, err
	}
	f, ok := asFloat(v)
	if !ok || f < 0 || math.IsInf(f, 0) {
		return 0, problem.New("clause", c.st.at(r.Value), "TOLERANCE is a length of 0 or more")
	}
	return f, nil
}

func (c *clauses) oneCharacter(t *lang.Text, clause string) (rune, error) {
	value := t.Value
	if value == `\t` {
		value = "\t"
	}
	r, size := utf8.DecodeRuneInString(value)
	if size == 0 || size != len(value) || r == utf8.RuneError || r == '"' || r == '\n' || r == '\r' {
		return 0, problem.New("clause", c.st.at(t), "%s is a single character, such as ';' (or '\\t' for a tab)", clause)
	}
	return r, nil
}

func (c *clauses) wholeNumber(e lang.Expr, clause string, least, most int64) (int, error) {
	v, err := c.s.constant(c.st, e)
	if err != nil {
		return 0, err
	}
	if v.Null || v.Type != column.Integer || v.I < least || v.I > most {
		return 0, problem.New("clause", c.st.at(e), "%s is a whole number of %d or more", clause, least)
	}
	return int(v.I), nil
}

// asFloat is a number as float64.
func asFloat(v column.Value) (f float64, ok bool) {
	switch {
	case v.Null:
		return 0, false
	case v.Type == column.Integer:
		return float64(v.I), true
	}
	return v.F, v.Type == column.Real
}

// applyUnits puts the units of UNITS (…) on the columns of a table.
func (c *clauses) applyUnits(table *column.Table, origin string) (*column.Table, error) {
	if c.units == nil {
		return table, nil
	}
	schema := append(column.Schema(nil), table.Schema...)
	cols := append([]column.Vector(nil), table.Cols...)
	for _, u := range c.units.Units {
		if c.unpivots(u.Column) {
			continue // the reader has given it its unit before it became rows
		}
		i, err := findColumn(schema, u.Column, c.st.at(u.Column), origin)
		if err != nil {
			return nil, err
		}
		unit := column.ParseUnit(u.Unit.Value)
		schema[i].Unit, cols[i].Unit = unit, unit
	}
	return &column.Table{Schema: schema, Cols: cols, N: table.N}, nil
}

// unpivots reports whether a column became rows.
func (c *clauses) unpivots(name lang.Name) bool {
	if c.unpivot == nil {
		return false
	}
	for _, n := range c.unpivot.Columns {
		if name.Matches(n.Text) {
			return true
		}
	}
	return false
}

// findColumn is the column that a name means.
func findColumn(schema column.Schema, name lang.Name, at problem.Place, origin string) (int, error) {
	names := make([]string, len(schema))
	for i, f := range schema {
		if name.Matches(f.Name) {
			return i, nil
		}
		names[i] = f.Name
	}
	p := problem.New("no-column", at, "there is no column '%s' in %s", name.Text, origin)
	if near := lang.Nearest(name.Text, names); near != "" {
		return 0, p.WithHint("did you mean '%s'?", near)
	}
	return 0, p.WithHint("it has %s", listed(names, 12))
}

// listed writes names as a list, cut after a number of them.
func listed(names []string, most int) string {
	text := ""
	for i, n := range names {
		if i == most {
			return fmt.Sprintf("%s and %d more", text, len(names)-most)
		}
		if i > 0 {
			text += ", "
		}
		text += n
	}
	if text == "" {
		return "none"
	}
	return text
}
