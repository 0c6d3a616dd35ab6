package lang

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

func mustFail(t *testing.T, text, contains string) {
	t.Helper()
	_, err := Parse(text)
	var fault *Error
	if !errors.As(err, &fault) {
		t.Errorf("%s: was read", text)
		return
	}
	if !strings.Contains(fault.Error(), contains) {
		t.Errorf("%s: %s; expected %q", text, fault.Error(), contains)
	}
}

func mustParse(t *testing.T, text string) *Script {
	t.Helper()
	script, err := Parse(text)
	if err != nil {
		t.Errorf("%s", caretOf(text, err))
		return &Script{}
	}
	return script
}

func onlySelect(t *testing.T, text string) *Select {
	t.Helper()
	script := mustParse(t, text)
	if len(script.Statements) != 1 {
		t.Fatalf("%s: %d statements", text, len(script.Statements))
	}
	return script.Statements[0].(*QueryStatement).Query.Body.(*Select)
}

func TestTheReservedWordsAreTheseTwentyNine(t *testing.T) {
	want := strings.Fields(`SELECT DISTINCT ALL FROM WHERE HAVING UNION INTERSECT EXCEPT WITH AS JOIN ON AND OR NOT IN IS LIKE BETWEEN EXISTS
		CASE WHEN THEN ELSE CAST NULL TRUE FALSE`)
	if got := ReservedWords(); !slices.Equal(got, want) {
		t.Errorf("got %v", got)
	}
}

func TestEveryWordIsFoundInAnyCase(t *testing.T) {
	for i, text := range wordText {
		if text == "" {
			continue
		}
		for _, form := range []string{text, strings.ToLower(text), text[:1] + strings.ToLower(text[1:])} {
			if got := wordType(form); int(got) != i {
				t.Errorf("%s is found as %d, not %d", form, got, i)
			}
		}
	}
	for _, text := range []string{"SELECTED", "SELEC", "ſelect", "K", "", strings.Repeat("A", 100)} {
		if got := wordType(text); got != tokWord {
			t.Errorf("%q is taken for a known word %d", text, got)
		}
	}
}

// A reserved word is a name only in double quotes or behind a point.
func TestReservedWordsAsNames(t *testing.T) {
	for _, word := range ReservedWords() {
		quoted := onlySelect(t, `SELECT "`+word+`" AS "`+word+`" FROM "`+word+`" WHERE t.`+word+` = 1`)
		if c := quoted.Items[0].Expr.(*Column); c.Name.Text != word || !c.Name.Quoted {
			t.Errorf("quoted %s is read as %+v", word, c.Name)
		}
		if c := quoted.Where.(*Binary).Left.(*Column); c.Name.Text != word || c.Qualifier.Text != "t" {
			t.Errorf("t.%s is read as %+v", word, c)
		}
		mustFail(t, "SELECT 1 AS "+word+" FROM t", "reserved word")
		mustFail(t, "SELECT * FROM t AS "+word, "reserved word")
		mustFail(t, "CREATE VIEW "+word+" AS (SELECT 1)", "reserved word")
		mustFail(t, "DROP TABLE "+word, "reserved word")
		if e, err := ParseExpr(word); err == nil {
			if _, isColumn := e.(*Column); isColumn {
				t.Errorf("%s alone is read as a column", word)
			}
		}
		mustParse(t, "LET "+strings.ToLower(word)+" = :"+word)
		mustParse(t, "HELP "+word)
		mustParse(t, "CREATE TABLE t FROM 'f' UNITS ("+word+" 'm')")
	}
}

// Every other word names columns, tables, aliases with AS, solids and frames.
func TestOtherWordsAreNamesAnywhere(t *testing.T) {
	for _, word := range append(StopWords(), PlainWords()...) {
		s := onlySelect(t, "SELECT "+word+", a."+word+", "+word+".b, "+word+".*, COUNT("+word+") AS "+word+" FROM "+word+" AS "+word+
			" WHERE "+word+" > 1 AND "+word+" IS NULL GROUP BY "+word+" ORDER BY "+word)
		if s == nil || len(s.Items) != 5 {
			t.Errorf("%s: %v", word, s)
			continue
		}
		if c, ok := s.Items[0].Expr.(*Column); !ok || c.Name.Text != word {
			t.Errorf("%s is read as %s", word, Print(s.Items[0]))
		}
		if s.Items[4].Alias.Text != word || s.From[0].Aliasing().Alias.Text != word {
			t.Errorf("the alias %s is lost", word)
		}
		mustParse(t, "CREATE CAMPAIGN "+word+" FROM 'f' ID "+word+" WITHIN ("+word+", "+word+")")
		mustParse(t, "CREATE SOLID "+word+" AS "+word+" MINUS "+word)
		mustParse(t, "DROP VIEW "+word)
		mustParse(t, "SELECT * FROM CELLS OF "+word+" WITHIN "+word+" FOR "+word+" AS "+word)
		mustParse(t, "SELECT * FROM "+word+" OF "+word)
		mustParse(t, "SELECT * FROM (SELECT 1 AS "+word+") AS q ("+word+")")
	}
}

func TestStopWordsNeedAsToBeAnAlias(t *testing.T) {
	for _, word := range StopWords() {
		for _, text := range []string{"SELECT x " + word + " FROM t", "SELECT 1 " + word} {
			if script, err := Parse(text); err == nil {
				t.Errorf("%s is read as %s", text, Print(script))
			}
		}
		if script, err := Parse("SELECT * FROM t " + word); err == nil {
			t.Errorf("FROM t %s is read as %s", word, Print(script))
		}
	}
}

func TestPlainWordsAreBareAliases(t *testing.T) {
	for _, word := range PlainWords() {
		s := onlySelect(t, "SELECT x "+word+" FROM t "+word)
		if s.Items[0].Alias.Text != word || s.From[0].Aliasing().Alias.Text != word {
			t.Errorf("%s is no alias", word)
		}
	}
}

// Behind a relation an alias needs AS, whatever the word.
func TestRelationsNeedAsBeforeTheirAlias(t *testing.T) {
	for _, word := range append(PlainWords(), "k", `"Quoted"`) {
		if script, err := Parse("SELECT * FROM CELLS OF hall " + word); err == nil {
			t.Errorf("%s is read as %s", word, Print(script))
		}
	}
}

// Every word that begins a clause is a stop word with a parser.
func TestClauseWordsAreStopWords(t *testing.T) {
	for i, parse := range clauseParsers {
		begins := clauseBegins[i]
		if (parse != nil) != begins {
			t.Errorf("the tables differ about %s", wordText[i])
		}
		if begins && !slices.Contains(StopWords(), wordText[i]) {
			t.Errorf("%s is no stop word", wordText[i])
		}
	}
	for word := range readingParsers {
		if !slices.Contains(readingWords, wordText[word]) {
			t.Errorf("%s is missing among the words for hints", wordText[word])
		}
	}
	if len(readingWords) != len(readingParsers) {
		t.Errorf("%d words for hints, %d readings", len(readingWords), len(readingParsers))
	}
	for _, word := range StatementWords() {
		if !statementWords[wordType(word)] {
			t.Errorf("%s begins no statement", word)
		}
	}
	if len(StatementWords()) != len(statementWords) {
		t.Error("the two lists of statements differ")
	}
}

func TestNamesCompare(t *testing.T) {
	bare, quoted := Name{Text: "Temp"}, Name{Text: "Temp", Quoted: true}
	for _, c := range []struct {
		name Name
		have string
		want bool
	}{
		{bare, "temp", true}, {bare, "TEMP", true}, {bare, "Temp", true}, {bare, "tem", false},
		{quoted, "Temp", true}, {quoted, "temp", false},
		{Name{Text: "GRÖSSE"}, "größe", false}, {Name{Text: "HÖHE"}, "höhe", true}, {Name{Text: "ΣΟΦΟΣ"}, "σοφος", true},
	} {
		if got := c.name.Matches(c.have); got != c.want {
			t.Errorf("%v matches %q: %v", c.name, c.have, got)
		}
		if !c.name.Quoted && (c.name.Key() == Fold(c.have)) != c.want {
			t.Errorf("the key %q of %v against %q", c.name.Key(), c.name, Fold(c.have))
		}
	}
	if Fold("σοφος") != Fold("σοφοσ") || Fold("ſ") != "s" || Fold("\u212A") != "k" || Fold("aß") != "aß" {
		t.Error("letters that differ in case only fold differently")
	}
	if quoted.Key() != "Temp" || bare.Key() != "temp" {
		t.Error("keys")
	}
	if Equal(&bare, &quoted) || !Equal(&bare, &Name{Text: "TEMP"}) || Equal(&quoted, &Name{Text: "temp", Quoted: true}) {
		t.Error("Equal does not follow the rules of names")
	}
}

func TestEqualSeesDifferences(t *testing.T) {
	texts := []string{"a", "b", `"a"`, "a.b", "1", "1.0", "'a'", "a + b", "b + a", "a - b", "-a", "NOT a", "a IS NULL", "a IS NOT NULL", "f()", "f(*)",
		"f(a)", "f(DISTINCT a)", "f(a, b)", "f(a FROM b)", "f(a FOR b)", "f(a) WEIGHTED BY b", "f(a) FILTER (WHERE b)", "f(a) OVER ()",
		"f(a ORDER BY b)", "f(a ORDER BY b DESC)", "f(a ORDER BY b NULLS FIRST)", "f(a) OVER (ORDER BY b)", "f(a) OVER (ORDER BY b ROWS CURRENT ROW)",
		"f(a) OVER (ORDER BY b RANGE CURRENT ROW)", "(SELECT 1)", "EXISTS (SELECT 1)", "(SELECT DISTINCT 1)", ":a", "TRUE", "FALSE", "NULL",
		"a IN (1)", "a NOT IN (1)", "a IN (SELECT 1)", "CASE WHEN a THEN b END", "CASE a WHEN a THEN b END", "CAST(a AS b)", "INTERVAL '1' b", "TIMESTAMP '1'"}
	for i, x := range texts {
		for j, y := range texts {
			a, errA := ParseExpr(x)
			b, errB := ParseExpr(y)
			if errA != nil || errB != nil {
				t.Fatal(errA, errB)
			}
			if Equal(a, b) != (i == j) {
				t.Errorf("Equal(%s, %s) is %v", x, y, i != j)
			}
		}
	}
	if Equal(nil, &Null{}) || !Equal(nil, nil) || Equal((*Query)(nil), &Query{}) {
		t.Error("Equal and nil")
	}
}

func TestQuoting(t *testing.T) {
	for text, want := range map[string]string{"a": "a", "Temp": "Temp", "number": "number", "select": `"select"`, "a b": `"a b"`, "1a": `"1a"`,
		`a"b`: `"a""b"`, "": `""`, "höhe": "höhe", "x.y": `"x.y"`} {
		if got := QuoteName(text); got != want {
			t.Errorf("QuoteName(%q) = %s", text, got)
		}
	}
	if got := QuoteText("it's"); got != "'it''s'" {
		t.Error(got)
	}
}
