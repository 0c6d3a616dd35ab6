package prompt

import (
	"slices"
	"strings"

	"nearcell/lang"
)

// want is a sort of names that may stand at the cursor.
type want uint8

const (
	wantNothing   want = iota // a new name, a number: nothing is known of it
	wantColumns               // columns of the sources, and functions
	wantBare                  // columns without functions: behind FOR EACH, BY
	wantSources               // what FROM takes: relations too
	wantOperand               // what OF takes: names only
	wantSolids                // what WITHIN takes
	wantObjects               // all names of the catalog
	wantCampaigns             // by the kind of thing
	wantTables
	wantViews
	wantTopics   // what LIST takes
	wantSettings // what SET takes
	wantHelp     // what HELP takes
	wantTypes    // what CAST takes
	wantHeadings // columns of the file that the statement reads
)

// place is what the cursor stands in.
type place struct {
	want      want
	with      string   // the text of WITH, as far as its queries are closed
	sources   []source // of the queries around the cursor, the innermost first
	qualifier string   // what stands before the point: c. of c.temp
	relation  *source  // the relation whose clauses may stand here, or whose clause this is
	file      string   // the file that a CREATE statement reads
	noQuery   bool     // there is no query around the cursor
	noFrom    bool     // the query around the cursor has no FROM so far
	last      token    // before the cursor
	topic     string   // the words behind HELP so far
}

// source is an item behind FROM.
type source struct {
	name string // the alias, or the name; empty for neither
	text string // without the alias
	noun string // of a relation
}

// level is one bracket around the cursor: its tokens, the cursor's index, and
// the tokens before the bracket in the level above.
type level struct {
	list []token
	at   int
}

// levels lists the brackets around the cursor from the outside in.
func levels(list []token) []level {
	for i, t := range list {
		if t.kind == here {
			return []level{{list, i}}
		}
		if t.kind == group {
			if inner := levels(t.inner); inner != nil {
				return append([]level{{list, i}}, inner...)
			}
		}
	}
	return nil
}

// before is the n-th token before the cursor or the bracket (1: the nearest).
func (l level) before(n int) token {
	if l.at-n < 0 {
		return token{kind: mark}
	}
	return l.list[l.at-n]
}

// placeOf says what the cursor of a statement stands in. src is the text that
// the tokens were cut from.
func placeOf(src string, list []token) place {
	nested := levels(list)
	if nested == nil {
		return place{}
	}
	p := place{with: withText(src, list)}
	p.findSources(src, nested)
	p.file = fileOf(list)
	inner := nested[len(nested)-1]
	p.last = inner.before(1)
	if p.last.text == "." && inner.before(2).kind != mark {
		p.qualifier = inner.before(2).text
		p.want = wantBare
		return p
	}
	p.want = p.wanted(src, nested)
	if p.want == wantHelp {
		for _, t := range inner.list[1:inner.at] {
			p.topic += t.text + " "
		}
	}
	if p.want == wantColumns && endsOperand(p.last) {
		p.want = wantNothing // an alias
	}
	return p
}

// endsOperand tells whether an expression may end with a token: behind it stands
// an operator, or a new name.
func endsOperand(t token) bool {
	switch t.kind {
	case quoted, text, number, param, group:
		return true
	case word:
		return t.isOne("NULL", "TRUE", "FALSE") || !reserved(t.text) && !t.isOne("BY")
	}
	return false
}

// wanted goes by the words before the cursor, then by the clause it is in.
func (p *place) wanted(src string, nested []level) want {
	inner := nested[len(nested)-1]
	last, first := inner.before(1), list0(nested[0].list)
	if w, ok := wantedByStatement(first, nested[0]); ok && len(nested) == 1 {
		return w
	}
	switch {
	case last.isOne("FROM", "JOIN"):
		return wantSources
	case last.is("OF") && inner.before(2).isOne("ENVELOPE"):
		return wantCampaigns
	case last.isOne("OF", "AGAINST", "AMONG", "EXPECTING"):
		return wantOperand
	case last.isOne("WITHIN", "PLUS", "MINUS"):
		return wantSolids
	case last.is("AS"):
		return wantedBehindAs(nested)
	case last.isOne("ID", "EACH") && last.kind == word && first.is("CREATE") && last.is("ID"):
		return wantHeadings
	}
	if query := isQuery(inner); !query && len(nested) > 1 {
		return p.wantedInBracket(src, nested)
	}
	return p.wantedInQuery(src, inner)
}

func list0(list []token) token {
	if len(list) == 0 {
		return token{kind: mark}
	}
	return list[0]
}

// wantedByStatement is for statements that are not about queries.
func wantedByStatement(first token, l level) (want, bool) {
	second := l.at == 1
	switch {
	case first.is("LIST"):
		return wantTopics, second
	case first.is("SET"):
		return wantSettings, second
	case first.is("HELP"):
		return wantHelp, true
	case first.is("DESCRIBE") && second:
		return wantObjects, true
	case first.is("DROP") && l.at == 2:
		return map[string]want{"CAMPAIGN": wantCampaigns, "TABLE": wantTables, "SOLID": wantSolids,
			"VIEW": wantViews}[strings.ToUpper(l.before(1).text)], true
	case first.is("CREATE") && l.before(1).isOne("CAMPAIGN", "TABLE", "SOLID", "VIEW", "FRAME") && l.at <= 4:
		return wantNothing, true
	case first.is("LET") && second:
		return wantNothing, true
	}
	return wantNothing, false
}

// wantedBehindAs is a solid in CREATE SOLID … AS, a type in CAST, else a new name.
func wantedBehindAs(nested []level) want {
	inner := nested[len(nested)-1]
	if len(nested) == 1 && list0(inner.list).is("CREATE") && slices.ContainsFunc(inner.list[:inner.at], func(t token) bool { return t.is("SOLID") }) {
		return wantSolids
	}
	if len(nested) > 1 && nested[len(nested)-2].before(1).is("CAST") {
		return wantTypes
	}
	return wantNothing
}

// isQuery tells whether a level holds a query of its own.
func isQuery(l level) bool {
	return slices.ContainsFunc(l.list[:l.at], func(t token) bool { return t.isOne("SELECT", "WITH", "VALUES") })
}

// wantedInBracket goes by what the bracket stands behind.
func (p *place) wantedInBracket(src string, nested []level) want {
	outer, inner := nested[len(nested)-2], nested[len(nested)-1]
	opener, opener2 := outer.before(1), outer.before(2)
	switch {
	case inner.at == 0 && opener.isOne("OF", "FROM", "JOIN", "AT", "AGAINST", "AMONG", "EXPECTING"):
		return wantSources
	case opener.is("WITHIN"), opener.is("IN") && opener2.is("MEASURED"):
		return wantSolids
	case opener.is("EACH"), opener.is("FOR"):
		p.relation = relationBefore(src, outer)
		return wantBare
	case list0(nested[0].list).is("CREATE") && opener.isOne("POSITION", "UNITS", "TIME", "CENSORED"):
		return wantHeadings
	case opener.is("OMITTING"), opener.is("KEEP"):
		return wantNothing
	}
	if relationBefore(src, inner) != nil {
		return p.wantedInQuery(src, inner)
	}
	if len(nested) > 2 && !isQuery(outer) {
		return p.wantedInBracket(src, nested[:len(nested)-1])
	}
	return wantColumns
}

// wantedInQuery goes by the clause of the query.
func (p *place) wantedInQuery(src string, l level) want {
	switch clauseOf(l) {
	case "FROM":
		p.relation = relationBefore(src, l)
		last := l.before(1)
		switch {
		case last.text == ",":
			return wantSources
		case p.relation == nil:
			return wantNothing
		case last.isOne("EACH", "FOR", "BY", "ON"):
			return wantBare
		case last.is("AT"):
			return wantOperand
		}
		return wantNothing
	case "":
		if r := relationBefore(src, l); r != nil {
			p.relation = r
			return wantBare
		}
	case "LIMIT":
		return wantNothing
	}
	return wantColumns
}

// clauseOf is the part of a query that the cursor is in.
func clauseOf(l level) string {
	for i := l.at - 1; i >= 0; i-- {
		t := l.list[i]
		switch {
		case t.isOne("SELECT", "WHERE", "HAVING", "LIMIT", "USING"):
			return strings.ToUpper(t.text)
		case t.is("ON") && !onOfRelation(l.list[:i]):
			return "ON"
		case t.is("BY") && i > 0 && l.list[i-1].isOne("GROUP", "ORDER"):
			return "BY"
		case t.is("FROM") && (i == 0 || !l.list[i-1].is("DISTINCT")), t.is("JOIN"):
			return "FROM"
		}
	}
	return ""
}

// onOfRelation tells whether an ON belongs to BY … ON t.
func onOfRelation(list []token) bool {
	return len(list) >= 2 && list[len(list)-2].is("BY")
}

// relationBefore is the relation that the cursor follows within its level, with
// nothing of the query in between.
func relationBefore(src string, l level) *source {
	for i := l.at - 1; i > 0; i-- {
		t := l.list[i]
		if t.text == "," || endsSource(t) || t.is("FROM") && !l.list[i-1].is("DISTINCT") {
			return nil
		}
		if t.is("OF") && !l.list[i-1].is("ENVELOPE") {
			if i+1 >= l.at {
				return nil // the operand is not there yet
			}
			s := sourceOf(src, l.list[i-1:l.at])
			return &s
		}
	}
	return nil
}

// withText is the text of a statement's WITH up to its last closed query.
func withText(src string, list []token) string {
	for i, t := range list {
		if t.isOne("SELECT", "VALUES") {
			return ""
		}
		if !t.is("WITH") {
			continue
		}
		end := -1
		for j := i + 1; j+2 < len(list); j++ {
			if list[j+1].is("AS") && list[j+2].kind == group && !list[j+2].open {
				end = list[j+2].offset + len(list[j+2].text)
				j += 2
				if j+1 >= len(list) || list[j+1].text != "," {
					break
				}
				continue
			}
			break
		}
		if end < 0 {
			return ""
		}
		return src[t.offset:end]
	}
	return ""
}

// withNames are the names that WITH gives.
func withNames(with string) []string {
	list := scan(with, 0, -1)
	var names []string
	for i := range list {
		if i+1 < len(list) && list[i+1].is("AS") {
			names = append(names, list[i].text)
		}
	}
	return names
}

// fileOf is the file that CREATE … FROM 'file' reads.
func fileOf(list []token) string {
	if !list0(list).is("CREATE") {
		return ""
	}
	for i := 1; i < len(list); i++ {
		if list[i].kind == text && !list[i].open && list[i-1].is("FROM") {
			return strings.ReplaceAll(strings.Trim(list[i].text, "'"), "''", "'")
		}
	}
	return ""
}

// reserved tells whether a word can only be a keyword.
func reserved(w string) bool {
	return slices.ContainsFunc(lang.ReservedWords(), func(r string) bool { return strings.EqualFold(r, w) })
}
