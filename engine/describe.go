package engine

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// describe tells of a thing of the catalog, or of a relation.
func (s *Session) describe(st *statement, t *lang.Describe) error {
	if t.Operand != nil {
		return s.describeRelationOf(st, t)
	}
	object, err := s.catalog.Get(t.Name.Key())
	if err == nil {
		return s.describeObject(st, t, object)
	}
	var none *catalog.ErrNoSuch
	if !errors.As(err, &none) {
		return catalogProblem(err, st.at(t.Name))
	}
	if d, ok := relation.Lookup(t.Name.Text); ok && !t.Name.Quoted {
		return s.showTable(st, relationColumns(d))
	}
	if t.Name.Is(verdictsName) {
		return s.showTable(st, schemaTable(s.verdictTable().Schema, nil))
	}
	if noun, ok := relation.Planned(t.Name.Text); ok {
		return problem.NotThereYet(st.at(t.Name), noun+" OF …")
	}
	return s.nothingToDescribe(st, t)
}

func (s *Session) nothingToDescribe(st *statement, t *lang.Describe) error {
	p := problem.New("no-object", st.at(t.Name), "there is nothing called '%s'", t.Name.Text)
	objects, err := s.catalog.List()
	if err != nil {
		return p
	}
	names := relation.Nouns()
	for _, o := range objects {
		names = append(names, o.Name)
	}
	if near := lang.Nearest(t.Name.Text, names); near != "" {
		return p.WithHint("did you mean '%s'?", near)
	}
	if s.writeTopic(&page{}, t.Name.Text) {
		return p.WithHint("HELP %s tells of the word of the language", strings.ToUpper(t.Name.Text))
	}
	return p.WithHint("LIST CAMPAIGNS, TABLES, SOLIDS, VIEWS and GEOMETRY show what there is")
}

func (s *Session) describeObject(st *statement, t *lang.Describe, o *catalog.Object) error {
	switch o.Kind {
	case catalog.Solid:
		return s.describeSolid(st, t, o)
	case catalog.Frame:
		return s.describeFrame(st, t)
	case catalog.View:
		q := &lang.Query{Body: &lang.Select{
			Items: []*lang.Item{{Star: true}},
			From:  []lang.Source{&lang.NameSource{Name: t.Name}},
		}}
		node, err := bind.Query(s.bindEnv(st), q)
		if err != nil {
			return err
		}
		st.notes.Add(note.Note, note.Output, "the view is %s", o.Text)
		return s.showTable(st, schemaTable(node.Schema(), nil))
	}
	s.describeOrigin(st, o)
	return s.showTable(st, schemaTable(o.Table.Schema, o.Table))
}

// describeOrigin says where the data came from and what the import met.
func (s *Session) describeOrigin(st *statement, o *catalog.Object) {
	thing := "row"
	if o.Kind == catalog.Campaign {
		thing = "site"
	}
	from := "a query"
	switch n := len(o.Sources); {
	case n == 1:
		f := o.Sources[0]
		from = fmt.Sprintf("%s (%d bytes, SHA-256 %s)", f.Path, f.Size, f.SHA256)
	case n > 1:
		from = fmt.Sprintf("%d files, %s to %s", n, o.Sources[0].Path, o.Sources[n-1].Path)
	}
	st.notes.Add(note.Note, note.Import, "%s of %s from %s", strings.ToLower(o.Kind.String()), plural(o.Rows, thing), from)
	if text := bind.Changed(st.folder, o); text != "" {
		st.notes.Add(note.Note, note.Import, "%s", text)
	}
	for _, n := range o.Notes {
		st.notes.Add(note.Note, note.Import+1, "%s", n)
	}
	if o.Kind == catalog.Campaign {
		within := "no solid"
		if w := withinOf(o); w != "" {
			within = "WITHIN " + w
		}
		stretched := ""
		if k := o.Options.Stretched; k != [3]float64{} {
			stretched = fmt.Sprintf(", STRETCHED (%s, %s, %s)", s.number(k[0]), s.number(k[1]), s.number(k[2]))
		}
		st.notes.Add(note.Note, note.Sites, "%s%s, DUPLICATES %s, TOLERANCE %s, coordinates in %s",
			within, stretched, duplicatesOf(o), s.number(o.Options.Tolerance), lengthUnitOf(o))
	}
}

// schemaTable lists columns; with data also how many values are missing.
func schemaTable(schema column.Schema, data *column.Table) *column.Table {
	fields := []column.Field{text("column"), text("type"), text("unit")}
	if data != nil {
		fields = append(fields, whole("missing"))
	}
	r := newRows(append(fields, text("meaning"))...)
	for i, f := range schema {
		values := []column.Value{column.String(f.Name), column.String(f.Type.String()), maybe(f.Unit.String())}
		if data != nil {
			values = append(values, column.Int(int64(data.Cols[i].NullCount())))
		}
		r.add(append(values, maybe(f.Meaning))...)
	}
	return r.table()
}

// relationColumns are the columns of a relation as the registry has them, with
// units for coordinates in metres.
func relationColumns(d *relation.Definition) *column.Table {
	r := newRows(text("column"), text("type"), text("unit"), text("meaning"))
	for _, c := range slices.Concat(d.Computed, d.Roles()) {
		unit := c.Unit
		if c.Power != 0 {
			unit = column.Symbol("m").Pow(c.Power)
		}
		r.add(column.String(c.Name), column.String(c.Type.String()), maybe(unit.String()), maybe(c.Meaning))
	}
	return r.table()
}

// describeRelationOf is DESCRIBE CELLS OF hall: all columns, the sites' own too.
func (s *Session) describeRelationOf(st *statement, t *lang.Describe) error {
	if d, ok := relation.Lookup(t.Name.Text); ok && d.Over == relation.OverRows {
		return s.describeOverRows(st, t, d)
	}
	q := &lang.Query{Body: &lang.Select{
		Items: []*lang.Item{{Star: true}},
		From:  []lang.Source{&lang.RelationSource{Relation: &lang.Relation{At: t.At, Noun: t.Name, Operand: t.Operand}}},
	}}
	node, err := bind.Query(s.bindEnv(st), q)
	if err != nil {
		return err
	}
	if r := findRelation(node); r != nil {
		return s.showTable(st, schemaTable(r.Bound.Schema(), nil))
	}
	return s.showTable(st, schemaTable(node.Schema(), nil))
}

// describeOverRows is DESCRIBE SERIES OF log: the columns of the log, as they are without
// further clauses, or a word of those that only clauses bring.
func (s *Session) describeOverRows(st *statement, t *lang.Describe, d *relation.Definition) error {
	var source lang.Source
	switch o := t.Operand.(type) {
	case *lang.Name:
		source = &lang.NameSource{Name: *o}
	case *lang.Relation:
		source = &lang.RelationSource{Relation: o}
	case *lang.Query:
		source = &lang.QuerySource{Query: o}
	}
	node, err := bind.Query(s.bindEnv(st), &lang.Query{Body: &lang.Select{Items: []*lang.Item{{Star: true}}, From: []lang.Source{source}}})
	if err != nil {
		return err
	}
	if !d.Own {
		if slices.Contains(d.Clauses, "BY") {
			st.notes.Add(note.Note, note.Output, "before these stand the columns that BY names, such as the logger")
		}
		return s.showTable(st, relationColumns(d))
	}
	b := &relation.Bound{Def: d, Input: node.Schema(), Log: relation.LogClauses{Method: "LINEAR"}}
	b.Layout()
	return s.showTable(st, schemaTable(b.Schema(), nil))
}

func findRelation(n plan.Node) *plan.Relation {
	if r, ok := n.(*plan.Relation); ok {
		return r
	}
	for _, in := range n.Inputs() {
		if r := findRelation(in); r != nil {
			return r
		}
	}
	return nil
}

// describeSolid is the volume, surface, box and text of a solid.
func (s *Session) describeSolid(st *statement, t *lang.Describe, o *catalog.Object) error {
	body, err := bind.Solid(s.bindEnv(st), &lang.SolidName{At: t.Name.At, Name: t.Name})
	if err != nil {
		return err
	}
	m := column.Symbol("m")
	lo, hi := body.Bounds()
	r := newRows(text("solid"), realField("volume", m.Pow(3)), realField("surface", m.Pow(2)), whole("pieces"), whole("voids"),
		realField("x_from", m), realField("x_to", m), realField("y_from", m), realField("y_to", m),
		realField("z_from", m), realField("z_to", m))
	r.add(column.String(o.Name), column.Float(body.Volume()), column.Float(body.Area()), column.Int(int64(body.Pieces())), column.Int(int64(body.Facts().Voids)),
		column.Float(lo.X), column.Float(hi.X), column.Float(lo.Y), column.Float(hi.Y), column.Float(lo.Z), column.Float(hi.Z))
	came := ""
	if o.System != "" {
		came = ", " + strings.TrimSuffix(catalog.SystemText(o.System), ",")
	}
	st.notes.Add(note.Note, note.Output, "the solid is %s%s; its lengths are taken as metres", o.Text, came)
	s.tellFilms(st, o.Name, body)
	return s.showTable(st, r.table())
}
