package lang

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// beginsQuery tells whether the token at i is the first of a query without brackets.
func (p *parser) beginsQuery(i int) bool {
	switch p.toks[i].Type {
	case kSelect, kWith:
		return true
	case kValues:
		return p.toks[min(i+1, len(p.toks)-1)].Type == tokLeft
	}
	return false
}

// opensQuery tells whether the "(" at i opens a query, rather than an expression, a
// join or a relation: ((SELECT 1) UNION SELECT 2) does, ((SELECT 1) + 2) does not, nor
// does ((SELECT 1) AS a CROSS JOIN b). From the innermost bracket outwards, what
// follows the closing one decides.
func (p *parser) opensQuery(i int) bool {
	inner := i
	for p.toks[inner].Type == tokLeft {
		if inner++; inner-i > maxDepth {
			return false
		}
	}
	if inner == i || !p.beginsQuery(inner) {
		return false
	}
	for k := inner - 1; k > i; k-- {
		closing := p.toks[k].Pos.Column
		if closing == 0 {
			return true
		}
		switch p.toks[closing+1].Type {
		case tokRight, kUnion, kExcept, kIntersect, kOrder, kLimit:
		default:
			return false
		}
	}
	return true
}

// bracketedQuery reads "(" query ")".
func (p *parser) bracketedQuery() *Query {
	opened := p.open("( and a query")
	outer := p.afterRelation
	query := p.query()
	p.closeQuery(opened)
	p.afterRelation = outer
	return query
}

// closeQuery passes the ")" behind a query, with the hints that the end of a query has.
func (p *parser) closeQuery(opened *lexer.Token) {
	if !p.is(tokRight) && !p.is(tokEOF) {
		p.queryEnd("a closing )", opened)
	}
	p.close(opened, "")
}

// query reads a query: WITH, the set expression, ORDER BY, LIMIT.
func (p *parser) query() *Query {
	p.enter()
	defer p.leave()
	start := p.start()
	q := &Query{}
	if p.take(kWith) {
		for {
			q.With = append(q.With, p.cte())
			if !p.take(tokComma) {
				break
			}
		}
		if !p.beginsQuery(p.i) && !p.is(tokLeft) {
			p.fail("a comma or the query that uses the names of WITH")
		}
	}
	q.Body = p.set()
	if p.take(kOrder) {
		p.needWord(kBy)
		q.OrderBy = p.keys()
	}
	if p.take(kLimit) {
		q.Limit = p.value("a number of rows")
		if p.take(kOffset) {
			q.Offset = p.value("a number of rows to pass over")
		}
	} else if p.is(kOffset) {
		p.refuse("OFFSET stands behind a LIMIT", "LIMIT n OFFSET m")
	}
	q.At = p.since(start)
	if inner, bracketed := q.Body.(*Query); bracketed && len(q.With) == 0 && len(q.OrderBy) == 0 && q.Limit == nil {
		return inner
	}
	return q
}

func (p *parser) cte() *CTE {
	start := p.start()
	c := &CTE{Name: p.name("a name for a query of WITH")}
	if c.Name.Is("RECURSIVE") && isName(p.kind()) {
		p.refuse("there is no WITH RECURSIVE", "a query of WITH uses tables and the queries before it, not itself")
	}
	if p.is(tokLeft) {
		c.Columns = p.names("the name of a column")
	}
	p.needWord(kAs)
	c.Query = p.bracketedQuery()
	c.At = p.since(start)
	return c
}

func (p *parser) keys() []*Key {
	list := []*Key{p.key()}
	for p.take(tokComma) {
		list = append(list, p.key())
	}
	return list
}

func (p *parser) key() *Key {
	start := p.start()
	k := &Key{Expr: p.expr()}
	if p.take(kDesc) {
		k.Descending = true
	} else {
		p.take(kAsc)
	}
	if p.take(kNulls) {
		switch {
		case p.take(kFirst):
			k.Nulls = NullsFirst
		case p.take(kLast):
			k.Nulls = NullsLast
		default:
			p.fail("FIRST or LAST")
		}
	}
	k.At = p.since(start)
	return k
}

// set reads terms that UNION and EXCEPT join, from left to right.
func (p *parser) set() Body {
	start, count := p.start(), 0
	left := p.term()
	for p.isOneOf(kUnion, kExcept) {
		p.link(&count)
		kind := Union
		if p.next().Type == kExcept {
			kind = Except
		}
		all := p.allOrDistinct()
		right := p.term()
		left = &SetOp{At: p.since(start), Kind: kind, All: all, Left: left, Right: right}
	}
	return left
}

// term reads cores that INTERSECT joins; it binds tighter than UNION and EXCEPT.
func (p *parser) term() Body {
	start, count := p.start(), 0
	left := p.core()
	for p.is(kIntersect) {
		p.link(&count)
		p.next()
		all := p.allOrDistinct()
		right := p.core()
		left = &SetOp{At: p.since(start), Kind: Intersect, All: all, Left: left, Right: right}
	}
	return left
}

func (p *parser) allOrDistinct() bool {
	if p.take(kAll) {
		return true
	}
	p.take(kDistinct)
	return false
}

func (p *parser) core() Body {
	switch {
	case p.is(kSelect):
		return p.selection()
	case p.follows(kValues, tokLeft):
		return p.values()
	case p.is(tokLeft):
		query := p.bracketedQuery()
		if len(query.With) == 0 && len(query.OrderBy) == 0 && query.Limit == nil {
			return query.Body
		}
		return query
	}
	p.failHint("SELECT, VALUES or a query in brackets", nearHint(p.tok(), []string{"SELECT", "VALUES", "WITH"}))
	return nil
}

func (p *parser) values() *Values {
	start := p.next().Pos.Offset
	v := &Values{Rows: []*Row{p.row()}}
	for p.take(tokComma) {
		v.Rows = append(v.Rows, p.row())
	}
	v.At = p.since(start)
	return v
}

func (p *parser) row() *Row {
	start := p.start()
	opened := p.open("( and the values of a row")
	r := &Row{Values: p.exprs()}
	p.close(opened, "a comma")
	r.At = p.since(start)
	return r
}

// exprs reads one or more expressions with commas between.
func (p *parser) exprs() []Expr {
	list := []Expr{p.expr()}
	for p.take(tokComma) {
		list = append(list, p.expr())
	}
	return list
}

func (p *parser) selection() *Select {
	start := p.next().Pos.Offset
	s := &Select{}
	p.afterRelation = false
	if p.take(kDistinct) {
		s.Distinct = true
	} else {
		p.take(kAll)
	}
	for {
		s.Items = append(s.Items, p.item())
		if !p.take(tokComma) {
			break
		}
		if p.is(kFrom) {
			p.refuse("there is a comma too many before FROM", "")
		}
	}
	if p.take(kFrom) {
		s.From = p.from()
	}
	if p.take(kWhere) {
		s.Where = p.expr()
	}
	if p.take(kGroup) {
		p.needWord(kBy)
		s.GroupBy = p.exprs()
	}
	if p.take(kHaving) {
		s.Having = p.expr()
	}
	s.At = p.since(start)
	return s
}

func (p *parser) item() *Item {
	start := p.start()
	it := &Item{}
	switch {
	case p.take(tokStar):
		it.Star = true
	case isName(p.kind()) && p.ahead(1) == tokDot && p.ahead(2) == tokStar:
		it.Qualifier = p.anyName()
		p.i += 2
		it.Star = true
	default:
		if p.is(kFrom) {
			p.refuse("nothing stands between SELECT and FROM", "name columns, or write * for all")
		}
		it.Expr = p.expr()
		it.Alias = p.optionalAlias()
	}
	it.At = p.since(start)
	return it
}

// optionalAlias reads AS name, or a name that is neither reserved nor a stop word.
func (p *parser) optionalAlias() Name {
	switch {
	case p.take(kAs):
		if p.is(tokText) {
			p.failHint("a name", `names with blanks stand in double quotes: "`+strings.Trim(p.tok().Value, "'")+`"`)
		}
		return p.name("a name after AS")
	case isBareAlias(p.kind()):
		p.alias = p.i
		return p.anyName()
	}
	return Name{}
}

// queryEnd stops where a query should be over but is not. What should stand there is
// the caller's to say; opened is the bracket around the query, or nil.
func (p *parser) queryEnd(what string, opened *lexer.Token) {
	t := p.tok()
	if t.Type != tokBad {
		p.wordsOfOthers(t)
	}
	switch {
	case p.alias >= 0 && p.alias == p.i-1, t.Type == tokBad:
	case isComparison(t.Type):
		p.comparisonChain()
	case t.Type == kNatural:
		p.refuse("there is no NATURAL JOIN", "say which columns: JOIN … USING (…), or ON condition")
	case isQueryWord(t.Type):
		p.refuse(wordText[t.Type]+" stands out of order here, or twice",
			"SELECT … FROM … WHERE … GROUP BY … HAVING … ORDER BY … LIMIT …")
	case t.Type == tokRight && opened == nil:
		p.refuse("this ) closes no (", "")
	case p.looksLikeAlias():
		p.refuse("'"+t.Value+"' needs AS here to be an alias", "write AS "+t.Value)
	case isClauseWord(t.Type) && p.afterRelation:
		p.refuse(p.clauseWords()+" is a clause of the relation and stands directly behind it, before "+p.beforeClause(), "")
	case isClauseWord(t.Type):
		p.refuse(p.clauseWords()+" is a clause of a relation, such as CELLS OF hall, and there is none before it", "")
	}
	err := p.fault(what)
	if err.Hint == "" {
		if err.Hint = nearHint(t, afterItemWords); err.Hint == "" && opened == nil && statementWords[t.Type] {
			err.Hint = "is a ; missing before it?"
		}
		if opened != nil && t.Type != tokBad {
			err.opened = tokenStart(opened) + 1
		}
	}
	panic(err)
}

// wordsOfOthers stops at words that ask elsewhere for what is written differently here.
// Some have been taken for an alias already.
func (p *parser) wordsOfOthers(t *lexer.Token) {
	before := &lexer.Token{}
	if p.i > 0 {
		before = &p.toks[p.i-1]
	}
	is := func(t *lexer.Token, word string) bool { return t.Type != tokQuoted && strings.EqualFold(t.Value, word) }
	switch {
	case is(before, "FETCH") && (is(t, "FIRST") || is(t, "NEXT")):
		p.refuse("there is no FETCH FIRST", "LIMIT 5 takes the first 5 rows")
	case is(before, "TOP") && t.Type == tokNumber:
		p.refuse("there is no TOP", "LIMIT "+t.Value+" stands at the end of the query")
	case is(before, "DIV") && (t.Type == tokNumber || t.Type == tokLeft || isName(t.Type)):
		p.refuse("there is no DIV", "FLOOR(a / b) is the whole quotient of positive numbers, and a % b the rest")
	case is(t, "ILIKE"):
		p.refuse("there is no ILIKE", "UPPER(x) LIKE 'AB%' does not tell capitals from small letters")
	case is(t, "SIMILAR"), is(t, "REGEXP"), is(t, "RLIKE"):
		p.refuse("there are no regular expressions", "LIKE knows % for any text and _ for any one character")
	case is(before, "GROUPING") && is(t, "SETS"):
		p.refuse("there are no GROUPING SETS", "UNION ALL puts the groups of several queries one under the other")
	}
}

// looksLikeAlias tells whether a stop word stands where an alias was meant: behind an
// item or a source and before what can follow one.
func (p *parser) looksLikeAlias() bool {
	if t := p.kind(); t < firstStop || t >= firstPlain || p.i == 0 || p.toks[p.i-1].Type == kAs {
		return false
	}
	switch p.ahead(1) {
	case tokEOF, tokComma, tokRight, kFrom, kWhere, kGroup, kOrder, kJoin, kOn:
		return true
	}
	return false
}

func isQueryWord(t lexer.TokenType) bool {
	switch t {
	case kFrom, kWhere, kGroup, kHaving, kOrder, kLimit, kOffset:
		return true
	}
	return false
}

// beforeClause names what stands between a relation and a clause that came too late.
func (p *parser) beforeClause() string {
	for i := p.i - 1; i > 0; i-- {
		switch t := p.toks[i].Type; t {
		case kWhere, kGroup, kHaving, kOrder, kLimit, kJoin, kOn:
			return wordText[t]
		}
	}
	return "anything else"
}
