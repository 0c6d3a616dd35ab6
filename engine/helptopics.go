package engine

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem/catalogue"
	"nearcell/engine/relation"
)

// topic is a page of HELP and the words under which it is found.
type topic struct {
	name    string
	also    []string
	kind    string // "a statement"
	summary string
	there   func() bool // nil: it is there
	write   func(p *page)
}

// topicGroup is a group of topics with a name of its own, in the order of the
// overview.
type topicGroup struct {
	name   string
	also   []string
	intro  string
	topics []topic
	quiet  bool // the overview does not list it
}

func (t topic) isThere() bool { return t.there == nil || t.there() }

// topicGroups are all topics, each made of its registry; the codes of errors are
// the last.
func (s *Session) topicGroups() []topicGroup {
	return []topicGroup{
		{name: "STATEMENTS", also: []string{"STATEMENT", "COMMANDS"}, intro: "The statements; each ends with a semicolon.",
			topics: entryTopics("a statement", statementEntries())},
		{name: "QUERIES", also: []string{"QUERY PARTS"}, intro: "The parts of a query. HELP SELECT shows how they stand together.",
			topics: entryTopics("part of a query", queryEntries())},
		{name: "RELATIONS", also: []string{"RELATION", "GEOMETRY", "NOUNS"},
			intro:  "The geometric relations. They stand after FROM and are made of the sites of a campaign, of a view, or of a (query) that gives id, x, y, z.",
			topics: relationTopics()},
		{name: "CLAUSES", also: []string{"CLAUSE"}, intro: "The clauses of relations, in any order, each at most once. LIST GEOMETRY says which relation takes which.",
			topics: clauseTopics()},
		{name: "FILES", also: []string{"FILE CLAUSES", "READING CLAUSES", "CSV", "IMPORT CLAUSES"},
			intro: "The clauses of CREATE CAMPAIGN and CREATE TABLE, in any order, each at most once. A CSV file needs none if it has commas, decimal points and its heading in the first line; " +
				"the types of its columns are found by looking at every value, and a heading such as temp [°C] gives the unit.",
			topics: entryTopics("a clause of CREATE", readingEntries())},
		{name: "SOLIDS", also: []string{"SOLID FORMS"}, intro: "The forms of solids, behind CREATE SOLID name AS and behind WITHIN.",
			topics: entryTopics("a form of solids", solidEntries())},
		{name: "FUNCTIONS", also: []string{"AGGREGATES", "AGGREGATE FUNCTIONS"}, intro: "The functions of single values, then those of many rows.", topics: functionTopics()},
		{name: "COLUMNS", also: []string{"MEASURES"}, intro: "The columns of the relations.", topics: columnTopics(), quiet: true},
		{name: "GUIDES", also: []string{"GUIDE"}, intro: "Guides to what is no word of a statement.", topics: guideTopics()},
		{name: "SETTINGS", intro: "What SET changes.", topics: s.settingTopics()},
		{name: "COMMAND LINE", also: []string{"OPTIONS", "OPTION", "FLAGS"},
			intro: "How the program is called: nearcell, a command and options.", topics: s.switchTopics(), quiet: len(s.o.CommandLine) == 0},
		{name: "ERRORS", also: []string{"CODES", "CODE"}, intro: "The codes of errors. HELP ERROR explains the last one of the session.", topics: errorTopics(), quiet: true},
	}
}

func entryTopics(kind string, entries []entry) []topic {
	var list []topic
	for _, e := range entries {
		list = append(list, topic{name: e.name, also: e.also, kind: kind, summary: firstSentence(e.meaning), there: e.there,
			write: func(p *page) {
				p.verbatim(e.syntax...)
				p.say(e.meaning)
				for _, m := range e.more {
					p.say(m)
				}
				notYet(p, missing(e.forms))
				forExample(p, e.example)
				seeAlso(p, e.see)
			}})
	}
	return list
}

func forExample(p *page, example string) {
	if example == "" {
		return
	}
	p.say("For example:")
	p.verbatim(example)
}

func notYet(p *page, what []string) {
	if len(what) > 0 {
		p.say("Not there yet: " + strings.Join(what, "; ") + ".")
	}
}

func seeAlso(p *page, names []string) {
	if len(names) > 0 {
		p.say("HELP tells more of " + strings.Join(names, ", ") + ".")
	}
}

func relationTopics() []topic {
	var list []topic
	for _, noun := range relation.Nouns() {
		d, ok := relation.Lookup(noun)
		if !ok {
			row := "One row for each " + relation.PlannedRow(noun) + "."
			list = append(list, topic{name: noun, kind: "a relation", summary: row, there: func() bool { return false },
				write: func(p *page) {
					p.say(row)
					forExample(p, relationExample(noun))
				}})
			continue
		}
		list = append(list, topic{name: noun, also: []string{noun + " OF"}, kind: "a relation", summary: sentence(d.Meaning),
			write: func(p *page) { writeRelation(p, d) }})
	}
	return list
}

// relationExample is a relation's own example, or the first of a clause that shows it.
func relationExample(noun string) string {
	if d, ok := relation.Lookup(noun); ok && d.Example != "" {
		return d.Example
	}
	for _, c := range relation.AllClauses() {
		if strings.Contains(c.Example, " "+noun+" OF ") {
			return c.Example
		}
	}
	return "SELECT * FROM " + noun + " OF hall LIMIT 3;"
}

func writeRelation(p *page, d *relation.Definition) {
	syntax := d.Noun + " OF campaign | view | (query)"
	if d.Over == relation.OverRows {
		syntax = d.Noun + " OF table | view | (query)"
	}
	for _, c := range d.Clauses {
		if clause, ok := relation.LookupClause(c); ok {
			syntax += "\n  [" + clause.Syntax + "]"
		}
	}
	p.verbatim(syntax)
	p.say(sentence(d.Meaning) + " One row for each " + d.RowIs + ".")
	var rows [][]string
	for _, c := range slices.Concat(d.Computed, d.Roles()) {
		rows = append(rows, []string{c.Name, c.Type.String(), relationUnit(c).String(), c.Meaning})
	}
	p.table(rows)
	if d.Own {
		p.say("Beside these it has all columns of " + ownRows[d.Over] + ". A column of theirs with one of these names is read with own_ before it: own_area.")
	}
	later := slices.Concat(d.Later, d.NotYet)
	for _, c := range d.Clauses {
		later = append(later, missing(clauseForms[c])...)
	}
	notYet(p, later)
	forExample(p, relationExample(d.Noun))
}

// ownRows are the rows whose own columns a relation carries.
var ownRows = map[relation.Over]string{relation.OverSites: "the sites", relation.OverRows: "the rows"}

// relationUnit is the unit of a relation's column for coordinates in metres.
func relationUnit(c relation.Column) *column.Unit {
	if c.Power != 0 {
		return column.Symbol("m").Pow(c.Power)
	}
	return c.Unit
}

func clauseTopics() []topic {
	var list []topic
	for _, c := range relation.AllClauses() {
		taking := relation.Taking(c.Name)
		list = append(list, topic{name: c.Name, also: clauseWords(c), kind: "a clause of relations", summary: firstSentence(c.Meaning),
			there: func() bool { return len(taking) > 0 },
			write: func(p *page) {
				p.verbatim(c.Syntax)
				p.say(c.Meaning)
				if len(taking) > 0 {
					p.say("It is taken by " + strings.Join(taking, ", ") + ".")
					notYet(p, missing(clauseForms[c.Name]))
				}
				forExample(p, c.Example)
			}})
	}
	return list
}

// clauseForms are forms of clauses that may be missing while the clause is there.
var clauseForms = map[string][]form{
	"WITHIN": {{"WITHIN (solid, solid)", "SELECT id FROM CELLS OF hall WITHIN (air, BOX (40,0,0) TO (45,5,3));"}},
}

// clauseWords are the capital words of a clause's syntax beside its name: NORMAL
// of THROUGH, EACH and COMMON of UNCERTAINTY.
func clauseWords(c relation.Clause) []string {
	var words []string
	for _, w := range strings.FieldsFunc(c.Syntax, func(r rune) bool { return r < 'A' || r > 'Z' }) {
		if len(w) > 2 && !inClauseName(w) && !slices.Contains(words, w) {
			words = append(words, w)
		}
	}
	return words
}

// inClauseName tells whether a word stands in the name of a clause.
func inClauseName(word string) bool {
	return slices.ContainsFunc(relation.AllClauses(), func(c relation.Clause) bool {
		return slices.Contains(strings.Fields(c.Name), word)
	})
}

func functionTopics() []topic {
	var list []topic
	for _, f := range function.All() {
		list = append(list, topic{name: f.Name, also: f.Aliases, kind: "a function of single values", summary: sentence(f.Meaning),
			write: func(p *page) {
				p.verbatim(f.Signature)
				p.say(sentence(f.Meaning))
				p.say("This is TRUE:")
				p.verbatim(f.Example)
			}})
	}
	for _, f := range function.Aggregates() {
		list = append(list, topic{name: f.Name, kind: "a function of many rows", summary: sentence(f.Meaning),
			write: func(p *page) {
				p.verbatim(f.Signature + " [FILTER (WHERE condition)]" + weightSyntax(f))
				p.say(sentence(f.Meaning))
				forExample(p, "SELECT "+f.Example+" FROM CELLS OF hall;")
			}})
	}
	for _, f := range function.Windows() {
		list = append(list, topic{name: f.Name, kind: "a function of a row among others", summary: sentence(f.Meaning),
			write: func(p *page) {
				p.verbatim(f.Signature)
				p.say(sentence(f.Meaning))
				forExample(p, "SELECT id, "+f.Example+" FROM hall;")
				p.say("OVER says among which rows: HELP OVER.")
			}})
	}
	return list
}

func weightSyntax(f *function.Aggregate) string {
	if f.Weighted {
		return " [WEIGHTED BY weight]"
	}
	return ""
}

func columnTopics() []topic {
	var list []topic
	for _, d := range relation.All() {
		for _, c := range d.Computed {
			unit := relationUnit(c).String()
			if unit != "" {
				unit = " in " + unit + ", if the coordinates are in m"
			}
			list = append(list, topic{name: c.Name, kind: "a column of " + d.Noun + " OF …", summary: sentence(c.Meaning),
				write: func(p *page) { p.say(sentence(c.Meaning) + " It is " + c.Type.String() + unit + ".") }})
		}
	}
	return list
}

func guideTopics() []topic {
	var list []topic
	for _, g := range guides() {
		list = append(list, topic{name: g.name, also: g.also, kind: "a guide", summary: g.summary,
			write: func(p *page) {
				for _, t := range g.text {
					p.say(t)
				}
				forExample(p, g.example)
			}})
	}
	return list
}

func (s *Session) settingTopics() []topic {
	var list []topic
	for _, k := range settings {
		list = append(list, topic{name: k.name, also: []string{"SET " + k.name}, kind: "a setting", summary: k.meaning,
			write: func(p *page) {
				p.verbatim(k.syntax())
				p.say(k.meaning + " It is now " + k.value(s) + ".")
			}})
	}
	return list
}

func (s *Session) switchTopics() []topic {
	var list []topic
	for _, o := range s.o.CommandLine {
		word, _, _ := strings.Cut(o.Name, " ")
		list = append(list, topic{name: o.Name, also: []string{word}, kind: "for the command line", summary: sentence(o.Meaning),
			write: func(p *page) { p.say(sentence(o.Meaning)) }})
	}
	return list
}

func errorTopics() []topic {
	var list []topic
	for _, e := range catalogue.All() {
		list = append(list, topic{name: e.Code, kind: "the code of an error", summary: firstSentence(e.Meaning),
			write: func(p *page) { writeError(p, e) }})
	}
	return list
}

func writeError(p *page, e catalogue.Entry) {
	p.say(e.Meaning)
	p.say(e.WayOut)
	if e.Example == "" {
		return
	}
	p.say("An example of it:")
	p.verbatim(e.Example)
}

// sentence makes a sentence of a meaning as registries hold it.
func sentence(meaning string) string {
	if meaning == "" {
		return ""
	}
	text := meaning
	if first := text[:1]; !startsWithName(text) {
		text = strings.ToUpper(first) + text[1:]
	}
	if !strings.HasSuffix(text, ".") && !strings.HasSuffix(text, "?") {
		text += "."
	}
	return text
}

// startsWithName tells whether the first word is a name that is written small: x.
func startsWithName(text string) bool {
	word, _, _ := strings.Cut(text, " ")
	return len(word) == 1 && word != "a"
}
