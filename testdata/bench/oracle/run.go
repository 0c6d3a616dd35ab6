package oracle

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"time"

	_ "modernc.org/sqlite" // the other database

	"nearcell/catalog"
	col "nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// Bench is the two databases with the same tables.
type Bench struct {
	catalog *catalog.Catalog
	other   *sql.DB
}

// New fills the tables from a seed.
func New(seed uint64) (*Bench, error) {
	db, err := sql.Open("sqlite", ":memory:")
	if err != nil {
		return nil, err
	}
	db.SetMaxOpenConns(1)
	b := &Bench{catalog: catalog.Memory(), other: db}
	if _, err := db.Exec("PRAGMA case_sensitive_like = ON"); err != nil {
		return nil, err
	}
	rng := rand.New(rand.NewPCG(seed, 0))
	for i, t := range tables {
		if err := b.fill(rng, i, 4+rng.IntN(9)); err != nil {
			return nil, fmt.Errorf("%s: %w", t.name, err)
		}
	}
	return b, nil
}

func (b *Bench) fill(rng *rand.Rand, table, rows int) error {
	t := tables[table]
	ours := &col.Table{N: rows}
	var declared []string
	builders := make([]*col.Builder, len(t.columns))
	for i, name := range t.columns {
		ty := [...]col.Type{col.Integer, col.Real, col.Text}[t.types[i]]
		ours.Schema = append(ours.Schema, col.Field{Name: name, Type: ty})
		builders[i] = col.NewBuilder(ty, nil)
		declared = append(declared, name+" "+names[t.types[i]])
	}
	if _, err := b.other.Exec("CREATE TABLE " + t.name + " (" + strings.Join(declared, ", ") + ")"); err != nil {
		return err
	}
	words := []string{"a", "ab", "B", "", "Ab", "zz"}
	for range rows {
		var theirs []any
		for i, ty := range t.types {
			v := col.NullOf(ours.Schema[i].Type)
			var other any
			if rng.IntN(5) > 0 {
				switch ty {
				case integer:
					v = col.Int(int64(rng.IntN(6) - 1))
					other = v.I
				case real:
					v = col.Float(float64(rng.IntN(9)-3) / 4)
					other = v.F
				case word:
					v = col.String(words[rng.IntN(len(words))])
					other = v.S
				}
			}
			builders[i].Append(v)
			theirs = append(theirs, other)
		}
		marks := strings.TrimSuffix(strings.Repeat("?, ", len(theirs)), ", ")
		if _, err := b.other.Exec("INSERT INTO "+t.name+" VALUES ("+marks+")", theirs...); err != nil {
			return err
		}
	}
	for _, x := range builders {
		ours.Cols = append(ours.Cols, x.Finish())
	}
	return b.catalog.Put(catalog.Object{Kind: catalog.Table, Key: t.name, Name: t.name, Table: ours}, false)
}

// Ways in which our side runs a query; all must agree to the byte.
var Ways = []struct {
	Name    string
	Rules   bool
	Threads int
}{{"1 thread", true, 1}, {"2 threads", true, 2}, {"4 threads", true, 4}, {"without rules", false, 2}}

// Check runs a query on both sides. refused: the other side does not take it, or
// it has no value here (an overflow).
func (b *Bench) Check(q *Query) (refused bool, err error) {
	theirs, err := b.theirs(q.Theirs())
	if err != nil {
		return true, fmt.Errorf("the other side: %w", err)
	}
	var first []string
	for i, way := range Ways {
		ours, err := b.ours(q.Ours(), way.Rules, way.Threads)
		if !way.Rules && errors.Is(err, context.DeadlineExceeded) {
			continue // tables behind commas: without rules that is every pair of all of them
		}
		if err != nil {
			return false, fmt.Errorf("%s: %s", way.Name, problem.Render(err))
		}
		if i == 0 {
			first = ours
		} else if d := difference(first, ours); d != "" {
			return false, fmt.Errorf("%s differ from %s: %s", way.Name, Ways[0].Name, d)
		}
	}
	if !q.Ordered {
		slices.Sort(first)
		slices.Sort(theirs)
	}
	if d := difference(theirs, first); d != "" {
		return false, fmt.Errorf("%s", d)
	}
	return false, nil
}

func difference(want, got []string) string {
	for i := range max(len(want), len(got)) {
		switch {
		case i >= len(want):
			return fmt.Sprintf("row %d is too many: %s", i+1, got[i])
		case i >= len(got):
			return fmt.Sprintf("row %d is missing: %s", i+1, want[i])
		case want[i] != got[i]:
			return fmt.Sprintf("row %d is %s, want %s", i+1, got[i], want[i])
		}
	}
	return ""
}

func (b *Bench) ours(text string, rules bool, threads int) ([]string, error) {
	q, err := lang.ParseQuery(text)
	if err != nil {
		return nil, err
	}
	notes := &note.Notes{}
	n, err := bind.Query(&bind.Env{Catalog: b.catalog, Source: &problem.Source{Name: "query", Text: text}, Notes: notes}, q)
	if err == nil && rules {
		n, err = plan.Optimise(n)
	}
	if err != nil {
		return nil, err
	}
	ctx, cancel := context.WithTimeout(context.Background(), 20*time.Second)
	defer cancel()
	t, err := exec.Collect(ctx, &exec.Env{Env: relation.Env{Notes: notes, Threads: threads}}, n)
	if err != nil {
		return nil, err
	}
	rows := make([]string, t.N)
	for i := range rows {
		for c := range t.Cols {
			rows[i] += show(t.Cols[c].Value(i)) + " | "
		}
	}
	return rows, nil
}

func show(v col.Value) string {
	switch {
	case v.Null || v.Type == col.Null:
		return "NULL"
	case v.Type == col.Real:
		return number(v.F)
	case v.Type == col.Text:
		return "'" + v.S + "'"
	}
	return strconv.FormatInt(v.I, 10)
}

// number writes an INTEGER and a REAL of one value alike; quotients and means to
// 12 digits.
func number(f float64) string {
	if f == 0 {
		return "0"
	}
	if f == math.Trunc(f) && math.Abs(f) < 1e15 {
		return strconv.FormatInt(int64(f), 10)
	}
	return strconv.FormatFloat(f, 'g', 12, 64)
}

func (b *Bench) theirs(text string) ([]string, error) {
	ctx, cancel := context.WithTimeout(context.Background(), 5*time.Second)
	defer cancel()
	rows, err := b.other.QueryContext(ctx, text)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	names, err := rows.Columns()
	if err != nil {
		return nil, err
	}
	var out []string
	for rows.Next() {
		values := make([]any, len(names))
		at := make([]any, len(names))
		for i := range values {
			at[i] = &values[i]
		}
		if err := rows.Scan(at...); err != nil {
			return nil, err
		}
		s := ""
		for _, v := range values {
			switch v := v.(type) {
			case nil:
				s += "NULL"
			case int64:
				s += strconv.FormatInt(v, 10)
			case float64:
				s += number(v)
			case []byte:
				s += "'" + string(v) + "'"
			default:
				s += fmt.Sprintf("'%v'", v)
			}
			s += " | "
		}
		out = append(out, s)
	}
	return out, rows.Err()
}
