package prompt

import "slices"

// findSources gathers what stands behind FROM in the queries around the cursor,
// the innermost first, also behind the cursor: SELECT te| FROM CELLS OF hall.
func (p *place) findSources(src string, nested []level) {
	p.noQuery = true
	for i := len(nested) - 1; i >= 0; i-- {
		found := sourcesOf(src, nested[i].list)
		if p.noQuery && isQuery(nested[i]) {
			p.noQuery, p.noFrom = false, found == nil
		}
		p.sources = append(p.sources, found...)
	}
}

// sourcesOf lists the sources of the query whose tokens these are.
func sourcesOf(src string, list []token) []source {
	from := -1
	for i, t := range list {
		if t.is("FROM") && (i == 0 || !list[i-1].is("DISTINCT")) && (i == 0 || !list0(list).is("CREATE")) {
			from = i + 1
			break
		}
	}
	if from < 0 {
		return nil
	}
	var found []source
	start := from
	add := func(end int) {
		if end > start {
			found = append(found, sourceOf(src, list[start:end]))
		}
	}
	for i := from; i < len(list); i++ {
		t := list[i]
		switch {
		case t.text == "," || t.is("JOIN"):
			add(i)
			start = i + 1
		case t.is("ON") && !onOfRelation(list[:i]), t.is("USING"):
			add(i)
			start = len(list)
		case endsSource(t):
			add(i)
			start = len(list)
			if endsFrom(t) {
				return found
			}
		}
	}
	add(len(list))
	return found
}

// endsFrom tells whether a word ends the FROM of a query.
func endsFrom(t token) bool {
	return t.isOne("WHERE", "GROUP", "HAVING", "ORDER", "LIMIT", "UNION", "EXCEPT", "INTERSECT") || t.text == ";"
}

// endsSource tells whether a word cannot be within a source or its alias.
func endsSource(t token) bool {
	return endsFrom(t) || t.isOne("JOIN", "LEFT", "RIGHT", "FULL", "INNER", "CROSS", "SELECT")
}

// sourceOf takes the tokens of a source apart. A relation's alias needs AS;
// behind a name or a bracket it may stand alone.
func sourceOf(src string, list []token) source {
	list = slices.DeleteFunc(slices.Clone(list), func(t token) bool { return t.kind == here })
	if len(list) == 0 {
		return source{}
	}
	var s source
	relation := len(list) > 1 && list[1].is("OF")
	if relation {
		s.noun = list[0].text
	}
	end := len(list)
	for i, t := range list {
		if t.is("AS") && i > 0 {
			end = i
			if i+1 < len(list) {
				s.name = list[i+1].text
			}
			break
		}
	}
	if end == len(list) && !relation && len(list) > 1 && (list[1].kind == word || list[1].kind == quoted) {
		s.name, end = list[1].text, 1
	}
	last := list[end-1]
	s.text = src[list[0].offset : last.offset+len(last.text)]
	if s.name == "" && end == 1 && list[0].kind != group {
		s.name = list[0].text
	}
	return s
}
