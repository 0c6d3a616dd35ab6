package engine

import (
	"nearcell/engine/bind"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/lang"
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

// needsName refuses a campaign's solid that comes from a file and has no name: what it
// takes from the file is kept with the solid.
func needsName(st *statement, tree lang.Solid, kept *bind.KeptSolid) error {
	if kept.Table == nil {
		return nil
	}
	return problem.New("solid-name", st.at(tree), "a campaign's solid that comes from a file needs a name of its own").
		WithHint("CREATE SOLID room AS %s; then WITHIN room", lang.Print(tree))
}

// number writes a number for a message, to the session's digits.
func (s *Session) number(f float64) string { return present.Number(f, s.digits) }
