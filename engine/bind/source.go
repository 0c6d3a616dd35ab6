package bind

import (
	"errors"
	"path/filepath"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// from binds the sources of FROM, comma by comma.
func (b *binder) from(sources []lang.Source) (bound, error) {
	if len(sources) == 0 {
		return bound{&plan.One{}, &scope{}}, nil
	}
	all, err := b.fromSource(sources[0])
	if err != nil {
		return bound{}, err
	}
	for _, s := range sources[1:] {
		next, err := b.fromSource(s)
		if err != nil {
			return bound{}, behindComma(err, all.scope)
		}
		if err := b.clash(all.scope, next.scope, s); err != nil {
			return bound{}, err
		}
		all = bound{&plan.Join{Kind: plan.Inner, Left: all.node, Right: next.node}, all.scope.beside(next.scope)}
	}
	return all, nil
}

// behindComma says, where a join behind a comma asks for a source before it, that
// JOIN binds tighter than the comma.
func behindComma(err error, before *scope) error {
	var p *problem.Problem
	if !errors.As(err, &p) || p.Code != "no-source" {
		return err
	}
	for _, s := range before.sources {
		if s.alias != "" && strings.Contains(lang.Fold(p.Message), "'"+lang.Fold(s.alias)+"'") {
			p.Hint = "JOIN binds tighter than the comma, and its ON knows nothing before that: write CROSS JOIN in the place of the comma"
		}
	}
	return err
}

// clash refuses two sources under one name.
func (b *binder) clash(left, right *scope, n lang.Node) error {
	for _, l := range left.sources {
		for _, r := range right.sources {
			if l.alias != "" && lang.Fold(l.alias) == lang.Fold(r.alias) {
				return problem.New("same-name", b.at(n), "two sources are called '%s'", r.alias).
					WithHint("give one of them another name: %s AS other", r.what)
			}
		}
	}
	return nil
}

func (b *binder) fromSource(s lang.Source) (bound, error) {
	if *b.sources++; *b.sources > maxSources {
		return bound{}, problem.New("too-large", b.at(s), "the views and the names of WITH unfold into more than %d sources", maxSources).
			WithHint("CREATE TABLE … AS (query) keeps a step's rows")
	}
	var x bound
	var err error
	switch s := s.(type) {
	case *lang.NameSource:
		x, err = b.named(&s.Name)
	case *lang.QuerySource:
		x, err = b.subquery(s.Query)
	case *lang.RelationSource:
		x, err = b.relation(s.Relation)
	case *lang.JoinSource:
		x, err = b.join(s)
	default:
		return bound{}, problem.New("failed", b.at(s), "a source of an unknown kind")
	}
	if err != nil {
		return bound{}, err
	}
	x.scope, err = x.scope.renamed(b, s.Aliasing())
	return x, err
}

// queryName is what messages call a query without a name.
const queryName = "(query)"

// subquery binds a query in parentheses as a source without a name.
func (b *binder) subquery(q *lang.Query) (bound, error) {
	node, err := b.query(q)
	if err != nil {
		return bound{}, err
	}
	return bound{node, newScope("", queryName, node.Schema())}, nil
}

// named binds a name after FROM or OF: of WITH, else of the catalog.
func (b *binder) named(n *lang.Name) (bound, error) {
	if c := b.findCTE(n); c != nil {
		return b.bindCTE(c, n)
	}
	if b.meansVerdicts(n) {
		return b.verdicts(), nil
	}
	o, err := b.object(n)
	if err != nil {
		return bound{}, err
	}
	switch o.Kind {
	case catalog.Campaign, catalog.Table:
		s := scan(o)
		s.Fields = placed(o)
		return bound{s, newScope(o.Name, o.Name, s.Fields)}, nil
	case catalog.View:
		return b.view(n, o)
	case catalog.Solid:
		return bound{}, problem.New("wrong-kind", b.at(n), "'%s' is a solid, not a campaign, a table or a view", n.Text).
			WithHint("a solid stands after WITHIN")
	}
	return bound{}, problem.New("wrong-kind", b.at(n), "'%s' is a %s and has no rows", n.Text, strings.ToLower(o.Kind.String()))
}

// meansVerdicts reports whether a name is that of the list of verdicts; a thing of
// the catalog goes before it.
func (b *binder) meansVerdicts(n *lang.Name) bool {
	if !n.Is("VERDICTS") || b.env.Verdicts == nil {
		return false
	}
	_, err := b.env.Catalog.Get(n.Key())
	var none *catalog.ErrNoSuch
	return errors.As(err, &none)
}

// verdicts is the list of verdicts as a source. What was warned of when they were
// reached is said again, so that it travels with them.
func (b *binder) verdicts() bound {
	t := b.env.Verdicts()
	if b.env.VerdictWarnings != nil {
		for _, text := range b.env.VerdictWarnings() {
			b.say(note.Warning, note.Rows, "%s", text)
		}
	}
	o := &catalog.Object{Name: "VERDICTS", Kind: catalog.Table, Table: t}
	return bound{scan(o), newScope(o.Name, o.Name, t.Schema)}
}

func scan(o *catalog.Object) *plan.Scan {
	use := make([]int, len(o.Table.Schema))
	for i := range use {
		use[i] = i
	}
	return &plan.Scan{Name: o.Name, Kind: strings.ToLower(o.Kind.String()), Table: o.Table, Use: use, Fields: o.Table.Schema}
}

func (b *binder) findCTE(n *lang.Name) *cte {
	for c := b.ctes; c != nil; c = c.before {
		if c.def.Name.Key() == n.Key() {
			return c
		}
	}
	return nil
}

// bindCTE binds the query of a name of WITH, or gives what it was bound to.
func (b *binder) bindCTE(c *cte, at lang.Node) (bound, error) {
	kept := &c.bound[0]
	if b.quiet {
		kept = &c.bound[1]
	}
	if *kept == nil {
		inner := *b
		inner.ctes, inner.outer = c.before, c.outer
		node, err := inner.query(c.def.Query)
		if err != nil {
			return bound{}, err
		}
		name := c.def.Name.Text
		s := newScope(name, name, node.Schema())
		if len(c.def.Columns) > 0 {
			if err := s.rename(b, c.def.Columns); err != nil {
				return bound{}, err
			}
		}
		common := &plan.Common{Name: name, Plan: node}
		*kept = &bound{&plan.Shared{Common: common, Fields: node.Schema()}, s}
	}
	if b.outer != c.outer && plan.ReadsOuter((*kept).node) {
		return bound{}, b.notYet(at, "a name of WITH that depends on a row outside, in a query further inside,").
			WithHint("put its query there")
	}
	return **kept, nil
}

// object finds a name in the catalog.
func (b *binder) object(n *lang.Name) (*catalog.Object, error) {
	o, err := b.env.Catalog.Get(n.Key())
	if err == nil {
		b.sayChanged(o)
		return o, nil
	}
	var none *catalog.ErrNoSuch
	if !errors.As(err, &none) {
		return nil, problem.At(err, b.at(n))
	}
	p := problem.New("no-object", b.at(n), "there is no campaign, table or view '%s'", n.Text)
	didYouMean(p, n.Text, b.objectNames(catalog.Campaign, catalog.Table, catalog.View))
	if _, ok := relation.Lookup(n.Text); ok && p.Hint == "" {
		p.WithHint("a relation is made of sites: %s OF campaign", strings.ToUpper(n.Text))
	}
	if p.Hint == "" && n.Quoted && looksLikeFile(n.Text) {
		p.WithHint("a file is read first, its name between single quotes: CREATE TABLE … FROM '%s';", n.Text)
	}
	if p.Hint == "" && len(b.objectNames()) == 0 {
		p.WithHint("the catalog is empty: CREATE CAMPAIGN %s FROM 'file.csv';", n.Text)
	}
	return nil, p
}

// looksLikeFile reports whether a name has a folder or an ending, as files have.
func looksLikeFile(name string) bool {
	return strings.ContainsAny(name, `/\`) || filepath.Ext(name) != ""
}

// objectNames are the names in the catalog of the given kinds (none: all), and
// of WITH.
func (b *binder) objectNames(kinds ...catalog.Kind) []string {
	var names []string
	for c := b.ctes; c != nil; c = c.before {
		names = append(names, c.def.Name.Text)
	}
	list, err := b.env.Catalog.List(kinds...)
	if err != nil {
		return names // only a hint is lost
	}
	for _, o := range list {
		names = append(names, o.Name)
	}
	return names
}

// view binds a view where it is used: its text is read anew, so that the values
// of :name are those of the statement.
func (b *binder) view(n *lang.Name, o *catalog.Object) (bound, error) {
	if slices.Contains(b.views, o.Key) {
		return bound{}, problem.New("view-cycle", b.at(n), "the view '%s' uses itself: %s", o.Name,
			strings.Join(append(slices.Clone(b.views), o.Key), " uses "))
	}
	inner := &binder{env: b.env, sources: b.sources, views: append(slices.Clone(b.views), o.Key),
		source: &problem.Source{Name: "view " + o.Name, Text: o.Text}}
	q, err := inner.parseQuery(o.Text)
	if err != nil {
		return bound{}, err
	}
	node, err := inner.query(q)
	if err != nil {
		return bound{}, err
	}
	return bound{node, newScope(o.Name, o.Name, node.Schema())}, nil
}
