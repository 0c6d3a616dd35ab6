package expr

import (
	"testing"

	"nearcell/catalog/column"
)

// TestFunctions: values by definition; angles and roots are those that every
// table has.
func TestFunctions(t *testing.T) {
	schema := column.Schema{{Name: "s", Type: column.Text}, {Name: "x", Type: column.Real}, {Name: "n", Type: column.Integer}}
	row := []column.Value{column.String("Hällö"), column.Float(-7.25), column.Int(-7)}
	cases := []struct{ text, want string }{
		{"ABS(x)", "7.25"}, {"ABS(n)", "7"}, {"ABS(INTERVAL '-1' HOUR)", "INTERVAL '1' HOUR"}, {"SIGN(x)", "-1"}, {"SIGN(0.0)", "0"}, {"SIGN(3)", "1"},
		{"FLOOR(x)", "-8.0"}, {"FLOOR(n)", "-7"}, {"CEILING(x)", "-7.0"}, {"CEIL(-0.5)", "0.0"}, {"MOD(n, 4)", "-3"}, {"MOD(x, 2)", "-1.25"},
		{"ROUND(x)", "-7.0"}, {"ROUND(x, 1)", "-7.3"}, {"ROUND(n, -1)", "-10"}, {"ROUND(2.675, 2)", "2.68"}, {"ROUND(2.5)", "3.0"}, {"ROUND(NULL)", "NULL"}, {"ROUND(x, NULL)", "NULL"},
		{"SQRT(2)", "1.4142135623730951"}, {"SQRT(CAST('Infinity' AS REAL))", "Infinity"}, {"LN(1)", "0.0"}, {"LOG10(0.001)", "-3.0"}, {"LOG10(1E15)", "15.0"},
		{"EXP(1)", "2.718281828459045"}, {"POWER(2, 0.5)", "1.4142135623730951"}, {"POWER(9, -1)", "0.1111111111111111"},
		{"SIN(PI() / 6)", "0.49999999999999994"}, {"COS(0)", "1.0"}, {"TAN(0)", "0.0"}, {"ASIN(1)", "1.5707963267948966"}, {"ACOS(-1)", "3.141592653589793"},
		{"ATAN(1)", "0.7853981633974483"}, {"ATAN2(-1, 0)", "-1.5707963267948966"}, {"PI()", "3.141592653589793"},
		{"GREATEST(1, 2.5, n)", "2.5"}, {"GREATEST('a', 'b')", "'b'"}, {"LEAST(1, NULL)", "NULL"}, {"LEAST(TIMESTAMP '2031-04-07', TIMESTAMP '2031-04-06')", "TIMESTAMP '2031-04-06 00:00:00'"},
		{"UPPER(s)", "'HÄLLÖ'"}, {"LOWER(UPPER(s))", "'hällö'"}, {"CHAR_LENGTH(s)", "5"}, {"CHAR_LENGTH('')", "0"},
		{"TRIM('  a b ')", "'a b'"}, {"TRIM('x', 'xxaxx')", "'a'"}, {"TRIM('')", "''"},
		// 9075-2, <character substring function>: positions outside the text count
		{"SUBSTRING(s, 2, 3)", "'äll'"}, {"SUBSTRING(s FROM 2)", "'ällö'"}, {"SUBSTRING(s FROM 0 FOR 2)", "'H'"}, {"SUBSTRING(s FROM -1 FOR 2)", "''"},
		{"SUBSTRING(s FROM 6)", "''"}, {"SUBSTRING(s FROM 5 FOR 99)", "'ö'"}, {"SUBSTRING(s FROM 1 FOR 0)", "''"}, {"SUBSTRING(s FROM -5)", "'Hällö'"},
		{"SUBSTRING(s FROM 2 FOR 9223372036854775807)", "'ällö'"}, {"SUBSTRING(s FROM NULL)", "NULL"},
		{"EXTRACT(YEAR FROM TIMESTAMP '2031-04-07 08:15:30.25')", "2031"}, {"EXTRACT(MONTH FROM TIMESTAMP '2031-04-07 08:15:30.25')", "4"},
		{"EXTRACT(DAY FROM TIMESTAMP '2031-04-07 08:15:30.25')", "7"}, {"EXTRACT(HOUR FROM TIMESTAMP '2031-04-07 08:15:30.25')", "8"},
		{"EXTRACT(minute FROM TIMESTAMP '2031-04-07 08:15:30.25')", "15"}, {"EXTRACT(SECOND FROM TIMESTAMP '2031-04-07 08:15:30.25')", "30.25"},
		// 7 April 2031 is a Monday, by any calendar
		{"EXTRACT(WEEKDAY FROM TIMESTAMP '2031-04-07 08:15:30.25')", "1"}, {"EXTRACT(HOUR FROM TIMESTAMP '1969-12-31 23:00:00')", "23"}, {"EXTRACT(DAY FROM TIMESTAMP '1969-12-31 23:00:00')", "31"},
		{"HOURS(INTERVAL '90' MINUTE)", "1.5"}, {"HOURS(TIMESTAMP '2031-04-08' - TIMESTAMP '2031-04-07')", "24.0"},
		{"FLOOR_TO(TIMESTAMP '2031-04-07 08:59:59', INTERVAL '1' HOUR)", "TIMESTAMP '2031-04-07 08:00:00'"},
		{"FLOOR_TO(TIMESTAMP '1969-12-31 23:59:00', INTERVAL '1' HOUR)", "TIMESTAMP '1969-12-31 23:00:00'"},
		{"FLOOR_TO(INTERVAL '100' MINUTE, INTERVAL '1' HOUR)", "INTERVAL '1' HOUR"}, {"FLOOR_TO(x, 0.5)", "-7.5"}, {"FLOOR_TO(n, 4)", "-8"}, {"FLOOR_TO(0.3, 0.1)", "0.3"},
		{"DISTANCE(POINT(0, 0, 0), POINT(2, 3, 6))", "7.0"}, {"DISTANCE(POINT(1E200, 0, 0), POINT(0, 0, 0))", "1e+200"}, {"DISTANCE(POINT(x, x, x), POINT(x, x, x))", "0.0"},
		{"DISTANCE(POINT(3E-200, 0, 0), POINT(0, 4E-200, 0))", "5e-200"}, {"POINT(1, NULL, 3)", "NULL"},
	}
	for _, c := range cases {
		got, err := evalAt(mustRead(t, c.text, schema), row, schema)
		if err != nil || show(got) != c.want {
			t.Errorf("%s = %s (%v), want %s", c.text, show(got), err, c.want)
		}
	}
}
