package bind

import (
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// rowClauses bind the clauses of each relation over rows (relation.OverRows), by
// its noun. They give the plans of what clauses name beside OF (rel.Beside).
var rowClauses = map[string]func(b *binder, rel *relation.Bound, r *lang.Relation, in bound) ([]plan.Node, error){}

// overRows binds a relation over any rows: there is no position among them and no
// solid around.
func (b *binder) overRows(rel *relation.Bound, r *lang.Relation, in bound) (bound, error) {
	for _, c := range r.Clauses {
		if err := b.takes(rel, c); err != nil {
			return bound{}, err
		}
	}
	clauses, ok := rowClauses[rel.Def.Noun]
	if !ok {
		return bound{}, b.notYet(&r.Noun, rel.Def.Noun)
	}
	beside, err := clauses(b, rel, r, in)
	if err != nil {
		return bound{}, err
	}
	return b.relationNode(rel, r, in, beside...)
}

// column finds a column of a relation's input that a clause names.
func (b *binder) column(rel *relation.Bound, n *lang.Name) (int, error) {
	return newScope("", rel.Name, rel.Input).resolve(b, &lang.Column{At: n.At, Name: *n})
}

// needsClause refuses a relation without a clause that it cannot do without.
func (b *binder) needsClause(rel *relation.Bound, r *lang.Relation, clause, example string) error {
	return problem.New("needs-clause", b.at(r), "%s needs %s", rel.Def.Noun, clause).WithHint("for example %s", example)
}
