package bind

import (
	"math"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
	"nearcell/voronoi/field"
)

// The clauses of ESTIMATES, WEIGHTS, RESIDUALS and EXCEEDANCE, and the relations GRID
// and TRANSECT, which have no sites.

// overNothing binds a relation without an input.
func (b *binder) overNothing(rel *relation.Bound, r *lang.Relation) (bound, error) {
	rel.ID, rel.X, rel.Y, rel.Z = -1, -1, -1, -1
	rel.Clauses.Unit = column.Symbol("m")
	rel.Clauses.Step = math.NaN()
	for _, c := range r.Clauses {
		if err := b.takes(rel, c); err != nil {
			return bound{}, err
		}
		if c, ok := c.(*lang.StepClause); ok {
			step, err := b.real(c.Value, "STEP")
			if err != nil {
				return bound{}, err
			}
			if !(step > 0) {
				return bound{}, problem.New("types", b.at(c), "STEP must be more than 0")
			}
			rel.Clauses.Step = step
		}
	}
	if math.IsNaN(rel.Clauses.Step) {
		return bound{}, problem.New("clauses", b.at(r), "%s needs the distance from point to point: STEP", rel.Def.Noun).
			WithHint("%s STEP 0.5", b.text(r))
	}
	var err error
	if r.Operand == nil {
		rel.Name, rel.Place = "the line", b.at(r)
		if rel.Clauses.From, err = b.vector(r.Between); err == nil {
			rel.Clauses.To, err = b.vector(r.And)
		}
	} else {
		err = b.gridSolid(rel, r)
	}
	if err != nil {
		return bound{}, err
	}
	return b.relationNode(rel, r, bound{&plan.One{}, &scope{}})
}

// gridSolid is the solid of GRID OF name.
func (b *binder) gridSolid(rel *relation.Bound, r *lang.Relation) error {
	name, ok := r.Operand.(*lang.Name)
	if !ok {
		return problem.New("wrong-kind", b.at(r.Operand), "GRID OF takes the name of a solid").
			WithHint("CREATE SOLID name AS …; then GRID OF name STEP …")
	}
	s := &lang.SolidName{At: name.At, Name: *name}
	var err error
	rel.Name, rel.Place, rel.Clauses.SolidName = name.Text, b.at(name), name.Text
	if rel.Clauses.Solid, err = b.solid(s); err != nil {
		return err
	}
	rel.System, err = b.solidSystem(s)
	return err
}

// vector is a point of three numbers.
func (b *binder) vector(p *lang.Point) (v voronoi.Vec, err error) {
	for _, c := range []struct {
		e    lang.Expr
		what string
		to   *float64
	}{{p.X, "x", &v.X}, {p.Y, "y", &v.Y}, {p.Z, "z", &v.Z}} {
		if *c.to, err = b.real(c.e, c.what); err != nil {
			return v, err
		}
	}
	return v, nil
}

// estimatingClause binds a clause of estimates; ok is false for any other.
func (b *binder) estimatingClause(rel *relation.Bound, c lang.Clause) (ok bool, err error) {
	switch c := c.(type) {
	case *lang.MethodClause:
		return true, b.method(rel, c)
	case *lang.ForClause:
		return true, b.reading(rel, c)
	case *lang.AboveClause:
		limit, err := b.real(c.Value, "the limit")
		rel.Clauses.Below = c.Below
		rel.Clauses.Limits = append(rel.Clauses.Limits, limit)
		return true, err
	case *lang.ThresholdsClause:
		for _, e := range c.Values {
			limit, err := b.real(e, "a threshold")
			if err != nil {
				return true, err
			}
			rel.Clauses.Thresholds = append(rel.Clauses.Thresholds, limit)
		}
		return true, nil
	case *lang.AtPointsClause:
		return true, nil // bound with its rows
	case *lang.UncertaintyClause:
		return true, b.uncertain(rel, c)
	case *lang.WeightsClause:
		rel.Clauses.Weights, err = b.word(&c.Word, "a way to weigh cells that touch", "AREA", "CONTACT", "CONDUCTANCE")
		return true, err
	case *lang.AgainstClause:
		return true, nil // likewise
	case *lang.AtPlaneClause:
		return true, problem.New("clauses", b.at(c), "AT %s = … is a plane; %s needs points", c.Axis.Text, rel.Def.Noun).
			WithHint("AT (GRID OF solid STEP 1), AT a table with x, y, z, or AT (SELECT …)")
	}
	return false, nil
}

// methods are the words of METHOD.
var methods = []struct {
	word   string
	method field.Method
}{{"SIBSON", field.Sibson}, {"LAPLACE", field.Laplace}, {"LINEAR", field.Linear}, {"NEAREST", field.Nearest}, {"IDW", field.Distance}}

func (b *binder) method(rel *relation.Bound, c *lang.MethodClause) error {
	var words []string
	for _, m := range methods {
		words = append(words, m.word)
		if !c.Name.Is(m.word) {
			continue
		}
		o := field.Options{Method: m.method, Power: 2}
		text := m.word
		switch {
		case c.Argument == nil && m.method == field.Distance:
			return problem.New("clauses", b.at(c), "METHOD IDW needs the power of the distance").WithHint("METHOD IDW(2)")
		case c.Argument != nil && m.method != field.Distance:
			return problem.New("clauses", b.at(c), "METHOD %s takes no number", m.word)
		case c.Argument != nil:
			p, err := b.real(c.Argument, "the power of IDW")
			if err != nil {
				return err
			}
			if !(p > 0 && p <= 100) {
				return problem.New("types", b.at(c), "the power of IDW must be more than 0 and at most 100")
			}
			o.Power = p
			text += "(" + column.FormatReal(p) + ")"
		}
		if rel.Def.Noun == "EXCEEDANCE" && (m.method == field.Laplace || m.method == field.Distance) {
			return problem.New("clauses", b.at(c), "EXCEEDANCE takes METHOD NEAREST, LINEAR or SIBSON: no bounds are known for %s", m.word)
		}
		rel.Clauses.Method, rel.Clauses.MethodText = o, text
		return nil
	}
	p := problem.New("clauses", b.at(&c.Name), "there is no METHOD %s here: it is %s or %s(power)", c.Name.Text,
		strings.Join(words[:len(words)-1], ", "), words[len(words)-1])
	return didYouMean(p, c.Name.Text, words)
}

// reading is the one attribute of FOR.
func (b *binder) reading(rel *relation.Bound, c *lang.ForClause) error {
	if len(c.Names) > 1 {
		return problem.New("clauses", b.at(&c.Names[1]), "%s takes one attribute", rel.Def.Noun)
	}
	at, err := b.column(rel, &c.Names[0])
	if err != nil {
		return err
	}
	f := rel.Input[at]
	switch {
	case at == rel.ID || at == rel.X || at == rel.Y || at == rel.Z:
		return problem.New("types", b.at(c), "FOR names a reading, and '%s' is the site's %s", f.Name, map[bool]string{true: "identifier", false: "position"}[at == rel.ID])
	case !f.Type.Numeric():
		return problem.New("types", b.at(c), "FOR needs numbers, and '%s' of %s is %s", f.Name, rel.Name, f.Type)
	}
	rel.Clauses.For = []int{at}
	return nil
}

// estimatingInput binds what AT names and sees that nothing is missing.
func (b *binder) estimatingInput(rel *relation.Bound, r *lang.Relation) ([]plan.Node, error) {
	takes := map[string]bool{}
	for _, c := range rel.Def.Clauses {
		takes[c] = true
	}
	if takes["METHOD"] && rel.Clauses.MethodText == "" {
		rel.Clauses.MethodText = "SIBSON"
	}
	if takes["WEIGHTS"] && rel.Clauses.Weights == "" {
		rel.Clauses.Weights = "CONDUCTANCE"
	}
	if takes["FOR"] && len(rel.Clauses.For) == 0 {
		return nil, problem.New("clauses", b.at(r), "%s needs the reading: FOR", rel.Def.Noun).WithHint("%s OF %s FOR temp …", rel.Def.Noun, rel.Name)
	}
	if takes["ABOVE"] {
		if err := b.limits(rel, r); err != nil {
			return nil, err
		}
	}
	if takes["AMONG"] {
		return b.among(rel, r)
	}
	if !takes["AT"] || takes["THROUGH"] {
		return nil, nil
	}
	for _, c := range r.Clauses {
		if c, ok := c.(*lang.AtPointsClause); ok {
			node, err := b.points(rel, c.Operand, "AT")
			return []plan.Node{node}, err
		}
	}
	return nil, problem.New("clauses", b.at(r), "%s needs the points: AT", rel.Def.Noun).
		WithHint("%s OF %s AT (GRID OF solid STEP 1), AT a table with x, y, z, or AT (SELECT …)", rel.Def.Noun, rel.Name)
}

// limits are the thresholds of EXCEEDANCE: that of ABOVE or BELOW, then those of
// THRESHOLDS, each once.
func (b *binder) limits(rel *relation.Bound, r *lang.Relation) error {
	all := append(rel.Clauses.Limits, rel.Clauses.Thresholds...)
	if len(all) == 0 {
		return problem.New("clauses", b.at(r), "%s needs a limit: ABOVE, BELOW or THRESHOLDS", rel.Def.Noun).
			WithHint("%s OF %s FOR %s ABOVE 8", rel.Def.Noun, rel.Name, rel.Input[rel.Clauses.For[0]].Name)
	}
	rel.Clauses.Limits = nil
	for _, t := range all {
		if !slices.Contains(rel.Clauses.Limits, t) {
			rel.Clauses.Limits = append(rel.Clauses.Limits, t)
		}
	}
	return nil
}

// points binds the rows of AT or AMONG and finds their coordinates.
func (b *binder) points(rel *relation.Bound, o lang.Operand, clause string) (plan.Node, error) {
	in, err := b.operand(o)
	if err != nil {
		return nil, err
	}
	beside := relation.Beside{Name: b.operandName(o), Input: fields(in.scope), Clause: clause}
	var missing []string
	for i, name := range [3]string{"x", "y", "z"} {
		hits := named(beside.Input, name)
		switch {
		case len(hits) == 0:
			missing = append(missing, name)
			continue
		case len(hits) > 1:
			return nil, problem.New("ambiguous", b.at(o), "%s gives %d columns called '%s'", beside.Name, len(hits), name).
				WithHint("name one of them otherwise: SELECT … AS …")
		}
		f := beside.Input[hits[0]]
		if !f.Type.Numeric() && f.Type != column.Null {
			return nil, problem.New("types", b.at(o), "the coordinate '%s' of %s is %s, not a number", f.Name, beside.Name, f.Type).
				WithHint("CAST(%s AS REAL) AS %s", f.Name, f.Name)
		}
		if f.Unit != nil && rel.Clauses.Unit != nil && !column.SameUnit(f.Unit, rel.Clauses.Unit) {
			return nil, problem.New("units", b.at(o), "%s of %s is in %s, and the sites of %s are in %s", f.Name, beside.Name, f.Unit, rel.Name, rel.Clauses.Unit)
		}
		if rel.X >= 0 {
			if err := b.oneSystem(rel.Input[rel.X].System, f.System, b.at(o)); err != nil {
				return nil, err
			}
		}
		rel.Clauses.At[i] = hits[0]
	}
	if len(missing) > 0 {
		var gives []string
		for _, f := range beside.Input {
			gives = append(gives, f.Name)
		}
		return nil, problem.New("no-position", b.at(o), "%s needs points with the columns x, y, z: %s has no %s, it gives %s", clause, beside.Name,
			strings.Join(missing, ", "), shortList(gives)).WithHint("name them with SELECT … AS x, … AS y, … AS z")
	}
	rel.Beside = append(rel.Beside, beside)
	return in.node, nil
}

// operand binds what stands after OF, AT, AGAINST and their like.
func (b *binder) operand(o lang.Operand) (bound, error) {
	switch o := o.(type) {
	case *lang.Name:
		return b.named(o)
	case *lang.Query:
		return b.subquery(o)
	case *lang.Relation:
		return b.relation(o)
	}
	return bound{}, problem.New("failed", b.at(o), "an operand of an unknown kind")
}
