package engine

import (
	"fmt"
	"regexp"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/catalog/reader/packed"
	"nearcell/lang"
)

// shape guesses what the columns are: an identifier, a position, units in the
// headings, fields of the preamble.
func (g *fileGuess) shape() {
	t := g.result.Table
	g.unitsInHeadings(t)
	g.preambleFields()
	g.columnsOfLoggers(t)
	if !g.findPosition(t) {
		return
	}
	id, repeated := identifierOf(t)
	switch {
	case repeated != "":
		g.doubts = append(g.doubts, fmt.Sprintf("the same '%s' stands in several rows: they are readings, and make a table", repeated))
		return
	case id == "" && crowded(t, g.position):
		g.doubts = append(g.doubts, "most positions come again in other rows: they are readings, and make a table")
		return
	}
	g.campaign, g.id = true, id
}

// axes are names of coordinates, in lower case and without their unit.
var axes = [3]map[string]bool{
	{"x": true, "east": true, "easting": true},
	{"y": true, "north": true, "northing": true},
	{"z": true, "height": true, "elevation": true, "altitude": true, "up": true, "depth": true},
}

// unitBehind is a unit behind a name: x_km, X (m).
var unitBehind = regexp.MustCompile(`^(.*\S)\s*(?:_(mm|cm|m|km|ft|in)|\(([^()]+)\))$`)

// cutUnit takes the unit off a name; it is empty where there is none.
func cutUnit(name string) (plain, unit string) {
	m := unitBehind.FindStringSubmatch(name)
	if m == nil {
		return name, ""
	}
	if unit = m[2] + m[3]; !csv.KnownUnit(unit) {
		return name, ""
	}
	return m[1], unit
}

// findPosition finds columns of numbers without a gap that are called like the
// coordinates.
func (g *fileGuess) findPosition(t *column.Table) bool {
	found := [3]int{-1, -1, -1}
	gaps := false
	for i, f := range t.Schema {
		if f.Type != column.Real && f.Type != column.Integer || t.N == 0 {
			continue
		}
		plain, unit := cutUnit(f.Name)
		for k := range axes {
			if found[k] < 0 && axes[k][strings.ToLower(plain)] {
				found[k] = i
				gaps = gaps || t.Cols[i].NullCount() > 0
				if f.Unit == nil && unit != "" && strings.HasSuffix(f.Name, "_"+unit) {
					g.length = unit
				}
			}
		}
	}
	for k, i := range found {
		if i < 0 {
			return false
		}
		g.position[k] = lang.QuoteName(t.Schema[i].Name)
		if plain, _ := cutUnit(t.Schema[i].Name); strings.EqualFold(plain, "depth") {
			g.position[k] = "-" + g.position[k]
		}
	}
	if gaps {
		g.doubts = append(g.doubts, "some rows have no whole position: they make a table; a campaign needs one in every row")
	}
	return !gaps
}

// identifierNames are names of columns that identify a site.
var identifierNames = regexp.MustCompile(`(?i)^(id|logger|sensor|site|station|point|probe|serial|name|channel|reading|sample|number|no|nr|instrument|position)([ _]?(id|no|nr|number|name))?$`)

// identifierOf is the column that identifies the rows; repeated is one that is
// called so and does not.
func identifierOf(t *column.Table) (id, repeated string) {
	for i, f := range t.Schema {
		if !identifierNames.MatchString(f.Name) || f.Type != column.Text && f.Type != column.Integer {
			continue
		}
		v := &t.Cols[i]
		seen := map[string]bool{}
		for row := range v.N {
			if !v.IsNull(row) {
				seen[identifierText(v, row)] = true
			}
		}
		switch {
		case len(seen) == t.N:
			return f.Name, ""
		case repeated == "":
			repeated = f.Name
		}
	}
	return "", repeated
}

// crowded reports whether more than half of the rows have the position of another.
func crowded(t *column.Table, position [3]string) bool {
	var cols [3]*column.Vector
	for k := range cols {
		for i, f := range t.Schema {
			if lang.QuoteName(f.Name) == strings.TrimPrefix(position[k], "-") {
				cols[k] = &t.Cols[i]
			}
		}
	}
	places := map[string]bool{}
	for row := range t.N {
		places[cols[0].Value(row).String()+" "+cols[1].Value(row).String()+" "+cols[2].Value(row).String()] = true
	}
	return 2*len(places) < t.N
}

// unitsInHeadings finds names such as Temp (°C), whose unit is not read by itself.
func (g *fileGuess) unitsInHeadings(t *column.Table) {
	for i, f := range t.Schema {
		numbers := f.Type == column.Real || f.Type == column.Integer
		plain, unit := cutUnit(f.Name)
		if numbers && t.Cols[i].Unit == nil && unit != "" && plain+"_"+unit != f.Name {
			g.units = append(g.units, reader.ColumnUnit{Column: f.Name, Unit: column.ParseUnit(unit)})
		}
	}
}

// numbered is a name such as L01.
var numbered = regexp.MustCompile(`^(.*?)[0-9]+$`)

// columnsOfLoggers tells of columns that hold one logger each.
func (g *fileGuess) columnsOfLoggers(t *column.Table) {
	byStem := map[string][]string{}
	for _, f := range t.Schema {
		m := numbered.FindStringSubmatch(f.Name)
		if m == nil || f.Type != column.Real && f.Type != column.Integer {
			continue
		}
		names := append(byStem[m[1]], lang.QuoteName(f.Name))
		if byStem[m[1]] = names; len(names) == 3 {
			g.doubts = append(g.doubts, fmt.Sprintf("columns such as %s may be one logger each: UNPIVOT (value FOR logger IN (%s, …)) makes a row of every reading",
				names[0], strings.Join(names, ", ")))
		}
	}
}

// preambleKey is a key of the preamble that may tell instruments apart.
var preambleKey = regexp.MustCompile(`(?i)^"?((?:[\p{L}/. -]*\b)?(?:serial|s/n|logger|device|sensor|station|probe|instrument|site)\b[\p{L}/. -]{0,20}:)`)

// maxPreamble is how many fields of the preamble are offered.
const maxPreamble = 3

// preambleFields offers columns for the serial number and the like.
func (g *fileGuess) preambleFields() {
	all := strings.Join(g.layout.Preamble, "\n")
	taken := map[string]bool{}
	for _, f := range g.result.Table.Schema {
		taken[strings.ToLower(f.Name)] = true
	}
	for _, line := range g.layout.Preamble {
		m := preambleKey.FindStringSubmatch(line)
		if m == nil || strings.Count(all, m[1]) != 1 || len(g.o.Preamble) == maxPreamble {
			continue
		}
		name := plainName(strings.TrimSuffix(m[1], ":"))
		if taken[name] {
			continue
		}
		taken[name] = true
		g.o.Preamble = append(g.o.Preamble, reader.PreambleField{Column: name, After: m[1]})
	}
}

// statement writes CREATE with the clauses that the guess found.
func (g *fileGuess) statement() string {
	var lines []string
	add := func(format string, args ...any) { lines = append(lines, fmt.Sprintf(format, args...)) }
	kind := "TABLE"
	if g.campaign {
		kind = "CAMPAIGN"
	}
	add("CREATE %s %s FROM %s", kind, lang.QuoteName(g.name), lang.QuoteText(g.file))
	if g.campaign {
		if g.id != "" {
			add("ID %s", lang.QuoteName(g.id))
		}
		add("POSITION (%s, %s, %s)", g.position[0], g.position[1], g.position[2])
		if g.length != "" {
			add("COORDINATES IN %s", g.length)
		}
	}
	if g.form == asBook && len(g.result.Facts.Sheets) > 0 {
		add("SHEET %s", lang.QuoteText(g.result.Facts.Sheet))
	}
	if !g.layout.First {
		add("HEADING AT LINE %d", g.layout.Heading)
	}
	if g.layout.Encoding != "" {
		add("ENCODING %s", lang.QuoteText(string(g.layout.Encoding)))
	}
	if d := g.layout.Delimiter; d != ',' || g.layout.Unclear {
		add("DELIMITER %s", strings.ReplaceAll(lang.QuoteText(string(d)), "\t", `\t`))
	}
	if g.layout.DecimalMark == ',' {
		add("DECIMAL MARK ','")
	}
	lines = append(lines, g.listClauses()...)
	if g.refused > 0 {
		stem, _ := packed.Ending(g.file)
		if i := strings.LastIndexByte(stem, '.'); i > strings.LastIndexAny(stem, `/\`)+1 {
			stem = stem[:i]
		}
		ending := "-refused.csv"
		if g.form == asJSON {
			ending = "-refused.jsonl"
		}
		add("REFUSED TO %s", lang.QuoteText(stem+ending))
	}
	return strings.Join(lines, "\n  ") + ";"
}

// listClauses are the clauses with lists.
func (g *fileGuess) listClauses() []string {
	var lines []string
	list := func(word string, n int, item func(i int) string) {
		var items []string
		for i := range n {
			items = append(items, item(i))
		}
		if n > 0 {
			lines = append(lines, word+" ("+strings.Join(items, ", ")+")")
		}
	}
	list("MISSING", len(g.o.Missing), func(i int) string { return lang.QuoteText(g.o.Missing[i]) })
	list("PREAMBLE", len(g.o.Preamble), func(i int) string {
		return lang.QuoteName(g.o.Preamble[i].Column) + " AFTER " + lang.QuoteText(g.o.Preamble[i].After)
	})
	list("TIME", len(g.o.Times), func(i int) string {
		return lang.QuoteName(g.o.Times[i].Column) + " " + lang.QuoteText(g.o.Times[i].Form.String())
	})
	list("CENSORED", len(g.o.Censored), func(i int) string { return lang.QuoteName(g.o.Censored[i]) })
	list("UNITS", len(g.units), func(i int) string {
		return lang.QuoteName(g.units[i].Column) + " " + lang.QuoteText(g.units[i].Unit.String())
	})
	return lines
}
