package bind

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// scope is what names of columns may mean: the columns of the sources of one
// SELECT, in the order of the plan below.
type scope struct {
	sources []scopeSource
	columns []scopeColumn
}

// scopeSource is one source of FROM.
type scopeSource struct {
	alias  string   // what qualifies its columns; "" where it has no name
	what   string   // for messages: "CELLS OF hall"
	notYet []string // columns that the language promises and the engine lacks
}

// scopeColumn is one column.
type scopeColumn struct {
	column.Field
	source int
	merged bool // a copy of a column of USING: only seen when qualified
	costly bool // left out of *
}

// newScope is the scope of a single source.
func newScope(alias, what string, fields column.Schema) *scope {
	s := &scope{sources: []scopeSource{{alias: alias, what: what}}}
	for _, f := range fields {
		s.columns = append(s.columns, scopeColumn{Field: f})
	}
	return s
}

// beside is the scope of a join.
func (s *scope) beside(t *scope) *scope {
	j := &scope{sources: slices.Concat(s.sources, t.sources), columns: slices.Clone(s.columns)}
	for _, c := range t.columns {
		c.source += len(s.sources)
		j.columns = append(j.columns, c)
	}
	return j
}

// what names the sources for messages.
func (s *scope) what() string {
	names := make([]string, len(s.sources))
	for i, t := range s.sources {
		names[i] = t.what
	}
	return strings.Join(names, " or ")
}

// label is a column's name with its source: s.id.
func (s *scope) label(i int) string {
	c := s.columns[i]
	if alias := s.sources[c.source].alias; alias != "" {
		return alias + "." + c.Name
	}
	return c.Name
}

// find lists the columns that a name may mean.
func (s *scope) find(b *binder, q, name lang.Name) ([]int, error) {
	source := -1
	if !q.IsZero() {
		for i, t := range s.sources {
			if t.alias != "" && q.Matches(t.alias) {
				source = i
			}
		}
		if source < 0 {
			return nil, s.noSource(b, q)
		}
	}
	var hits []int
	for i, c := range s.columns {
		if name.Matches(c.Name) && (source == c.source || source < 0 && !c.merged) {
			hits = append(hits, i)
		}
	}
	return s.exactCase(hits, name), nil
}

// exactCase prefers, among columns of one source that differ only in case, the
// one that is spelt as written.
func (s *scope) exactCase(hits []int, name lang.Name) []int {
	if len(hits) < 2 {
		return hits
	}
	var exact []int
	for _, i := range hits {
		if s.columns[i].source != s.columns[hits[0]].source {
			return hits
		}
		if s.columns[i].Name == name.Text {
			exact = append(exact, i)
		}
	}
	if len(exact) == 1 {
		return exact
	}
	return hits
}

// resolve is the one column that a name means.
func (s *scope) resolve(b *binder, c *lang.Column) (int, error) {
	hits, err := s.find(b, c.Qualifier, c.Name)
	if err != nil {
		return 0, err
	}
	switch len(hits) {
	case 1:
		return hits[0], nil
	case 0:
		return 0, s.noColumn(b, c)
	}
	return 0, s.ambiguous(b, c, hits)
}

func (s *scope) ambiguous(b *binder, c *lang.Column, hits []int) error {
	labels := make([]string, len(hits))
	same := true
	for i, h := range hits {
		labels[i] = s.label(h)
		same = same && labels[i] == labels[0]
	}
	p := problem.New("ambiguous", b.at(c), "'%s' may be any of %d columns", c.Name.Text, len(hits))
	if !same {
		return p.WithHint("write %s", strings.Join(labels, " or "))
	}
	sources := make([]string, len(hits))
	for i, h := range hits {
		sources[i] = s.sources[s.columns[h].source].what
	}
	sources = slices.Compact(sources)
	if len(sources) > 1 {
		return p.WithHint("give %s names with AS to tell them apart", strings.Join(sources, " and "))
	}
	return p.WithHint("%s gives several columns of that name: give them different ones with AS", sources[0])
}

func (s *scope) noSource(b *binder, q lang.Name) error {
	var aliases []string
	nameless := ""
	for _, t := range s.sources {
		if t.alias != "" {
			aliases = append(aliases, t.alias)
		} else {
			nameless = t.what
		}
	}
	p := problem.New("no-source", b.at(&q), "no source here is called '%s'", q.Text)
	didYouMean(p, q.Text, aliases)
	switch {
	case p.Hint != "":
	case nameless != "":
		p.WithHint("give it a name: %s AS %s", nameless, q.Text)
	case len(aliases) > 0:
		p.WithHint("there is %s", strings.Join(aliases, ", "))
	}
	return p
}

func (s *scope) noColumn(b *binder, c *lang.Column) error {
	what, names := s.what(), []string(nil)
	for _, x := range s.columns {
		if x.Name == "" {
			continue
		}
		if t := s.sources[x.source]; c.Qualifier.IsZero() || c.Qualifier.Matches(t.alias) {
			names = append(names, x.Name)
			if !c.Qualifier.IsZero() {
				what = t.what
			}
		}
	}
	for _, t := range s.sources {
		for _, n := range t.notYet {
			if c.Name.Matches(n) {
				return b.notYet(c, "the column '"+n+"' of "+t.what)
			}
		}
	}
	p := problem.New("no-column", b.at(&c.Name), "there is no column '%s' in %s", c.Name.Text, what)
	if len(s.sources) == 0 {
		p.Message = "'" + c.Name.Text + "' is a column, but there are no columns here"
		if !c.Name.Quoted && !b.hasParam(c.Name.Text) {
			return p.WithHint("FROM says where it comes from")
		}
	}
	didYouMean(p, c.Name.Text, names)
	switch {
	case p.Hint != "":
	case c.Name.Quoted:
		p.WithHint("a text stands between single quotes: '%s'", c.Name.Text)
	case b.env.Params != nil && c.Qualifier.IsZero() && b.hasParam(c.Name.Text):
		p.WithHint("the value set by LET is written :%s", c.Name.Text)
	default:
		p.Hint = elsewhere(c.Name.Text, what, names)
	}
	return p
}

func (b *binder) hasParam(name string) bool {
	_, ok := b.env.Params[lang.Fold(name)]
	return ok
}

// renamed is a scope under an alias and, where given, new column names.
func (s *scope) renamed(b *binder, a *lang.Aliased) (*scope, error) {
	t := &scope{columns: slices.Clone(s.columns), sources: slices.Clone(s.sources)}
	if !a.Alias.IsZero() {
		what, notYet := s.what(), []string(nil)
		if what == queryName {
			what = a.Alias.Text
		}
		for _, x := range s.sources {
			notYet = append(notYet, x.notYet...)
		}
		t.sources = []scopeSource{{alias: a.Alias.Text, what: what, notYet: notYet}}
		for i := range t.columns {
			t.columns[i].source = 0
			if t.columns[i].merged {
				t.columns[i].Name = "" // under its source alone, which has no name any more
			}
		}
	}
	if len(a.Columns) == 0 {
		return t, nil
	}
	return t, t.rename(b, a.Columns)
}

// rename gives the visible columns new names.
func (s *scope) rename(b *binder, names []lang.Name) error {
	var visible []int
	for i, c := range s.columns {
		if !c.merged {
			visible = append(visible, i)
		}
	}
	if len(names) != len(visible) {
		return problem.New("column-names", b.spanning(&names[0], &names[len(names)-1]), "%s for the %s of %s",
			count(len(names), "name"), count(len(visible), "column"), s.what())
	}
	for i, n := range names {
		s.columns[visible[i]].Name = n.Text
	}
	return nil
}
