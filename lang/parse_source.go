package lang

// from reads the sources behind FROM.
func (p *parser) from() []Source {
	list := []Source{p.joined()}
	for p.take(tokComma) {
		list = append(list, p.joined())
	}
	return list
}

// joined reads a source and the joins behind it, from left to right.
func (p *parser) joined() Source {
	start, count := p.start(), 0
	left := p.source()
	for {
		kind, isJoin := p.joinWords()
		if !isJoin {
			return left
		}
		p.link(&count)
		j := &JoinSource{Kind: kind, Left: left, Right: p.source()}
		if kind != CrossJoin {
			p.joinCondition(j)
		} else if p.isOneOf(kOn, kUsing) {
			p.refuse("a CROSS JOIN has no condition", "write JOIN … ON condition")
		}
		j.At = p.since(start)
		left = j
	}
}

func (p *parser) joinWords() (kind JoinKind, isJoin bool) {
	switch {
	case p.take(kJoin):
		return InnerJoin, true
	case p.take(kInner):
		kind = InnerJoin
	case p.take(kCross):
		kind = CrossJoin
	case p.isOneOf(kLeft, kRight, kFull):
		kind = JoinKind(wordText[p.next().Type])
		p.take(kOuter)
	case p.is(kNatural):
		p.refuse("there is no NATURAL JOIN", "say which columns: JOIN … USING (…), or ON condition")
	default:
		return "", false
	}
	p.needWord(kJoin)
	return kind, true
}

func (p *parser) joinCondition(j *JoinSource) {
	switch {
	case p.take(kOn):
		j.On = p.expr()
	case p.take(kUsing):
		j.Using = p.names("the name of a column that both sides have")
	case lastBy(j.Right) != nil:
		p.failHint("ON or USING", "the ON before belongs to BY; a relation that is joined needs an alias: AS name ON condition")
	default:
		p.failHint("ON or USING", "a join without a condition is a CROSS JOIN")
	}
}

// lastBy gives the BY clause with which a source without an alias ends, or nil. An ON
// behind it is its own.
func lastBy(s Source) *ByClause {
	r, ok := s.(*RelationSource)
	if !ok || !r.Alias.IsZero() || len(r.Relation.Clauses) == 0 {
		return nil
	}
	by, _ := r.Relation.Clauses[len(r.Relation.Clauses)-1].(*ByClause)
	return by
}

// source reads one source with its alias.
func (p *parser) source() Source {
	p.enter()
	defer p.leave()
	start := p.start()
	switch {
	case p.is(tokLeft) && p.opensQuery(p.i):
		s := &QuerySource{Query: p.bracketedQuery(), Aliased: p.sourceAlias()}
		s.At = p.since(start)
		return s
	case p.is(tokLeft):
		return p.bracketedSource()
	case p.beginsRelation():
		return p.relationSource()
	case p.beginsQuery(p.i):
		p.refuse("a query after FROM stands in brackets", "FROM (SELECT …) AS name")
	}
	if p.is(tokText) {
		p.failHint("a campaign, a table, a view, a relation or a query in brackets",
			"a file is read by CREATE CAMPAIGN or CREATE TABLE first; names stand without quotes or in double ones")
	}
	s := &NameSource{Name: p.name("a campaign, a table, a view, a relation or a query in brackets")}
	if p.is(tokLeft) {
		p.refuse("'"+cutShort(s.Name.Text)+"' is called like a function, but a source is a name or a relation", s.Name.Text+" OF (…)?")
	}
	if isClauseWord(p.kind()) && !p.looksLikeAlias() {
		p.refuse(p.clauseWords()+" is a clause of a relation, and '"+cutShort(s.Name.Text)+"' alone is none",
			"CELLS OF "+printName(s.Name)+" "+p.clauseWords()+" …")
	}
	s.Aliased = p.sourceAlias()
	s.At = p.since(start)
	return s
}

func (p *parser) sourceAlias() Aliased {
	a := Aliased{Alias: p.optionalAlias()}
	if !a.Alias.IsZero() && p.is(tokLeft) {
		a.Columns = p.names("the name of a column")
	}
	return a
}

// bracketedSource reads "(" from ")" with an alias. Brackets around a single source
// without an alias of its own only carry the alias.
func (p *parser) bracketedSource() Source {
	start := p.start()
	opened := p.next()
	inner := p.joined()
	if !p.is(tokRight) && p.is(tokComma) {
		p.refuse("a comma joins sources only outside brackets", "write CROSS JOIN")
	}
	p.close(opened, "")
	had := *inner.Aliasing()
	before := p.i
	alias := p.sourceAlias()
	if alias.Alias.IsZero() {
		return inner
	}
	if !had.Alias.IsZero() {
		p.i = before
		p.refuse("the source in brackets has the alias '"+cutShort(had.Alias.Text)+"' already", "")
	}
	*inner.Aliasing() = alias
	at := p.since(start)
	switch s := inner.(type) {
	case *NameSource:
		s.At = at
	case *QuerySource:
		s.At = at
	case *RelationSource:
		s.At = at
	case *JoinSource:
		s.At = at
	}
	return inner
}

// relationSource reads a relation and its alias, which needs AS here.
func (p *parser) relationSource() Source {
	start := p.start()
	s := &RelationSource{Relation: p.relation()}
	p.afterRelation = true
	if p.is(kAs) {
		s.Aliased = p.sourceAlias()
		if isClauseWord(p.kind()) {
			p.refuse(p.clauseWords()+" stands before the alias", "move AS "+printName(s.Alias)+" behind the last clause")
		}
	} else if isBareAlias(p.kind()) {
		p.afterClauses()
	}
	s.At = p.since(start)
	return s
}

// clauseWords spells the clause at hand as its user knows it.
func (p *parser) clauseWords() string {
	if p.follows(kFor, kEach) {
		return "FOR EACH"
	}
	return wordText[p.kind()]
}

// afterClauses stops at a word behind a relation that is no clause.
func (p *parser) afterClauses() {
	t := p.tok()
	if hint := nearHint(t, clauseAndQueryWords); hint != "" {
		p.failHint("a clause or the end of the relation", hint)
	}
	if before := &p.toks[p.i-1]; before.Type == tokNumber && isWord(t.Type) {
		p.refuse("'"+cutShort(before.Value+" "+t.Value)+"' is no value here", "a time is written INTERVAL '15' MINUTE; units of length are left out")
	}
	name := printName(Name{Text: t.Value})
	if t.Type == tokQuoted {
		name = t.Value
	}
	p.refuse("'"+cutShort(t.Value)+"' is no clause of a relation, and an alias behind a relation needs AS", "write AS "+name)
}

// clauseAndQueryWords are hinted at behind a relation.
var clauseAndQueryWords = append(wordRange(kWithin, firstPlain), afterItemWords...)
