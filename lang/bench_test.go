package lang

import (
	"strings"
	"testing"
)

// query1kB is a query of about 1,000 bytes of the kind that engineers keep in scripts.
const query1kB = `WITH step AS (SELECT s.logger AS id, p.x, p.y, p.z, s.t, s.span, s.temp
  FROM SERIES OF log BY logger ON t EVERY INTERVAL '15' MINUTE FROM :a TO :b METHOD LINEAR LONGEST GAP INTERVAL '30' MINUTE AS s
  JOIN place p ON p.logger = s.logger AND s.t >= p.since AND s.t < p.until WHERE s.temp IS NOT NULL)
SELECT t, CASE WHEN z < 2.5 THEN 'low' WHEN z < 5.0 THEN 'middle' ELSE 'high' END AS level,
  AVG(temp) WEIGHTED BY (volume * HOURS(span)) AS mean, SHARE(temp > 8) WEIGHTED BY (volume * HOURS(span)) AS over_limit,
  SUM(volume * HOURS(span)) FILTER (WHERE temp BETWEEN 2 AND 8 AND NOT hidden) AS m3h_inside, -temp ^ 2 + (1 + 2 * (x - y) / 3) AS odd
FROM CELLS OF (SELECT * FROM step WHERE id NOT IN ('L17', 'L18') AND id LIKE 'L%') FOR EACH t WITHIN (hall, office MINUS plant)
  MEASURED IN (racks) OMITTING ('L23') BECAUSE 'moved on day three' STRETCHED (1, 1, 5) AS c
WHERE c.volume > 0.001 OR EXISTS (SELECT 1 FROM excl e WHERE e.logger = c.id AND e.since <= c.t)
GROUP BY t, level HAVING COUNT(*) > 3 ORDER BY t, mean DESC NULLS LAST LIMIT 1000 OFFSET 10;
`

// BenchmarkParse1kB reads a script of one query; 200 µs is what a user may wait for it.
func BenchmarkParse1kB(b *testing.B) {
	b.SetBytes(int64(len(query1kB)))
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Parse(query1kB); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkParseScript reads a script of short statements, where participle weighs most.
func BenchmarkParseScript(b *testing.B) {
	const statements = `CREATE OR REPLACE CAMPAIGN hall FROM 'hall.csv' ID logger POSITION (x, y, -depth) UNITS (temp '°C') WITHIN air DUPLICATES SPLIT;
LET a = TIMESTAMP '2031-07-01 00:00:00'; DROP TABLE t; SAVE SELECT * FROM CELLS OF hall TO 'cells.csv' OVERWRITE WITH UNITS; DESCRIBE CELLS OF hall;
DRAW SECTION OF c AT z = 1.1 SHADED BY temp LIMITS (2, 8) TO 'floor.svg'; REQUIRE 'A' NONE (SELECT * FROM hall WHERE temp > 8); HELP SELECT;
`
	script := strings.Repeat(statements, 10)
	b.SetBytes(int64(len(script)))
	for b.Loop() {
		if _, err := Parse(script); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkParse100000Brackets is how long the refusal of a hostile text takes.
func BenchmarkParse100000Brackets(b *testing.B) {
	text := "SELECT " + strings.Repeat("(", 100_000) + "1" + strings.Repeat(")", 100_000)
	for b.Loop() {
		if _, err := Parse(text); err == nil {
			b.Fatal("was read")
		}
	}
}

func BenchmarkPrint1kB(b *testing.B) {
	script, err := Parse(query1kB)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		Print(script)
	}
}

func BenchmarkWalk1kB(b *testing.B) {
	script, err := Parse(query1kB)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		Walk(script, func(Node) bool { return true })
	}
}
