package lang

import (
	"errors"
	"runtime/debug"
	"strings"
	"testing"
	"time"
)

// nests are all the ways in which a text can be nested: before, within and after.
var nests = []struct{ name, before, open, middle, close, after string }{
	{"brackets", "SELECT ", "(", "1", ")", ""},
	{"scalar queries", "SELECT ", "(SELECT ", "1", ")", ""},
	{"brackets around a query", "SELECT ", "(", "(SELECT 1)", ")", ""},
	{"query statements", "", "(", "SELECT 1", ")", ""},
	{"set operations", "", "(SELECT 1 UNION ", "SELECT 1", ")", ""},
	{"sources", "SELECT * FROM ", "(SELECT * FROM ", "t", ") AS a", ""},
	{"bracketed sources", "SELECT * FROM ", "(", "t", ")", ""},
	{"joins", "SELECT * FROM ", "(a CROSS JOIN ", "t", ")", ""},
	{"with", "", "WITH a AS (", "SELECT 1", ") SELECT 2", ""},
	{"in", "SELECT 1 WHERE ", "a IN (", "1", ")", ""},
	{"in queries", "SELECT 1 WHERE ", "a IN (SELECT b FROM c WHERE ", "TRUE", ")", ""},
	{"exists", "SELECT 1 WHERE ", "EXISTS (SELECT 1 WHERE ", "TRUE", ")", ""},
	{"calls", "SELECT ", "f(", "1", ")", ""},
	{"filters", "SELECT ", "f() FILTER (WHERE ", "TRUE", ")", ""},
	{"weights", "SELECT ", "f() WEIGHTED BY (", "1", ")", ""},
	{"weights that are calls", "SELECT ", "f() WEIGHTED BY g(", "1", ")", ""},
	{"windows", "SELECT ", "f() OVER (PARTITION BY ", "1", ")", ""},
	{"casts", "SELECT ", "CAST(", "1", " AS REAL)", ""},
	{"cases", "SELECT ", "CASE WHEN ", "TRUE", " THEN 1 END", ""},
	{"cases in else", "SELECT ", "CASE WHEN a THEN 1 ELSE ", "1", " END", ""},
	{"not", "SELECT ", "NOT ", "TRUE", "", ""},
	{"minus signs", "SELECT ", "- ", "1", "", ""},
	{"plus signs", "SELECT ", "+", "1", "", ""},
	{"powers", "SELECT ", "2 ^ ", "1", "", ""},
	{"powers with signs", "SELECT ", "2 ^ -", "1", "", ""},
	{"rows", "SELECT ", "(a, ", "b", ") OVERLAPS (c, d)", ""},
	{"between", "SELECT ", "a BETWEEN (", "1", ") AND 2", ""},
	{"operands", "SELECT * FROM CELLS OF ", "(SELECT * FROM CELLS OF ", "t", ")", ""},
	{"inner relations", "SELECT * FROM CELLS OF ", "(CELLS OF ", "t", ")", ""},
	{"bracketed operands", "SELECT * FROM CELLS OF ", "(", "(CELLS OF t)", ")", ""},
	{"points", "SELECT * FROM ESTIMATES OF c AT ", "(GRID OF c AT ", "t", ")", ""},
	{"solids", "CREATE SOLID s AS ", "(", "a", ")", ""},
	{"solids taken away", "CREATE SOLID s AS ", "a MINUS (", "a", ")", ""},
	{"zones", "SELECT * FROM CELLS OF c WITHIN ", "(", "a", ")", ""},
	{"values", "SELECT * FROM GRID OF s STEP ", "(", "1", ")", ""},
	{"rings", "CREATE SOLID s AS PRISM ((0, ", "(", "1", ")", ")) FROM 0 TO 1"},
	{"limits", "SELECT 1 LIMIT ", "(", "1", ")", ""},
	{"unclosed brackets", "SELECT ", "(", "", "", ""},
	{"unclosed queries", "SELECT ", "(SELECT ", "", "", ""},
	{"unclosed solids", "CREATE SOLID s AS ", "(", "", "", ""},
	{"unclosed sources", "SELECT * FROM ", "(", "", "", ""},
}

func nested(i, n int) string {
	c := nests[i]
	return c.before + strings.Repeat(c.open, n) + c.middle + strings.Repeat(c.close, n) + c.after
}

// Up to a depth that nobody needs, a nested text is read; far beyond it is a fault with
// a word about depth. With a small stack a parser that recursed freely would die here.
func TestDepthIsLimited(t *testing.T) {
	defer debug.SetMaxStack(debug.SetMaxStack(64 << 20))
	for i, c := range nests {
		t.Run(c.name, func(t *testing.T) {
			if c.close != "" || c.middle != "" {
				text := nested(i, 60)
				script, err := Parse(text)
				if err != nil {
					t.Fatalf("60 levels: %s", caretOf(text, err))
				}
				if again, err := Parse(Print(script)); err != nil || !Equal(script, again) {
					t.Fatalf("60 levels do not come back: %v", err)
				}
			}
			levels := 20_000
			if len(c.open) < 3 {
				levels = 100_000
			}
			start := time.Now()
			_, err := Parse(nested(i, levels))
			var fault *Error
			if !errors.As(err, &fault) || !strings.Contains(fault.Message, "nested more than 200 levels deep") {
				t.Fatalf("%d levels: %v", levels, err)
			}
			if took := time.Since(start); took > 2*time.Second {
				t.Errorf("%d levels took %v", levels, took)
			}
		})
	}
}

// chains are all the ways in which operators follow each other without brackets.
var chains = []struct{ name, before, first, next string }{
	{"or", "SELECT ", "a", " OR a"}, {"and", "SELECT ", "a", " AND a"}, {"sums", "SELECT ", "1", " + 1"},
	{"products", "SELECT ", "1", " * 1"}, {"is", "SELECT ", "a", " IS NULL"}, {"zones", "SELECT ", "a", " AT TIME ZONE 'z'"},
	{"unions", "", "SELECT 1", " UNION SELECT 1"}, {"intersections", "", "SELECT 1", " INTERSECT SELECT 1"},
	{"joins", "SELECT * FROM ", "a", " CROSS JOIN a"}, {"solids", "CREATE SOLID s AS ", "a", " MINUS a"},
}

func TestChainsAreLimited(t *testing.T) {
	for _, c := range chains {
		t.Run(c.name, func(t *testing.T) {
			text := c.before + c.first + strings.Repeat(c.next, maxChain)
			script, err := Parse(text)
			if err != nil {
				t.Fatal(caretOf(text, err))
			}
			if again, err := Parse(Print(script)); err != nil || !Equal(script, again) {
				t.Fatalf("does not come back: %v", err)
			}
			_, err = Parse(text + c.next)
			var fault *Error
			if !errors.As(err, &fault) || !strings.Contains(fault.Message, "operators follow each other") {
				t.Fatalf("got %v", err)
			}
		})
	}
}

// Chains within chains may pile up, though each is short enough, but not without end.
func TestHeightIsLimited(t *testing.T) {
	pile := func(links, levels int) string {
		return "SELECT " + strings.Repeat("(", levels) + "1" + strings.Repeat(strings.Repeat(" + 1", links)+")", levels)
	}
	if _, err := Parse(pile(1000, 3)); err != nil {
		t.Fatal(caretOf("", err))
	}
	_, err := Parse(pile(1500, 150))
	var fault *Error
	if !errors.As(err, &fault) || !strings.Contains(fault.Message, "stand one within another") || fault.Span.Len() == 0 {
		t.Fatalf("got %v", err)
	}
}

// Flat lists have no limit, and time grows with their length, not faster.
func TestLongListsAreFine(t *testing.T) {
	const n = 50_000
	for _, text := range []string{
		"SELECT 1 WHERE a IN (1" + strings.Repeat(", 2", n) + ")",
		"VALUES (1)" + strings.Repeat(", (2)", n),
		"SELECT a" + strings.Repeat(", b", n),
		"SELECT CASE WHEN a THEN 1" + strings.Repeat(" WHEN b THEN 2", n) + " END",
		"SELECT * FROM a" + strings.Repeat(", b", n),
		strings.Repeat("SELECT 1;\n", n),
		"SELECT '" + strings.Repeat("''", n) + "' AS \"" + strings.Repeat(`""`, n) + `"`,
		strings.Repeat("-- a comment\n/* another */ ;", n),
	} {
		if _, err := Parse(text); err != nil {
			t.Fatal(caretOf(text, err))
		}
	}
}
