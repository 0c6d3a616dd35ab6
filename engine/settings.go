package engine

import (
	"context"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// setting is a registry line of what SET changes: a whole number from 1 to most,
// kept where field says; without one it is CACHE, a size that the catalog keeps.
type setting struct {
	name    string
	meaning string
	most    int64
	unset   string // what holds while it is 0
	field   func(*Session) *int
}

// settings are in the order in which HELP lists them.
var settings = []setting{
	{"DIGITS", "Significant digits of the numbers in printed tables; what is saved always has all of them.",
		present.MaxDigits, "", func(s *Session) *int { return &s.digits }},
	{"ROWS", "Rows of a table that are printed at most; SAVE keeps all of them.",
		present.MaxTableRows, "as many as the screen has room for", func(s *Session) *int { return &s.rowLimit }},
	{name: cacheSetting, meaning: "Bytes that kept diagrams take in the catalog at most, from now on; those used least recently go first."},
}

func settingNames() []string {
	names := make([]string, len(settings))
	for i, k := range settings {
		names[i] = k.name
	}
	return names
}

// syntax is how the setting is written.
func (k setting) syntax() string {
	if k.field == nil {
		return "SET " + k.name + " 'size';  -- such as '2GiB'; 0 keeps none"
	}
	return "SET " + k.name + " n;  -- a whole number from 1 to " + strconv.FormatInt(k.most, 10)
}

func settingSyntax() []string {
	var lines []string
	for _, k := range settings {
		lines = append(lines, k.syntax())
	}
	return lines
}

// value is what holds now.
func (k setting) value(s *Session) string {
	if k.field == nil {
		return s.cacheText()
	}
	if n := *k.field(s); n > 0 {
		return strconv.Itoa(n)
	}
	return k.unset
}

// set is SET name value.
func (s *Session) set(ctx context.Context, st *statement, t *lang.Set) error {
	word := strings.ToUpper(t.Name.Text)
	for _, k := range settings {
		if k.name == word && k.field == nil {
			return s.setCache(ctx, st, t)
		}
		if k.name == word {
			return s.setCount(st, t, k)
		}
	}
	p := problem.New("setting", st.at(t.Name), "there is no setting '%s'", t.Name.Text)
	if near := lang.Nearest(word, settingNames()); near != "" {
		return p.WithHint("did you mean %s?", near)
	}
	return p.WithHint("SET knows %s", listed(settingNames(), 10))
}

// setCount sets a whole number from 1 to most.
func (s *Session) setCount(st *statement, t *lang.Set, k setting) error {
	refusal := func(at lang.Node) error {
		return problem.New("setting", st.at(at), "SET %s takes a whole number from 1 to %d", k.name, k.most)
	}
	if t.Value == nil {
		return refusal(t)
	}
	v, err := s.constant(st, t.Value)
	if err != nil {
		return err
	}
	if v.Null || v.Type != column.Integer || v.I < 1 || v.I > k.most {
		return refusal(t.Value)
	}
	*k.field(s) = int(v.I)
	return nil
}
