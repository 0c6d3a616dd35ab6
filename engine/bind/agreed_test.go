package bind_test

import (
	"context"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// The queries of testdata/agreed*.txt were written at random and answered alike by
// this program and by SQLite 3 (testdata/bench/oracle records them). Each gives its
// answer with and without the rules of the planner and with 1, 2 and 4 threads.
func TestAgreedAnswers(t *testing.T) { agreed(t, "testdata/agreed.txt", 250) }

// Windows, and questions in the shapes of collections of test questions.
func TestAgreedAnswersOfOtherShapes(t *testing.T) { agreed(t, "testdata/agreed-shapes.txt", 600) }

func agreed(t *testing.T, file string, least int) {
	c := catalog.Memory()
	asked := 0
	datadriven.RunTest(t, file, func(t *testing.T, d *datadriven.TestData) string {
		if d.Cmd == "table" {
			putRows(t, c, d)
			return d.Expected
		}
		asked++
		first := agreedRows(t, c, d, true, 1)
		for _, threads := range []int{2, 4} {
			if again := agreedRows(t, c, d, true, threads); !slices.Equal(first, again) {
				t.Errorf("%s: %d threads give\n%s", d.Pos, threads, strings.Join(again, "\n"))
			}
		}
		if plain := agreedRows(t, c, d, false, 2); !slices.Equal(first, plain) {
			t.Errorf("%s: without the rules\n%s", d.Pos, strings.Join(plain, "\n"))
		}
		if d.Cmd == "any-order" {
			slices.Sort(first)
		}
		if len(first) == 0 {
			return ""
		}
		return strings.Join(first, "\n") + "\n"
	})
	if asked < least {
		t.Errorf("only %d queries were asked", asked)
	}
}

// putRows makes a table of the rows written in a story; a number with a point
// makes its column REAL.
func putRows(t *testing.T, c *catalog.Catalog, d *datadriven.TestData) {
	names := strings.Fields(d.Input)
	lines := strings.Split(strings.TrimSpace(d.Expected), "\n")
	table := &column.Table{N: len(lines)}
	for i, name := range names {
		ty := column.Integer
		var cells []string
		for _, line := range lines {
			cell := strings.Split(line, " | ")[i]
			cells = append(cells, cell)
			switch {
			case strings.HasPrefix(cell, "'"):
				ty = column.Text
			case strings.Contains(cell, "."):
				ty = column.Real
			}
		}
		b := column.NewBuilder(ty, nil)
		for _, cell := range cells {
			f, err := strconv.ParseFloat(cell, 64)
			switch {
			case cell == "NULL":
				b.Append(column.NullOf(ty))
			case ty == column.Text:
				b.AppendText(strings.Trim(cell, "'"))
			case err != nil:
				t.Fatal(err)
			case ty == column.Real:
				b.AppendFloat(f)
			default:
				b.AppendInt(int64(f))
			}
		}
		table.Schema = append(table.Schema, column.Field{Name: name, Type: ty})
		table.Cols = append(table.Cols, b.Finish())
	}
	key := d.CmdArgs[0].Key
	if err := c.Put(catalog.Object{Kind: catalog.Table, Key: key, Name: key, Table: table}, false); err != nil {
		t.Fatal(err)
	}
}

func agreedRows(t *testing.T, c *catalog.Catalog, d *datadriven.TestData, rules bool, threads int) []string {
	q, err := lang.ParseQuery(d.Input)
	if err != nil {
		t.Fatalf("%s: %v", d.Pos, err)
	}
	notes := &note.Notes{}
	n, err := bind.Query(&bind.Env{Catalog: c, Source: &problem.Source{Name: "query", Text: d.Input}, Notes: notes}, q)
	if err == nil && rules {
		n, err = plan.Optimise(n)
	}
	var out *column.Table
	if err == nil {
		out, err = exec.Collect(context.Background(), &exec.Env{Env: relation.Env{Notes: notes, Threads: threads}}, n)
	}
	if err != nil {
		t.Fatalf("%s: %s", d.Pos, problem.Render(err))
	}
	var rows []string
	for i := range out.N {
		var cells []string
		for k := range out.Cols {
			cells = append(cells, agreedCell(out.Cols[k].Value(i)))
		}
		rows = append(rows, strings.Join(cells, " | "))
	}
	return rows
}

// agreedCell writes numbers as the recorder does: whole ones alike whatever their
// type, others to 12 digits.
func agreedCell(v column.Value) string {
	switch {
	case v.Null || v.Type == column.Null:
		return "NULL"
	case v.Type == column.Text:
		return "'" + v.S + "'"
	case v.Type == column.Real && v.F == math.Trunc(v.F):
		return strconv.FormatInt(int64(v.F), 10)
	case v.Type == column.Real:
		return strconv.FormatFloat(v.F, 'g', 12, 64)
	}
	return strconv.FormatInt(v.I, 10)
}
