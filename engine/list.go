package engine

import (
	"maps"
	"slices"
	"sort"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// lists are the things that LIST knows.
var lists = map[string]func(*Session) (*column.Table, error){
	"CAMPAIGNS": (*Session).listCampaigns,
	"TABLES":    (*Session).listTables,
	"SOLIDS":    listTexts(catalog.Solid),
	"VIEWS":     listTexts(catalog.View),
	"FRAMES":    (*Session).listFrames,
	"GEOMETRY":  (*Session).listGeometry,
	"DIAGRAMS":  (*Session).listDiagrams,
	"FUNCTIONS": (*Session).listFunctions,
	"VALUES":    (*Session).listValues,
}

func (s *Session) list(st *statement, t *lang.List) error {
	word := strings.ToUpper(t.What.Text)
	table, ok := lists[word]
	if !ok {
		names := slices.Sorted(maps.Keys(lists))
		p := problem.New("list", st.at(t.What), "LIST does not know '%s'", t.What.Text)
		if near := lang.Nearest(word, names); near != "" {
			return p.WithHint("did you mean %s?", near)
		}
		return p.WithHint("it lists %s", listed(names, 20))
	}
	rows, err := table(s)
	if err != nil {
		return err
	}
	return s.showTable(st, rows)
}

// rows builds a small table of texts and numbers, row by row.
type rows struct {
	schema   column.Schema
	builders []*column.Builder
}

func newRows(schema ...column.Field) *rows {
	r := &rows{schema: schema}
	for _, f := range schema {
		r.builders = append(r.builders, column.NewBuilder(f.Type, f.Unit))
	}
	return r
}

func text(name string) column.Field  { return column.Field{Name: name, Type: column.Text} }
func whole(name string) column.Field { return column.Field{Name: name, Type: column.Integer} }

func realField(name string, unit *column.Unit) column.Field {
	return column.Field{Name: name, Type: column.Real, Unit: unit}
}

func (r *rows) add(values ...column.Value) {
	for i, v := range values {
		r.builders[i].Append(v)
	}
}

func (r *rows) table() *column.Table {
	t := &column.Table{Schema: r.schema}
	for _, b := range r.builders {
		t.N = b.Len()
		t.Cols = append(t.Cols, b.Finish())
	}
	return t
}

// maybe is a text, or NULL where there is nothing to say.
func maybe(s string) column.Value {
	if s == "" {
		return column.NullOf(column.Text)
	}
	return column.String(s)
}

func sourceText(o *catalog.Object) string {
	var names []string
	for _, f := range o.Sources {
		names = append(names, f.Path)
	}
	if n := len(names); n > 3 {
		return names[0] + " … " + names[n-1] + " (" + plural(n, "file") + ")"
	}
	return strings.Join(names, ", ")
}

func (s *Session) listCampaigns() (*column.Table, error) {
	objects, err := s.catalog.List(catalog.Campaign)
	if err != nil {
		return nil, err
	}
	r := newRows(text("campaign"), whole("sites"), text("within"), text("duplicates"),
		column.Field{Name: "tolerance", Type: column.Real}, text("coordinates"), text("from"))
	for i := range objects {
		o := &objects[i]
		r.add(column.String(o.Name), column.Int(int64(o.Rows)), maybe(withinOf(o)),
			column.String(duplicatesOf(o)), column.Float(o.Options.Tolerance),
			column.String(lengthUnitOf(o)), maybe(sourceText(o)))
	}
	return r.table(), nil
}

// withinOf is the solid of a campaign, or its zones, as WITHIN writes them.
func withinOf(o *catalog.Object) string {
	if len(o.Options.Zones) > 0 {
		return "(" + strings.Join(o.Options.Zones, ", ") + ")"
	}
	return o.Options.Within
}

func duplicatesOf(o *catalog.Object) string {
	if o.Options.Duplicates == "" {
		return string(lang.DuplicatesSplit)
	}
	return o.Options.Duplicates
}

func lengthUnitOf(o *catalog.Object) string {
	if o.Options.LengthUnit == "" {
		return "m"
	}
	return o.Options.LengthUnit
}

func (s *Session) listTables() (*column.Table, error) {
	objects, err := s.catalog.List(catalog.Table)
	if err != nil {
		return nil, err
	}
	r := newRows(text("table"), whole("rows"), text("from"))
	for i := range objects {
		r.add(column.String(objects[i].Name), column.Int(int64(objects[i].Rows)), maybe(sourceText(&objects[i])))
	}
	return r.table(), nil
}

// listTexts lists what is kept as a text: solids and views.
func listTexts(kind catalog.Kind) func(*Session) (*column.Table, error) {
	return func(s *Session) (*column.Table, error) {
		objects, err := s.catalog.List(kind)
		if err != nil {
			return nil, err
		}
		r := newRows(text(strings.ToLower(kind.String())), text("as"))
		for i := range objects {
			r.add(column.String(objects[i].Name), column.String(objects[i].Text))
		}
		return r.table(), nil
	}
}

func (s *Session) listGeometry() (*column.Table, error) {
	r := newRows(text("relation"), text("one_row_for_each"), text("meaning"), text("clauses"))
	for _, d := range relation.All() {
		r.add(column.String(d.Noun), column.String(d.RowIs), column.String(d.Meaning),
			maybe(strings.Join(d.Clauses, ", ")))
	}
	return r.table(), nil
}

func (s *Session) listFunctions() (*column.Table, error) {
	r := newRows(text("function"), text("kind"), text("signature"), text("meaning"))
	for _, f := range function.All() {
		r.add(column.String(f.Name), column.String("scalar"), column.String(f.Signature), column.String(f.Meaning))
	}
	for _, f := range function.Aggregates() {
		r.add(column.String(f.Name), column.String("aggregate"), column.String(f.Signature), column.String(f.Meaning))
	}
	for _, f := range function.Windows() {
		r.add(column.String(f.Name), column.String("window"), column.String(f.Signature), column.String(f.Meaning))
	}
	return r.table(), nil
}

func (s *Session) listValues() (*column.Table, error) {
	names := make([]string, 0, len(s.params))
	for n := range s.params {
		names = append(names, n)
	}
	sort.Strings(names)
	r := newRows(text("name"), text("type"), text("value"))
	for _, n := range names {
		v := s.params[n]
		r.add(column.String(n), column.String(v.Type.String()), maybe(v.String()))
	}
	return r.table(), nil
}
