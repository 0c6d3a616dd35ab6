package engine

import (
	"context"
	"errors"
	"slices"
	"time"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// createData is CREATE CAMPAIGN and CREATE TABLE: from a file or from a query.
func (s *Session) createData(ctx context.Context, st *statement, t *lang.CreateData) error {
	if err := s.mayCreate(st, t.Name, kindOf(t.Kind), t.Replace); err != nil {
		return err
	}
	clauses, err := s.readClauses(st, t)
	if err != nil {
		return err
	}
	object := catalog.Object{Kind: kindOf(t.Kind), Key: t.Name.Key(), Name: t.Name.Text, Created: time.Now().UTC()}
	var table *column.Table
	origin := "the query"
	if named := t.File; t.Query == nil {
		if named == nil {
			named = t.Files
		}
		origin = named.Value
		table, err = s.importFile(ctx, st, t, clauses, &object)
	} else {
		table, err = s.collect(ctx, st, t, clauses)
		object.Text = lang.Print(t.Query)
		for _, l := range st.notes.Lines() {
			object.Notes = append(object.Notes, madeWith(l))
		}
	}
	if err != nil {
		return err
	}
	if object.Kind == catalog.Campaign {
		table, err = s.campaignTable(st, t, clauses, table, origin, &object)
	} else if clauses.position != nil {
		table, _, err = s.placedTable(st, clauses, table, origin)
		err = problem.At(err, originPlace(st, t))
	}
	if err != nil {
		return err
	}
	object.Table, object.System = withoutSystem(table, clauses.system)
	if err := clauses.inSystem(&object); err != nil {
		return err
	}
	object.Notes = append(object.Notes, clauses.placedNotes...)
	if err := clauses.keepSolids(); err != nil {
		return err
	}
	if err := s.catalog.Put(object, t.Replace); err != nil {
		return catalogProblem(err, st.at(t.Name))
	}
	thing := "row"
	if object.Kind == catalog.Campaign {
		thing = "site"
	}
	if !s.checkOnly {
		if len(object.Sources) > 1 {
			origin = plural(len(object.Sources), "file") + " " + origin
		}
		s.say("%s: %s from %s, %s", t.Name.Text, plural(table.N, thing), origin, st.seconds())
	}
	return nil
}

// withoutSystem is a table as the catalog keeps it, and what its places count from: what
// the clauses say, else what those of the query did.
func withoutSystem(table *column.Table, said string) (*column.Table, string) {
	t := *table
	t.Schema = slices.Clone(table.Schema)
	for i := range t.Schema {
		f := &t.Schema[i]
		if said == "" && lang.Fold(f.Name) == "x" && f.System != nil {
			said = f.System.Text
		}
		f.System = nil
	}
	return &t, said
}

// inSystem sees that the sites of a campaign and its solids count from one place.
func (c *clauses) inSystem(o *catalog.Object) error {
	if c.withinAt == nil {
		return nil
	}
	for _, s := range c.withinAt.Solids {
		if err := bind.InSystem(c.s.bindEnv(c.st), &column.System{Of: o.Name, Text: o.System}, o.Options.LengthUnit, s); err != nil {
			return err
		}
	}
	return nil
}

// madeWith is how a note stays with a table that a query made: warnings under their
// name, so that they are told of where the table's numbers are saved.
func madeWith(l note.Line) string {
	if l.Level == note.Warning {
		return warningMark + l.Text
	}
	return l.Text
}

const warningMark = "warning: "

// collect runs the query of CREATE … AS (query).
func (s *Session) collect(ctx context.Context, st *statement, t *lang.CreateData, c *clauses) (*column.Table, error) {
	if err := c.refuseFileClauses(); err != nil {
		return nil, err
	}
	node, err := s.prepare(st, t.Query)
	if err != nil {
		return nil, err
	}
	if s.checkOnly {
		return emptyTable(node.Schema()), nil
	}
	table, err := exec.Collect(ctx, s.execEnv(st), node)
	if err != nil {
		return nil, err
	}
	if err := distinctNames(table.Schema, st.at(t.Query)); err != nil {
		return nil, err
	}
	return c.applyUnits(table, "the query")
}

// emptyTable has columns and no rows.
func emptyTable(schema column.Schema) *column.Table {
	table := &column.Table{Schema: schema, Cols: make([]column.Vector, len(schema))}
	for i, f := range schema {
		table.Cols[i] = column.New(f.Type, f.Unit, 0)
	}
	return table
}

// distinctNames refuses a table in which a name would mean two columns.
func distinctNames(schema column.Schema, at problem.Place) error {
	seen := map[string]bool{}
	for _, f := range schema {
		key := lang.Fold(f.Name)
		if seen[key] {
			return problem.New("column-twice", at, "two columns are called '%s'", f.Name).
				WithHint("give one of them another name with AS")
		}
		seen[key] = true
		if f.Type == column.Null {
			return problem.New("no-type", at, "the column '%s' holds nothing but NULL and has no type", f.Name).
				WithHint("give it one: CAST(NULL AS REAL)")
		}
	}
	return nil
}

// createSolid is CREATE SOLID: the solid is made once to see that it can be.
func (s *Session) createSolid(st *statement, t *lang.CreateSolid) error {
	if err := s.mayCreate(st, t.Name, catalog.Solid, t.Replace); err != nil {
		return err
	}
	var kept *bind.KeptSolid
	text, system := "", ""
	if !t.Frame.IsZero() {
		f, k, err := s.frameNamed(st, t.Frame)
		if err != nil {
			return err
		}
		if kept, err = bind.KeepInFrame(s.bindEnv(st), t.Solid, &k.Similarity, f.Name); err != nil {
			return err
		}
		text = lang.Print(kept.Text)
		system = catalog.FrameSystem(f.Name, f.Text)
		st.notes.Add(note.Note, note.Import, "%s is brought from the frame %s to the site's coordinates: %s", t.Name.Text, f.Name, s.frameText(k))
	}
	if kept == nil {
		var err error
		if kept, text, err = s.solid(st, t.Solid); err != nil {
			return err
		}
		own, err := bind.SolidSystem(s.bindEnv(st), t.Solid)
		if err != nil {
			return err
		}
		if own != nil {
			system = own.Text
		}
	}
	object := catalog.Object{Kind: catalog.Solid, Key: t.Name.Key(), Name: t.Name.Text, Text: text, Created: time.Now().UTC(),
		Table: kept.Table, Sources: kept.Sources, System: system}
	if err := s.catalog.Put(object, t.Replace); err != nil {
		return catalogProblem(err, st.at(t.Name))
	}
	s.tellFilms(st, t.Name.Text, kept.Body)
	if !s.checkOnly {
		s.say("%s: a solid of %s m³", t.Name.Text, s.number(kept.Body.Volume()))
	}
	return nil
}

// createView is CREATE VIEW. The query is bound once, so that a slip shows now
// and not at the first use; its parameters are bound anew at each use.
func (s *Session) createView(st *statement, t *lang.CreateView) error {
	if err := s.mayCreate(st, t.Name, catalog.View, t.Replace); err != nil {
		return err
	}
	quiet := *st
	quiet.notes = &note.Notes{} // what the query has to say it says at its use
	columns := ""
	node, err := s.prepare(&quiet, t.Query)
	switch {
	case unsetParameter(err):
		// it is bound at each use, and may be set then
		st.notes.Add(note.Note, note.Import, "%s when the view is made; its columns are looked at when it is used", err)
	case err != nil:
		return err
	default:
		if err := distinctNames(node.Schema(), st.at(t.Query)); err != nil {
			return err
		}
		columns = " of " + plural(len(node.Schema()), "column")
	}
	object := catalog.Object{
		Kind: catalog.View, Key: t.Name.Key(), Name: t.Name.Text, Text: lang.Print(t.Query), Created: time.Now().UTC(),
	}
	if err := s.catalog.Put(object, t.Replace); err != nil {
		return catalogProblem(err, st.at(t.Name))
	}
	if !s.checkOnly {
		s.say("%s: a view%s", t.Name.Text, columns)
	}
	return nil
}

// unsetParameter reports whether binding stopped at a :name without a value.
func unsetParameter(err error) bool {
	var p *problem.Problem
	return errors.As(err, &p) && p.Code == "no-parameter"
}

// mayCreate refuses a name that is taken before any work is done for it.
func (s *Session) mayCreate(st *statement, name lang.Name, kind catalog.Kind, replace bool) error {
	old, err := s.catalog.Get(name.Key())
	if err != nil {
		var none *catalog.ErrNoSuch
		if errors.As(err, &none) || replace {
			return nil // a damaged object may be replaced
		}
		return catalogProblem(err, st.at(name))
	}
	if old.Kind == kind && replace {
		return nil
	}
	return catalogProblem(&catalog.ErrExists{Kind: old.Kind, Name: old.Name}, st.at(name))
}

// drop is DROP kind name.
func (s *Session) drop(st *statement, t *lang.Drop) error {
	if err := s.catalog.Drop(kindOf(t.Kind), t.Name.Key()); err != nil {
		return s.withNearest(catalogProblem(err, st.at(t.Name)), t.Name, kindOf(t.Kind))
	}
	if !s.checkOnly {
		s.say("%s is dropped", t.Name.Text)
	}
	return nil
}

// withNearest adds the nearest name of the kind to the problem of a missing object.
func (s *Session) withNearest(err error, name lang.Name, kinds ...catalog.Kind) error {
	var p *problem.Problem
	if !errors.As(err, &p) || p.Code != "no-object" {
		return err
	}
	list, listError := s.catalog.List(kinds...)
	if listError != nil {
		return err
	}
	var names []string
	for _, o := range list {
		names = append(names, o.Name)
	}
	if near := lang.Nearest(name.Text, names); near != "" {
		p.Hint = "did you mean '" + near + "'?"
	}
	return err
}

func kindOf(k lang.ObjectKind) catalog.Kind {
	switch k {
	case lang.Campaign:
		return catalog.Campaign
	case lang.Table:
		return catalog.Table
	case lang.SolidOb:
		return catalog.Solid
	case lang.View:
		return catalog.View
	case lang.FrameOb:
		return catalog.Frame
	}
	return 0
}
