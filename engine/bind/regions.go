package bind

import (
	"errors"
	"slices"
	"strconv"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
)

// within takes WITHIN over: one solid, or zones.
func (b *binder) within(rel *relation.Bound, c *lang.WithinClause) error {
	rel.Clauses.Solid, rel.Clauses.Zones = nil, nil
	if c.Zones {
		return b.zones(rel, c.Solids)
	}
	var err error
	rel.Clauses.SolidName = b.text(c.Solids[0])
	rel.Clauses.Solid, err = b.solid(c.Solids[0])
	return err
}

// zones takes several solids over, each a space of its own. Their interiors must be
// apart: what two of them share would be given away twice.
func (b *binder) zones(rel *relation.Bound, solids []lang.Solid) error {
	list, err := b.regions(solids, "zone")
	if err != nil {
		return err
	}
	rel.Clauses.Zones = list
	names := make([]string, len(list))
	for i, z := range list {
		names[i] = z.Name
	}
	rel.Clauses.SolidName = "the zones " + strings.Join(names, ", ")
	return b.apart(list, solids)
}

// inheritZones takes the zones of a campaign over, unless the relation has a WITHIN of
// its own that goes before them.
func (b *binder) inheritZones(rel *relation.Bound, o *catalog.Object) error {
	solids := make([]lang.Solid, len(o.Options.Zones))
	for i, z := range o.Options.Zones {
		s, err := lang.ParseSolid(z)
		if err != nil {
			return b.misread(err)
		}
		solids[i] = s
	}
	err := b.zones(rel, solids)
	var p *problem.Problem
	if errors.As(err, &p) {
		p.Place = rel.Place // the zones stand in the campaign, not in this text
	}
	return err
}

// Stretch are the factors of STRETCHED.
func Stretch(env *Env, c *lang.StretchedClause) ([3]float64, error) {
	return newBinder(env).factors(c)
}

// stretched takes the factors of the distances over.
func (b *binder) stretched(rel *relation.Bound, c *lang.StretchedClause) error {
	k, err := b.factors(c)
	rel.Clauses.Stretch = voronoi.Vec{X: k[0], Y: k[1], Z: k[2]}
	return err
}

func (b *binder) factors(c *lang.StretchedClause) (k [3]float64, err error) {
	for i, e := range [3]lang.Expr{c.X, c.Y, c.Z} {
		if k[i], err = b.real(e, "a factor of STRETCHED"); err != nil {
			return k, err
		}
		if !(k[i] >= leastFactor && k[i] <= mostFactor) {
			return k, problem.New("stretched", b.at(e), "a factor of STRETCHED is a number greater than 0, not %s", column.FormatReal(k[i])).
				WithHint("STRETCHED (1, 1, 5): a metre up counts as five; 1 leaves an axis as it is")
		}
	}
	return k, nil
}

// Factors beyond these help nobody and cost digits.
const (
	leastFactor = 1e-9
	mostFactor  = 1e9
)

// spaceTaken refuses zones and stretched distances of a campaign in a relation that does
// not know them.
func (b *binder) spaceTaken(rel *relation.Bound, r *lang.Relation) error {
	if voronoi.IsStretch(rel.Clauses.Stretch) && !slices.Contains(rel.Def.Clauses, "STRETCHED") {
		return problem.NotThereYet(rel.Place, rel.Def.Noun+" of the stretched distances of "+rel.Name).
			WithHint("OF (SELECT * FROM %s) WITHIN … has plain distances", rel.Name)
	}
	if len(rel.Clauses.Zones) == 0 || rel.Def.Zoned {
		return nil
	}
	var at lang.Node = r.Operand
	for _, c := range r.Clauses {
		if w, ok := c.(*lang.WithinClause); ok {
			at = w
		}
	}
	return b.notYet(at, rel.Def.Noun+" in zones, WITHIN (a, b),").WithHint("WITHIN one of the solids, or UNCLIPPED")
}

// Zones makes the solids of WITHIN (a, b), under the names that rows carry for them.
func Zones(env *Env, solids []lang.Solid) ([]relation.Region, error) {
	b := newBinder(env)
	list, err := b.regions(solids, "zone")
	if err != nil {
		return nil, err
	}
	return list, b.apart(list, solids)
}

// regions makes solids that rows name, each under a name of its own.
func (b *binder) regions(solids []lang.Solid, what string) ([]relation.Region, error) {
	list := make([]relation.Region, len(solids))
	for i, s := range solids {
		name := b.text(s)
		if n, ok := s.(*lang.SolidName); ok {
			name = n.Name.Text
		}
		if slices.ContainsFunc(list[:i], func(r relation.Region) bool { return lang.Fold(r.Name) == lang.Fold(name) }) {
			return nil, problem.New("same-name", b.at(s), "two of these solids are called '%s': rows could not tell one %s from the other", name, what)
		}
		made, err := b.solid(s)
		if err != nil {
			return nil, err
		}
		list[i] = relation.Region{Name: name, Solid: made}
	}
	return list, nil
}

// sharedVolume is the share of the smaller of two solids from which they overlap: less
// is the rounding of a wall between them.
const sharedVolume = 1e-9

// apart refuses zones that overlap.
func (b *binder) apart(list []relation.Region, solids []lang.Solid) error {
	for i, z := range list {
		for k, other := range list[:i] {
			volume, err := b.shared(z.Solid, other.Solid)
			if err != nil {
				return problem.At(err, b.at(solids[i]))
			}
			if volume <= sharedVolume*min(z.Solid.Volume(), other.Solid.Volume()) {
				continue
			}
			p := problem.New("overlap", b.at(solids[i]), "the zones %s and %s overlap: %s m³ lie in both and would count twice",
				other.Name, z.Name, strconv.FormatFloat(volume, 'g', 4, 64))
			if _, plain := solids[i].(*lang.SolidName); plain {
				return p.WithHint("take one out of the other, WITHIN (%s, %s MINUS %s), or make them one room: %s PLUS %s",
					b.text(solids[k]), b.text(solids[i]), b.text(solids[k]), b.text(solids[k]), b.text(solids[i]))
			}
			return p
		}
	}
	return nil
}
