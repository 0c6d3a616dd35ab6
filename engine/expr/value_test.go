package expr

import (
	"errors"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Expected values are arithmetic on paper; what the standard decides is marked
// with its clause (ISO/IEC 9075-2, by the names of its rules).
func TestValues(t *testing.T) {
	cases := []struct{ text, want string }{
		// arithmetic and its types
		{"1 + 2", "3"}, {"7 - 10", "-3"}, {"6 * 7", "42"}, {"1 + 2.5", "3.5"},
		{"7 / 2", "3.5"}, {"8 / 2", "4.0"}, {"7 % 3", "1"}, {"-7 % 3", "-1"}, {"7 % -3", "1"}, {"7.5 % 2", "1.5"},
		{"-2 ^ 2", "-4.0"}, {"2 ^ -1", "0.5"}, {"2 ^ 3 ^ 2", "512.0"}, {"0.1 ^ 2", "0.010000000000000002"},
		{"+3", "3"}, {"-(-3)", "3"}, {"-0.0", "0.0"}, {"0 * -1.5", "0.0"},
		{"9223372036854775806 + 1", "9223372036854775807"}, {"-9223372036854775807 - 1", "-9223372036854775808"},
		{"(-9223372036854775807 - 1) % -1", "0"},
		{"NULL + 1", "NULL"}, {"1 / NULL", "NULL"}, {"-NULL", "NULL"}, {"NULL / 0", "NULL"},
		{"CAST('Infinity' AS REAL) + 1", "Infinity"}, {"-CAST('Infinity' AS REAL)", "-Infinity"}, {"1 / CAST('Infinity' AS REAL)", "0.0"},
		// time
		{"TIMESTAMP '2031-04-07 08:15:00' + INTERVAL '15' MINUTE", "TIMESTAMP '2031-04-07 08:30:00'"},
		{"INTERVAL '1' DAY + TIMESTAMP '2031-02-28 00:00:00'", "TIMESTAMP '2031-03-01 00:00:00'"},
		{"TIMESTAMP '2031-04-07' - TIMESTAMP '2031-04-06'", "INTERVAL '1' DAY"},
		{"TIMESTAMP '2031-04-07' - INTERVAL '1' SECOND", "TIMESTAMP '2031-04-06 23:59:59'"},
		{"INTERVAL '15' MINUTE * 4", "INTERVAL '1' HOUR"}, {"0.5 * INTERVAL '1' HOUR", "INTERVAL '30' MINUTE"},
		{"INTERVAL '1' HOUR / 4", "INTERVAL '15' MINUTE"}, {"-INTERVAL '1' HOUR", "INTERVAL '-1' HOUR"},
		{"INTERVAL '1' HOUR + INTERVAL '30' MINUTE", "INTERVAL '90' MINUTE"},
		{"INTERVAL '100' MINUTE % INTERVAL '1' HOUR", "INTERVAL '40' MINUTE"}, {"INTERVAL '0.25' SECOND * 1", "INTERVAL '0.25' SECOND"},
		{"TIMESTAMP '2031-04-07' + NULL", "NULL"}, {"NULL - TIMESTAMP '2031-04-07'", "NULL"}, {"NULL * INTERVAL '1' DAY", "NULL"}, {"INTERVAL '1' DAY / NULL", "NULL"}, {"NULL - INTERVAL '1' DAY", "NULL"},
		// comparison
		{"1 < 2", "TRUE"}, {"2 <= 1", "FALSE"}, {"1 = 1.0", "TRUE"}, {"1 <> 1.5", "TRUE"},
		{"9007199254740993 = 9007199254740992.0", "FALSE"}, {"9007199254740993 > 9007199254740992.0", "TRUE"},
		{"9223372036854775807 < 9223372036854775807.0", "TRUE"}, {"'a' < 'b'", "TRUE"}, {"'Z' < 'a'", "TRUE"}, {"'z' < 'ä'", "TRUE"},
		{"'L17' = 'L17 '", "FALSE"}, {"FALSE < TRUE", "TRUE"}, {"TRUE = FALSE", "FALSE"},
		{"TIMESTAMP '2031-04-07' < TIMESTAMP '2031-04-08'", "TRUE"}, {"INTERVAL '60' MINUTE = INTERVAL '1' HOUR", "TRUE"},
		{"POINT(1, 2, 3) = POINT(1, 2, 3)", "TRUE"}, {"POINT(1, 2, 3) <> POINT(1, 2, 4)", "TRUE"},
		{"NULL = NULL", "NULL"}, {"1 < NULL", "NULL"}, {"'a' = NULL", "NULL"},
		{"1 IS DISTINCT FROM NULL", "TRUE"}, {"NULL IS DISTINCT FROM NULL", "FALSE"}, {"1 IS NOT DISTINCT FROM 1.0", "TRUE"}, {"1 IS DISTINCT FROM 2", "TRUE"},
		// BETWEEN (9075-2, <between predicate>: X >= Y AND X <= Z)
		{"2 BETWEEN 1 AND 3", "TRUE"}, {"3 BETWEEN 1 AND 3", "TRUE"}, {"2 BETWEEN 3 AND 1", "FALSE"}, {"2 NOT BETWEEN 3 AND 1", "TRUE"},
		{"0 BETWEEN 1 AND NULL", "FALSE"}, {"2 BETWEEN 1 AND NULL", "NULL"}, {"5 NOT BETWEEN NULL AND 3", "TRUE"}, {"NULL BETWEEN 1 AND 2", "NULL"},
		{"2 BETWEEN 1.5 AND 2.5", "TRUE"}, {"'b' BETWEEN 'a' AND 'c'", "TRUE"},
		// IN (9075-2, <in predicate>: an OR of comparisons)
		{"2 IN (1, 2)", "TRUE"}, {"3 IN (1, 2)", "FALSE"}, {"3 IN (1, NULL)", "NULL"}, {"1 IN (1, NULL)", "TRUE"},
		{"3 NOT IN (1, NULL)", "NULL"}, {"1 NOT IN (1, NULL)", "FALSE"}, {"NULL IN (1)", "NULL"}, {"'a' IN ('b', 'a')", "TRUE"},
		{"2 IN (1, 2.0)", "TRUE"}, {"2.5 NOT IN (1, 2)", "TRUE"}, {"TRUE IN (FALSE, TRUE)", "TRUE"}, {"TRUE IN (NULL, NULL)", "NULL"}, {"POINT(1, 2, 3) IN (POINT(1, 2, 3), NULL)", "TRUE"},
		// LIKE (9075-2, <like predicate>)
		{"'L17' LIKE 'L%'", "TRUE"}, {"'L17' LIKE 'L_'", "FALSE"}, {"'L17' LIKE 'L__'", "TRUE"}, {"'' LIKE '%'", "TRUE"}, {"'' LIKE '_'", "FALSE"},
		{"'Käse' LIKE 'K_se'", "TRUE"}, {"'10%' LIKE '10!%' ESCAPE '!'", "TRUE"}, {"'100' LIKE '10!%' ESCAPE '!'", "FALSE"},
		{"'abcbc' LIKE '%bc'", "TRUE"}, {"'aaab' LIKE '%a%b%'", "TRUE"}, {"'L17' NOT LIKE 'M%'", "TRUE"}, {"NULL LIKE 'a'", "NULL"}, {"'a' LIKE NULL", "NULL"},
		{"'' LIKE ''", "TRUE"}, {"'a' LIKE ''", "FALSE"}, {"'l17' LIKE 'L%'", "FALSE"},
		// IS
		{"NULL IS NULL", "TRUE"}, {"1 IS NULL", "FALSE"}, {"1 IS NOT NULL", "TRUE"}, {"(1 = NULL) IS UNKNOWN", "TRUE"}, {"TRUE IS NOT UNKNOWN", "TRUE"},
		{"(1 = NULL) IS TRUE", "FALSE"}, {"(1 = NULL) IS NOT TRUE", "TRUE"}, {"(1 = 2) IS FALSE", "TRUE"}, {"(1 = NULL) IS NOT FALSE", "TRUE"},
		// CASE
		{"CASE WHEN 1 = 2 THEN 'a' WHEN NULL THEN 'b' ELSE 'c' END", "'c'"}, {"CASE WHEN FALSE THEN 1 END", "NULL"},
		{"CASE 2 WHEN 1 THEN 'a' WHEN 2 THEN 'b' END", "'b'"}, {"CASE NULL WHEN NULL THEN 1 ELSE 2 END", "2"}, {"CASE WHEN TRUE THEN 1 ELSE 2.5 END", "1.0"},
		{"CASE WHEN TRUE THEN NULL ELSE 2 END", "NULL"},
		{"COALESCE(NULL, NULL)", "NULL"}, {"COALESCE(NULL, 2.5, 1)", "2.5"}, {"COALESCE(NULL, 'a')", "'a'"}, {"COALESCE(1, 1 / 0)", "1.0"},
		{"NULLIF(1, 1)", "NULL"}, {"NULLIF(1, 2)", "1"}, {"NULLIF(1, NULL)", "1"}, {"NULLIF('n/a', 'n/a')", "NULL"}, {"NULLIF(NULL, 1)", "NULL"}, {"NULLIF(1, 1.0)", "NULL"},
		// texts
		{"'a' || 'b'", "'ab'"}, {"'a' || NULL", "NULL"}, {"'it''s' || ''", "'it''s'"},
		// CAST (9075-2, <cast specification>)
		{"CAST(2.5 AS INTEGER)", "3"}, {"CAST(-2.5 AS INTEGER)", "-3"}, {"CAST(' 12 ' AS INTEGER)", "12"}, {"CAST('8.7' AS INTEGER)", "9"},
		{"CAST('9223372036854775807' AS INTEGER)", "9223372036854775807"}, {"CAST('-1.5e2' AS REAL)", "-150.0"}, {"CAST(3 AS REAL)", "3.0"},
		{"CAST(0.1 AS TEXT)", "'0.1'"}, {"CAST(12 AS TEXT)", "'12'"}, {"CAST(TRUE AS TEXT)", "'TRUE'"}, {"CAST(' false' AS BOOLEAN)", "FALSE"},
		{"CAST('2031-04-07T08:15:00+02:00' AS TIMESTAMP)", "TIMESTAMP '2031-04-07 06:15:00'"}, {"CAST(TIMESTAMP '2031-04-07' AS TEXT)", "'2031-04-07 00:00:00'"},
		{"CAST('00:15:00' AS INTERVAL)", "INTERVAL '15' MINUTE"}, {"CAST(INTERVAL '90' MINUTE AS TEXT)", "'01:30:00'"}, {"CAST(NULL AS TEXT)", "NULL"},
		{"CAST('-Infinity' AS REAL)", "-Infinity"}, {"CAST(POINT(1, 2, 0.5) AS TEXT)", "'POINT(1, 2, 0.5)'"},
		// OVERLAPS (9075-2, <overlaps predicate>): touching periods do not, instants at a start do
		{"(TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-03') OVERLAPS (TIMESTAMP '2031-04-02', TIMESTAMP '2031-04-05')", "TRUE"},
		{"(TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-02') OVERLAPS (TIMESTAMP '2031-04-02', TIMESTAMP '2031-04-05')", "FALSE"},
		{"(TIMESTAMP '2031-04-03', TIMESTAMP '2031-04-01') OVERLAPS (TIMESTAMP '2031-04-02', INTERVAL '1' HOUR)", "TRUE"},
		{"(TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-01') OVERLAPS (TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-01')", "TRUE"},
		{"(TIMESTAMP '2031-04-01', NULL) OVERLAPS (TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-02')", "NULL"},
		{"(TIMESTAMP '2031-04-03', NULL) OVERLAPS (TIMESTAMP '2031-04-01', TIMESTAMP '2031-04-02')", "NULL"},
	}
	for _, c := range cases {
		e, err := read(c.text, nil)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		got, err := evalAt(e, nil, nil)
		if err != nil || show(got) != c.want {
			t.Errorf("%s = %s (%v), want %s", c.text, show(got), err, c.want)
		}
		folded, err := evalAt(Fold(e), nil, nil)
		if err != nil || show(folded) != c.want {
			t.Errorf("folded, %s = %s (%v), want %s", c.text, show(folded), err, c.want)
		}
		if _, ok := Const(e); !ok {
			t.Errorf("%s is not constant", c.text)
		}
	}
}

// TestTruthTables is the tables of AND, OR, NOT and IS of ISO/IEC 9075-2,
// <boolean value expression>.
func TestTruthTables(t *testing.T) {
	names := []string{"TRUE", "FALSE", "NULL"}
	and := [3][3]string{{"TRUE", "FALSE", "NULL"}, {"FALSE", "FALSE", "FALSE"}, {"NULL", "FALSE", "NULL"}}
	or := [3][3]string{{"TRUE", "TRUE", "TRUE"}, {"TRUE", "FALSE", "NULL"}, {"TRUE", "NULL", "NULL"}}
	not := [3]string{"FALSE", "TRUE", "NULL"}
	is := [3][3]string{{"TRUE", "FALSE", "FALSE"}, {"FALSE", "TRUE", "FALSE"}, {"FALSE", "FALSE", "TRUE"}}
	schema := column.Schema{{Name: "a", Type: column.Boolean}, {Name: "b", Type: column.Boolean}}
	values := []column.Value{column.Bool(true), column.Bool(false), column.NullOf(column.Boolean)}
	check := func(text string, row []column.Value, want string) {
		t.Helper()
		got, err := evalAt(mustRead(t, text, schema), row, schema)
		if err != nil || show(got) != want {
			t.Errorf("%s of %s, %s = %s (%v), want %s", text, show(row[0]), show(row[1]), show(got), err, want)
		}
	}
	for i := range names {
		for j := range names {
			row := []column.Value{values[i], values[j]}
			check("a AND b", row, and[i][j])
			check("a OR b", row, or[i][j])
			check("NOT a", row, not[i])
			for k, what := range []string{"TRUE", "FALSE", "UNKNOWN"} {
				check("a IS "+what, row, is[i][k])
			}
			check(names[i]+" AND b", row, and[i][j])
			check("a OR "+names[j], row, or[i][j])
		}
	}
}

// TestRowErrors: what has no value is an error that says so.
func TestRowErrors(t *testing.T) {
	cases := []struct{ text, code, want string }{
		{"1 / 0", CodeNoValue, "1 / 0 has no value"},
		{"0.0 / 0", CodeNoValue, "0 / 0 has no value"},
		{"7 % 0", CodeNoValue, "7 % 0 has no value"},
		{"9223372036854775807 + 1", CodeOverflow, "9223372036854775807 + 1 is beyond the 64 bits of an INTEGER"},
		{"4611686018427387904 * -4", CodeOverflow, "4611686018427387904 * -4 is beyond the 64 bits of an INTEGER"},
		{"-(-9223372036854775807 - 1)", CodeOverflow, "-(-9223372036854775808) is beyond the 64 bits of an INTEGER"},
		{"1E308 * 10", CodeOverflow, "1e+308 * 10 has no finite value"},
		{"CAST('Infinity' AS REAL) - CAST('Infinity' AS REAL)", CodeNoValue, "Infinity - Infinity has no value"},
		{"CAST('Infinity' AS REAL) / 0", CodeNoValue, "Infinity / 0 has no value"},
		{"0 ^ -1", CodeNoValue, "0 ^ -1 has no value"},
		{"(-8) ^ 0.5", CodeNoValue, "(-8) ^ 0.5 has no value"},
		{"TIMESTAMP '9999-12-31 23:59:59' + INTERVAL '1' HOUR", CodeOverflow, "beyond the years 1 to 9999"},
		{"INTERVAL '1' HOUR / 0", CodeNoValue, "01:00:00 / 0 has no value"},
		{"CAST('8,5' AS REAL)", CodeCast, "'8,5' is no number"},
		{"CAST('0x10' AS REAL)", CodeCast, "'0x10' is no number"},
		{"CAST('NaN' AS REAL)", CodeCast, "'NaN' is no number"},
		{"CAST('1e400' AS REAL)", CodeCast, "'1e400' is no number"},
		{"CAST('' AS INTEGER)", CodeCast, "'' is no number"},
		{"CAST('1e30' AS INTEGER)", CodeOverflow, "'1e30' is beyond the 64 bits of an INTEGER"},
		{"CAST(1E30 AS INTEGER)", CodeOverflow, "beyond the 64 bits"},
		{"CAST('yes' AS BOOLEAN)", CodeCast, "'yes' is neither TRUE nor FALSE"},
		{"CAST('2031-02-30' AS TIMESTAMP)", CodeCast, "'2031-02-30' is no date and time that there is"},
		{"CAST('noon' AS TIMESTAMP)", CodeCast, "'noon' is no time stamp"},
		{"LN(-1)", CodeNoValue, "the logarithm of -1 has no value"},
		{"LN(0)", CodeNoValue, "the logarithm of 0 has no value"},
		{"SQRT(-2.5)", CodeNoValue, "the square root of -2.5 has no value"},
		{"EXP(1000)", CodeNoValue, "EXP(1000) has no finite value"},
		{"ASIN(2)", CodeNoValue, "ASIN(2) has no value"},
		{"MOD(5, 0)", CodeNoValue, "MOD(5, 0) has no value"},
		{"FLOOR_TO(5, 0)", CodeNoValue, "FLOOR_TO(5, 0) has no value"},
		{"POWER(-8, 0.5)", CodeNoValue, "(-8) ^ 0.5 has no finite value"},
		{"SUBSTRING('abc' FROM 1 FOR -1)", CodeNoValue, "SUBSTRING cannot take -1 characters"},
	}
	for _, c := range cases {
		e, err := read(c.text, nil)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		_, err = evalAt(e, nil, nil)
		var row *RowError
		var p *problem.Problem
		if !errors.As(err, &row) || !errors.As(err, &p) || row.Row != 0 || p.Code != c.code || !strings.Contains(p.Message, c.want) {
			t.Errorf("%s: %v, want %s: %s in row 0", c.text, err, c.code, c.want)
			continue
		}
		if p.Place.Source == nil {
			t.Errorf("%s: the error has no place", c.text)
		}
		if _, ok := Fold(e).(*Literal); ok {
			t.Errorf("%s was folded although it fails", c.text)
		}
		if !e.CanFail() {
			t.Errorf("%s can fail and does not say so", c.text)
		}
	}
}

// TestBindErrors: types and units that do not go together are refused with the
// two types and a way out, at the place of the wrong part.
func TestBindErrors(t *testing.T) {
	schema := column.Schema{
		{Name: "temp", Type: column.Real, Unit: column.Symbol("°C")}, {Name: "co2", Type: column.Real, Unit: column.Symbol("ppm")},
		{Name: "name", Type: column.Text}, {Name: "t", Type: column.Timestamp}, {Name: "span", Type: column.Interval},
		{Name: "ok", Type: column.Boolean}, {Name: "n", Type: column.Integer}, {Name: "p", Type: column.Point},
	}
	cases := []struct{ text, code, want, at string }{
		{"temp + co2", CodeUnits, "temp is in °C and co2 in ppm: they cannot be added to each other (CAST(co2 AS REAL) drops the unit)", "co2"},
		{"temp > co2", CodeUnits, "temp is in °C and co2 in ppm: they cannot be compared with each other", "co2"},
		{"temp BETWEEN 2 AND co2", CodeUnits, "they cannot be compared with each other", "co2"},
		{"CASE WHEN ok THEN temp ELSE co2 END", CodeUnits, "temp is in °C", "co2"},
		{"GREATEST(temp, co2)", CodeUnits, "GREATEST is given °C and ppm", "co2"},
		{"name + 1", CodeTypes, "+ needs numbers, not name (TEXT) (CAST(name AS REAL) reads a text as a number)", "name"},
		{"name + 'a'", CodeTypes, "texts are joined by ||", "name"},
		{"temp * '2'", CodeTypes, "* needs numbers, not '2' (TEXT) (a number is written without quotes)", "'2'"},
		{"temp > '8'", CodeTypes, "temp (REAL) cannot be compared with '8' (TEXT) (a number is written without quotes)", "'8'"},
		{"temp > name", CodeTypes, "temp (REAL) cannot be compared with name (TEXT) (CAST(name AS REAL) reads a text as a number)", "name"},
		{"name = 17", CodeTypes, "name (TEXT) cannot be compared with 17 (INTEGER) (CAST(name AS REAL)", "17"},
		{"n = 'L17'", CodeTypes, "CAST(n AS TEXT) makes a text of the number", "'L17'"},
		{"t > '2031-04-07'", CodeTypes, "t (TIMESTAMP) cannot be compared with '2031-04-07' (TEXT) (write TIMESTAMP '2031-04-07')", "'2031-04-07'"},
		{"t + 1", CodeTypes, "+ does not go with t (TIMESTAMP) and 1 (INTEGER) (write how long: INTERVAL '1' HOUR)", "t + 1"},
		{"span / span", CodeTypes, "HOURS(span) / HOURS(span) is their ratio", "span / span"},
		{"-name", CodeTypes, "- needs a number, not name (TEXT)", "name"},
		{"ok AND temp", CodeTypes, "AND needs a BOOLEAN, not temp (REAL) (write a condition, such as temp = …)", "temp"},
		{"NOT n", CodeTypes, "NOT needs a BOOLEAN, not n (INTEGER)", "n"},
		{"name LIKE 5", CodeTypes, "LIKE needs a TEXT, not 5 (INTEGER)", "5"},
		{"name || n", CodeTypes, "|| needs a TEXT, not n (INTEGER) (CAST(n AS TEXT) makes a text of it)", "n"},
		{"p < p", CodeTypes, "points have no order", "p < p"},
		{"ok + 1", CodeTypes, "CASE WHEN ok THEN 1 ELSE 0 END makes a number of a condition", "ok"},
		{"CAST(ok AS REAL)", CodeTypes, "ok (BOOLEAN) cannot be cast to REAL", "ok"},
		{"CAST(span AS INTEGER)", CodeTypes, "HOURS(span) makes a number of an interval", "span"},
		{"SQRT(name)", CodeTypes, "SQRT needs a number here, not TEXT (CAST(name AS REAL) reads a text as a number)", "name"},
		{"ROUND(temp, 1.5)", CodeTypes, "ROUND needs INTEGER here, not REAL", "1.5"},
		{"ROUND(temp, 1, 2)", CodeArguments, "ROUND takes 1 to 2 arguments, not 3", "ROUND(temp, 1, 2)"},
		{"PI(1)", CodeArguments, "PI takes no arguments, not 1", "PI(1)"},
		{"EXTRACT(FORTNIGHT FROM t)", CodeArguments, "EXTRACT knows no field FORTNIGHT", "FORTNIGHT"},
		{"EXTRACT(HOUR FROM span)", CodeTypes, "EXTRACT needs a TIMESTAMP, not INTERVAL", "span"},
		{"FLOOR_TO(t, 1)", CodeTypes, "needs an INTERVAL as its step", "1"},
		{"name LIKE '10!' ESCAPE '!'", CodeArguments, "the escape character stands before", "'10!'"},
		{"name LIKE 'a' ESCAPE '!!'", CodeArguments, "the ESCAPE of LIKE is one character", "'a'"},
		{"n IN (1, 'a')", CodeTypes, "n (INTEGER) cannot be compared with 'a' (TEXT)", "'a'"},
		{"COALESCE(temp, 'none')", CodeTypes, "COALESCE needs arguments of one type, not REAL and TEXT", "'none'"},
	}
	for _, c := range cases {
		_, err := read(c.text, schema)
		var p *problem.Problem
		if !errors.As(err, &p) {
			t.Errorf("%s: %v is no problem", c.text, err)
			continue
		}
		at := p.Place.Source.Text[p.Place.Span.Start:p.Place.Span.End]
		if p.Code != c.code || !strings.Contains(p.Error(), c.want) || at != c.at {
			t.Errorf("%s: %s: %s, at %q\nwant %s: %s, at %q", c.text, p.Code, p.Error(), at, c.code, c.want, c.at)
		}
	}
}

// TestUnits: the unit of what is computed.
func TestUnits(t *testing.T) {
	m := column.Symbol("m")
	schema := column.Schema{
		{Name: "temp", Type: column.Real, Unit: column.Symbol("°C")}, {Name: "volume", Type: column.Real, Unit: m.Pow(3)},
		{Name: "area", Type: column.Real, Unit: m.Pow(2)}, {Name: "plain", Type: column.Real}, {Name: "span", Type: column.Interval},
		{Name: "n", Type: column.Integer}, {Name: "x", Type: column.Real, Unit: m},
	}
	cases := []struct{ text, want string }{
		{"temp + temp", "°C"}, {"temp + 1", "°C"}, {"2 * temp - (1 + 1)", "°C"}, {"temp + plain", ""}, {"volume / area", "m"},
		{"volume * HOURS(span)", "m³·h"}, {"x ^ 2", "m²"}, {"x ^ 0", ""}, {"volume ^ 0.5", ""}, {"SQRT(area)", "m"}, {"SQRT(volume)", ""},
		{"area / area", ""}, {"1 / x", "m⁻¹"}, {"-temp", "°C"}, {"CAST(temp AS REAL)", ""}, {"CAST(temp AS INTEGER)", ""},
		{"CASE WHEN n = 1 THEN temp ELSE 0 END", "°C"}, {"CASE WHEN n = 1 THEN temp END", "°C"}, {"COALESCE(temp, 0)", "°C"}, {"NULLIF(temp, -99)", "°C"},
		{"ROUND(temp, 1)", "°C"}, {"ABS(temp)", "°C"}, {"SIGN(temp)", ""}, {"LN(x)", ""}, {"temp % 2", "°C"}, {"FLOOR_TO(x, 0.5)", "m"}, {"GREATEST(x, 2)", "m"},
		{"DISTANCE(POINT(x, x, 0), POINT(0, 0, 0))", "m"}, {"n * x", "m"}, {"temp > 8", ""}, {"POWER(x, 3)", "m³"},
	}
	for _, c := range cases {
		e := mustRead(t, c.text, schema)
		if got := e.Unit().String(); got != c.want {
			t.Errorf("the unit of %s is %q, want %q", c.text, got, c.want)
		}
	}
}

// TestExamples: the example of each scalar function is TRUE.
func TestExamples(t *testing.T) {
	for _, f := range function.All() {
		got, err := evalAt(mustRead(t, f.Example, nil), nil, nil)
		if err != nil || show(got) != "TRUE" {
			t.Errorf("%s: %s is %s (%v)", f.Name, f.Example, show(got), err)
		}
		if !strings.Contains(f.Example, f.Name+"(") {
			t.Errorf("%s: the example %s does not show it", f.Name, f.Example)
		}
		if f.Meaning == "" || !strings.HasPrefix(f.Signature, f.Name+"(") {
			t.Errorf("%s: signature %q, meaning %q", f.Name, f.Signature, f.Meaning)
		}
	}
}
