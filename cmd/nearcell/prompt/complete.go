package prompt

import (
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine"
	"nearcell/lang"
)

// completer finds what may stand at the cursor.
type completer struct {
	session *engine.Session
	folder  string // relative files are looked for here
}

// candidate is a text that may stand at the cursor in place of what was typed.
type candidate struct {
	text string
	// keyword texts are typed in any case and follow the case of what was typed;
	// exact ones must match what was typed.
	keyword, exact bool
}

// complete lists what the word at the cursor may become, and what of it is
// typed. The candidates all begin with what is typed.
func (c *completer) complete(src string, cursor int) (typed string, list []string) {
	start := statementAt(src, cursor)
	head := src[start:cursor]
	var found []candidate
	switch unclosed(head) {
	case '\'':
		typed, found = c.inText(src[start:], head)
	case '"':
		typed = head[strings.LastIndexByte(head, '"'):]
		found = c.inStatement(src[start:], head[:len(head)-len(typed)], typed)
	case '*', '-':
		return "", nil
	default:
		typed = lastWord(head)
		before := head[:len(head)-len(typed)]
		if strings.HasSuffix(before, ":") {
			typed = ":" + typed
			for _, n := range c.session.ValueNames() {
				found = append(found, candidate{text: ":" + n})
			}
			break
		}
		found = c.inStatement(src[start:], before, typed)
	}
	for _, f := range found {
		if text, ok := f.fits(typed); ok && !slices.Contains(list, text) {
			list = append(list, text)
		}
	}
	return typed, list
}

// fits gives the candidate so that it begins with what was typed.
func (f candidate) fits(typed string) (string, bool) {
	if f.exact || !foldPrefix(f.text, typed) {
		return f.text, f.exact && strings.HasPrefix(f.text, typed) && f.text != typed
	}
	rest := f.text[len(typed):]
	upper, lower := caseOf(typed)
	bare := !strings.ContainsAny(f.text, `"'`)
	switch {
	case f.keyword && lower:
		rest = strings.ToLower(rest)
	case bare && upper:
		rest = strings.ToUpper(rest)
	}
	return typed + rest, rest != ""
}

// caseOf tells of what was typed whether all its letters are of one case.
func caseOf(typed string) (upper, lower bool) {
	upper = strings.ToUpper(typed) == typed && strings.ToLower(typed) != typed
	lower = strings.ToLower(typed) == typed && strings.ToUpper(typed) != typed
	return upper, lower
}

// lastWord is the word that touches the end of a text; none after a digit's number.
func lastWord(head string) string {
	at := len(head)
	for at > 0 {
		r, size := utf8.DecodeLastRuneInString(head[:at])
		if r != '_' && !unicode.IsLetter(r) && !unicode.IsDigit(r) && !unicode.IsMark(r) {
			break
		}
		at -= size
	}
	return head[at:]
}

// inStatement lists keywords and names behind a text; whole is the statement
// from its begin with what stands behind the cursor.
func (c *completer) inStatement(whole, before, typed string) []candidate {
	p := placeOf(whole, scan(whole, 0, len(before)+len(typed)))
	ask := before + " "
	if strings.TrimSpace(before) == "" {
		ask = ""
	}
	var list []candidate
	if acceptsName(ask) {
		list = c.names(p, typed)
	}
	if p.qualifier != "" {
		return c.names(p, typed)
	}
	if strings.HasPrefix(typed, `"`) {
		return list
	}
	if typed == "" && !acceptsName(ask) {
		list = append(list, c.filesBehind(scan(before, 0, -1))...)
	}
	return append(list, c.keywords(p, ask, typed)...)
}

// keywords are the words that the parser takes; behind a relation, the clauses
// that this relation has.
func (c *completer) keywords(p place, ask, typed string) []candidate {
	if p.last.is("EACH") && p.want == wantBare {
		return nil // it would be a column called each
	}
	var list []candidate
	var clauses []string
	known := false
	if p.relation != nil {
		clauses = engine.ClausesOf(p.relation.noun)
		known = clauses != nil
	}
	words := wordsAt(ask, typed)
	first := map[string]bool{}
	for _, w := range words {
		head, _, _ := strings.Cut(w, " ")
		first[head] = true
		if known && clauseWords()[head] || head == "OF" && !isNoun(p.last) {
			continue
		}
		list = append(list, candidate{text: w + " ", keyword: true})
	}
	for _, clause := range clauses {
		head, _, _ := strings.Cut(clause, " ")
		if first[head] && !hasClause(p.relation.text, clause) {
			list = append(list, candidate{text: clause + " ", keyword: true})
		}
	}
	return list
}

// isNoun tells whether a token is a relation's noun.
func isNoun(t token) bool { return t.isOne(engine.Nouns()...) }

// hasClause tells whether a relation's text has a clause already.
func hasClause(text, clause string) bool {
	words := strings.Fields(clause)
	list := scan(text, 0, -1)
	for i := range list {
		n := 0
		for n < len(words) && i+n < len(list) && list[i+n].is(words[n]) {
			n++
		}
		if n == len(words) {
			return true
		}
	}
	return false
}

// names lists the names that the place wants.
func (c *completer) names(p place, typed string) []candidate {
	var list []candidate
	add := func(names []string) {
		for _, n := range names {
			list = append(list, candidate{text: lang.QuoteName(n)})
		}
	}
	words := func(names []string, suffix string) {
		for _, n := range names {
			list = append(list, candidate{text: n + suffix, keyword: true})
		}
	}
	switch p.want {
	case wantColumns, wantBare:
		add(c.columns(p))
		if p.noFrom && typed != "" {
			add(engine.ComputedColumns())
		}
		if p.want == wantColumns && p.qualifier == "" && (typed != "" || len(list) == 0) {
			words(engine.Functions(), "(")
		}
	case wantSources:
		words(engine.Nouns(), " OF ")
		fallthrough
	case wantOperand:
		add(withNames(p.with))
		add(c.session.Objects(catalog.Campaign, catalog.Table, catalog.View))
	case wantSolids:
		add(c.session.Objects(catalog.Solid))
	case wantObjects:
		add(c.session.Objects())
		words(engine.Nouns(), "")
	case wantCampaigns:
		add(c.session.Objects(catalog.Campaign))
	case wantTables:
		add(c.session.Objects(catalog.Table))
	case wantViews:
		add(c.session.Objects(catalog.View))
	case wantTopics:
		words(engine.ListTopics(), "")
	case wantSettings:
		words(engine.Settings(), " ")
	case wantHelp:
		words(c.session.HelpWords(p.topic), "")
	case wantTypes:
		words(types(), "")
	case wantHeadings:
		add(headingsOf(c.folder, p.file))
	}
	return list
}

// types are the names of the types of columns.
func types() []string {
	var names []string
	for t := column.Integer; t <= column.Point; t++ {
		names = append(names, t.String())
	}
	return names
}

// columns are the columns of the sources around the cursor; before FROM is
// written, those of everything in the catalog.
func (c *completer) columns(p place) []string {
	sources := p.sources
	if p.relation != nil && p.want == wantBare {
		_, operand, _ := strings.Cut(p.relation.text, " ")
		_, operand, _ = strings.Cut(strings.TrimSpace(operand), " ")
		sources = []source{{text: strings.TrimSpace(operand)}}
		if first := scan(operand, 0, -1); len(first) > 0 {
			sources[0].text = first[0].text
		}
	}
	if (len(sources) == 0 || p.noFrom) && !p.noQuery && p.qualifier == "" {
		for _, n := range c.session.Objects(catalog.Campaign, catalog.Table, catalog.View) {
			sources = append(sources, source{text: lang.QuoteName(n)})
		}
	}
	var names []string
	for _, s := range sources {
		if p.qualifier != "" && !strings.EqualFold(s.name, p.qualifier) {
			continue
		}
		for _, f := range c.session.ColumnsOf(p.with, s.text) {
			if !slices.Contains(names, f.Name) {
				names = append(names, f.Name)
			}
		}
		if p.qualifier == "" && s.name != "" && len(sources) > 1 && !slices.Contains(names, s.name) {
			names = append(names, s.name)
		}
	}
	return names
}
