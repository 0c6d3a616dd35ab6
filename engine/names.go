package engine

import (
	"maps"
	"slices"
	"sort"
	"strings"
	"unicode"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// What a prompt completes from: the names that there are, each from the
// registry or the catalog that the statements themselves look them up in.

// Objects are the names of what the catalog holds of the given kinds (all, if
// none is given), sorted.
func (s *Session) Objects(kinds ...catalog.Kind) []string {
	list, err := s.catalog.List(kinds...)
	if err != nil {
		return nil // whoever uses a damaged catalog is told then
	}
	names := make([]string, 0, len(list))
	for i := range list {
		names = append(names, list[i].Name)
	}
	return names
}

// ValueNames are the names that LET and --let have given values, sorted.
func (s *Session) ValueNames() []string { return slices.Sorted(maps.Keys(s.params)) }

// ColumnsOf lists the columns of a source as it stands behind FROM, costly ones
// too; nil where it means nothing. with is the text of the statement's WITH, or
// empty. Of a relation whose clauses are not finished, the clauses are left out;
// of one that has no rows yet, the columns are those of its sites.
func (s *Session) ColumnsOf(with, source string) column.Schema {
	if schema, ok := s.schemaOf(with, source); ok {
		return schema
	}
	noun, rest, isRelation := cutRelation(source)
	if !isRelation {
		return nil
	}
	operand := firstOperand(rest)
	if schema, ok := s.schemaOf(with, noun+" OF "+operand); ok {
		return schema
	}
	schema, _ := s.schemaOf(with, operand)
	return schema
}

// schemaOf binds SELECT * FROM source and gives the columns of the source.
func (s *Session) schemaOf(with, source string) (column.Schema, bool) {
	text := with + " SELECT * FROM " + source
	query, err := lang.ParseQuery(text)
	if err != nil {
		return nil, false
	}
	st := &statement{source: &problem.Source{Text: text}, folder: ".", notes: &note.Notes{}}
	node, err := bind.Query(s.bindEnv(st), query)
	if err != nil {
		return nil, false
	}
	if _, _, isRelation := cutRelation(source); isRelation {
		if r := findRelation(node); r != nil {
			return r.Bound.Schema(), true
		}
	}
	return node.Schema(), true
}

// cutRelation takes the noun of a relation from the text behind it.
func cutRelation(source string) (noun, rest string, ok bool) {
	fields := strings.Fields(source)
	if len(fields) < 2 || !strings.EqualFold(fields[1], "OF") {
		return "", "", false
	}
	behindNoun := strings.TrimSpace(strings.TrimSpace(source)[len(fields[0]):])
	return fields[0], strings.TrimSpace(behindNoun[len(fields[1]):]), true
}

// firstOperand is the name or the bracket that a text begins with.
func firstOperand(text string) string {
	depth, mark := 0, rune(0)
	for i, r := range text {
		switch {
		case mark != 0:
			if r == mark {
				mark = 0
			}
		case r == '\'' || r == '"':
			mark = r
		case r == '(':
			depth++
		case r == ')':
			if depth--; depth <= 0 {
				return text[:i+1]
			}
		case depth == 0 && unicode.IsSpace(r):
			return text[:i]
		}
	}
	return text
}

// Nouns are the relations that have rows.
func Nouns() []string {
	var names []string
	for _, d := range relation.All() {
		names = append(names, d.Noun)
	}
	return names
}

// ClausesOf are the clauses that a relation takes, "FOR EACH" as two words; nil
// where there is no such relation.
func ClausesOf(noun string) []string {
	d, ok := relation.Lookup(noun)
	if !ok {
		return nil
	}
	return slices.Clone(d.Clauses)
}

// Functions are the names of scalar functions and aggregates, sorted.
func Functions() []string { return function.Names() }

// ListTopics are the words that may follow LIST, sorted.
func ListTopics() []string {
	names := slices.Collect(maps.Keys(lists))
	sort.Strings(names)
	return names
}

// Settings are the words that may follow SET.
func Settings() []string { return settingNames() }

// Statements are the words that begin a statement, in the order of HELP.
func Statements() []string { return lang.StatementWords() }

// ComputedColumns are the names of the columns that relations add to their
// sites' own, sorted.
func ComputedColumns() []string {
	seen := map[string]bool{}
	for _, d := range relation.All() {
		for _, c := range d.Computed {
			seen[c.Name] = true
		}
	}
	return slices.Sorted(maps.Keys(seen))
}
