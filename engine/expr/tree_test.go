package expr

import (
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

var treeSchema = column.Schema{
	{Name: "temp", Type: column.Real, Unit: column.Symbol("°C")}, {Name: "n", Type: column.Integer}, {Name: "id", Type: column.Text},
	{Name: "Wall Side", Type: column.Text}, {Name: "t", Type: column.Timestamp}, {Name: "ok", Type: column.Boolean},
}

// TestStrings: expressions are written as the language writes them, with no
// more parentheses than they need.
func TestStrings(t *testing.T) {
	same := []string{
		"temp > 8", "temp + 1 > 8.5 AND NOT ok", "(temp + 1) * 2", "temp - (n - 1)", "temp - n - 1", "-2.5 ^ n", "(-2.5) ^ n", "n ^ n ^ n", "(n ^ n) ^ n",
		"-(n + 1)", "ok OR ok AND ok", "(ok OR ok) AND ok", "NOT (ok AND ok)", "temp BETWEEN 2 AND 8", "n NOT IN (1, 2, 3)", "id LIKE 'L%' ESCAPE '!'",
		"id IS NULL", "(temp > 8) IS NOT TRUE", "id IS NOT DISTINCT FROM 'L17'", "CASE WHEN temp > 8 THEN 'warm' ELSE 'fine' END", "CASE n WHEN 1 THEN id END",
		"CAST(id AS REAL)", "COALESCE(temp, 0)", "NULLIF(temp, -99)", "ROUND(temp, 1)", "EXTRACT(HOUR FROM t)", "t + INTERVAL '15' MINUTE",
		"t >= TIMESTAMP '2031-04-07 00:00:00'", `"Wall Side" = 'it''s'`, "id || '-' || id", "n % 2 = 1", "n / 2", "POINT(temp, 1, 2) = POINT(0, 0, 0)",
		"(t, INTERVAL '1' HOUR) OVERLAPS (t, t)", "temp * -1", "2 * (n + 1)", "temp > -5",
	}
	for _, text := range same {
		if got := mustRead(t, text, treeSchema).String(); got != text {
			t.Errorf("%s is written %s", text, got)
		}
	}
}

func TestFold(t *testing.T) {
	cases := []struct{ text, want string }{
		{"temp > 4 + 4", "temp > 8"}, {"TRUE AND ok", "ok"}, {"ok AND TRUE", "ok"}, {"FALSE AND 1 / n > 2", "FALSE"}, {"1 / n > 2 AND FALSE", "1 / n > 2 AND FALSE"},
		{"ok AND FALSE", "FALSE"}, {"ok OR TRUE", "TRUE"}, {"FALSE OR ok", "ok"}, {"ok AND NULL", "ok AND NULL"}, {"temp + 1 / 0", "temp + 1 / 0"},
		{"n IN (1 + 1, 3)", "n IN (2, 3)"}, {"CASE WHEN ok THEN 1 + 1 ELSE 3 END", "CASE WHEN ok THEN 2 ELSE 3 END"}, {"COALESCE(1, n)", "COALESCE(1, n)"},
		{"t > TIMESTAMP '2031-04-07' + INTERVAL '1' DAY", "t > TIMESTAMP '2031-04-08 00:00:00'"},
	}
	for _, c := range cases {
		if got := Fold(mustRead(t, c.text, treeSchema)).String(); got != c.want {
			t.Errorf("%s folds to %s, want %s", c.text, got, c.want)
		}
	}
	v, ok := Const(mustRead(t, "2 * 21", nil))
	if !ok || v.I != 42 {
		t.Errorf("2 * 21 is %v, %v", v, ok)
	}
	for _, text := range []string{"n", "1 / 0", "n * 0"} {
		if v, ok := Const(mustRead(t, text, treeSchema)); ok {
			t.Errorf("%s is constant: %s", text, v)
		}
	}
}

func TestEqual(t *testing.T) {
	texts := []string{"temp", "n", "temp + 1", "1 + temp", "temp + 1.5", "temp - 1", "temp > 8", "temp >= 8", "ok AND ok", "ok OR ok", "NOT ok", "ok IS TRUE", "ok IS NOT TRUE",
		"id LIKE 'a'", "id NOT LIKE 'a'", "id IN ('a')", "id IN ('a', 'b')", "n BETWEEN 1 AND 2", "n NOT BETWEEN 1 AND 2", "CAST(n AS REAL)", "CAST(n AS TEXT)",
		"COALESCE(n, 1)", "NULLIF(n, 1)", "SQRT(n)", "LN(n)", "CASE WHEN ok THEN 1 END", "CASE ok WHEN ok THEN 1 END", "id || id", "-n", "POINT(n, n, n)",
		"id IS DISTINCT FROM id", "id IS NOT DISTINCT FROM id", "(t, t) OVERLAPS (t, t)", "EXTRACT(HOUR FROM t)", "EXTRACT(DAY FROM t)", "CAST(temp AS REAL)"}
	for i, a := range texts {
		for j, b := range texts {
			if got := Equal(mustRead(t, a, treeSchema), mustRead(t, b, treeSchema)); got != (i == j) {
				t.Errorf("%s and %s are equal: %v", a, b, got)
			}
		}
	}
}

func TestConjuncts(t *testing.T) {
	e := mustRead(t, "ok AND (n > 1 AND temp > 2) AND (ok OR ok)", treeSchema)
	parts := Conjuncts(e)
	var got []string
	for _, p := range parts {
		got = append(got, p.String())
	}
	if strings.Join(got, "; ") != "ok; n > 1; temp > 2; ok OR ok" {
		t.Errorf("the conjuncts are %v", got)
	}
	if AndAll(nil) != nil || AndAll(parts).String() != "ok AND n > 1 AND temp > 2 AND (ok OR ok)" {
		t.Errorf("together again they are %v", AndAll(parts))
	}
	if i, ok := AsColumn(mustRead(t, "n", treeSchema)); !ok || i != 1 {
		t.Errorf("n is column %d, %v", i, ok)
	}
}

// TestCanFail: what may raise an error says so, and a comparison does not.
func TestCanFail(t *testing.T) {
	for text, want := range map[string]bool{
		"temp > 8": false, "id = 'L17'": false, "temp / 2": true, "n + 1": true, "CAST(id AS REAL)": true, "CAST(n AS REAL)": false, "id LIKE 'a%'": false,
		"SQRT(temp)": true, "UPPER(id) = 'A'": false, "CASE WHEN ok THEN 1 / n END": true, "COALESCE(temp, 0)": false, "n IN (1, 2)": false, "ok AND n / 2 > 1": true,
		"FLOOR(temp)": false, "temp BETWEEN 2 AND 8": false, "id IS NULL": false,
	} {
		if got := mustRead(t, text, treeSchema).CanFail(); got != want {
			t.Errorf("%s can fail: %v", text, got)
		}
	}
}

// TestMaskedErrors: a row that is off, or that a condition keeps away, raises
// nothing; a row that gets there does, by its number.
func TestMaskedErrors(t *testing.T) {
	schema := column.Schema{{Name: "x", Type: column.Integer}, {Name: "d", Type: column.Integer}}
	rows := make([][]column.Value, 100)
	for i := range rows {
		rows[i] = []column.Value{column.Int(int64(i)), column.Int(int64(i % 10))}
	}
	b := batchOf(schema, rows)
	var w Work
	for _, text := range []string{"CASE WHEN d <> 0 THEN x / d END", "d <> 0 AND x / d > 1", "d = 0 OR x / d > 1", "COALESCE(NULLIF(0, d), 1) = 1 OR x / d > 1"} {
		if _, err := mustRead(t, text, schema).Eval(&w, b, nil); err != nil {
			t.Errorf("%s: %v", text, err)
		}
	}
	e := mustRead(t, "x / d", schema)
	_, err := e.Eval(&w, b, nil)
	if r, ok := err.(*RowError); !ok || r.Row != 0 {
		t.Errorf("x / d: %v", err)
	}
	on := column.AllOn(100)
	for i := 0; i < 90; i += 10 {
		column.ClearBit(on, i)
	}
	_, err = e.Eval(&w, b, on)
	if r, ok := err.(*RowError); !ok || r.Row != 90 || r.Err.(*problem.Problem).Message != "90 / 0 has no value" {
		t.Errorf("x / d with one such row on: %v", err)
	}
	column.ClearBit(on, 90)
	if _, err := e.Eval(&w, b, on); err != nil {
		t.Errorf("x / d with no such row on: %v", err)
	}
}
