package engine

import (
	"nearcell/engine/bind"
	"nearcell/engine/present"
	"nearcell/lang"
	"nearcell/voronoi/solid"
)

// solid makes a solid and the text under which it is kept. A plain name stays a
// name, so that a campaign follows its solid when that is replaced; anything
// else is kept as it is at this moment, with values in place of parameters and
// rings in place of files.
func (s *Session) solid(st *statement, tree lang.Solid) (solid.Solid, string, error) {
	env := s.bindEnv(st)
	body, err := bind.Solid(env, tree)
	if err != nil {
		return nil, "", err
	}
	if name, plain := tree.(*lang.SolidName); plain {
		return body, lang.Print(name), nil
	}
	whole, err := bind.Canonical(env, tree)
	if err != nil {
		return nil, "", err
	}
	return body, lang.Print(whole), nil
}

// number writes a number for a message, to the session's digits.
func (s *Session) number(f float64) string { return present.Number(f, s.digits) }
