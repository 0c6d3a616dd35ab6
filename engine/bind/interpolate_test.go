package bind_test

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// calibrated puts a log of n readings (some NULL, some of loggers without a table) and
// a table of calibrations with repeated points and NULLs.
func calibrated(p *program, n int, rng *rand.Rand) {
	logger, temp := column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil)
	for range n {
		logger.AppendText(fmt.Sprintf("L%02d", rng.IntN(12)))
		if rng.IntN(20) == 0 {
			temp.AppendNull()
		} else {
			temp.AppendFloat(float64(rng.IntN(400))/10 - 10)
		}
	}
	p.put(catalog.Object{Kind: catalog.Table, Key: "raw", Table: tableOf(n, logger, temp, "logger", "temp")})
	who, x, y := column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil), column.NewBuilder(column.Real, nil)
	rows := 0
	for l := range 10 {
		for range 1 + rng.IntN(6) {
			who.AppendText(fmt.Sprintf("L%02d", l))
			x.AppendFloat(float64(rng.IntN(30)))
			if rng.IntN(9) == 0 {
				y.AppendNull()
			} else {
				y.AppendFloat(float64(rng.IntN(100)) / 64)
			}
			rows++
		}
	}
	cal := tableOf(rows, who, x, "logger", "indication")
	cal.Schema = append(cal.Schema, column.Field{Name: "correction", Type: column.Real})
	cal.Cols = append(cal.Cols, y.Finish())
	p.put(catalog.Object{Kind: catalog.Table, Key: "cal", Table: cal})
}

func tableOf(n int, a, b *column.Builder, first, second string) *column.Table {
	x, y := a.Finish(), b.Finish()
	return &column.Table{N: n, Cols: []column.Vector{x, y}, Schema: column.Schema{{Name: first, Type: x.Type}, {Name: second, Type: y.Type}}}
}

// The sorted merge gives what the query gives row by row (LIMIT 1 keeps it from being
// a merge), under conditions and inside expressions, and fails for the same rows.
func TestMergeIsTheQuery(t *testing.T) {
	const query = "(SELECT INTERPOLATE(c.correction ALONG c.indication AT l.temp%s) FROM cal c WHERE c.logger = l.logger%s)"
	for seed := range uint64(5) {
		p := start(t)
		calibrated(p, 300, rand.New(rand.NewPCG(seed, 3)))
		for _, form := range []string{
			"SELECT l.logger, l.temp, %s AS k FROM raw l",
			"SELECT l.logger, l.temp + %s AS k FROM raw l WHERE l.temp > 3",
			"SELECT l.logger, CASE WHEN l.temp BETWEEN 10 AND 12 THEN 0 ELSE COALESCE(%s, -1) END AS k FROM raw l",
			"SELECT l.logger, l.temp FROM raw l WHERE %s > 0.5",
			"SELECT l.logger, AVG(%s) AS k FROM raw l GROUP BY l.logger",
		} {
			for _, outside := range []string{"", " OUTSIDE HOLD", " OUTSIDE FAIL"} {
				merged, slow := fmt.Sprintf(form, fmt.Sprintf(query, outside, "")), fmt.Sprintf(form, fmt.Sprintf(query, outside, " LIMIT 1"))
				got, err := p.run(merged)
				want, errSlow := p.run(slow)
				if (err == nil) != (errSlow == nil) {
					t.Fatalf("seed %d: %s\n%v\nrow by row %v", seed, merged, err, errSlow)
				}
				if err != nil {
					if outside != " OUTSIDE FAIL" || !strings.Contains(problem.Render(err), "OUTSIDE FAIL") {
						t.Fatalf("seed %d: %s\n%v", seed, merged, err)
					}
					continue
				}
				for c := range got.Cols {
					if d := column.Diff(&got.Cols[c], &want.Cols[c]); d != "" {
						t.Fatalf("seed %d: %s\ncolumn %d: %s", seed, merged, c, d)
					}
				}
			}
		}
	}
}

// BenchmarkCalibration: ten million readings of 54 loggers against certificates of five
// points each, the sum of what comes out.
func BenchmarkCalibration(b *testing.B) {
	const n, loggers = 10_000_000, 54
	p := start(b)
	rng := rand.New(rand.NewPCG(1, 1))
	d := &column.Dict{}
	who, x, y := column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil), column.NewBuilder(column.Real, nil)
	for l := range loggers {
		name := fmt.Sprintf("L%02d", l)
		d.Texts = append(d.Texts, name)
		for k := range 5 {
			who.AppendText(name)
			x.AppendFloat(float64(10*k - 20))
			y.AppendFloat(rng.Float64())
		}
	}
	cal := tableOf(5*loggers, who, x, "logger", "indication")
	cal.Schema = append(cal.Schema, column.Field{Name: "correction", Type: column.Real})
	cal.Cols = append(cal.Cols, y.Finish())
	p.put(catalog.Object{Kind: catalog.Table, Key: "cal", Table: cal})
	logger, temp := column.New(column.Text, nil, n), column.New(column.Real, nil, n)
	logger.Dict = d
	for i := range n {
		logger.C[i], temp.F[i] = uint32(i%loggers), float64(rng.IntN(4000))/100-20
	}
	p.put(catalog.Object{Kind: catalog.Table, Key: "raw", Table: &column.Table{N: n, Cols: []column.Vector{logger, temp},
		Schema: column.Schema{{Name: "logger", Type: column.Text}, {Name: "temp", Type: column.Real}}}})
	for b.Loop() {
		p.must("SELECT SUM(l.temp + (SELECT INTERPOLATE(c.correction ALONG c.indication AT l.temp OUTSIDE FAIL) FROM cal c WHERE c.logger = l.logger)) AS s FROM raw l")
	}
}
