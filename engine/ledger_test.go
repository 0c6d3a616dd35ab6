package engine

import (
	"bytes"
	"context"
	"strings"
	"testing"

	"nearcell/catalog"
)

// ledgerSetting is a room of 4 × 2 × 2 m with three sites on a line: the cells are
// 4, 8 and 4 m³ (from x = 0 to 1, to 3, to 4). The site b has no reading; at the
// second instant it has none either. Beside it lies a store of 2 m³ without a site.
const ledgerSetting = `
CREATE SOLID room AS BOX (0, 0, 0) TO (4, 2, 2);
CREATE SOLID store AS BOX (5, 0, 0) TO (6, 2, 1);
CREATE SOLID porch AS BOX (3, 0, 0) TO (6, 2, 1);
CREATE SOLID hut AS BOX (0, 0, 0) TO (4, 2, 1);
CREATE CAMPAIGN hall AS (SELECT * FROM (VALUES ('a', 0.5, 1.0, 1.0, 4.0), ('b', 1.5, 1.0, 1.0, NULL), ('c', 4.5, 1.0, 1.0, 6.0)) AS v (id, x, y, z, temp))
  WITHIN room TOLERANCE 1;
CREATE TABLE week AS (SELECT * FROM (VALUES (1, 5.0, 'a'), (1, NULL, 'b'), (1, 8.0, 'c'), (2, 5.0, 'a'), (2, 7.9, 'b'), (2, 2.22 + 4.23 + 1.55, 'c')) AS v (t, temp, logger)) UNITS (temp '°C');
CREATE VIEW readings AS (SELECT h.id, h.x, h.y, h.z, w.t, w.temp FROM hall h JOIN week w ON w.logger = h.id);
CREATE TABLE twice AS (SELECT * FROM (VALUES (1), (2)) AS v (n));
`

// TestLedger: what a weighted answer speaks for, by hand: the cells are 4 m³ (x up to
// 1), 8 m³ (up to 3) and 4 m³.
func TestLedger(t *testing.T) {
	const mean = "SELECT AVG(temp) WEIGHTED BY volume AS m FROM CELLS OF "
	for query, want := range map[string]string{
		mean + "(SELECT id, x, y, z, 4.0 AS temp FROM hall) WITHIN room": "note: AVG(temp) WEIGHTED BY volume: of 16 m³ of room all is answered for",
		mean + "hall":                              "note: AVG(temp) WEIGHTED BY volume: of 16 m³ of room 8 (50.0 %) answered for, 8 NULL, so that nobody spoke for it, 0 removed by WHERE, 0 outside any partition",
		mean + "hall WHERE id <> 'a'":              "of 16 m³ of room 4 (25.0 %) answered for, 8 NULL, so that nobody spoke for it, 4 removed by WHERE, 0 outside any partition",
		mean + "hall WHERE volume > 5 OR temp > 5": "of 16 m³ of room 4 (25.0 %) answered for, 8 NULL, so that nobody spoke for it, 4 removed by WHERE, 0 outside any partition",
		// the zone without a site is in no row; a small one is half the room high
		mean + "hall WITHIN (room, store)": "of 18 m³ of room and store 8 (44.4 %) answered for, 8 NULL, so that nobody spoke for it, 0 removed by WHERE, 2 outside any partition",
		mean + "hall WITHIN hut":           "of 8 m³ of hut 4 (50.0 %) answered for, 4 NULL",
		"SELECT AVG(temp) FILTER (WHERE id <> 'c') WEIGHTED BY volume AS m FROM CELLS OF hall": "of 16 m³ of room 4 (25.0 %) answered for, 8 NULL, so that nobody spoke for it, 4 left out by FILTER, 0 removed by WHERE",
		// sums of volumes: what they leave out, and what the condition of FILTER leaves open
		"SELECT SUM(volume) AS v FROM CELLS OF hall":                                       "",
		"SELECT SUM(volume) FILTER (WHERE temp > 5) AS v FROM CELLS OF hall":               "SUM(volume) FILTER (WHERE temp > 5): of 16 m³ of room 4 (25.0 %) answered for, 0 NULL, so that nobody spoke for it, 4 left out by FILTER, 8 of which FILTER cannot tell (its condition is unknown), 0 removed by WHERE, 0 outside any partition",
		"SELECT SUM(volume) FILTER (WHERE id = 'a') AS v FROM CELLS OF hall":               "",
		"SELECT SUM(volume * temp) AS v FROM CELLS OF hall WHERE id <> 'a'":                "SUM(volume * temp): of 16 m³ of room 4 (25.0 %) answered for, 8 NULL, so that nobody spoke for it, 4 removed by WHERE, 0 outside any partition",
		"SELECT SUM(volume) AS v FROM CELLS OF hall WITHIN (room, store)":                  "SUM(volume): of 18 m³ of room and store 16 (88.9 %) answered for, 0 NULL, so that nobody spoke for it, 0 removed by WHERE, 2 outside any partition",
		"SELECT AVG(2) FILTER (WHERE temp > 5) WEIGHTED BY volume AS v FROM CELLS OF hall": "of 16 m³ of room 4 (25.0 %) answered for, 0 NULL, so that nobody spoke for it, 4 left out by FILTER, 8 of which FILTER cannot tell (its condition is unknown), 0 removed",
		// two instants: in the first one the 8 m³ of b are NULL
		"SELECT t, AVG(temp) WEIGHTED BY volume AS m FROM CELLS OF (SELECT * FROM readings WHERE id <> 'c') FOR EACH t WITHIN room GROUP BY t":     "of 2 partitions of room, 32 m³ together, 20 (62.5 %) answered for, 12 NULL",
		"SELECT AVG(temp) WEIGHTED BY (volume * 2) AS m FROM CELLS OF (SELECT * FROM readings WHERE id <> 'c') FOR EACH t WITHIN room WHERE t = 1": "of 16 m³ of room 4 (25.0 %) answered for, 12 NULL",
		// a join that loses a cell, and one that repeats them
		"SELECT AVG(c.temp) WEIGHTED BY volume AS m FROM CELLS OF hall AS c JOIN twice ON c.id = 'a' AND n = 1": "of 16 m³ of room 4 (25.0 %) answered for, 0 NULL, so that nobody spoke for it, 12 removed by WHERE or a join, 0 outside",
		"SELECT AVG(c.temp) WEIGHTED BY volume AS m FROM CELLS OF hall AS c CROSS JOIN twice":                   "warning: AVG(c.temp) WEIGHTED BY volume: the weights add up to 32 m³, and room has only 16 m³: cells are counted more than once",
		// WHERE and a zone without a site at once: the 2 m³ of the store are nobody's whatever
		// WHERE removes
		mean + "hall WITHIN (room, store) WHERE id <> 'a'":                                          "of 18 m³ of room and store 4 (22.2 %) answered for, 8 NULL, so that nobody spoke for it, 4 removed by WHERE, 2 outside any partition",
		mean + "hall WITHIN (room, store) WHERE volume > 5":                                         "of 18 m³ of room and store 0 (0.0 %) answered for, 8 NULL, so that nobody spoke for it, 8 removed by WHERE, 2 outside any partition",
		mean + "(SELECT * FROM readings) FOR EACH t WITHIN (room, store) WHERE t = 2 AND id <> 'b'": "of 18 m³ of room and store 4 (22.2 %) answered for, 0 NULL, so that nobody spoke for it, 12 removed by WHERE, 2 outside any partition",
		// a part that reaches out of the room: of its 6 m³ 2 are c's, 4 nobody's
		mean + "hall WITHIN room MEASURED IN (porch)":                      "of 6 m³ of porch 2 (33.3 %) answered for, 0 NULL, so that nobody spoke for it, 0 removed by WHERE, 4 outside any partition",
		mean + "hall WITHIN room MEASURED IN (porch, hut) WHERE id <> 'a'": "of 14 m³ of porch, hut 4 (28.6 %) answered for, 4 NULL, so that nobody spoke for it, 2 removed by WHERE, 4 outside any partition",
		mean + "hall WITHIN room MEASURED IN (porch) WHERE id <> 'c'":      "of 6 m³ of porch 0 (0.0 %) answered for, 0 NULL, so that nobody spoke for it, 2 removed by WHERE, 4 outside any partition",
		// partitions of which WHERE leaves no row are removed, not forgotten; those that it
		// does not choose are not asked for. Without TOLERANCE c is outside, so that b has 12 m³;
		// only b at the second instant reads 7 to 7.95.
		mean + "readings FOR EACH t WITHIN room WHERE temp BETWEEN 7 AND 7.95":           "of 2 partitions of room, 32 m³ together, 12 (37.5 %) answered for, 0 NULL, so that nobody spoke for it, 20 removed by WHERE, 0 outside",
		mean + "readings FOR EACH t WITHIN room WHERE t = 2 AND temp BETWEEN 7 AND 7.95": "of 16 m³ of room 12 (75.0 %) answered for, 0 NULL, so that nobody spoke for it, 4 removed by WHERE, 0 outside",
		// in a query with a name that is used twice
		"WITH c AS (SELECT id, t, temp, volume FROM CELLS OF readings FOR EACH t WITHIN (room, store)) SELECT AVG(temp) WEIGHTED BY volume AS m, (SELECT COUNT(*) FROM c) AS n FROM c": "of 2 partitions of room and store, 36 m³ together, 20 (55.6 %) answered for, 12 NULL, so that nobody spoke for it, 0 removed by WHERE or a join, 4 outside any partition",
		// what counts in a part of the room: its lower half, and the store that lies outside
		mean + "hall MEASURED IN (hut)": "of 8 m³ of hut 4 (50.0 %) answered for, 4 NULL, so that nobody spoke for it, 0 removed by WHERE, 0 outside any partition",
		// no closed space, no ledger
		mean + "hall UNCLIPPED WHERE bounded":                           "",
		"SELECT AVG(temp) WEIGHTED BY farthest AS m FROM CELLS OF hall": "",
		// through a view and a subquery
		"SELECT AVG(temp) WEIGHTED BY v AS m FROM (SELECT temp, volume AS v FROM CELLS OF hall)": "note: AVG(temp) WEIGHTED BY v: of 16 m³ of room 8 (50.0 %) answered for",
	} {
		for _, threads := range []int{1, 2} {
			var out, words bytes.Buffer
			s := New(catalog.Memory(), Options{Out: &out, Err: &words, Quiet: true, Threads: threads})
			if err := s.Run(context.Background(), "input", ledgerSetting, t.TempDir()); err != nil {
				t.Fatal(words.String())
			}
			words.Reset()
			if err := s.Run(context.Background(), "input", query+";", "."); err != nil {
				t.Errorf("%s: %s", query, words.String())
				continue
			}
			if want == "" && strings.Contains(words.String(), "answered for") || !strings.Contains(words.String(), want) {
				t.Errorf("%s says\n%s\nwant\n%s", query, words.String(), want)
			}
		}
	}
}

// TestNearLimit: SHARE and FILTER tell of readings at their limits, where nothing
// could go wrong on the way.
func TestNearLimit(t *testing.T) {
	for query, want := range map[string]string{
		"SELECT SHARE(temp > 8) FROM week":                           "note: SHARE(temp > 8): 2 values of temp lie within 1e-9 of the limit 8 and 1 of them differ from it",
		"SELECT SHARE(8 < temp) FROM week WHERE t = 1":               "note: SHARE(8 < temp): 1 value of temp is equal to the limit 8",
		"SELECT COUNT(*) FILTER (WHERE temp >= 7.9) FROM week":       "1 value of temp is equal to the limit 7.9: whether it counts",
		"SELECT t, SHARE(temp BETWEEN 2 AND 8) FROM week GROUP BY t": "2 values of temp lie within",
		"SELECT SHARE(ROUND(temp, 2) > 8.5) FROM week":               "",
		// computed readings: 8.0 and 2.22 + 4.23 + 1.55 are 8 when rounded
		"SELECT SHARE(ROUND(temp, 2) > 8) FROM week":                  "SHARE(ROUND(temp, 2) > 8): 2 values of ROUND(temp, 2) are equal to the limit 8: whether they count",
		"SELECT SHARE(temp * 2 > 16) FROM week WHERE logger = 'c'":    "2 values of temp * 2 lie within 1e-9 of the limit 16",
		"SELECT SHARE(temp > 8 AND logger = 'a') FROM week":           "",
		"SELECT SHARE(logger = 'c' AND t = 1 AND temp > 8) FROM week": "1 value of temp is equal to the limit 8",
		"SELECT SHARE(temp > lim) FROM week, (SELECT 8 AS lim) l":     "2 values of temp lie within 1e-9 of the limit lim",
		"SELECT SHARE(NOT (temp * 2 <= 16)) FROM week":                "2 values of temp * 2 lie within",
		"SELECT SHARE(temp < 0 OR LN(temp) > LN(8)) FROM week":        "",
		"SELECT SHARE(temp > 8.5) FROM week":                          "",
		"SELECT SHARE(t > 1) FROM week":                               "", // whole numbers are what they are
		"SELECT SHARE(temp = 8) FROM week":                            "",
		"SELECT SHARE(temp > 100 AND LN(temp - 100) > 1.0) FROM week": "", // would fail if it were computed for every row
	} {
		var out, words bytes.Buffer
		s := New(catalog.Memory(), Options{Out: &out, Err: &words, Quiet: true})
		if err := s.Run(context.Background(), "input", ledgerSetting, t.TempDir()); err != nil {
			t.Fatal(words.String())
		}
		words.Reset()
		if err := s.Run(context.Background(), "input", query+";", "."); err != nil {
			t.Errorf("%s: %s", query, words.String())
		}
		if want == "" && strings.Contains(words.String(), "limit") || !strings.Contains(words.String(), want) {
			t.Errorf("%s says\n%s\nwant\n%s", query, words.String(), want)
		}
	}
}
