package bind

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// schema reads "id TEXT, x REAL m, t TIMESTAMP".
func schema(text string) column.Schema {
	var out column.Schema
	for _, f := range strings.Split(text, ",") {
		words := strings.Fields(f)
		field := column.Field{Name: words[0]}
		for t := column.Null; t <= column.Point; t++ {
			if t.String() == words[1] {
				field.Type = t
			}
		}
		if len(words) > 2 {
			field.Unit = column.Symbol(words[2])
		}
		out = append(out, field)
	}
	return out
}

// tableOf is an empty table, or one with a row of numbers for each of rows.
func tableOf(s column.Schema, rows ...[]float64) *column.Table {
	t := &column.Table{Schema: s, N: len(rows)}
	for i, f := range s {
		b := column.NewBuilder(f.Type, f.Unit)
		for _, r := range rows {
			switch f.Type {
			case column.Text:
				b.AppendText(fmt.Sprintf("L%g", r[i]))
			case column.Real:
				b.AppendFloat(r[i])
			default:
				b.AppendInt(int64(r[i]))
			}
		}
		t.Cols = append(t.Cols, b.Finish())
	}
	return t
}

// depot is the catalog of the stories.
func depot(t testing.TB) *catalog.Catalog {
	t.Helper()
	c := catalog.Memory()
	put := func(o catalog.Object) {
		t.Helper()
		o.Name = o.Key
		if err := c.Put(o, false); err != nil {
			t.Fatal(err)
		}
	}
	hall := schema("id TEXT, x REAL m, y REAL m, z REAL m, temp REAL °C, area TEXT")
	put(catalog.Object{Kind: catalog.Campaign, Key: "hall", Options: catalog.CampaignOptions{Within: "air", Tolerance: 0.05},
		Table: tableOf(hall, []float64{1, 1, 2, 1, 5, 0}, []float64{2, 28, 11, 3, 6, 0})})
	put(catalog.Object{Kind: catalog.Campaign, Key: "walk", Table: tableOf(schema("id INTEGER, x REAL m, y REAL m, z REAL m, dust REAL, pass INTEGER"),
		[]float64{1, 1, 2, 1, 5, 1}, []float64{2, 3, 4, 1, 6, 1})})
	put(catalog.Object{Kind: catalog.Campaign, Key: "stretched", Options: catalog.CampaignOptions{Stretched: [3]float64{1, 1, 5}}, Table: tableOf(hall)})
	put(catalog.Object{Kind: catalog.Campaign, Key: "zoned", Options: catalog.CampaignOptions{Zones: []string{"air", "BOX (40,0,0) TO (45,5,3)"}}, Table: tableOf(hall)})
	put(catalog.Object{Kind: catalog.Table, Key: "log", Table: tableOf(schema("logger TEXT, t TIMESTAMP, temp REAL °C, co2 REAL ppm, n INTEGER, ok BOOLEAN"))})
	put(catalog.Object{Kind: catalog.Table, Key: "points", Table: tableOf(schema("id TEXT, x TEXT, y REAL m, z REAL m"))})
	put(catalog.Object{Kind: catalog.Table, Key: "mixed", Table: tableOf(schema("id TEXT, x REAL mm, y REAL m, z REAL m"))})
	put(catalog.Object{Kind: catalog.Table, Key: "Cases", Table: tableOf(schema("Temp REAL, temp REAL, \"x REAL"))})
	put(catalog.Object{Kind: catalog.Solid, Key: "air", Text: "PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5"})
	return c
}

// TestStories runs the golden stories of testdata: statement, then plan or error.
func TestStories(t *testing.T) {
	files, err := filepath.Glob("testdata/*.story")
	if err != nil || len(files) < 5 {
		t.Fatal(err, files)
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {
			c, params := depot(t), map[string]column.Value{"limit": column.Float(8), "since": {Type: column.Timestamp, I: 0}}
			datadriven.RunTest(t, file, func(t *testing.T, d *datadriven.TestData) string {
				env := &Env{Catalog: c, Params: params, Folder: "testdata", Notes: &note.Notes{},
					Source: &problem.Source{Name: "input", Text: d.Input}}
				return strings.TrimSuffix(story(t, env, d), "\n") + "\n"
			})
		})
	}
}

func story(t *testing.T, env *Env, d *datadriven.TestData) string {
	fail := func(err error) string {
		if !env.rendered(err) {
			t.Errorf("%s: this error has no place: %v", d.Pos, err)
		}
		return problem.Render(err)
	}
	switch d.Cmd {
	case "plan", "columns":
		q, err := lang.ParseQuery(d.Input)
		if err != nil {
			return "syntax: " + err.Error()
		}
		node, err := Query(env, q)
		if err != nil {
			return fail(err)
		}
		if d.Cmd == "plan" {
			return plan.Format(node) + said(env)
		}
		return columns(node.Schema()) + said(env)
	case "value":
		e, err := lang.ParseExpr(d.Input)
		if err != nil {
			return "syntax: " + err.Error()
		}
		v, err := Value(env, e)
		if err != nil {
			return fail(err)
		}
		return v.Type.String() + " " + v.String() + unit(v.Unit)
	case "solid":
		s, err := lang.ParseSolid(d.Input)
		if err != nil {
			return "syntax: " + err.Error()
		}
		text, err := solidStory(t, env, d, s)
		if err != nil {
			return fail(err)
		}
		return text
	case "position":
		e, err := lang.ParseExpr(d.Input)
		if err != nil {
			return "syntax: " + err.Error()
		}
		x, err := OverSchema(env, e, schema("east REAL m, depth REAL m, name TEXT"), "bores.csv")
		if err != nil {
			return fail(err)
		}
		return fmt.Sprintf("%s %s%s", x, x.Type(), unit(x.Unit()))
	case "view":
		name := d.CmdArgs[0].Key
		err := env.Catalog.Put(catalog.Object{Kind: catalog.View, Key: name, Name: name, Text: d.Input}, true)
		return fmt.Sprint(err)
	}
	return "unknown command"
}

// solidStory makes the solid, and once more from its canonical text.
func solidStory(t *testing.T, env *Env, d *datadriven.TestData, s lang.Solid) (string, error) {
	made, err := Solid(env, s)
	if err != nil {
		return "", err
	}
	kept, err := Keep(env, s)
	if err != nil {
		return "", err
	}
	again, err := lang.ParseSolid(lang.Print(kept.Text))
	if err != nil {
		return "", err
	}
	if twice, err := Solid(&Env{Catalog: catalog.Memory()}, again); err != nil || twice.Key() != made.Key() {
		t.Errorf("%s: the canonical text makes another solid (%v)", d.Pos, err)
	}
	return fmt.Sprintf("%.10g m³\n%s", made.Volume(), lang.Print(kept.Text)), nil
}

// rendered tells whether an error has a place in a text.
func (env *Env) rendered(err error) bool { return problem.Render(err) != err.Error() }

func unit(u *column.Unit) string {
	if u == nil {
		return ""
	}
	return " [" + u.String() + "]"
}

func columns(s column.Schema) string {
	var b strings.Builder
	for _, f := range s {
		fmt.Fprintf(&b, "%s %s%s\n", f.Name, f.Type, unit(f.Unit))
	}
	return b.String()
}

func said(env *Env) string {
	s := ""
	for _, l := range env.Notes.Lines() {
		s += l.Level.String() + ": " + l.Text + "\n"
	}
	return s
}

// Numbers in canonical texts read back to the same bits.
func TestLiteralNumber(t *testing.T) {
	for _, f := range []float64{0, 1, -1, 0.1, 7.5, 1e300, -1e-300, math.Pi, math.MaxFloat64, math.SmallestNonzeroFloat64, 1 << 53, 123456789012345680000000000} {
		text := lang.Print(literalNumber(f, lang.At{}))
		e, err := lang.ParseExpr(text)
		if err != nil {
			t.Fatal(text, err)
		}
		got, err := newBinder(&Env{}).real(e, "a number")
		if err != nil || got != f {
			t.Errorf("%v is written %s and read as %v (%v)", f, text, got, err)
		}
	}
}
