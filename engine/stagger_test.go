package engine

import (
	"encoding/csv"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"nearcell/engine/present"
)

// signal is what the air at logger i is at, t hours into the week: a day's course and a
// wave of three hours. Its second derivative is at most curvature.
func signal(i int, t float64) float64 {
	return 5.5 + 1.8*math.Sin(2*math.Pi*(t-6)/24+float64(i)/40) + 1.2*math.Sin(2*math.Pi*t/3+float64(i))
}

// curvature in °C/h²: amplitudes times squared frequencies.
var curvature = 1.8*math.Pow(2*math.Pi/24, 2) + 1.2*math.Pow(2*math.Pi/3, 2)

// TestHandStartedLoggers: 54 loggers in the demo hall, started by hand within a quarter
// of an hour, for seven days. Brought to common instants they say what loggers that were
// started together say, within the error of straight lines between readings: h²/8 times
// the largest curvature (from Taylor's theorem). A reading over limit + error there is
// over the limit here, and one over the limit here over limit - error there; so the
// shares, by space and time, lie between those of the two limits, for every instant.
func TestHandStartedLoggers(t *testing.T) {
	dir := t.TempDir()
	rng := rand.New(rand.NewPCG(54, 7))
	start := time.Date(2031, 4, 7, 0, 0, 0, 0, time.UTC)
	const step = 15 * time.Minute
	together, staggered := &strings.Builder{}, &strings.Builder{}
	for _, w := range []*strings.Builder{together, staggered} {
		fmt.Fprintln(w, "logger,t,temp [°C]")
	}
	write := func(w *strings.Builder, i int, at time.Time) {
		v := signal(i, at.Sub(start).Hours())
		fmt.Fprintf(w, "L%02d,%s,%s\n", i, at.Format("2006-01-02 15:04:05"), strconv.FormatFloat(v, 'f', -1, 64))
	}
	for i := 1; i <= 54; i++ {
		for k := range 672 {
			write(together, i, start.Add(time.Duration(k)*step))
		}
		late := time.Duration(rng.IntN(900)) * time.Second
		for k := range 674 {
			write(staggered, i, start.Add(time.Duration(k-1)*step+late))
		}
	}
	for name, w := range map[string]*strings.Builder{"together.csv": together, "staggered.csv": staggered} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(w.String()), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	e := newExplainer(t, present.AsCSV, 0)
	e.run(t, fmt.Sprintf(`CREATE TABLE together FROM '%s/together.csv'; CREATE TABLE staggered FROM '%s/staggered.csv';
		CREATE VIEW step AS (SELECT h.id, h.x, h.y, h.z, s.t, s.span, s.temp FROM SERIES OF staggered BY logger ON t EVERY INTERVAL '15' MINUTE
			FROM TIMESTAMP '2031-04-07 00:00:00' TO TIMESTAMP '2031-04-14 00:00:00' AS s JOIN hall h ON h.id = s.logger);
		CREATE VIEW same AS (SELECT h.id, h.x, h.y, h.z, l.t, INTERVAL '15' MINUTE AS span, l.temp FROM together l JOIN hall h ON h.id = l.logger);`,
		filepath.ToSlash(dir), filepath.ToSlash(dir)))

	const limit = 8
	slack := curvature*0.25*0.25/8 + 1e-12
	week := func(view string, limit float64) []float64 {
		return numbers(t, e.run(t, fmt.Sprintf(`SELECT SHARE(temp > %v) WEIGHTED BY (volume * HOURS(span)) AS share,
			SUM(volume * HOURS(span)) FILTER (WHERE temp > %v) AS m3h, SUM(volume * HOURS(span)) AS all_m3h FROM CELLS OF %s FOR EACH t WITHIN air;`, limit, limit, view)))[0]
	}
	peaks := func(view string, limit float64) [][]float64 {
		return numbers(t, e.run(t, fmt.Sprintf(`SELECT SHARE(temp > %v) WEIGHTED BY volume AS share FROM CELLS OF %s FOR EACH t WITHIN air GROUP BY t ORDER BY t;`, limit, view)))
	}
	got, exact, low, high := week("step", limit), week("same", limit), week("same", limit+slack), week("same", limit-slack)
	for c, name := range []string{"share", "cubic metre hours"} {
		if got[c] < low[c] || got[c] > high[c] {
			t.Errorf("the %s are %v, not between %v and %v", name, got[c], low[c], high[c])
		}
		if high[c]-low[c] > exact[c]/4 || math.Abs(got[c]-exact[c]) > 0.06*exact[c] { // seen: 5.6 % below
			t.Errorf("the %s are %v, started together %v, which the limits place between %v and %v", name, got[c], exact[c], low[c], high[c])
		}
	}
	if got[2] != exact[2] { // L17 hangs outside
		t.Errorf("%v m³h in all, started together %v", got[2], exact[2])
	}
	shares, below, above := peaks("step", limit), peaks("same", limit+slack), peaks("same", limit-slack)
	if len(shares) != 672 || len(below) != 672 {
		t.Fatalf("%d and %d instants", len(shares), len(below))
	}
	for k := range shares {
		if s := shares[k][0]; s < below[k][0]-1e-12 || s > above[k][0]+1e-12 {
			t.Errorf("instant %d: the share is %v, not between %v and %v", k, s, below[k][0], above[k][0])
		}
	}
	// without SERIES it is refused
	said := e.run(t, `SELECT COUNT(*) FROM CELLS OF (SELECT h.id, h.x, h.y, h.z, l.t FROM staggered l JOIN hall h ON h.id = l.logger) FOR EACH t WITHIN air;`)
	if !strings.Contains(said, "SERIES") {
		t.Errorf("one partition for each stamp: %s", said)
	}
}

// numbers reads a CSV answer.
func numbers(t *testing.T, text string) [][]float64 {
	t.Helper()
	rows, err := csv.NewReader(strings.NewReader(strings.TrimSpace(text))).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%q: %v", text, err)
	}
	var out [][]float64
	for _, r := range rows[1:] {
		values := make([]float64, len(r))
		for i, s := range r {
			if values[i], err = strconv.ParseFloat(s, 64); err != nil {
				t.Fatal(err)
			}
		}
		out = append(out, values)
	}
	return out
}
