package function

import (
	"slices"
	"strings"
	"testing"

	"nearcell/catalog/column"
)

// TestRegistry: every line is complete, names are found in any case, and what
// is planned is not there yet.
func TestRegistry(t *testing.T) {
	want := strings.Fields(`ABS ACOS ASIN ATAN ATAN2 AVG CEIL CEILING CHARACTER_LENGTH CHAR_LENGTH COALESCE CORR COS COUNT CUME_DIST DENSE_RANK DIRECTION_AVG DISTANCE EXP
		EXTRACT FIRST FIRST_VALUE FLOOR FLOOR_TO GREATEST HOURS INTERPOLATE LAG LAST LAST_VALUE LEAD LEAST LEVEL_AVG LN LOG10 LOWER MAX MEDIAN MIN MKT MOD
		NTH_VALUE NTILE NULLIF PERCENT_RANK PI POWER QUANTILE RANK ROUND ROW_NUMBER SHARE SIGN SIN SQRT STDDEV_POP STDDEV_SAMP SUBSTRING SUM TAN TRIM UPPER VAR_POP VAR_SAMP`)
	if got := Names(); !slices.Equal(got, want) {
		t.Errorf("the names are %v", got)
	}
	for _, f := range All() {
		if LookupScalar(strings.ToLower(f.Name)) != f || f.Check == nil || (f.Eval == nil) != f.Lazy {
			t.Errorf("%s is not complete", f.Name)
		}
	}
	for _, f := range Aggregates() {
		if LookupAggregate(strings.ToLower(f.Name)) != f || f.Check == nil || f.New == nil || (f.Slide == nil) != f.Along || f.Meaning == "" ||
			!strings.HasPrefix(f.Signature, f.Name+"(") || !strings.HasPrefix(f.Example, f.Name+"(") ||
			!f.Weighted && strings.Contains(f.Example, "WEIGHTED BY") || f.Ordered != strings.Contains(f.Example, "ORDER BY") {
			t.Errorf("%s is not complete", f.Name)
		}
	}
	for _, f := range Windows() {
		if LookupWindow(strings.ToLower(f.Name)) != f || f.Check == nil || f.Meaning == "" ||
			!strings.HasPrefix(f.Signature, f.Name+"(") || !strings.Contains(f.Example, f.Name+"(") || !strings.Contains(f.Example, "OVER (") {
			t.Errorf("%s is not complete", f.Name)
		}
	}
	for _, name := range planned {
		if !Planned(name) {
			t.Errorf("%s is not planned", name)
		}
	}
	for _, name := range Names() {
		if Planned(name) {
			t.Errorf("%s is planned and there", name)
		}
	}
}

// TestAggregateChecks: types, units and constants of aggregates.
func TestAggregateChecks(t *testing.T) {
	celsius, m3 := column.Symbol("°C"), column.Symbol("m").Pow(3)
	temp, volume := Arg{Type: column.Real, Unit: celsius}, Arg{Type: column.Real, Unit: m3}
	text := Arg{Type: column.Text}
	units := []struct {
		name   string
		args   []Arg
		weight *Arg
		want   string
	}{
		{"AVG", []Arg{temp}, &volume, "°C"}, {"SUM", []Arg{temp}, nil, "°C"}, {"SUM", []Arg{temp}, &volume, "m³·°C"}, {"VAR_POP", []Arg{temp}, &volume, "°C²"},
		{"STDDEV_SAMP", []Arg{temp}, nil, "°C"}, {"CORR", []Arg{temp, volume}, nil, ""}, {"COUNT", []Arg{temp}, nil, ""}, {"MAX", []Arg{temp}, nil, "°C"},
		{"MEDIAN", []Arg{volume}, nil, "m³"}, {"MKT", []Arg{temp}, nil, "°C"}, {"SHARE", []Arg{{Type: column.Boolean}}, &volume, ""},
	}
	for _, c := range units {
		r, err := LookupAggregate(c.name).Check(c.args, c.weight)
		if err != nil || r.Unit.String() != c.want {
			t.Errorf("%s: unit %q (%v), want %q", c.name, r.Unit, err, c.want)
		}
	}
	half, two := column.Float(0.5), column.Float(2)
	refused := []struct {
		name   string
		args   []Arg
		weight *Arg
		arg    int
		want   string
	}{
		{"AVG", []Arg{text}, nil, 0, "AVG needs a number here, not TEXT"}, {"SUM", []Arg{{Type: column.Boolean}}, nil, 0, "COUNT(*) FILTER"},
		{"SUM", []Arg{{Type: column.Timestamp}}, nil, 0, "not TIMESTAMP"}, {"AVG", []Arg{temp}, &text, WeightArg, "a weight is a number, not TEXT"},
		{"AVG", []Arg{temp}, &Arg{Type: column.Interval}, WeightArg, "HOURS"}, {"QUANTILE", []Arg{temp}, nil, -1, "takes 2 arguments, not 1"},
		{"QUANTILE", []Arg{temp, {Type: column.Real, Const: &two}}, nil, 1, "constant from 0 to 1"}, {"QUANTILE", []Arg{text, {Type: column.Real, Const: &half}}, nil, 0, "not TEXT"},
		{"QUANTILE", []Arg{temp, temp}, nil, 1, "constant from 0 to 1"}, {"MKT", []Arg{{Type: column.Real, Unit: column.Symbol("K")}}, nil, 0, "takes temperatures in °C, and this is in K"},
		{"MKT", []Arg{temp, temp}, nil, 1, "constant activation energy"}, {"SHARE", []Arg{temp}, nil, 0, "SHARE(temp > 8)"}, {"MAX", []Arg{{Type: column.Point}}, nil, 0, "no order"},
		{"COUNT", []Arg{temp, temp}, nil, -1, "COUNT takes 0 to 1 arguments, not 2"},
	}
	for _, c := range refused {
		_, err := LookupAggregate(c.name).Check(c.args, c.weight)
		e, ok := err.(*ArgumentError)
		if !ok || e.Arg != c.arg || !strings.Contains(e.Message+" "+e.Hint, c.want) {
			t.Errorf("%s: %v, want %q of argument %d", c.name, err, c.want, c.arg)
		}
	}
}
