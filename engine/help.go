package engine

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/engine/problem/catalogue"
	"nearcell/lang"
)

// Switch is a command or an option of the command line, which HELP tells of too.
type Switch struct {
	Name    string // "--let name=value", "run FILE…"
	Meaning string
}

// help is HELP with the words of a topic.
func (s *Session) help(st *statement, t *lang.Help) error {
	p := &page{}
	if s.plain() {
		p.width = s.helpWidth()
	}
	title := "HELP"
	if len(t.Topic) == 0 {
		s.writeOverview(p)
	} else {
		words := make([]string, len(t.Topic))
		for i, w := range t.Topic {
			words[i] = w.Text
		}
		title = strings.Join(words, " ")
		if !s.writeTopic(p, title) {
			return s.noTopic(st, t, title)
		}
	}
	if s.checkOnly {
		return nil
	}
	return s.showPage(st, title, p)
}

// helpWidth is where pages are broken: at the screen's width, but not so far out
// that lines are hard to read.
func (s *Session) helpWidth() int {
	const most = 96
	if s.o.Screen != nil {
		if width, _ := s.o.Screen(); width > 0 {
			return min(width, most)
		}
	}
	return most
}

// showPage prints a page as text; formats for programs get a row with topic and text.
func (s *Session) showPage(st *statement, title string, p *page) error {
	if !s.plain() {
		r := newRows(text("topic"), text("text"))
		r.add(column.String(title), column.String(strings.TrimSpace(p.text())))
		return s.showTable(st, r.table())
	}
	return s.showText(p.text())
}

// topicKey is a topic's name for comparison: dashes count as blanks.
func topicKey(name string) string {
	name = strings.NewReplacer("-", " ", "…", "").Replace(strings.ToUpper(name))
	return strings.Join(strings.Fields(name), " ")
}

// is tells whether a topic is found under a key.
func (t topic) is(key string) bool {
	if topicKey(t.name) == key {
		return true
	}
	return slices.ContainsFunc(t.also, func(a string) bool { return topicKey(a) == key })
}

// writeTopic writes what is known under some words: all topics that are called
// so, else the groups, else the topics with these words in their names.
func (s *Session) writeTopic(p *page, words string) bool {
	key := topicKey(words)
	groups := s.topicGroups()
	if key == "ERROR" {
		s.writeLastError(p)
		return true
	}
	if writeCalled(p, groups, key) {
		return true
	}
	if function.Planned(words) {
		writePage(p, topic{name: strings.ToUpper(words), kind: "a function", there: func() bool { return false }, write: func(*page) {}})
		return true
	}
	if here := function.Elsewhere(words); here != "" {
		p.say("This language has no function " + strings.ToUpper(words) + ". Write " + here + ".")
		return true
	}
	return writeContaining(p, groups, key)
}

// writeCalled writes the topics that are called so, the groups, and last the code
// of an error, which may be an everyday word.
func writeCalled(p *page, groups []topicGroup, key string) (found bool) {
	topicsOf := func(g topicGroup) {
		for _, t := range g.topics {
			if t.is(key) {
				found = true
				writePage(p, t)
			}
		}
	}
	codes := len(groups) - 1
	for _, g := range groups[:codes] {
		topicsOf(g)
	}
	for _, g := range groups {
		if topicKey(g.name) == key || slices.ContainsFunc(g.also, func(a string) bool { return topicKey(a) == key }) {
			found = true
			writeGroup(p, g)
		}
	}
	topicsOf(groups[codes])
	return found
}

func writePage(p *page, t topic) {
	title := t.name + ", " + t.kind
	if !t.isThere() {
		title += " (not there yet)"
	}
	p.heading(title)
	t.write(p)
}

// writeGroup lists the topics of a group.
func writeGroup(p *page, g topicGroup) {
	p.heading(g.name)
	p.say(g.intro)
	p.table(summaries(g.topics))
}

func summaries(topics []topic) [][]string {
	var rows [][]string
	for _, t := range topics {
		summary := t.summary
		if !t.isThere() {
			summary = "(not there yet) " + summary
		}
		rows = append(rows, []string{t.name, summary})
	}
	return rows
}

// writeContaining lists the topics with the words in their names, or writes the
// only one.
func writeContaining(p *page, groups []topicGroup, key string) bool {
	var hits []topic
	for _, g := range groups {
		for _, t := range g.topics {
			names := append([]string{t.name}, t.also...)
			if slices.ContainsFunc(names, func(n string) bool { return strings.Contains(" "+topicKey(n)+" ", " "+key+" ") }) {
				hits = append(hits, t)
			}
		}
	}
	switch len(hits) {
	case 0:
		return false
	case 1:
		writePage(p, hits[0])
		return true
	}
	p.heading("HELP tells of these:")
	p.table(summaries(hits))
	return true
}

// writeLastError explains the last error of the session.
func (s *Session) writeLastError(p *page) {
	if s.last == nil {
		p.say("No statement of this session has failed. HELP ERRORS lists the codes of errors.")
		return
	}
	code := s.LastCode()
	if code == "" {
		code = "failed"
	}
	p.heading("The last error was:")
	p.verbatim(strings.Split(strings.TrimRight(problem.Render(s.last), "\n"), "\n")...)
	if e, ok := catalogue.Lookup(code); ok {
		p.heading("Its code is " + code + ".")
		writeError(p, e)
	}
}

// noTopic is the error of words of which HELP knows nothing.
func (s *Session) noTopic(st *statement, t *lang.Help, words string) error {
	at := st.at(t)
	at.Span.Start, at.Span.End = t.Topic[0].Span().Start, t.Topic[len(t.Topic)-1].Span().End
	p := problem.New("no-topic", at, "HELP knows nothing of '%s'", words)
	if _, err := s.catalog.Get(lang.Name{Text: words}.Key()); err == nil {
		return p.WithHint("DESCRIBE %s tells of what you made", lang.QuoteName(words))
	}
	if near := lang.Nearest(topicKey(words), s.HelpTopics()); near != "" {
		return p.WithHint("did you mean %s?", near)
	}
	return p.WithHint("HELP; alone lists what it knows")
}

// HelpTopics are the words that HELP knows, in capitals and with their codes'
// dashes, in the order of the overview.
func (s *Session) HelpTopics() []string {
	var names []string
	add := func(n string) {
		if !slices.Contains(names, n) {
			names = append(names, n)
		}
	}
	for _, g := range s.topicGroups() {
		add(g.name)
		for _, t := range g.topics {
			add(t.name)
		}
	}
	return append(names, "ERROR")
}

// HelpWords are the words that may stand behind HELP and those that were said,
// for completion: whole topics at first, then what is left of them.
func (s *Session) HelpWords(said string) []string {
	var list []string
	for _, name := range s.HelpTopics() {
		rest := strings.TrimLeft(name, "-") // two dashes would begin a comment
		if key := topicKey(said); key != "" {
			var ok bool
			if rest, ok = strings.CutPrefix(topicKey(name), key+" "); !ok {
				continue
			}
		}
		if rest, _, _ = strings.Cut(rest, "="); rest != "" && !strings.ContainsAny(rest, "'…;") {
			list = append(list, rest)
		}
	}
	return list
}

// writeOverview is HELP alone: what to type first, and the topics.
func (s *Session) writeOverview(p *page) {
	p.say("nearcell gives each reading of a 3D campaign the space nearest to it, closed at the walls of the room, and answers questions about that space in tables.")
	p.say("The first things to type, with a file of your own that has columns id, x, y, z and a reading:")
	p.verbatim("CREATE CAMPAIGN hall FROM 'hall.csv';", "DESCRIBE hall;",
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall WITHIN BOX (0, 0, 0) TO (30, 18, 7.5);")
	p.say("HELP and any of these words tells more, for example HELP CELLS; or HELP WEIGHTED BY;")
	var rows [][]string
	for _, g := range s.topicGroups() {
		if !g.quiet {
			rows = append(rows, []string{g.name, topicNames(g.topics)})
		}
	}
	p.table(append(rows, []string{"ERRORS", "HELP ERROR explains the last error; HELP and a code such as no-column any other"}))
	p.say("HELP STATEMENTS, HELP QUERIES and so on list a group with a line on each, and what is not there yet. Before a number leaves your desk, read HELP CAUTIONS.")
}

// topicNames lists the topics that are there.
func topicNames(topics []topic) string {
	var names []string
	for _, t := range topics {
		if t.isThere() {
			names = append(names, strings.ReplaceAll(t.name, " ", tied))
		}
	}
	return strings.Join(names, ", ")
}
