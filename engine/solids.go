package engine

import (
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"nearcell/catalog"
	"nearcell/engine/bind"
	"nearcell/engine/note"
	"nearcell/engine/present"
	"nearcell/lang"
	"nearcell/voronoi/solid"
)

// solid makes a solid and the text under which it is kept. A plain name stays a
// name, so that a campaign follows its solid when that is replaced; anything
// else is kept as it is at this moment, with values in place of parameters and
// rings in place of files.
func (s *Session) solid(st *statement, tree lang.Solid) (*bind.KeptSolid, string, error) {
	env := s.bindEnv(st)
	kept, err := bind.Keep(env, tree)
	if err != nil {
		return nil, "", err
	}
	if name, plain := tree.(*lang.SolidName); plain {
		kept.Table, kept.Sources = nil, nil // they are the other solid's
		return kept, lang.Print(name), nil
	}
	return kept, lang.Print(kept.Text), nil
}

// named gives a campaign's solid that comes from files a name, under which the catalog keeps
// it: what it takes from the files is kept with it. The name is that of the file, or the
// campaign's for a combination; a solid that is there already is used.
func (c *clauses) named(tree lang.Solid, kept *bind.KeptSolid, text string) (string, error) {
	o := catalog.Object{Kind: catalog.Solid, Text: text, Created: time.Now().UTC(), Table: kept.Table, Sources: kept.Sources}
	base := c.name.Text + "_room"
	var file *lang.Text
	switch s := tree.(type) {
	case *lang.MeshSolid:
		file = s.File
	case *lang.BoxesSolid:
		file = s.File
	case *lang.TerrainSolid:
		file = s.File
	}
	if file != nil {
		base = strings.TrimSuffix(filepath.Base(file.Value), filepath.Ext(file.Value))
	}
	for k := 1; ; k++ {
		name := lang.Name{Text: base}
		if k > 1 {
			name.Text = fmt.Sprintf("%s_%d", base, k)
		}
		o.Name, o.Key = name.Text, name.Key()
		there, err := c.s.catalog.Get(o.Key)
		var none *catalog.ErrNoSuch
		switch {
		case errors.As(err, &none):
			if slices.ContainsFunc(c.solids, func(s catalog.Object) bool { return s.Key == o.Key }) || o.Key == c.name.Key() {
				continue
			}
			c.solids = append(c.solids, o)
			c.st.notes.Add(note.Note, note.Import, "%s is kept as the solid %s", lang.Print(tree), lang.Print(&name))
		case err != nil:
			return "", catalogProblem(err, c.st.at(tree))
		case there.Kind != catalog.Solid || there.Text != o.Text || !sameSources(there.Sources, o.Sources):
			continue
		}
		return lang.Print(&lang.SolidName{Name: name}), nil
	}
}

// sameSources tells whether two solids were made of the same files.
func sameSources(a, b []catalog.SourceFile) bool {
	return slices.EqualFunc(a, b, func(x, y catalog.SourceFile) bool { return x.SHA256 == y.SHA256 })
}

// keepSolids keeps the solids that came with a campaign.
func (c *clauses) keepSolids() error {
	for _, o := range c.solids {
		if err := c.s.catalog.Put(o, false); err != nil {
			return catalogProblem(err, c.st.at(c.withinAt))
		}
	}
	return nil
}

// tellFilms says that a combination has parts, or gaps, as thin as rounding.
func (s *Session) tellFilms(st *statement, name string, body solid.Solid) {
	m, ok := body.(interface{ Films() float64 })
	if !ok || m.Films() <= 1e-9*body.Area() {
		return
	}
	st.notes.Add(note.Note, note.Import, "faces of %s, %s m² of them, lie on one another but for rounding, with a film or a gap between that is nothing: they are no walls", name, s.number(m.Films()))
}

// number writes a number for a message, to the session's digits.
func (s *Session) number(f float64) string { return present.Number(f, s.digits) }
