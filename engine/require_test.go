package engine

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/present"
)

// requireSetting has a log of three loggers, of which one is dead, an empty log,
// one whose readings are all missing, and a limit of 8 that readings reach by
// adding up: 2.22 + 4.23 + 1.55 is 8.000000000000002 in binary numbers.
const requireSetting = `
CREATE TABLE log AS (SELECT * FROM (VALUES ('L1', 1, 7.5), ('L1', 2, 8.0), ('L2', 1, 7.0), ('L2', 2, 2.22 + 4.23 + 1.55), ('L3', 1, NULL), ('L3', 2, NULL))
  AS v (logger, n, temp)) UNITS (temp '°C');
CREATE TABLE nothing AS (SELECT * FROM log WHERE n > 5);
CREATE TABLE dead AS (SELECT * FROM log WHERE logger = 'L3');
CREATE VIEW later AS (SELECT * FROM log WHERE n > 5);
CREATE VIEW warm AS (SELECT * FROM log WHERE temp > 7.9);
CREATE TABLE register AS (SELECT * FROM (VALUES ('L1'), ('L2'), ('L9')) AS v (logger));
CREATE TABLE strangers AS (SELECT * FROM (VALUES ('X1'), ('X2')) AS v (logger));
CREATE CAMPAIGN hall AS (SELECT * FROM (VALUES ('a', 1.0, 1.0, 1.0, 4.0), ('b', 3.0, 1.0, 1.0, 5.0)) AS v (id, x, y, z, temp))
  WITHIN BOX (0, 0, 0) TO (4, 2, 2);
`

func requirer(t *testing.T, o Options) (s *Session, out, words *bytes.Buffer) {
	t.Helper()
	out, words = &bytes.Buffer{}, &bytes.Buffer{}
	o.Out, o.Err, o.Quiet = out, words, true
	s = New(catalog.Memory(), o)
	if err := s.Run(context.Background(), "setting", requireSetting, t.TempDir()); err != nil {
		t.Fatal(words)
	}
	out.Reset()
	words.Reset()
	return s, out, words
}

// TestRequire: verdicts by hand. The hard half is when an empty answer is one.
func TestRequire(t *testing.T) {
	for _, c := range []struct{ require, verdict, says string }{
		// conditions
		{"1 < 2", pass, ""},
		{"1 > 2", fail, "1 > 2 is FALSE"},
		{"NULL", notDecided, "missing"},
		{"(SELECT MAX(temp) FROM log) <= 9", pass, ""},
		{"(SELECT MAX(temp) FROM log) <= 8", fail, "8.000000000000002 °C <= 8 is FALSE"}, // the last bit is shown
		{"(SELECT MAX(temp) + 1/3 FROM log) <= 8", fail, "8.33333 °C <= 8 is FALSE"},
		{"(SELECT MAX(temp) FROM nothing) <= 8", notDecided, "missing"},
		{"(SELECT COUNT(*) FROM nothing) = 0", notDecided, "no row of nothing"},
		{"(SELECT COUNT(*) FROM nothing) >= 50", fail, "0 >= 50"}, // sure: there are none
		{"(SELECT COUNT(*) FROM log WHERE temp > 20) = 0", pass, ""},
		{"(SELECT COUNT(*) FROM dead WHERE temp > 20) = 0", notDecided, "values are missing in all 2 rows of dead"},
		{"EXISTS (SELECT * FROM log WHERE temp > 8)", pass, ""},
		{"NOT EXISTS (SELECT * FROM later WHERE temp > 8)", notDecided, "no row of log came as far"},
		{"(SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall) <= 8", pass, ""},
		// NONE (query)
		{"NONE (SELECT * FROM log WHERE temp > 9)", pass, ""},
		{"NONE (SELECT logger, n FROM log WHERE temp > 8)", fail, "1 row: logger = L2, n = 2"},
		{"NONE (SELECT logger, n FROM log WHERE temp >= 8)", fail, "2 rows, the first: logger = L1, n = 2"},
		{"NONE (SELECT * FROM nothing WHERE temp > 8)", notDecided, "no row of nothing came as far"},
		{"NONE (SELECT * FROM nothing)", notDecided, "no row of nothing"},
		{"NONE (SELECT * FROM later WHERE temp > 8)", notDecided, "no row of log came as far"},
		{"NONE (SELECT * FROM dead WHERE temp > 8)", notDecided, "values are missing in all 2 rows of dead"},
		{"NONE (SELECT * FROM warm WHERE temp > 9)", pass, ""},
		{"NONE (SELECT * FROM warm)", fail, "2 rows"},
		{"NONE (SELECT logger FROM log GROUP BY logger HAVING MAX(temp) > 9)", pass, ""},
		{"NONE (SELECT logger FROM nothing GROUP BY logger HAVING MAX(temp) > 9)", notDecided, "no row"},
		{"NONE (SELECT logger FROM dead GROUP BY logger HAVING MAX(temp) > 9)", notDecided, "missing in all 1 row"},
		{"NONE (SELECT MAX(temp) FROM nothing HAVING MAX(temp) > 9)", notDecided, "missing"},
		// a register that no logger stands in: the join is empty, and nothing was looked at
		{"NONE (SELECT * FROM log l JOIN register r ON r.logger = l.logger WHERE l.temp > 9)", pass, ""},
		{"NONE (SELECT * FROM log l JOIN strangers r ON r.logger = l.logger WHERE l.temp > 9)", notDecided, "no row of log and strangers"},
		// two rows of one register that overlap: the condition stands in ON
		{"NONE (SELECT * FROM register a JOIN register b ON a.logger < b.logger AND a.logger > b.logger)", pass, ""},
		{"NONE (SELECT * FROM nothing a JOIN register b ON a.logger = b.logger)", notDecided, "no row of nothing"},
		// all have to be looked at
		{"NONE (SELECT logger FROM log WHERE temp > 9 UNION ALL SELECT logger FROM nothing WHERE temp > 9)", notDecided, "nothing"},
		{"NONE (SELECT logger FROM register EXCEPT SELECT logger FROM log)", fail, "1 row: logger = L9"},
		{"NONE (SELECT logger FROM nothing EXCEPT SELECT logger FROM log)", notDecided, "nothing"},
		{"NONE (SELECT logger FROM log EXCEPT SELECT logger FROM log)", pass, ""},
		// relations
		{"NONE (SELECT id FROM CELLS OF hall WHERE volume < 1)", pass, ""},
		{"NONE (SELECT id FROM CELLS OF hall WHERE temp > 4.5)", fail, "id = b"},
		{"NONE (WITH w AS (SELECT * FROM nothing) SELECT * FROM w WHERE temp > 8)", notDecided, "nothing"},
	} {
		s, _, words := requirer(t, Options{})
		if err := s.Run(context.Background(), "input", "REQUIRE 'A' "+c.require+";", "."); err != nil {
			t.Errorf("%s: %s", c.require, words)
			continue
		}
		v := s.verdicts[0]
		if v.result != c.verdict || !strings.Contains(v.reason, c.says) || c.says == "" && v.reason != "" {
			t.Errorf("%s: %s (%s), want %s (%s)", c.require, v.result, v.reason, c.verdict, c.says)
		}
		if !strings.HasPrefix(words.String(), v.result+": A") {
			t.Errorf("%s says %s", c.require, words)
		}
		if (v.result == notDecided) != strings.Contains(words.String(), "warning: 'A' is not decided") {
			t.Errorf("%s: a warning tells of what is not decided, and of nothing else: %s", c.require, words)
		}
	}
}

// TestRequireNear: readings at the limit are told of, those that differ from it by
// their last bits apart from those that are equal to it.
func TestRequireNear(t *testing.T) {
	for require, want := range map[string]string{
		"NONE (SELECT * FROM log WHERE temp > 8)": "note: 'A': 2 values of temp lie within 1e-9 of the limit 8 and 1 of them differ from it",
		// of the rows that the rest of the condition leaves
		"NONE (SELECT * FROM log WHERE logger = 'L1' AND 8 < temp)":                     "note: 'A': 1 value of temp is equal to the limit 8: whether it counts",
		"NONE (SELECT * FROM log WHERE 8 < temp AND logger = 'L3')":                     "",
		"NONE (SELECT * FROM log WHERE temp > 100 AND LN(temp - 100) > 1.0)":            "", // fails on its own
		"NONE (SELECT * FROM log WHERE temp > 100 AND (n = 1 OR LN(temp - 100) > 1.0))": "",
		// a limit that is a column or was computed
		"NONE (SELECT * FROM log JOIN (VALUES (8)) AS v (lim) ON TRUE WHERE temp > lim)":     "2 values of temp lie within 1e-9 of the limit lim and 1 of them differ",
		"NONE (SELECT * FROM log JOIN (VALUES (8)) AS v (lim) ON TRUE WHERE temp > lim + 1)": "",
		"NONE (SELECT * FROM log WHERE temp + 1 > 9)":                                        "2 values of temp + 1 lie within 1e-9 of the limit 9",
		"(SELECT MAX(temp) FROM log) <= 8":                                                   "note: 'A': 1 value of (SELECT MAX(temp) FROM log) lies within 1e-9 of the limit 8 and 1 of them differ from it",
		"(SELECT MIN(temp) FROM log) < (SELECT 7 FROM log LIMIT 1)":                          "note: 'A': 1 value of (SELECT MIN(temp) FROM log) is equal to the limit 7: whether it counts",
		"NONE (SELECT * FROM log WHERE temp NOT BETWEEN 2 AND 7.5)":                          "note: 'A': 1 value of temp is equal to the limit 7.5: whether it counts",
		"NONE (SELECT logger FROM log GROUP BY logger HAVING MAX(temp) > 8)":                 "note: 'A': 2 values of \"MAX(temp)\" lie within",
		"(SELECT COUNT(*) FROM log WHERE temp > 8) < 3":                                      "2 values of temp lie within 1e-9 of the limit 8",
		"NONE (SELECT * FROM log WHERE temp > 8.1)":                                          "",
		"NONE (SELECT * FROM log WHERE ROUND(temp, 2) > 8)":                                  "2 values of ROUND(temp, 2) are equal to the limit 8: whether they count",
	} {
		s, _, words := requirer(t, Options{})
		if err := s.Run(context.Background(), "input", "REQUIRE 'A' "+require+";", "."); err != nil {
			t.Fatalf("%s: %s", require, words)
		}
		if want == "" && strings.Contains(words.String(), "limit") || !strings.Contains(words.String(), want) {
			t.Errorf("%s says %s, want %s", require, words, want)
		}
	}
}

// TestVerdicts: the list of verdicts, what travels with it, and what goes before it.
func TestVerdicts(t *testing.T) {
	s, out, words := requirer(t, Options{Format: present.AsCSV})
	ctx, folder := context.Background(), t.TempDir()
	run := func(text string) {
		t.Helper()
		if err := s.Run(ctx, "input", text, folder); err != nil {
			t.Fatal(words)
		}
	}
	run("SELECT * FROM VERDICTS;")
	if out.String() != "requirement,verdict,rows,reason,script,line\n" {
		t.Errorf("no verdicts yet: %s", out)
	}
	run("REQUIRE 'A1' NONE (SELECT logger FROM log WHERE temp > 8);\n\nREQUIRE 'A2' 1 < 2; REQUIRE 'A3' NONE (SELECT logger FROM nothing WHERE temp > 8);\n" +
		"REQUIRE 'A4' (SELECT SUM(c.volume) FROM CELLS OF hall AS c CROSS JOIN register) > 1;")
	if s.FailedRequirements() != 1 {
		t.Errorf("%d failed", s.FailedRequirements())
	}
	out.Reset()
	words.Reset()
	run("SAVE SELECT * FROM VERDICTS TO 'v.csv' WITH PROVENANCE;")
	got, _ := os.ReadFile(filepath.Join(folder, "v.csv"))
	want := "requirement,verdict,rows,reason,script,line\n" +
		"A1,FAIL,1,1 row: logger = L2,input,1\nA2,PASS,,,input,3\nA3,NOT DECIDED,0,no row of nothing came as far as the condition,input,3\nA4,PASS,,,input,4\n"
	if string(got) != want {
		t.Errorf("verdicts\n%s\nwant\n%s", got, want)
	}
	if !strings.Contains(words.String(), "warning: 'A4': SUM(c.volume) adds up 6 rows") {
		t.Errorf("the warning of a requirement does not travel: %s", words)
	}
	for _, name := range []string{"v.csv.warnings.txt", "v.csv.provenance.json"} {
		if text, _ := os.ReadFile(filepath.Join(folder, name)); !strings.Contains(string(text), "'A4': SUM(c.volume) adds up 6 rows") {
			t.Errorf("%s says %s", name, text)
		}
	}
	provenance, _ := os.ReadFile(filepath.Join(folder, "v.csv.provenance.json"))
	for _, part := range []string{`"requirement": "A1"`, `REQUIRE 'A1' NONE (SELECT logger FROM log WHERE temp > 8)`, `"name": "log"`} {
		if !strings.Contains(string(provenance), part) {
			t.Errorf("the provenance lacks %s: %s", part, provenance)
		}
	}
	run("CREATE TABLE verdicts AS (SELECT 7 AS mine);")
	out.Reset()
	run("SELECT * FROM VERDICTS;")
	if out.String() != "\nmine\n7\n" && out.String() != "mine\n7\n" {
		t.Errorf("a table of that name goes before: %s", out)
	}
}

// TestWarningsTravel: a saved table with a warning gets a file beside it that says
// so; it goes when the next one has none, unless it is somebody else's.
func TestWarningsTravel(t *testing.T) {
	s, _, words := requirer(t, Options{})
	ctx, folder := context.Background(), t.TempDir()
	beside := filepath.Join(folder, "room.csv.warnings.txt")
	twice := "SAVE SELECT SUM(c.volume) AS v FROM CELLS OF hall AS c CROSS JOIN register TO 'room.csv' OVERWRITE;"
	once := "SAVE SELECT SUM(volume) AS v FROM CELLS OF hall TO 'room.csv' OVERWRITE;"
	run := func(text string) {
		t.Helper()
		if err := s.Run(ctx, "input", text, folder); err != nil {
			t.Fatal(words)
		}
	}
	run(twice)
	text, _ := os.ReadFile(beside)
	if !strings.HasPrefix(string(text), "The numbers in room.csv are to be read with") || !strings.Contains(string(text), "\nwarning: SUM(c.volume) adds up 6 rows") {
		t.Errorf("beside the table: %q", text)
	}
	run("CREATE TABLE sums AS (SELECT SUM(c.volume) AS v FROM CELLS OF hall AS c CROSS JOIN register); SAVE SELECT * FROM sums TO 'sums.csv' WITH PROVENANCE;")
	for _, name := range []string{"sums.csv.warnings.txt", "sums.csv.provenance.json"} {
		if text, _ := os.ReadFile(filepath.Join(folder, name)); !strings.Contains(string(text), "sums was made with the warning: SUM(c.volume) adds up 6 rows") {
			t.Errorf("a table in between loses the warning: %s says %s", name, text)
		}
	}
	if text, _ := os.ReadFile(filepath.Join(folder, "sums.csv.provenance.json")); !strings.Contains(string(text), `"name": "hall"`) {
		t.Errorf("a table in between hides what it rests on: %s", text)
	}
	run(once)
	if _, err := os.Stat(beside); err == nil {
		t.Error("the warnings of the older table are still there")
	}
	if err := os.WriteFile(beside, []byte("mine"), 0o600); err != nil {
		t.Fatal(err)
	}
	run(once)
	if text, _ := os.ReadFile(beside); string(text) != "mine" {
		t.Errorf("somebody's file is %q now", text)
	}
}

// TestRequireStrict: what is not decided fails a strict script; what failed does
// not, since it is an answer.
func TestRequireStrict(t *testing.T) {
	s, _, words := requirer(t, Options{Strict: true})
	if err := s.Run(context.Background(), "input", "REQUIRE 'A' NONE (SELECT * FROM log WHERE temp > 7);", "."); err != nil {
		t.Errorf("a FAIL stops a strict script: %s", words)
	}
	if err := s.Run(context.Background(), "input", "REQUIRE 'A' NONE (SELECT * FROM nothing WHERE temp > 7);", "."); err == nil || s.LastCode() != "strict" {
		t.Errorf("what is not decided passes a strict script: %s", words)
	}
}

// TestRequireMistakes: what users get wrong.
func TestRequireMistakes(t *testing.T) {
	for text, want := range map[string]string{
		"REQUIRE 'A' (SELECT MAX(temp) FROM log);":                                             "REQUIRE needs a condition, and this is REAL",
		"REQUIRE '' 1 < 2;":                                                                    "a requirement needs a name",
		"REQUIRE 'A' NONE (SELECT tmp FROM log);":                                              "did you mean 'temp'",
		"REQUIRE 'A' temp > 8;":                                                                "temp",
		"REQUIRE 'A' NONE (SELECT * FROM verdict);":                                            "there is no campaign, table or view 'verdict'",
		"REQUIRE 'A' (SELECT logger FROM log) = 'L1';":                                         "row",
		"REQUIRE 'A' NONE (SELECT 1/0 FROM log);":                                              "1 / 0 has no value",
		"REQUIRE 'A' NONE (SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall UNCLIPPED);": "weight",
	} {
		s, _, words := requirer(t, Options{})
		if err := s.Run(context.Background(), "input", text, "."); err == nil || !strings.Contains(words.String(), want) {
			t.Errorf("%s says %s, want %s", text, words, want)
		}
		if len(s.verdicts) > 0 {
			t.Errorf("%s: a requirement that broke off has no verdict", text)
		}
	}
}
