package relation

import (
	"context"
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// readCSV reads a reference file: its lines by column.
func readCSV(t testing.TB, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("../../testdata/reference/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, l := range lines[1:] {
		row := map[string]string{}
		for i, h := range lines[0] {
			row[h] = l[i]
		}
		out = append(out, row)
	}
	return out
}

func float(t testing.TB, s string) float64 {
	t.Helper()
	f, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// site is a row of a test's input.
type site struct {
	id      string // a whole number makes the column INTEGER
	x, y, z float64
	t       int64 // for FOR EACH; -1: NULL
	temp    float64
}

// table makes the input; TEXT identifiers if text is set.
func table(sites []site, text bool) *column.Table {
	s := column.Schema{{Name: "id", Type: column.Integer}, {Name: "x", Type: column.Real}, {Name: "y", Type: column.Real},
		{Name: "z", Type: column.Real}, {Name: "t", Type: column.Timestamp}, {Name: "temp", Type: column.Real}}
	if text {
		s[0].Type = column.Text
	}
	var builders []*column.Builder
	for _, f := range s {
		builders = append(builders, column.NewBuilder(f.Type, f.Unit))
	}
	for _, r := range sites {
		if text {
			builders[0].AppendText(r.id)
		} else {
			n, _ := strconv.ParseInt(r.id, 10, 64)
			builders[0].AppendInt(n)
		}
		builders[1].AppendFloat(r.x)
		builders[2].AppendFloat(r.y)
		builders[3].AppendFloat(r.z)
		if r.t < 0 {
			builders[4].AppendNull()
		} else {
			builders[4].AppendInt(r.t)
		}
		builders[5].AppendFloat(r.temp)
	}
	out := &column.Table{Schema: s, N: len(sites)}
	for _, b := range builders {
		out.Cols = append(out.Cols, b.Finish())
	}
	return out
}

func twenty(t testing.TB) []site {
	var out []site
	for _, r := range readCSV(t, "twenty.csv") {
		out = append(out, site{id: r["id"], x: float(t, r["x"]), y: float(t, r["y"]), z: float(t, r["z"]), temp: float(t, r["temp"])})
	}
	return out
}

func box(t testing.TB, x, y, z float64) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(solid.Vec{}, solid.Vec{X: x, Y: y, Z: z})
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// setup is one relation to be run.
type setup struct {
	def   *Definition
	input *column.Table
	c     Clauses
	env   *Env
	need  []string // nil: all columns
	want  []uint64
}

func newEnv() *Env {
	return &Env{Diagrams: diagram.NewStore(0), Notes: &note.Notes{}, Threads: 2}
}

func (s *setup) bound() *Bound {
	if s.env == nil {
		s.env = newEnv()
	}
	if s.c.Unit == nil {
		s.c.Unit = column.Symbol("m")
	}
	if s.c.Solid != nil && s.c.SolidName == "" {
		s.c.SolidName = "air"
	}
	b := &Bound{Def: s.def, Name: "hall", Input: s.input.Schema, ID: 0, X: 1, Y: 2, Z: 3, Clauses: s.c}
	b.Layout()
	return b
}

// run gives all rows as one table.
func (s *setup) run() (*column.Table, error) {
	b := s.bound()
	r := Request{Need: make([]bool, len(b.Columns)), Wanted: s.want}
	for i, c := range b.Columns {
		r.Need[i] = s.need == nil
		for _, n := range s.need {
			r.Need[i] = r.Need[i] || n == c.Name
		}
	}
	rows, err := b.Def.Open(b, s.env, s.input, r)
	if err != nil {
		return nil, err
	}
	out := &column.Table{Schema: b.Schema()}
	var builders []*column.Builder
	for _, c := range b.Columns {
		builders = append(builders, column.NewBuilder(c.Type, c.Unit))
	}
	err = rows.Run(context.Background(), func(batch *column.Batch) error {
		if batch.N == 0 || batch.N > BatchRows {
			panic("a batch of a size that was not agreed")
		}
		for i := range batch.Cols {
			if batch.Cols[i].N != batch.N {
				panic("a column of another length than its batch")
			}
			if r.Need[i] == (batch.Cols[i].Type == column.Null) {
				panic("a column that is needed and not there, or the other way round")
			}
			builders[i].AppendVector(&batch.Cols[i], nil)
		}
		out.N += batch.N
		return nil
	})
	if err != nil {
		return nil, err
	}
	for _, b := range builders {
		out.Cols = append(out.Cols, b.Finish())
	}
	return out, nil
}

func (s *setup) must(t testing.TB) *column.Table {
	t.Helper()
	out, err := s.run()
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// col is a column by its name.
func col(t testing.TB, tab *column.Table, name string) *column.Vector {
	t.Helper()
	for i, f := range tab.Schema {
		if f.Name == name {
			return &tab.Cols[i]
		}
	}
	t.Fatalf("there is no column %s", name)
	return nil
}

func sum(v *column.Vector) float64 {
	var s voronoi.Sum
	for _, x := range v.F[:v.N] {
		s.Add(x)
	}
	return s.Value()
}

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.12g, want %.12g", what, got, want)
	}
}

// same compares two tables to the bit.
func same(a, b *column.Table) bool {
	if a.N != b.N || len(a.Cols) != len(b.Cols) {
		return false
	}
	for c := range a.Cols {
		for i := range a.N {
			x, y := a.Cols[c].Value(i), b.Cols[c].Value(i)
			x.Unit, y.Unit = nil, nil
			if math.Float64bits(x.F) != math.Float64bits(y.F) {
				return false
			}
			x.F, y.F = 0, 0
			if x != y {
				return false
			}
		}
	}
	return true
}

func notes(e *Env) string {
	s := ""
	for _, l := range e.Notes.Lines() {
		s += l.Level.String() + ": " + l.Text + "\n"
	}
	return s
}

func shuffled(sites []site, seed uint64) []site {
	out := append([]site(nil), sites...)
	r := rand.New(rand.NewPCG(seed, 7))
	r.Shuffle(len(out), func(i, j int) { out[i], out[j] = out[j], out[i] })
	return out
}
