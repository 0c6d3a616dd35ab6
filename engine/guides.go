package engine

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/lang"
)

// guide is a page of HELP about something that is no word of a statement.
type guide struct {
	name    string
	also    []string
	summary string
	text    []string
	example string
}

// guides are the guides, in the order in which HELP lists them.
func guides() []guide {
	return []guide{
		{name: "CAUTIONS", also: []string{"CAUTION", "SAFETY", "LIMITS OF USE"},
			summary: "What to have in mind before a number leaves the desk.", text: cautions},
		{name: "UNITS", also: []string{"UNIT"},
			summary: "How units are carried along, and when they are refused.",
			text: []string{
				"A unit is a label that goes with a column: from a heading such as temp [°C], from UNITS (temp '°C'), or from the coordinates, whose unit gives volumes their cube. Units are multiplied and divided with their values, so that SUM(volume * HOURS(span)) is in h·m³. They are never converted.",
				"Values in different units are not added, compared or put into one column: that is an error. A constant without a unit takes the unit of what stands beside it: temp > 8. A value without a unit beside one with a unit leaves the result without. CAST(x AS REAL) drops a unit.",
				"Tables print the units in a line of their own; a CSV file has them in its heading only if SAVE says WITH UNITS.",
			},
			example: "SELECT SUM(volume * HOURS(INTERVAL '15' MINUTE)) AS room_hours FROM CELLS OF hall;"},
		{name: "REPORT", also: []string{"HTML", "REPORTS"},
			summary: "One file with everything that a script prints.",
			text: []string{
				"nearcell run --as html FILE > report.html (or --to report.html) writes one page: the title, the verdicts of REQUIRE, then tables and texts in the order of the script with the notes of each, last what all of it rests on: the inputs with their checksums, the program's version, the script. A statement that fails stands in it with its message.",
				"The page needs nothing but itself, follows the reader's choice of light or dark, and prints on A4 and Letter. Its numbers are those of printed tables (SET DIGITS). A table shows 200 rows unless SET ROWS says another number, and how many there were. The same script over the same inputs makes the same file, byte for byte.",
			},
			example: "TITLE 'Hall 4, summer mapping';"},
		{name: "NULL", also: []string{"MISSING VALUES", "NAN", "UNKNOWN"},
			summary: "Missing values, and why a calculation without a value is an error.",
			text: []string{
				"NULL is a value that is missing. A comparison with it is neither TRUE nor FALSE, and WHERE keeps only rows for which the condition is TRUE. Aggregates leave NULL out, and with it its weight; IS NULL asks for it, COALESCE(x, 0) puts something in its place.",
				"A calculation that has no value (0 / 0, the logarithm of a negative number) is an error that names the row, never a silent NULL: a mean over the rest would look like one over all. NULLIF(x, 0) makes a NULL where one is meant.",
			},
			example: "SELECT COUNT(*) AS readings, COUNT(temp) AS with_a_value FROM log;"},
		{name: "INFINITY", also: []string{"UNBOUNDED", "BOUNDED", "INFINITE"},
			summary: "Cells that nothing closes off.",
			text: []string{
				"Without a solid the cells at the rim run to infinity. Their volume, area and farthest are Infinity (∞ in tables), never NULL, so that no sum passes over them in silence; as a weight Infinity is an error. WITHIN a solid closes them, ENVELOPE OF campaign MARGIN 1 makes one where the room is not known, and WHERE bounded leaves them out, which makes the answer one about the inner cells.",
			},
			example: "SELECT COUNT(*) FROM CELLS OF hall UNCLIPPED WHERE NOT bounded;"},
		{name: "TYPES", also: append([]string{"TYPE", "LITERALS"}, typeNames()...),
			summary: "The types of values and how values are written.",
			text: []string{
				"The types are " + strings.Join(typeNames(), ", ") + ". INTEGER has 64 bits and REAL is a double (about 16 digits). / always gives a REAL. Time stamps are kept in UTC. An interval has a fixed length: weeks, days, hours, minutes, seconds.",
				"They are written 12, 7.5, 1e-3, 'a text' (a quotation mark in it is doubled: 'it''s'), TRUE, FALSE, TIMESTAMP '2031-04-07 08:15:00', INTERVAL '15' MINUTE, POINT(1.5, 2, 0.3), NULL.",
			},
			example: "SELECT TIMESTAMP '2031-04-07 08:15:00' + INTERVAL '15' MINUTE AS later;"},
		{name: "NAMES", also: []string{"NAME", "WORDS", "RESERVED WORDS", "QUOTES", "COMMENTS"},
			summary: "How names, texts and comments are written.",
			text: []string{
				"Words and bare names may be written in any case. \"Quoted Names\" keep case and blanks. Texts stand between single quotes. -- begins a comment to the end of the line, /* and */ enclose one. A statement ends with a semicolon.",
				"Only these words must be quoted to be a name: " + strings.Join(lang.ReservedWords(), ", ") + ".",
			},
			example: `SELECT temp AS "Temperature at noon" FROM log WHERE EXTRACT(HOUR FROM t) = 12;`},
		{name: "OPERATORS", also: []string{"OPERATOR", "EXPRESSIONS", "EXPRESSION", "AND", "OR", "NOT", "MATHS"},
			summary: "The operators, from those that bind tightest.",
			text: []string{
				"^ (power; 2^3^2 is 2^9, and -2^2 is -4), the sign + -, * / % (the rest), + - || (puts texts together), the comparisons = <> < <= > >= with BETWEEN, IN, LIKE and IS, then NOT, AND, OR. Brackets group. a < b < c is an error: write a < b AND b < c.",
			},
			example: "SELECT 2 + 3 * 4 ^ 2 AS fifty, 'L' || '01' AS id;"},
		{name: "NOTES", also: []string{"NOTE", "WARNING", "WARNINGS", "STRICT"},
			summary: "What the lines note: and warning: below an answer are.",
			text: []string{
				"Below an answer stands what it is to be read with: sites left out, merged or unbounded, values missing, weights that count for much. A warning is a note on something that may falsify the answer; with --strict a warning fails its statement; --quiet keeps it. Notes, warnings and errors go to the standard error, so that a saved result holds rows only: where there was a warning, SAVE writes a file beside the saved one that says so.",
			}},
		{name: "CATALOG", also: []string{"FOLDER", "STORE"},
			summary: "Where campaigns, tables, solids and views are kept.",
			text: []string{
				"What CREATE makes is kept in a folder, .nearcell in the working folder unless --catalog says otherwise; --no-catalog keeps nothing. Columns are Arrow IPC files, which other tools read too. A file is read when it is imported, and not again: CREATE OR REPLACE takes a changed file in.",
				"Diagrams of 20,000 sites and more are kept there, too, with each measure that was asked for of all cells, and a later session answers from them with the same digits. LIST DIAGRAMS shows them, SET CACHE '4GiB' says how much they may take, those used least recently go first, and DROP DIAGRAMS removes them: nothing is lost by it but time.",
			}},
		{name: "EXIT CODES", also: []string{"EXIT CODE"},
			summary: "What the program returns to the one who called it.",
			text:    []string{"0: all went well. 1: a statement failed. 2: the call was wrong. 3: all statements ran, and a requirement failed (REQUIRE). 130: interrupted. With --keep-going the rest of a script runs after a failure, and the code still tells of it."}},
	}
}

// typeNames are the names of the types.
func typeNames() []string {
	var names []string
	for t := column.Integer; t <= column.Point; t++ {
		names = append(names, t.String())
	}
	return names
}
