package engine

// queryEntries are the parts of a query, in the order in which one writes them.
func queryEntries() []entry { return append(queryClauses(), queryExpressions()...) }

func queryClauses() []entry {
	return []entry{
		{
			name: "WITH", also: []string{"COMMON TABLE EXPRESSION"},
			syntax:  []string{"WITH name AS (query), name AS (query) SELECT …"},
			meaning: "Gives queries names for the rest of the statement.",
			example: "WITH warm AS (SELECT id, temp FROM hall WHERE temp > 6) SELECT COUNT(*) FROM warm;",
			see:     []string{"CREATE VIEW"},
		},
		{
			name: "FROM", also: []string{"SOURCE", "SOURCES", "AS", "ALIAS"},
			syntax:  []string{"FROM name [[AS] alias]", "FROM (query) [[AS] alias]", "FROM CELLS OF name {clause} [AS alias]"},
			meaning: "Says where the rows come from: a campaign, a table, a view, a query in brackets, or a geometric relation, after which an alias needs AS.",
			example: "SELECT h.id, h.temp FROM hall h;",
			see:     []string{"RELATIONS", "JOIN"},
		},
		{
			name: "JOIN", also: []string{"INNER JOIN", "LEFT JOIN", "CROSS JOIN", "ON", "USING"},
			syntax:  []string{"FROM a JOIN b ON condition", "FROM a LEFT JOIN b ON condition", "FROM a JOIN b USING (column)", "FROM a CROSS JOIN b"},
			meaning: "Brings the rows of two sources together, where the condition holds. LEFT keeps the rows of the left source that find none, with NULL beside them.",
			example: "SELECT s.id, l.t, l.temp FROM hall s JOIN log l ON l.logger = s.id;",
		},
		{
			name: "RIGHT JOIN", also: []string{"RIGHT"},
			syntax: []string{"FROM a RIGHT JOIN b ON condition"}, meaning: "Keeps the rows of the right source that find none.",
			example: "SELECT s.id, l.temp FROM log l RIGHT JOIN hall s ON l.logger = s.id;",
		},
		{
			name: "FULL JOIN", also: []string{"FULL", "OUTER"},
			syntax: []string{"FROM a FULL JOIN b ON condition"}, meaning: "Keeps the rows of both sources that find none.",
			example: "SELECT s.id, l.temp FROM log l FULL JOIN hall s ON l.logger = s.id;",
		},
		{
			name:    "WHERE",
			syntax:  []string{"WHERE condition"},
			meaning: "Keeps the rows for which the condition is TRUE. It chooses the rows that are shown and never changes which sites partition: for that, OMITTING leaves a site out, and OF (query) chooses the sites.",
			example: "SELECT id, volume FROM CELLS OF hall WHERE temp > 8;",
			see:     []string{"OMITTING", "NULL"},
		},
		{
			name: "GROUP BY", also: []string{"GROUP"},
			syntax:  []string{"GROUP BY item, …"},
			meaning: "Makes one row of all rows with equal values. Items are columns, expressions, names given with AS, or positions in SELECT.",
			example: "SELECT level, COUNT(*), AVG(temp) FROM hall GROUP BY level;",
			see:     []string{"HAVING", "FUNCTIONS"},
		},
		{
			name:    "HAVING",
			syntax:  []string{"HAVING condition"},
			meaning: "Keeps the groups for which the condition is TRUE.",
			example: "SELECT level, MAX(temp) AS highest FROM hall GROUP BY level HAVING MAX(temp) > 8;",
		},
		{
			name: "ORDER BY", also: []string{"ORDER", "NULLS FIRST", "NULLS LAST", "DESC", "ASC"},
			syntax:  []string{"ORDER BY item [ASC | DESC] [NULLS FIRST | LAST], …"},
			meaning: "Sorts the rows. NULL comes last unless told otherwise.",
			example: "SELECT id, temp FROM hall ORDER BY temp DESC, id;",
		},
		{
			name: "LIMIT", also: []string{"OFFSET"},
			syntax:  []string{"LIMIT n [OFFSET m]"},
			meaning: "Keeps the first n rows, after leaving out m.",
			example: "SELECT id, volume FROM CELLS OF hall ORDER BY volume DESC LIMIT 3;",
		},
		{
			name:    "DISTINCT",
			syntax:  []string{"SELECT DISTINCT item, …", "COUNT(DISTINCT x)"},
			meaning: "Keeps one of several equal rows, or counts equal values once.",
			example: "SELECT DISTINCT level FROM hall;",
		},
		{
			name: "UNION", also: []string{"UNION ALL"},
			syntax:  []string{"query UNION [ALL] query"},
			meaning: "Puts the rows of two queries together; without ALL, equal rows are kept once.",
			example: "SELECT id, temp FROM hall UNION ALL SELECT logger, temp FROM log;",
		},
		{
			name: "EXCEPT", syntax: []string{"query EXCEPT query"}, meaning: "Keeps the rows of the first query that are not among those of the second.",
			example: "SELECT id FROM hall EXCEPT SELECT logger FROM log;",
		},
		{
			name: "INTERSECT", syntax: []string{"query INTERSECT query"}, meaning: "Keeps the rows that both queries have.",
			example: "SELECT id FROM hall INTERSECT SELECT logger FROM log;",
		},
		{
			name:    "VALUES",
			syntax:  []string{"VALUES (value, …), (value, …)"},
			meaning: "Rows that are written out.",
			example: "SELECT * FROM (VALUES ('L01', 0.12), ('L02', -0.05)) AS correction (id, offset_k);",
		},
	}
}

func queryExpressions() []entry {
	return []entry{
		{
			name: "WEIGHTED BY", also: []string{"WEIGHTED", "WEIGHT", "WEIGHTED MEAN"},
			syntax:  []string{"AVG(x) WEIGHTED BY weight"},
			meaning: "Weighs each row: by its space (volume), by its time, or by both. The weight is a column, a number, a call, or anything in brackets. It follows SUM, AVG, the variances, CORR, QUANTILE, MEDIAN, SHARE and MKT.",
			more: []string{
				"Rows without a value are left out together with their weight. A weight that is negative, infinite or NULL is an error that names the row. The note below the answer tells n_eff, the number of equally weighted values that would be worth as much, and the largest single weight.",
			},
			example: "SELECT AVG(temp) WEIGHTED BY volume AS by_space, SHARE(temp > 8) WEIGHTED BY volume AS over_limit\nFROM CELLS OF hall;",
			see:     []string{"FUNCTIONS", "CAUTIONS"},
		},
		{
			name:    "FILTER",
			syntax:  []string{"AVG(x) FILTER (WHERE condition)"},
			meaning: "Lets an aggregate see only the rows for which the condition is TRUE.",
			example: "SELECT SUM(volume) FILTER (WHERE temp > 8) AS over_limit, SUM(volume) AS all_of_it\nFROM CELLS OF hall;",
		},
		{
			name: "OVER", also: []string{"WINDOW", "PARTITION BY", "ROWS BETWEEN"},
			syntax: []string{"function(…) OVER ([PARTITION BY item, …] [ORDER BY item, …] [frame])", "aggregate(…) [FILTER (WHERE condition)] [WEIGHTED BY weight] OVER (…)",
				"frame: ROWS | RANGE start, or ROWS | RANGE BETWEEN start AND end",
				"start, end: UNBOUNDED PRECEDING, n PRECEDING, CURRENT ROW, n FOLLOWING, UNBOUNDED FOLLOWING"},
			meaning: "Computes a function for every row over the rows around it: an aggregate, or ROW_NUMBER, RANK, LAG and others of HELP FUNCTIONS. " +
				"PARTITION BY makes parts that know nothing of each other. The frame says which rows of the part count: ROWS counts rows, RANGE goes by the key of ORDER BY, " +
				"such as RANGE INTERVAL '1' HOUR PRECEDING. Without a frame it is all rows up to the current one and its equals, without ORDER BY the whole part. " +
				"OVER stands in SELECT and ORDER BY, and is computed after GROUP BY and HAVING.",
			example: "SELECT logger, t, AVG(temp) OVER (PARTITION BY logger ORDER BY t) FROM log;",
		},
		{
			name: "CASE", also: []string{"WHEN", "THEN", "ELSE", "END"},
			syntax:  []string{"CASE WHEN condition THEN value … [ELSE value] END", "CASE x WHEN value THEN value … [ELSE value] END"},
			meaning: "Takes the value of the first condition that holds; NULL if none does and there is no ELSE.",
			example: "SELECT id, CASE WHEN temp > 8 THEN 'over' ELSE 'within' END AS verdict FROM hall;",
		},
		{
			name:    "CAST",
			syntax:  []string{"CAST(x AS type)"},
			meaning: "Brings a value to another type. A text that does not read as the type is an error that names the row; a unit that the value had is dropped.",
			example: "SELECT CAST('7.5' AS REAL);",
			see:     []string{"TYPES"},
		},
		{
			name: "BETWEEN", syntax: []string{"x [NOT] BETWEEN low AND high"}, meaning: "Holds from low to high, both included.",
			example: "SELECT id FROM hall WHERE temp BETWEEN 2 AND 8;",
		},
		{
			name: "IN", syntax: []string{"x [NOT] IN (value, value, …)"}, meaning: "Holds if x is one of the values.",
			example: "SELECT id FROM hall WHERE level IN ('floor', 'middle');",
		},
		{
			name: "LIKE", also: []string{"ESCAPE"}, syntax: []string{"x [NOT] LIKE 'pattern' [ESCAPE 'character']"},
			meaning: "Compares a text with a pattern: % stands for any run of characters, _ for one.",
			example: "SELECT id FROM hall WHERE id LIKE 'L0_';",
		},
		{
			name: "IS NULL", also: []string{"IS", "IS NOT NULL", "IS TRUE", "IS DISTINCT FROM"},
			syntax:  []string{"x IS [NOT] NULL", "condition IS [NOT] TRUE | FALSE | UNKNOWN", "x IS [NOT] DISTINCT FROM y"},
			meaning: "Asks for a missing value; = NULL is never true. IS DISTINCT FROM compares and counts two NULLs as equal.",
			example: "SELECT COUNT(*) FROM log WHERE temp IS NULL;",
			see:     []string{"NULL"},
		},
		{
			name: "OVERLAPS", syntax: []string{"(start, end) OVERLAPS (start, end)"}, meaning: "Holds if two spans of time have an instant in common.",
			example: "SELECT (TIMESTAMP '2031-04-07 08:00:00', INTERVAL '2' HOUR)\n  OVERLAPS (TIMESTAMP '2031-04-07 09:00:00', INTERVAL '2' HOUR);",
		},
		{
			name: "SUBQUERY", also: []string{"SUBQUERIES"}, syntax: []string{"x > (query)", "x IN (query)"},
			meaning: "A query in brackets as a value, or as a list of values.",
			example: "SELECT id FROM hall WHERE temp > (SELECT AVG(temp) FROM hall);",
		},
		{
			name: "EXISTS", syntax: []string{"[NOT] EXISTS (query)"}, meaning: "Holds if the query has a row.",
			example: "SELECT id FROM hall h WHERE EXISTS (SELECT 1 FROM log l WHERE l.logger = h.id);",
		},
		{
			name: "AT TIME ZONE", also: []string{"TIME ZONE", "ZONE"}, syntax: []string{"t AT TIME ZONE 'Europe/Zurich'"},
			meaning: "Shows a time stamp, which is kept in UTC, in the time of a zone.",
			example: "SELECT t AT TIME ZONE 'Europe/Zurich' FROM log;",
		},
	}
}
