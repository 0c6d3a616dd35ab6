package lang

// Levels of set expressions, from loose to tight.
const (
	levelSet = iota
	levelTerm
	levelCore
)

func (w *printer) bracketedQuery(q *Query) {
	w.put("(")
	w.query(q)
	w.put(")")
}

func (w *printer) query(q *Query) {
	if len(q.With) > 0 {
		w.put("WITH ")
		list(w, q.With, w.cte)
		w.put(" ")
	}
	w.body(q.Body, levelSet)
	if len(q.OrderBy) > 0 {
		w.put(" ORDER BY ")
		list(w, q.OrderBy, w.key)
	}
	if q.Limit != nil {
		w.put(" LIMIT ")
		w.value(q.Limit)
	}
	if q.Offset != nil {
		w.put(" OFFSET ")
		w.value(q.Offset)
	}
}

func (w *printer) cte(c *CTE) {
	w.name(c.Name)
	if len(c.Columns) > 0 {
		w.put(" ")
		w.names(c.Columns)
	}
	w.put(" AS ")
	w.bracketedQuery(c.Query)
}

func (w *printer) key(k *Key) {
	w.expr(k.Expr, levelOr)
	if k.Descending {
		w.put(" DESC")
	}
	if k.Nulls != NullsDefault {
		w.put(" NULLS ", string(k.Nulls))
	}
}

// body writes a set expression, in brackets where it is looser than its place.
func (w *printer) body(b Body, level int) {
	switch b := b.(type) {
	case *Select:
		w.selection(b)
	case *Values:
		w.put("VALUES ")
		list(w, b.Rows, w.row)
	case *Query:
		w.bracketedQuery(b)
	case *SetOp:
		own := levelSet
		if b.Kind == Intersect {
			own = levelTerm
		}
		if own < level {
			w.put("(")
		}
		w.body(b.Left, own)
		w.put(" ", string(b.Kind), " ")
		if b.All {
			w.put("ALL ")
		}
		w.body(b.Right, own+1)
		if own < level {
			w.put(")")
		}
	}
}

func (w *printer) row(r *Row) {
	w.put("(")
	w.exprs(r.Values)
	w.put(")")
}

func (w *printer) exprs(list []Expr) {
	for i, e := range list {
		if i > 0 {
			w.put(", ")
		}
		w.expr(e, levelOr)
	}
}

func (w *printer) selection(s *Select) {
	w.put("SELECT ")
	if s.Distinct {
		w.put("DISTINCT ")
	}
	list(w, s.Items, w.item)
	if len(s.From) > 0 {
		w.put(" FROM ")
		list(w, s.From, func(s Source) { w.source(s, false) })
	}
	if s.Where != nil {
		w.put(" WHERE ")
		w.expr(s.Where, levelOr)
	}
	if len(s.GroupBy) > 0 {
		w.put(" GROUP BY ")
		w.exprs(s.GroupBy)
	}
	if s.Having != nil {
		w.put(" HAVING ")
		w.expr(s.Having, levelOr)
	}
}

func (w *printer) item(it *Item) {
	switch {
	case it.Star && !it.Qualifier.IsZero():
		w.name(it.Qualifier)
		w.put(".*")
	case it.Star:
		w.put("*")
	default:
		w.expr(it.Expr, levelOr)
		w.optional(" AS ", it.Alias)
	}
}

// source writes a source; a join that is the right side of another, or that has an
// alias, stands in brackets.
func (w *printer) source(s Source, right bool) {
	switch s := s.(type) {
	case *NameSource:
		w.name(s.Name)
	case *QuerySource:
		w.bracketedQuery(s.Query)
	case *RelationSource:
		w.relation(s.Relation)
	case *JoinSource:
		bracket := right || !s.Alias.IsZero()
		if bracket {
			w.put("(")
		}
		w.join(s)
		if bracket {
			w.put(")")
		}
	}
	a := s.Aliasing()
	w.optional(" AS ", a.Alias)
	if len(a.Columns) > 0 {
		w.put(" ")
		w.names(a.Columns)
	}
}

func (w *printer) join(j *JoinSource) {
	w.source(j.Left, false)
	if j.Kind == InnerJoin {
		w.put(" JOIN ")
	} else {
		w.put(" ", string(j.Kind), " JOIN ")
	}
	if by := lastBy(j.Right); by != nil && by.On.IsZero() && j.On != nil {
		w.put("(")
		w.source(j.Right, true)
		w.put(")")
	} else {
		w.source(j.Right, true)
	}
	if j.On != nil {
		w.put(" ON ")
		w.expr(j.On, levelOr)
	}
	if len(j.Using) > 0 {
		w.put(" USING ")
		w.names(j.Using)
	}
}

func (w *printer) relation(r *Relation) {
	w.name(r.Noun)
	if r.Between != nil {
		w.put(" BETWEEN ")
		w.point(r.Between)
		w.put(" AND ")
		w.point(r.And)
	} else {
		w.put(" OF ")
		w.operand(r.Operand)
	}
	for _, c := range r.Clauses {
		w.put(" ")
		w.clause(c)
	}
}
