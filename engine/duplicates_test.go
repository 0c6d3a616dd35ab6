package engine_test

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// doubled is a campaign with two readings at one place: with the sites at x = 2 and 6
// a box of 10 by 4 by 3 m divides at x = 4 into 48 and 72 m³ that share 12 m² (worked
// out by hand).
func doubled(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "doubled.csv")
	text := "id,x,y,z,temp,n,rack\nB,2,2,1.5,3,2,east\nC,6,2,1.5,8,5,west\nA,2,2,1.5,1,1,door\nD,2,2,1.5,,4,door\n"
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// withPolicy is a session with the doubled campaign under a policy ("": none named).
func withPolicy(t *testing.T, policy string) *asker {
	t.Helper()
	a := newAsker(t, 2)
	clause := ""
	if policy != "" {
		clause = " DUPLICATES " + policy
	}
	a.text("CREATE CAMPAIGN hall FROM '" + doubled(t) + "' WITHIN BOX (0,0,0) TO (10,4,3)" + clause + ";")
	return a
}

func (a *asker) lines(script string) string {
	a.t.Helper()
	var out []string
	for _, r := range a.records(script) {
		out = append(out, strings.Join(r, " "))
	}
	return strings.Join(out, "; ")
}

func (a *asker) is(script, want string) {
	a.t.Helper()
	if got := a.lines(script); got != want {
		a.t.Errorf("%s\ngives %s\nwant  %s", script, got, want)
	}
}

func (a *asker) says(want string) {
	a.t.Helper()
	if got := a.notes.String(); !strings.Contains(got, want) {
		a.t.Errorf("the notes are %q, want %q in them", got, want)
	}
}

// SPLIT, the default: every row is there, with its share of the cell.
func TestDuplicatesSplit(t *testing.T) {
	for _, policy := range []string{"", "SPLIT"} {
		a := withPolicy(t, policy)
		a.is("SELECT id, volume, temp FROM CELLS OF hall WHERE temp IS NOT NULL;", "A 16 1; B 16 3; C 72 8")
		a.says("3 sites of hall share a place with another ('A', 'B', 'D'): the measures of their cell are split equally among them (DUPLICATES SPLIT)")
		a.is("SELECT SUM(volume), SUM(area), COUNT(*) FROM CELLS OF hall;", "120 188 4")
		a.is("SELECT SUM(area) FROM CONTACTS OF hall WHERE a = 'C';", "12")
		a.is("SELECT DISTINCT neighbours, faces, farthest FROM CELLS OF hall WHERE id <> 'C';", "1 6 "+a.lines("SELECT farthest FROM CELLS OF hall WHERE id = 'A';"))
		// D has no reading: its share of the space is nobody's.
		if got, want := a.number("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall;"), (16*1+16*3+72*8.)/104; math.Abs(got-want) > 1e-14*want {
			t.Errorf("the mean is %v, want %v", got, want)
		}
		a.says("13.3 % of the weight was left out")
		a.is("SELECT id, volume FROM CELLS OF hall OMITTING ('D', 'B') BECAUSE 'two of three';", "A 48; C 72")
	}
}

// MEAN: one row a place under its first identifier, numbers are means of those there
// are, all else is the first row's.
func TestDuplicatesMean(t *testing.T) {
	a := withPolicy(t, "MEAN")
	a.is("SELECT id, volume, temp, n, rack FROM CELLS OF hall;", "A 48 2 2.3333333333333335 door; C 72 8 5 west")
	a.says("each place is one site under its first identifier, its numbers are their means (DUPLICATES MEAN)")
	a.is("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall;", "5.6")
	// Conditions see the means, not the rows behind them.
	a.is("SELECT id FROM CELLS OF hall WHERE temp > 1.5 AND temp < 2.5;", "A")
	a.is("SELECT id FROM CELLS OF hall WHERE temp = 3;", "")
	a.is("SELECT a, b, area FROM CONTACTS OF hall;", "A C 12; C A 12")
	a.is("SELECT id, temp, volume FROM CELLS OF hall OMITTING ('A') BECAUSE 'first';", "B 3 48; C 8 72")
}

// FIRST: the row with the first identifier stands for its place.
func TestDuplicatesFirst(t *testing.T) {
	a := withPolicy(t, "FIRST")
	a.is("SELECT id, volume, temp, n, rack FROM CELLS OF hall;", "A 48 1 1 door; C 72 8 5 west")
	a.says("only the first identifier of each place is kept (DUPLICATES FIRST)")
	a.is("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall;", "5.2")
	a.is("SELECT id FROM CELLS OF hall WHERE temp = 3;", "")
	a.is("SELECT a, b, area FROM CONTACTS OF hall;", "A C 12; C A 12")
}

// FAIL: no answer, but the names and the place; with two of them left out there is one.
func TestDuplicatesFail(t *testing.T) {
	a := withPolicy(t, "FAIL")
	for _, relation := range []string{"CELLS", "CONTACTS", "GAPS"} {
		a.notes.Reset()
		err := a.session.Run(context.Background(), "test", "SELECT COUNT(*) FROM "+relation+" OF hall;", reference)
		if err == nil || a.session.LastCode() != "duplicates" {
			t.Errorf("%s: %v, code %q", relation, err, a.session.LastCode())
		}
		a.says("sites 'A' and 'B' of hall stand at one place (2, 2, 1.5), and DUPLICATES is FAIL")
	}
	a.is("SELECT id, volume FROM CELLS OF hall OMITTING ('B', 'D') BECAUSE 'keyed in twice';", "A 48; C 72")
}

// Policies act in each partition of FOR EACH for itself: sites of different days do not
// share a place. A query has no policy of its own and splits.
func TestDuplicatesForEach(t *testing.T) {
	path := filepath.Join(t.TempDir(), "days.csv")
	text := "id,x,y,z,temp,day\nA,2,2,1.5,1,1\nB,2,2,1.5,3,1\nC,6,2,1.5,8,1\nE,2,2,1.5,4,2\nF,6,2,1.5,5,2\n"
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	for policy, want := range map[string]string{
		"SPLIT": "1 A 24 1; 1 B 24 3; 1 C 72 8; 2 E 48 4; 2 F 72 5",
		"MEAN":  "1 A 48 2; 1 C 72 8; 2 E 48 4; 2 F 72 5",
		"FIRST": "1 A 48 1; 1 C 72 8; 2 E 48 4; 2 F 72 5",
	} {
		a := newAsker(t, 2)
		a.text("CREATE CAMPAIGN hall FROM '" + path + "' WITHIN BOX (0,0,0) TO (10,4,3) DUPLICATES " + policy + ";")
		a.is("SELECT day, id, volume, temp FROM CELLS OF hall FOR EACH day;", want)
		a.is("SELECT day, id FROM CELLS OF hall FOR EACH day WHERE day = 2;", "2 E; 2 F")
		split := "1 A 24 1; 1 B 24 3; 1 C 72 8; 2 E 48 4; 2 F 72 5"
		a.is("SELECT day, id, volume, temp FROM CELLS OF (SELECT * FROM hall) WITHIN BOX (0,0,0) TO (10,4,3) FOR EACH day;", split)
	}
}

// DUPLICATES MEAN of what has no plain mean: 80 dB and 90 dB are 10 lg(0.5 (10^8 + 10^9)) =
// 87.403627 dB, 350° and 20° are 5°, pH 4 and pH 6 have the mean acid -lg(0.5 (1e-4 + 1e-6))
// = 5.29671 - 1 = 4.296709 (by hand). Opposite directions have no mean.
func TestMeanOfLogarithms(t *testing.T) {
	path := filepath.Join(t.TempDir(), "noise.csv")
	text := "id,x,y,z,level [dB],wind [°],acid [pH],temp [°C]\nA,2,2,1.5,80,350,4,10\nB,2,2,1.5,90,20,6,20\nC,6,2,1.5,70,90,7,8\nD,8,2,1.5,-5000,90,7,8\nE,8,2,1.5,,270,,8\n"
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM '" + path + "' WITHIN BOX (0,0,0) TO (10,4,3) DUPLICATES MEAN;")
	a.is("SELECT id, ROUND(level, 6), ROUND(wind, 9), ROUND(acid, 6), temp FROM CELLS OF hall ORDER BY id;",
		"A 87.403627 5 4.296709 15; C 70 90 7 8; D -5000  7 8")
	a.says("its numbers are their means (of level by energy, wind by vectors, acid by the acid)")
}
