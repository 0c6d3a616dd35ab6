package oracle

import (
	"fmt"
	"strings"
)

// Questions are questions written from the rules of the standard, one rule at a time and
// with every combination of the values at which it turns: what Random and Corpus meet by
// chance is asked here on purpose. The tables are those of New.
func Questions() []*Query {
	q := &questions{}
	q.arithmetic()
	q.comparisons()
	q.logic()
	q.choices()
	q.signs()
	q.aggregates()
	q.groups()
	q.joins()
	q.queriesInside()
	q.quantified()
	q.sets()
	q.order()
	q.texts()
	q.windows()
	return q.list
}

type questions struct{ list []*Query }

func (q *questions) ask(t text) { q.list = append(q.list, &Query{Text: t}) }

// same asks in words that both sides understand.
func (q *questions) same(format string, args ...any) { q.ask(same(fmt.Sprintf(format, args...))) }

// ordered asks where the rows have one order.
func (q *questions) ordered(format string, args ...any) {
	q.list = append(q.list, &Query{Text: same(fmt.Sprintf(format, args...)), Ordered: true})
}

// values are those at which rules turn.
var values = []string{"NULL", "-2", "0", "1", "3"}

func (q *questions) arithmetic() {
	for _, op := range []string{"+", "-", "*"} {
		for _, a := range values {
			var items []string
			for _, b := range values {
				items = append(items, a+" "+op+" "+b, "- "+a+" "+op+" - "+b)
			}
			q.same("SELECT %s", strings.Join(items, ", "))
		}
	}
	for _, a := range values {
		q.same("SELECT %s %% 3, %s %% -3, - %s %% 2, ABS ( %s ), ABS ( - %s )", a, a, a, a, a)
		q.ask(f("SELECT %s / 2.0, %s / 4.0 + 1, - %s / - 0.5", a, a, a))
	}
	for _, e := range []string{"1 + 2 * 3", "( 1 + 2 ) * 3", "10 - 3 - 2", "10 - ( 3 - 2 )", "2 * 3 % 4", "10 % 4 * 3", "7 % 4 % 2", "2 + 7 % 4",
		"1 + 1 = 2", "2 * 3 = 3 + 3 AND 1 < 2", "1.5 + 1", "2 * 1.25", "1 = 1.0", "0.5 < 1", "-7 % 3", "7 % -3", "- 7 % - 3"} {
		q.same("SELECT %s", e)
	}
}

func (q *questions) comparisons() {
	for _, op := range []string{"=", "<>", "<", "<=", ">", ">=", "IS DISTINCT FROM", "IS NOT DISTINCT FROM"} {
		for _, a := range values {
			var items []string
			for _, b := range values {
				items = append(items, a+" "+op+" "+b)
			}
			q.same("SELECT %s", strings.Join(items, ", "))
		}
		if op[0] != 'I' {
			q.same("SELECT a, b FROM t1 WHERE a %s b", op)
			q.same("SELECT a, b FROM t1 WHERE NOT a %s b", op)
			q.same("SELECT a, b FROM t1 WHERE ( a %s b ) IS NULL", op)
			q.same("SELECT c FROM t1 WHERE c %s 'ab'", op)
			q.same("SELECT d FROM t1 WHERE d %s a", op)
		}
	}
	for _, not := range []string{"", "NOT "} {
		for _, a := range values {
			var between, in []string
			for _, b := range values {
				for _, c := range values {
					between = append(between, fmt.Sprintf("%s %sBETWEEN %s AND %s", a, not, b, c))
					in = append(in, fmt.Sprintf("%s %sIN ( %s, %s )", a, not, b, c))
				}
			}
			q.same("SELECT %s", strings.Join(between, ", "))
			q.same("SELECT %s", strings.Join(in, ", "))
		}
		q.same("SELECT a FROM t1 WHERE a %sIN ( 1 )", not)
		q.same("SELECT a FROM t1 WHERE a %sIN ( b, NULL )", not)
		q.same("SELECT a FROM t1 WHERE a + b %sIN ( a * 2, b * 2 )", not)
		q.same("SELECT a FROM t1 WHERE a %sBETWEEN b - 1 AND b + 1", not)
		q.same("SELECT a FROM t1 WHERE NOT a %sBETWEEN 0 AND 2 AND b > 0", not)
		q.same("SELECT c FROM t1 WHERE c %sIN ( 'a', '', 'zz' )", not)
		q.same("SELECT a FROM t1 WHERE a IS %sNULL", not)
		q.same("SELECT a FROM t1 WHERE NOT ( a + b ) IS %sNULL", not)
	}
}

// truths are TRUE, FALSE and unknown.
var truths = []string{"( 1 = 1 )", "( 1 = 0 )", "( 1 = NULL )"}

func (q *questions) logic() {
	for _, a := range truths {
		q.same("SELECT NOT %s, NOT NOT %s, %s IS NULL, %s IS NOT NULL, NOT %s IS NULL", a, a, a, a, a)
		q.ask(f("SELECT %s, %s, %s, %s", same(a+" IS TRUE"), same(a+" IS NOT TRUE"), same(a+" IS FALSE"), same(a+" IS NOT FALSE")))
		q.ask(text{"SELECT " + a + " IS UNKNOWN, " + a + " IS NOT UNKNOWN", "SELECT " + a + " IS NULL, " + a + " IS NOT NULL"})
		for _, b := range truths {
			q.same("SELECT %s AND %s, %s OR %s, NOT %s AND %s, NOT ( %s OR %s )", a, b, a, b, a, b, a, b)
			for _, c := range truths {
				q.same("SELECT %s OR %s AND %s, ( %s OR %s ) AND %s, NOT %s OR %s AND NOT %s", a, b, c, a, b, c, a, b, c)
			}
		}
		q.same("SELECT a FROM t1 WHERE %s", a)
		q.same("SELECT a FROM t1 WHERE NOT %s OR a > 1", a)
		q.same("SELECT COUNT ( * ) FROM t1 WHERE %s AND a IS NOT NULL", a)
	}
	for _, e := range []string{"NOT 1 = 2", "NOT 1 = 1 AND 1 = 2", "NOT NOT 1 = 1", "NOT 2 BETWEEN 1 AND 3 OR 1 = 1", "1 < 2 AND NOT 2 > 3 OR 1 = 2", "NOT NULL IS NULL", "( NULL ) IS NOT NULL"} {
		q.same("SELECT %s", e)
		q.same("SELECT a FROM t1 WHERE %s", e)
	}
}

func (q *questions) choices() {
	for _, a := range values {
		for _, b := range values {
			if a == "NULL" && b == "NULL" {
				continue // of no type
			}
			q.same("SELECT NULLIF ( %s, %s ), COALESCE ( %s, %s, 7 ), COALESCE ( NULL, %s, - %s )", a, b, a, b, a, b)
			q.same("SELECT CASE %s WHEN %s THEN 1 ELSE 2 END, CASE %s WHEN %s THEN 1 END, CASE WHEN %s = %s THEN 1 WHEN %s < %s THEN 2 ELSE 3 END", a, b, a, b, a, b, a, b)
		}
	}
	for _, e := range []string{"CASE WHEN NULL THEN 1 ELSE 2 END", "CASE WHEN 1 = 1 THEN NULL ELSE 2 END", "CASE NULL WHEN NULL THEN 1 ELSE 2 END",
		"CASE WHEN a IS NULL THEN 0 ELSE a END", "CASE a WHEN 1 THEN 'one' WHEN 2 THEN 'two' ELSE 'more' END", "CASE WHEN a > b THEN a WHEN b > a THEN b END",
		"CASE a + 1 WHEN b THEN 111 WHEN b - 1 THEN 222 WHEN b - 2 THEN 333 ELSE 555 END", "CASE WHEN a < b - 3 THEN 111 WHEN a <= b THEN 222 WHEN a < b + 3 THEN 333 ELSE 444 END",
		"COALESCE ( a, b, 0 )", "NULLIF ( a, b )", "CASE WHEN CASE WHEN a = 1 THEN 1 ELSE 0 END = 1 THEN b ELSE - b END", "COALESCE ( NULLIF ( a, 1 ), CASE WHEN b = 1 THEN 5 END, -1 )"} {
		q.same("SELECT %s FROM t1", e)
		q.same("SELECT COUNT ( %s ) FROM t1", e)
	}
}

func (q *questions) signs() {
	for _, chain := range []string{"- ", "+ ", "- - ", "- + ", "+ - ", "+ + ", "- + - ", "- - - ", "+ - + - - "} {
		q.same("SELECT %s3, %sa, %s( a + 1 ), 5 + %s2, 5 - %sa, 5 * %s2 FROM t1", chain, chain, chain, chain, chain, chain)
		q.same("SELECT %sCOUNT ( * ), %sSUM ( %sa ) FROM t1", chain, chain, chain)
		q.same("SELECT a FROM t1 WHERE %sa < %sb", chain, chain)
		q.same("SELECT a FROM t1 WHERE NOT %sa IN ( %s1, 2 )", chain, chain)
		q.same("SELECT ALL %sCAST ( NULL AS INTEGER ) AS n, %sCOALESCE ( %s4, 1 ) m", chain, chain, chain)
	}
}

func (q *questions) aggregates() {
	for _, where := range []string{"", " WHERE 1 = 0", " WHERE a IS NULL", " WHERE a > 0", " WHERE NULL IS NOT NULL", " WHERE NOT a = b"} {
		for _, fn := range []string{"COUNT", "SUM", "MIN", "MAX", "AVG"} {
			for _, how := range []string{"", "ALL ", "DISTINCT "} {
				var items []string
				for _, arg := range []string{"a", "b", "- a", "a + b", "1", "CASE WHEN a > 1 THEN b END", "COALESCE ( a, 0 )", "CAST ( NULL AS INTEGER )"} {
					items = append(items, fmt.Sprintf("%s ( %s%s )", fn, how, arg))
				}
				q.same("SELECT %s, COUNT ( * ) FROM t1%s", strings.Join(items, ", "), where)
			}
		}
		q.same("SELECT COUNT ( DISTINCT c ), MIN ( c ), MAX ( c ), MIN ( d ), MAX ( d ), SUM ( d ) FROM t1%s", where)
		q.same("SELECT SUM ( a ) + COUNT ( * ) * 2, MAX ( a ) - MIN ( a ), - MIN ( - a ) FROM t1%s", where)
		q.same("SELECT COUNT ( * ) FILTER ( WHERE b > 0 ), SUM ( a ) FILTER ( WHERE b IS NULL ) FROM t1%s", where)
	}
	q.same("SELECT COUNT ( * ), SUM ( 3 ), MIN ( - 3 ), MAX ( DISTINCT 3 ), AVG ( 3 )")
	q.same("SELECT 7 + COUNT ( * ) * - 2 AS n, - MAX ( 4 ) m")
}

func (q *questions) groups() {
	for _, by := range []string{"a", "b", "c", "d", "a, b", "b, c", "a + 1", "a % 2, c", "COALESCE ( a, b )"} {
		for _, having := range []string{"", " HAVING COUNT ( * ) > 1", " HAVING NOT COUNT ( * ) > 1", " HAVING MIN ( b ) IS NULL", " HAVING SUM ( a ) > 1 OR MAX ( b ) < 2", " HAVING NULL IS NULL", " HAVING NOT NULL IS NULL"} {
			q.same("SELECT COUNT ( * ), SUM ( a ), MIN ( b ), MAX ( c ), COUNT ( DISTINCT b ) FROM t1 GROUP BY %s%s", by, having)
		}
		q.same("SELECT DISTINCT COUNT ( * ) FROM t1 GROUP BY %s", by)
		q.same("SELECT %s, COUNT ( a ) AS n FROM t1 WHERE b IS NOT NULL GROUP BY %s", by, by)
	}
	q.ordered("SELECT a, COUNT ( * ) AS n FROM t1 GROUP BY a ORDER BY n DESC, a NULLS FIRST")
	q.ordered("SELECT a + 1 AS n, SUM ( b ) FROM t1 GROUP BY a + 1 ORDER BY 1 NULLS LAST")
	q.ordered("SELECT b FROM t1 GROUP BY b HAVING b > 0 ORDER BY - b")
	q.ordered("SELECT MAX ( a ) FROM t1 GROUP BY b ORDER BY COUNT ( * ), b NULLS FIRST")
	q.same("SELECT 1 FROM t1 GROUP BY a HAVING a IN ( 1, 2 )")
	q.same("SELECT - col0 AS col1 FROM ( SELECT a AS col0, b AS col1 FROM t1 ) AS x GROUP BY col0, col1")
	q.same("SELECT x.a, COUNT ( * ) FROM t1 AS x, t2 AS y WHERE x.a = y.a GROUP BY x.a")
}

func (q *questions) joins() {
	for _, kind := range []string{"JOIN", "INNER JOIN", "LEFT JOIN", "LEFT OUTER JOIN", "RIGHT JOIN", "FULL JOIN", "FULL OUTER JOIN"} {
		for _, on := range []string{"x.a = y.a", "x.a = y.a AND x.b = y.e", "x.a < y.a", "x.a + 1 = y.e", "x.c = y.s", "x.d = y.a", "1 = 1", "1 = 0", "x.a IS NULL", "y.a > 1 AND x.a = y.a",
			"x.a = y.a OR x.b = y.e", "NOT x.a = y.a", "x.a BETWEEN y.a AND y.e", "x.a = 1", "NULL IS NULL"} {
			q.same("SELECT x.a, x.b, y.a, y.e FROM t1 AS x %s t2 AS y ON %s", kind, on)
		}
		q.same("SELECT a, b, e FROM t1 %s t2 USING ( a )", kind)
		q.same("SELECT COUNT ( * ) FROM t1 %s t2 USING ( a ) WHERE a > 0", kind)
		q.same("SELECT x.a FROM t1 AS x %s t2 AS y ON x.a = y.a WHERE y.a IS NULL", kind)
		q.same("SELECT x.a, z.k FROM t1 AS x %s t2 AS y ON x.a = y.a JOIN t3 AS z ON z.k = x.b", kind)
		q.same("SELECT x.a, y.a, z.k FROM t1 AS x %s ( t2 AS y JOIN t3 AS z ON y.e = z.k ) ON x.a = y.a", kind)
		q.same("SELECT x.a, y.b FROM t1 AS x %s t1 AS y ON x.a = y.b", kind)
		q.same("SELECT x.a, v.n FROM t1 AS x %s ( SELECT e AS n, COUNT ( * ) AS m FROM t2 GROUP BY e ) AS v ON v.n = x.a AND v.m > 1", kind)
	}
	for _, from := range []string{"t1, t2", "t1 CROSS JOIN t2", "t1 x, t2 y", "t1 AS x, t1 AS y, t3", "t1 CROSS JOIN t2 CROSS JOIN t3"} {
		q.same("SELECT COUNT ( * ) FROM %s", from)
	}
	q.same("SELECT x.a FROM t1 x, t2 y, t3 z WHERE x.a = y.a AND y.e = z.k")
	q.same("SELECT x.*, 1 FROM t1 AS x, t3 AS y WHERE x.a = y.k")
	q.same("SELECT * FROM t3 AS x CROSS JOIN t3 AS y WHERE x.k < y.k")
	q.same("SELECT DISTINCT x.a + y.e FROM t1 AS x, t2 AS y WHERE x.a IS NOT NULL")
}

func (q *questions) queriesInside() {
	for _, not := range []string{"", "NOT "} {
		for _, in := range []string{"SELECT a FROM t2", "SELECT a FROM t2 WHERE a IS NOT NULL", "SELECT a FROM t2 WHERE 1 = 0", "SELECT e FROM t2 WHERE t2.a = t1.a", "SELECT MAX ( a ) FROM t2",
			"SELECT a FROM t2 UNION SELECT k FROM t3", "SELECT a + e FROM t2", "SELECT a FROM t2 GROUP BY a HAVING COUNT ( * ) > 1", "SELECT NULL FROM t2"} {
			q.same("SELECT a, b FROM t1 WHERE a %sIN ( %s )", not, in)
			q.same("SELECT a %sIN ( %s ) FROM t1", not, in)
		}
		for _, in := range []string{"SELECT * FROM t2", "SELECT 1 FROM t2 WHERE t2.a = t1.a", "SELECT 1 FROM t2 WHERE 1 = 0", "SELECT t2.a FROM t2 WHERE t2.a > t1.a AND t2.e < t1.b", "SELECT NULL",
			"SELECT 1 FROM t2 WHERE t2.a = t1.a AND EXISTS ( SELECT 1 FROM t3 WHERE t3.k = t2.e AND t3.k <> t1.b )", "SELECT COUNT ( * ) FROM t2 WHERE t2.a = t1.a"} {
			q.same("SELECT a, b FROM t1 WHERE %sEXISTS ( %s )", not, in)
			q.same("SELECT CASE WHEN %sEXISTS ( %s ) THEN 1 ELSE 0 END FROM t1", not, in)
		}
	}
	for _, scalar := range []string{"SELECT MAX ( a ) FROM t2", "SELECT COUNT ( * ) FROM t2 WHERE t2.a < t1.a", "SELECT SUM ( e ) FROM t2 WHERE t2.a = t1.a", "SELECT a FROM t2 WHERE 1 = 0",
		"SELECT MIN ( t2.a + t1.b ) FROM t2", "SELECT COUNT ( * ) FROM t2 AS x WHERE x.a < t1.b AND x.e IS NOT NULL", "SELECT 5", "SELECT t1.a", "SELECT MAX ( n ) FROM ( SELECT COUNT ( * ) AS n FROM t2 WHERE t2.a <> t1.a GROUP BY e ) AS g"} {
		q.same("SELECT a, ( %s ) FROM t1", scalar)
		q.same("SELECT a FROM t1 WHERE a >= ( %s )", scalar)
		q.same("SELECT a FROM t1 WHERE b = ( %s ) OR a IS NULL", scalar)
		q.same("SELECT CASE WHEN a > ( %s ) THEN a * 2 ELSE b * 10 END FROM t1", scalar)
		q.same("SELECT COALESCE ( ( %s ), -1 ) + a FROM t1", scalar)
		q.same("SELECT SUM ( ( %s ) ) FROM t1", scalar)
	}
	q.same("SELECT b, COUNT ( * ) FROM t1 GROUP BY b HAVING COUNT ( * ) >= ( SELECT MIN ( a ) FROM t2 )")
	q.same("SELECT b, ( SELECT COUNT ( * ) FROM t2 WHERE t2.a = t1.b ) FROM t1 GROUP BY b")
	q.same("SELECT b FROM t1 GROUP BY b HAVING EXISTS ( SELECT 1 FROM t2 WHERE t2.e = t1.b )")
	q.same("SELECT n FROM ( SELECT a + b AS n FROM t1 ) AS x WHERE n > 1")
	q.same("SELECT COUNT ( * ) FROM ( SELECT DISTINCT a FROM t1 ) AS x")
	q.same("WITH w AS ( SELECT a, COUNT ( * ) AS n FROM t1 GROUP BY a ) SELECT x.a, y.n FROM w AS x JOIN w AS y ON x.n = y.n")
	q.same("WITH w ( p, r ) AS ( SELECT a, b FROM t1 ), v AS ( SELECT p FROM w WHERE r > 0 ) SELECT * FROM v WHERE p IN ( SELECT r FROM w )")
	q.ordered("SELECT a, b FROM t1 ORDER BY ( SELECT COUNT ( * ) FROM t2 WHERE t2.a < t1.a ), a NULLS FIRST, b NULLS FIRST")
}

// quantified compares with ALL, ANY and SOME of a query, which the other side does not
// know: there the rows for which the comparison holds, and is unknown, are counted.
func (q *questions) quantified() {
	opposite := map[string]string{"=": "<>", "<>": "=", "<": ">=", ">=": "<", ">": "<=", "<=": ">"}
	for op, not := range opposite {
		for _, from := range []string{"t2", "t2 WHERE a IS NOT NULL", "t2 WHERE 1 = 0", "t2 WHERE e > 1"} {
			where := " WHERE "
			if strings.Contains(from, "WHERE") {
				where = " AND "
			}
			count := func(op, is string) string {
				return fmt.Sprintf("( SELECT COUNT(*) FROM %s%s( t1.b %s t2.a ) %s )", from, where, op, is)
			}
			any := fmt.Sprintf("CASE WHEN %s > 0 THEN 1 WHEN %s > 0 THEN NULL ELSE 0 END", count(op, ""), count(op, "IS NULL"))
			all := fmt.Sprintf("CASE WHEN %s > 0 THEN 0 WHEN %s > 0 THEN NULL ELSE 1 END", count(not, ""), count(op, "IS NULL"))
			for word, theirs := range map[string]string{"ANY": any, "SOME": any, "ALL": all} {
				ours := fmt.Sprintf("b %s %s ( SELECT a FROM %s )", op, word, from)
				q.ask(text{"SELECT b, " + ours + " FROM t1", "SELECT b, " + theirs + " FROM t1"})
				q.ask(text{"SELECT b FROM t1 WHERE NOT " + ours, "SELECT b FROM t1 WHERE NOT " + theirs})
			}
		}
	}
}

func (q *questions) sets() {
	sides := []string{"SELECT a FROM t1", "SELECT a FROM t2", "SELECT DISTINCT b FROM t1", "SELECT 1", "SELECT k FROM t3 WHERE k > 1", "SELECT a FROM t1 WHERE 1 = 0"}
	for _, op := range []string{"UNION", "UNION ALL", "EXCEPT", "INTERSECT"} {
		for i, a := range sides {
			for k, b := range sides {
				if i != k {
					q.same("%s %s %s", a, op, b)
				}
			}
		}
		q.ordered("SELECT a, b FROM t1 %s SELECT a, e FROM t2 ORDER BY 1 NULLS FIRST, 2 NULLS LAST", op)
		q.ordered("SELECT a AS n FROM t1 %s SELECT e FROM t2 ORDER BY n DESC NULLS LAST LIMIT 3", op)
		q.same("SELECT COUNT ( * ) FROM ( SELECT a FROM t1 %s SELECT a FROM t2 ) AS x", op)
		q.same("SELECT a FROM t1 WHERE a IN ( SELECT a FROM t2 %s SELECT k FROM t3 )", op)
		q.same("SELECT a, c FROM t1 %s SELECT k, c FROM t3", op)
	}
	q.same("SELECT a FROM t1 UNION ALL SELECT a FROM t2 UNION SELECT k FROM t3")
	q.same("SELECT a FROM t1 UNION SELECT a FROM t2 UNION ALL SELECT k FROM t3")
	q.same("SELECT a FROM t1 EXCEPT SELECT a FROM t2 EXCEPT SELECT k FROM t3")
	q.ask(text{"SELECT a FROM t1 EXCEPT ( SELECT a FROM t2 EXCEPT SELECT k FROM t3 )", "SELECT a FROM t1 EXCEPT SELECT * FROM ( SELECT a FROM t2 EXCEPT SELECT k FROM t3 )"})
	q.ask(text{"SELECT a FROM t1 UNION ALL SELECT a FROM t2 INTERSECT SELECT k FROM t3", "SELECT a FROM t1 UNION ALL SELECT * FROM ( SELECT a FROM t2 INTERSECT SELECT k FROM t3 )"})
	q.same("VALUES ( 1, 'a' ), ( 2, NULL ), ( NULL, 'b' )")
}

func (q *questions) order() {
	for _, by := range []string{"1 NULLS FIRST, 2 NULLS FIRST", "a NULLS FIRST, b DESC NULLS LAST", "n NULLS LAST, b NULLS FIRST", "- a NULLS FIRST, b NULLS FIRST", "a + b NULLS FIRST, a NULLS FIRST, b NULLS FIRST", "2 DESC NULLS LAST, 1 DESC NULLS FIRST"} {
		for _, limit := range []string{"", " LIMIT 3", " LIMIT 0", " LIMIT 100", " LIMIT 2 OFFSET 1", " LIMIT 5 OFFSET 100"} {
			q.ordered("SELECT a AS n, b FROM t1 ORDER BY %s%s", by, limit)
		}
	}
	q.ordered("SELECT DISTINCT a FROM t1 ORDER BY a DESC NULLS LAST")
	q.ordered("SELECT c FROM t1 WHERE c IS NOT NULL ORDER BY c, 1")
	q.ordered("SELECT - a AS a FROM t1 ORDER BY a NULLS FIRST")
	q.ordered("SELECT b FROM t1 ORDER BY a NULLS FIRST, b NULLS FIRST LIMIT 4")
	q.ordered("SELECT n FROM ( SELECT a AS n FROM t1 ORDER BY a DESC NULLS LAST LIMIT 3 ) AS x ORDER BY 1 NULLS FIRST")
}

func (q *questions) texts() {
	words := []string{"NULL", "''", "'a'", "'ab'", "'B'", "'it''s'"}
	for _, a := range words {
		var joined []string
		for _, b := range words {
			joined = append(joined, a+" || "+b)
		}
		q.same("SELECT %s", strings.Join(joined, ", "))
		if a != "NULL" {
			q.ask(text{"SELECT CHAR_LENGTH ( " + a + " )", "SELECT LENGTH ( " + a + " )"})
			q.same("SELECT UPPER ( %s ), LOWER ( %s ), TRIM ( ' ' || %s || ' ' ), %s = 'a', %s < 'b'", a, a, a, a, a)
			for _, pattern := range []string{"'%'", "'_'", "'a%'", "'%b'", "'_b'", "''", "'%''%'", "NULL"} {
				q.same("SELECT %s LIKE %s, %s NOT LIKE %s", a, pattern, a, pattern)
			}
			q.ask(text{"SELECT SUBSTRING ( " + a + " FROM 1 FOR 1 ), SUBSTRING ( " + a + " FROM 2 )", "SELECT SUBSTR ( " + a + ", 1, 1 ), SUBSTR ( " + a + ", 2 )"})
		}
	}
	for _, e := range []string{"c || c", "UPPER ( c )", "c LIKE 'a%'", "c LIKE c", "c LIKE '%' || c", "c = LOWER ( c )", "CAST ( a AS TEXT )", "CAST ( a AS TEXT ) || '!'", "CAST ( '12' AS INTEGER ) + a", "CAST ( a AS REAL ) * 0.5"} {
		q.same("SELECT %s FROM t1", e)
	}
	q.same("SELECT a FROM t1 WHERE c LIKE 'A!_' ESCAPE '!' OR c LIKE '__'")
}

func (q *questions) windows() {
	for _, fn := range []string{"SUM ( a )", "COUNT ( * )", "MIN ( b )", "MAX ( a )", "AVG ( b )"} {
		for _, over := range []string{"", "PARTITION BY b", "ORDER BY a NULLS FIRST", "PARTITION BY c ORDER BY b NULLS LAST", "ORDER BY a NULLS FIRST, b NULLS FIRST ROWS BETWEEN UNBOUNDED PRECEDING AND UNBOUNDED FOLLOWING"} {
			q.same("SELECT a, b, %s OVER ( %s ) FROM t1", fn, over)
		}
	}
	for _, fn := range []string{"RANK ( )", "DENSE_RANK ( )"} {
		q.same("SELECT a, %s OVER ( ORDER BY a NULLS FIRST ), %s OVER ( PARTITION BY b ORDER BY a DESC NULLS LAST ) FROM t1", fn, fn)
	}
	q.same("SELECT n, COUNT ( * ) FROM ( SELECT ROW_NUMBER ( ) OVER ( PARTITION BY b ORDER BY a ) AS n FROM t1 ) AS x GROUP BY n")
	q.same("SELECT b, SUM ( COUNT ( * ) ) OVER ( ) FROM t1 GROUP BY b")
}
