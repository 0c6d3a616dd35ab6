package main

import (
	"context"
	"database/sql"
	"database/sql/driver"
	"fmt"
	"strconv"
	"strings"
	"time"

	"github.com/duckdb/duckdb-go/v2"
	_ "modernc.org/sqlite" // the driver

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

// answer is the rows of a result, values as texts that can be compared.
type answer [][]string

// engine is one of the three.
type engine interface {
	ask(ctx context.Context, q *query) (answer, error)
}

// own is nearcell.
type own struct {
	catalog *catalog.Catalog
	threads int
}

func newOwn(tables map[string]*column.Table, threads int) (*own, error) {
	o := &own{catalog.Memory(), threads}
	for name, t := range tables {
		if err := o.catalog.Put(catalog.Object{Kind: catalog.Table, Key: name, Name: name, Table: t}, false); err != nil {
			return nil, err
		}
	}
	return o, nil
}

func (o *own) ask(ctx context.Context, q *query) (answer, error) {
	tree, err := lang.ParseQuery(q.ours)
	if err != nil {
		return nil, err
	}
	notes := &note.Notes{}
	n, err := bind.Query(&bind.Env{Catalog: o.catalog, Source: &problem.Source{Name: q.name, Text: q.ours}, Notes: notes}, tree)
	if err == nil {
		n, err = plan.Optimise(n)
	}
	if err != nil {
		return nil, fmt.Errorf("%s", problem.Render(err))
	}
	t, err := exec.Collect(ctx, &exec.Env{Env: relation.Env{Notes: notes, Threads: o.threads}}, n)
	if err != nil {
		return nil, fmt.Errorf("%s", problem.Render(err))
	}
	out := make(answer, t.N)
	for i := range out {
		for c := range t.Cols {
			out[i] = append(out[i], shown(t.Cols[c].Value(i)))
		}
	}
	return out, nil
}

func shown(v column.Value) string {
	switch {
	case v.Null || v.Type == column.Null:
		return ""
	case v.Type == column.Real:
		return real(v.F)
	case v.Type == column.Text:
		return v.S
	}
	return strconv.FormatInt(v.I, 10)
}

func real(f float64) string { return strconv.FormatFloat(f, 'g', -1, 64) }

// other is a database behind database/sql.
type other struct {
	db   *sql.DB
	text func(*query) string
}

func (o *other) ask(ctx context.Context, q *query) (answer, error) {
	rows, err := o.db.QueryContext(ctx, o.text(q))
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	names, err := rows.Columns()
	if err != nil {
		return nil, err
	}
	values, at := make([]any, len(names)), make([]any, len(names))
	for i := range values {
		at[i] = &values[i]
	}
	var out answer
	for rows.Next() {
		if err := rows.Scan(at...); err != nil {
			return nil, err
		}
		row := make([]string, len(values))
		for i, v := range values {
			switch v := v.(type) {
			case nil:
			case float64:
				row[i] = real(v)
			case time.Time:
				row[i] = strconv.FormatInt(v.UnixMicro(), 10)
			case []byte:
				row[i] = string(v)
			default:
				row[i] = fmt.Sprint(v)
			}
		}
		out = append(out, row)
	}
	return out, rows.Err()
}

func newLite(tables map[string]*column.Table) (*other, error) {
	db, err := sql.Open("sqlite", ":memory:")
	if err != nil {
		return nil, err
	}
	db.SetMaxOpenConns(1)
	for name, t := range tables {
		if err := fillLite(db, name, t); err != nil {
			return nil, err
		}
	}
	return &other{db, (*query).forLite}, nil
}

var liteTypes = map[column.Type]string{column.Timestamp: "INTEGER", column.Integer: "INTEGER", column.Real: "REAL", column.Text: "TEXT"}
var duckTypes = map[column.Type]string{column.Timestamp: "TIMESTAMP", column.Integer: "BIGINT", column.Real: "DOUBLE", column.Text: "VARCHAR"}

func create(name string, t *column.Table, types map[column.Type]string) string {
	var list []string
	for _, f := range t.Schema {
		list = append(list, f.Name+" "+types[f.Type])
	}
	return "CREATE TABLE " + name + " (" + strings.Join(list, ", ") + ")"
}

// fillLite inserts a hundred rows a statement.
func fillLite(db *sql.DB, name string, t *column.Table) error {
	if _, err := db.Exec(create(name, t, liteTypes)); err != nil {
		return err
	}
	tx, err := db.Begin()
	if err != nil {
		return err
	}
	const many = 100
	row := "(" + strings.TrimSuffix(strings.Repeat("?,", len(t.Cols)), ",") + ")"
	insert := func(n int) string {
		return "INSERT INTO " + name + " VALUES " + strings.TrimSuffix(strings.Repeat(row+",", n), ",")
	}
	st, err := tx.Prepare(insert(many))
	if err != nil {
		return err
	}
	args := make([]any, 0, many*len(t.Cols))
	for i := 0; i < t.N; i++ {
		for c := range t.Cols {
			args = append(args, plain(t.Cols[c].Value(i)))
		}
		switch {
		case len(args) == cap(args):
			_, err = st.Exec(args...)
			args = args[:0]
		case i == t.N-1:
			_, err = tx.Exec(insert(len(args)/len(t.Cols)), args...)
		}
		if err != nil {
			return err
		}
	}
	return tx.Commit()
}

func plain(v column.Value) any {
	switch {
	case v.Null:
		return nil
	case v.Type == column.Real:
		return v.F
	case v.Type == column.Text:
		return v.S
	}
	return v.I
}

func newDuck(tables map[string]*column.Table, threads int) (*other, error) {
	connector, err := duckdb.NewConnector("", nil)
	if err != nil {
		return nil, err
	}
	db := sql.OpenDB(connector)
	if _, err := db.Exec(fmt.Sprintf("SET threads = %d", threads)); err != nil {
		return nil, err
	}
	for name, t := range tables {
		if _, err := db.Exec(create(name, t, duckTypes)); err != nil {
			return nil, err
		}
		if err := appendDuck(connector, name, t); err != nil {
			return nil, err
		}
	}
	return &other{db, (*query).forDuck}, nil
}

func appendDuck(connector *duckdb.Connector, name string, t *column.Table) error {
	conn, err := connector.Connect(context.Background())
	if err != nil {
		return err
	}
	defer conn.Close()
	a, err := duckdb.NewAppenderFromConn(conn, "", name)
	if err != nil {
		return err
	}
	row := make([]driver.Value, len(t.Cols))
	for i := range t.N {
		for c := range t.Cols {
			v := t.Cols[c].Value(i)
			row[c] = plain(v)
			if v.Type == column.Timestamp && !v.Null {
				row[c] = time.UnixMicro(v.I).UTC()
			}
		}
		if err := a.AppendRow(row...); err != nil {
			return err
		}
	}
	return a.Close()
}
