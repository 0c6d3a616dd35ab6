package engine

import (
	"bytes"
	"context"
	"math"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/present"
)

// asked runs a setting and a query, and gives the answer as CSV and what was said.
func asked(t *testing.T, threads int, setting, query string) (rows [][]string, words string, failed bool) {
	t.Helper()
	var out, said bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &out, Err: &said, Quiet: true, Threads: threads, Format: present.AsCSV})
	if err := s.Run(context.Background(), "setting", setting, t.TempDir()); err != nil {
		t.Fatal(said.String())
	}
	out.Reset()
	said.Reset()
	failed = s.Run(context.Background(), "input", query+";", ".") != nil
	for _, line := range strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")[1:] {
		rows = append(rows, strings.Split(line, ","))
	}
	if failed {
		rows = nil
	}
	return rows, said.String(), failed
}

// asText joins the rows of an answer; numbers to six digits.
func asText(rows [][]string) string {
	var lines []string
	for _, r := range rows {
		var cells []string
		for _, c := range r {
			if x, err := strconv.ParseFloat(c, 64); err == nil {
				c = strconv.FormatFloat(x, 'g', 6, 64)
			}
			cells = append(cells, c)
		}
		lines = append(lines, strings.Join(cells, " "))
	}
	return strings.Join(lines, "; ")
}

// TestExtremes: ranks by hand. 2.22 + 4.23 + 1.55 is 8 but for its last bit.
func TestExtremes(t *testing.T) {
	const setting = `CREATE TABLE high AS (SELECT * FROM (VALUES ('C', 7.5, 1), ('A', 8.0, 2), ('D', NULL, 3), ('B', 2.22 + 4.23 + 1.55, 4), ('F', 6.0, 5), ('E', 7.5, 6)) AS v (logger, hi, n));
		CREATE TABLE none AS (SELECT * FROM high WHERE n > 9);`
	for _, c := range []struct{ query, want, says string }{
		// both at the top have rank 1; the next rank would be 3
		{"SELECT logger, side, rank, tied FROM EXTREMES OF high FOR hi NUMBER 2",
			"B highest 1 TRUE; A highest 1 TRUE; F lowest 1 FALSE; C lowest 2 TRUE; E lowest 2 TRUE", "1 row of high without a value of hi is in no rank"},
		{"SELECT logger, rank FROM EXTREMES OF high FOR hi NUMBER 1 WHERE side = 'lowest'", "F 1", ""},
		{"SELECT logger, rank FROM EXTREMES OF high FOR hi NUMBER 9 AS x WHERE x.logger = 'C' AND x.side = 'highest'", "C 3", ""},
		{"SELECT COUNT(*) FROM EXTREMES OF high FOR hi NUMBER 9", "10", ""},
		{"SELECT p_highest, p_lowest FROM EXTREMES OF high FOR hi NUMBER 1 WHERE side = 'lowest'", " ", ""},
		{"SELECT n, rank, side FROM EXTREMES OF high FOR n NUMBER 1", "6 1 highest; 1 1 lowest", ""},
		{"SELECT rank FROM EXTREMES OF none FOR hi NUMBER 2", "", "there is no value of hi in none"},
		{"SELECT own_rank, rank FROM EXTREMES OF (SELECT hi, 7 AS rank FROM high) FOR hi NUMBER 1 WHERE side = 'lowest'", "7 1", ""},
	} {
		rows, words, failed := asked(t, 1, setting, c.query)
		if got := asText(rows); failed || got != c.want || !strings.Contains(words, c.says) {
			t.Errorf("%s gives %s\nwant %s\n%s", c.query, got, c.want, words)
		}
	}
	for query, want := range map[string]string{
		"SELECT * FROM EXTREMES OF high FOR hi":                                                      "EXTREMES needs NUMBER",
		"SELECT * FROM EXTREMES OF high NUMBER 5":                                                    "EXTREMES needs FOR",
		"SELECT * FROM EXTREMES OF high FOR logger NUMBER 5":                                         "is TEXT, not a number",
		"SELECT * FROM EXTREMES OF high FOR hi NUMBER 0":                                             "NUMBER is a whole number of 1 or more",
		"SELECT * FROM EXTREMES OF high FOR hi NUMBER 1 UNCERTAINTY logger":                          "is TEXT, not a number",
		"SELECT * FROM EXTREMES OF high FOR hi NUMBER 1 UNCERTAINTY (-1 EACH)":                       "0 or more",
		"SELECT * FROM EXTREMES OF (SELECT hi, 0 - hi AS u FROM high) FOR hi NUMBER 1 UNCERTAINTY u": "the uncertainty u in row",
		"SELECT * FROM EXTREMES OF high FOR hi NUMBER 1 WITHIN air":                                  "EXTREMES takes no WITHIN",
	} {
		if _, words, failed := asked(t, 1, setting, query); !failed || !strings.Contains(words, want) {
			t.Errorf("%s says %s, want %s", query, words, want)
		}
	}
}

// TestExtremesProbability: of two values with normal errors the higher one is the
// highest with the probability of the normal distribution at d/√(u²+v²); equal ones
// share what there is; what is six uncertainties below has none.
func TestExtremesProbability(t *testing.T) {
	normal := func(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 }
	for _, c := range []struct {
		values, clause string
		want           map[string][2]float64
		within         float64
	}{
		{"('A', 8.0, 0.1), ('B', 8.1, 0.1)", "u", map[string][2]float64{"A": {normal(-math.Sqrt2 / 2), normal(math.Sqrt2 / 2)}, "B": {normal(math.Sqrt2 / 2), normal(-math.Sqrt2 / 2)}}, 0.006},
		{"('A', 8.0, 0.3), ('B', 8.2, 0.4)", "u", map[string][2]float64{"A": {normal(-0.4), normal(0.4)}, "B": {normal(0.4), normal(-0.4)}}, 0.006},
		{"('A', 8.0, 9), ('B', 8.2, 9)", "(0.3 EACH, hi 0.4 EACH, 5 COMMON)", map[string][2]float64{"A": {normal(-0.2 / math.Sqrt(0.5)), normal(0.2 / math.Sqrt(0.5))}}, 0.006},
		{"('A', 8.0, 0.1), ('B', 8.0, 0.1), ('C', 8.0, 0.1), ('D', 2.0, 0.1)", "u", map[string][2]float64{"A": {1. / 3, 0}, "B": {1. / 3, 0}, "C": {1. / 3, 0}, "D": {0, 1}}, 1e-15},
		{"('A', 8.0, 0.0), ('B', 8.0, 0.0), ('C', 7.0, 0.0)", "u", map[string][2]float64{"A": {0.5, 0}, "B": {0.5, 0}, "C": {0, 1}}, 0},
		{"('A', 8.0, 0.1)", "u", map[string][2]float64{"A": {1, 1}}, 0},
	} {
		var first string
		for _, threads := range []int{1, 2} {
			for _, order := range []string{"logger", "logger DESC"} {
				query := "SELECT DISTINCT logger, p_highest, p_lowest FROM EXTREMES OF (SELECT * FROM (VALUES " + c.values + ") AS v (logger, hi, u) ORDER BY " + order +
					") FOR hi NUMBER 4 UNCERTAINTY " + c.clause + " ORDER BY logger"
				rows, words, failed := asked(t, threads, "", query)
				if failed {
					t.Fatal(words)
				}
				if text := asText(rows); first == "" {
					first = text
				} else if text != first {
					t.Errorf("%s: %s, and before %s", query, text, first)
				}
				for _, r := range rows {
					want, ok := c.want[r[0]]
					high, _ := strconv.ParseFloat(r[1], 64)
					low, _ := strconv.ParseFloat(r[2], 64)
					if ok && (math.Abs(high-want[0]) > c.within || math.Abs(low-want[1]) > c.within) {
						t.Errorf("%s: %v, want %v", query, r, want)
					}
				}
				if !strings.Contains(words, "100000 draws of normal errors") || strings.Contains(c.clause, "COMMON") != strings.Contains(words, "moves them together") {
					t.Errorf("%s says %s", query, words)
				}
			}
		}
	}
}

// TestRepresentatives: choices by hand, on four instants of which two choose and two
// judge. Without a solid all weigh alike: the mean of all is 5, 6 | 5, 6.333.
//
//	a 4 5 | 4 5    b 6 7 | 6 7    c 5 6 | 5 7
//
// c alone meets the mean of the first half and errs by 0 and 2/3 on the second:
// √(4/9/2) = 0.471405. a and b together meet it too, and err by 0 and 1/3: 0.235702.
// In the room of 4 m the cells are 4, 6 and 6 m³: the mean is 5.125, 6.125 | 5.125,
// 6.5, from which c is off by -1/8, -1/8 | -1/8, 1/2: √((1/64 + 1/4)/2) = 0.364434.
// In two zones of 2 m each a and b have 4 m³ and c 8: the mean is 5, 6 | 5, 6.5, from which
// c is off by 0, 0 | 0, 1/2: √(1/4/2) = 0.353553; a by -1, -1 | -1, -3/2: √(13/8) = 1.27475,
// and a and b together by 0, 0 | 0, -1/2.
func TestRepresentatives(t *testing.T) {
	const setting = `CREATE SOLID room AS BOX (0, 0, 0) TO (4, 2, 2);
		CREATE SOLID west AS BOX (0, 0, 0) TO (2, 2, 2); CREATE SOLID east AS BOX (2, 0, 0) TO (4, 2, 2); CREATE SOLID shed AS BOX (9, 0, 0) TO (10, 1, 1);
		CREATE TABLE log AS (SELECT * FROM (VALUES ('a', 1, 4.0), ('a', 2, 5.0), ('a', 3, 4.0), ('a', 4, 5.0), ('b', 1, 6.0), ('b', 2, 7.0), ('b', 3, 6.0), ('b', 4, 7.0),
		  ('c', 1, 5.0), ('c', 2, 6.0), ('c', 3, 5.0), ('c', 4, 7.0)) AS v (logger, n, temp)) UNITS (temp '°C');
		CREATE CAMPAIGN hall AS (SELECT * FROM (VALUES ('a', 0.5, 1.0, 1.0), ('b', 1.5, 1.0, 1.0), ('c', 3.5, 1.0, 1.0), ('d', 3.5, 1.0, 0.2)) AS v (id, x, y, z)) WITHIN room;
		CREATE VIEW readings AS (SELECT h.id, h.x, h.y, h.z, l.n AS t, l.temp FROM hall h JOIN log l ON l.logger = h.id);
		CREATE VIEW dead AS (SELECT * FROM readings UNION ALL SELECT 'd', 3.5, 1.0, 0.2, 1, 5.0 UNION ALL SELECT 'd', 3.5, 1.0, 0.2, 3, NULL);`
	for _, c := range []struct{ query, want, says string }{
		{"readings FOR EACH t FOR temp NUMBER 1 BY MEAN", "1 c 0.471405", "chosen on the first 2 values of t, where the error of the 1 is 0 °C, and judged on the other 2; all weigh alike"},
		{"readings FOR EACH t FOR temp NUMBER 2 BY MEAN", "1 a 1.17851; 2 b 0.235702", ""},
		{"readings FOR EACH t FOR temp NUMBER 1 BY MEAN WITHIN room", "1 c 0.364434", "the error of the 1 is 0.125 °C"},
		{"readings FOR EACH t FOR temp NUMBER 1 BY MEAN WITHIN (west, east)", "1 c 0.353553 east", "the error of the 1 is 0 °C, and judged on the other 2; the mean of all is weighted"},
		{"readings FOR EACH t FOR temp NUMBER 2 BY MEAN WITHIN (west, east)", "1 a 1.27475 west; 2 b 0.353553 west", ""},
		{"readings FOR EACH t FOR temp NUMBER 2 KEEP ('c') BY HIGHEST WITHIN (east, west, shed)", "1 c 0.707107 east; 2 b 0 west", "the zone shed has no site of readings"},
		{"(SELECT id, CASE WHEN id = 'c' AND t > 2 THEN 1.9 ELSE x END AS x, y, z, t, temp FROM readings) FOR EACH t FOR temp NUMBER 1 KEEP ('c') BY HIGHEST WITHIN (west, east)", "1 c 0.707107 ", "the zone east has no site in 2 of 4 partitions"},
		{"readings FOR EACH t FOR temp NUMBER 1 BY HIGHEST", "1 b 0", "the highest of the few"},
		{"readings FOR EACH t FOR temp NUMBER 1 BY COURSE", "1 a 0.235702", ""},
		{"readings FOR EACH t FOR temp NUMBER 2 KEEP ('c') BY MEAN", "1 c 0.471405; 2 a 0.424918", ""},
		{"readings FOR EACH t FOR temp NUMBER 7 BY MEAN", "", "only 3 sites to choose from, and NUMBER asks for 7"},
		{"readings FOR EACH t OMITTING ('c') BECAUSE 'moved' FOR temp NUMBER 2 BY MEAN", "1 a 1; 2 b 0", "'c' was left out before the partition"},
		{"dead FOR EACH t FOR temp NUMBER 1 BY MEAN", "1 c 0.471405", "'d'"},
		{"(SELECT * FROM readings WHERE t = 1) FOR EACH t FOR temp NUMBER 1 BY MEAN", "1 c ", "nothing was left to judge the choice by"},
	} {
		for _, threads := range []int{1, 2} {
			rows, words, failed := asked(t, threads, setting, "SELECT * FROM REPRESENTATIVES OF "+c.query)
			if got := asText(rows); failed || c.want != "" && got != c.want || !strings.Contains(words, c.says) {
				t.Errorf("%s gives %s\nwant %s\n%s", c.query, got, c.want, words)
			}
		}
	}
	for query, want := range map[string]string{
		"readings FOR temp NUMBER 1 BY MEAN":                               "needs FOR EACH",
		"readings FOR EACH t NUMBER 1 BY MEAN":                             "needs FOR, the reading",
		"readings FOR EACH t FOR temp BY MEAN":                             "needs NUMBER",
		"readings FOR EACH t FOR temp NUMBER 1":                            "needs BY MEAN",
		"readings FOR EACH t FOR temp NUMBER 1 BY MEDIAN":                  "'MEDIAN' is not what sites are chosen by",
		"readings FOR EACH t FOR temp NUMBER 1 BY MEEN":                    "did you mean MEAN?",
		"readings FOR EACH t FOR temp NUMBER 1 KEEP ('e') BY MEAN":         "there is no site 'e' in readings to keep",
		"readings FOR EACH t FOR temp NUMBER 1 KEEP ('a', 'b') BY MEAN":    "KEEP names 2 sites, and NUMBER is 1",
		"readings FOR EACH t FOR temp NUMBER 2 KEEP ('a', 'a') BY MEAN":    "KEEP names 'a' twice",
		"readings FOR EACH t FOR temp NUMBER 1 BY MEAN WITHIN (room, air)": "there is no solid 'air'",
		"log FOR EACH n FOR temp NUMBER 1 BY MEAN":                         "needs the columns id, x, y, z",
	} {
		if _, words, failed := asked(t, 1, setting, "SELECT * FROM REPRESENTATIVES OF "+query); !failed || !strings.Contains(words, want) {
			t.Errorf("%s says %s, want %s", query, words, want)
		}
	}
}

// TestEpisodesNear: readings at the limit of EPISODES are told of; 2.22 + 4.23 + 1.55
// is 8 but for its last bit.
func TestEpisodesNear(t *testing.T) {
	const setting = `CREATE TABLE log AS (SELECT 'a' AS logger, TIMESTAMP '2031-04-07 00:00:00' + n * INTERVAL '15' MINUTE AS t, temp
		FROM (VALUES (0, 7.0), (1, 8.0), (2, 2.22 + 4.23 + 1.55), (3, 9.0), (4, 7.0)) AS v (n, temp));`
	for query, want := range map[string]string{
		"ABOVE 8":   "2 readings of temp lie within 1e-9 of the limit 8, 1 of them equal to it",
		"BELOW 9":   "1 reading of temp lies within 1e-9 of the limit 9, 1 of them equal to it",
		"ABOVE 8.5": "",
	} {
		_, words, failed := asked(t, 1, setting, "SELECT * FROM EPISODES OF log BY logger ON t FOR temp "+query)
		if failed || !strings.Contains(words, want) || want == "" && strings.Contains(words, "limit") {
			t.Errorf("%s says %s, want %s", query, words, want)
		}
	}
}
