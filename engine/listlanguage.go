package engine

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/problem/catalogue"
	"nearcell/engine/relation"
)

// The lists of the language itself. They ask the program what is there, and so
// would be part of what they are initialised from: init puts them in.
func init() {
	lists["STATEMENTS"] = (*Session).listStatements
	lists["CLAUSES"] = (*Session).listClauses
	lists["SETTINGS"] = (*Session).listSettings
	lists["ERRORS"] = (*Session).listErrors
}

// listMeanings says what the words behind LIST show, for HELP.
var listMeanings = map[string]string{
	"CAMPAIGNS":  "the campaigns of the catalog, with their solids and policies",
	"TABLES":     "the tables of the catalog and the files that they came from",
	"SOLIDS":     "the solids of the catalog and how they are made",
	"VIEWS":      "the views of the catalog and their queries",
	"FRAMES":     "the frames of the catalog",
	"DIAGRAMS":   "the diagrams that are kept",
	"GEOMETRY":   "the geometric relations and the clauses that each takes",
	"FUNCTIONS":  "the functions of single rows and of many",
	"VALUES":     "the values that LET and --let have set",
	"STATEMENTS": "the statements and how they are written",
	"CLAUSES":    "the clauses of relations and the relations that take them",
	"SETTINGS":   "what SET changes, with the values of now",
	"ERRORS":     "the codes of errors, with their meanings and ways out",
}

// listTopicNames are the lists as they are typed.
func listTopicNames() []string {
	var names []string
	for _, word := range ListTopics() {
		names = append(names, "LIST "+word)
	}
	return names
}

// listLines are the words behind LIST, each with what it shows.
func listLines() []string {
	var lines []string
	for _, word := range ListTopics() {
		lines = append(lines, "LIST "+word+": "+listMeanings[word]+".")
	}
	return lines
}

// here is how lists say whether a thing is there.
func here(there bool) column.Value {
	if there {
		return column.String("yes")
	}
	return column.String("not yet")
}

func (s *Session) listStatements() (*column.Table, error) {
	r := newRows(text("statement"), text("there"), text("written"), text("meaning"))
	for _, e := range statementEntries() {
		r.add(column.String(e.name), here(e.there()), column.String(strings.Join(e.syntax, " ")), column.String(e.meaning))
	}
	return r.table(), nil
}

func (s *Session) listClauses() (*column.Table, error) {
	r := newRows(text("clause"), text("taken_by"), text("written"), text("meaning"))
	for _, c := range relation.AllClauses() {
		taken := maybe(strings.Join(relation.Taking(c.Name), ", "))
		r.add(column.String(c.Name), taken, column.String(c.Syntax), column.String(c.Meaning))
	}
	return r.table(), nil
}

func (s *Session) listSettings() (*column.Table, error) {
	r := newRows(text("setting"), text("value"), text("meaning"))
	for _, k := range settings {
		r.add(column.String(k.name), column.String(k.value(s)), column.String(k.meaning))
	}
	return r.table(), nil
}

func (s *Session) listErrors() (*column.Table, error) {
	r := newRows(text("code"), text("meaning"), text("way_out"))
	for _, e := range catalogue.All() {
		r.add(column.String(e.Code), column.String(e.Meaning), column.String(e.WayOut))
	}
	return r.table(), nil
}
