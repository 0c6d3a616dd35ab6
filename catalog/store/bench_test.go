package store

import (
	"bytes"
	"context"
	"fmt"
	"path/filepath"
	"testing"

	"nearcell/catalog/column"
)

// million is a table of a million rows with a column of each common type.
func million() *column.Table {
	const n = 1_000_000
	t := &column.Table{N: n}
	for _, typ := range []column.Type{column.Integer, column.Real, column.Text, column.Timestamp} {
		b := column.NewBuilder(typ, nil)
		b.Grow(n)
		for i := range n {
			switch {
			case i%100 == 7:
				b.AppendNull()
			case typ == column.Real:
				b.AppendFloat(float64(i) / 3)
			case typ == column.Text:
				b.AppendText(fmt.Sprint("L", i%54))
			default:
				b.AppendInt(int64(i))
			}
		}
		t.Cols = append(t.Cols, b.Finish())
		t.Schema = append(t.Schema, column.Field{Name: typ.String(), Type: typ})
	}
	return t
}

func BenchmarkEncodeMillion(b *testing.B) {
	t := million()
	var w bytes.Buffer
	for b.Loop() {
		w.Reset()
		if err := Encode(&w, t); err != nil {
			b.Fatal(err)
		}
	}
	b.SetBytes(int64(w.Len()))
}

// A table is checked and opened; the second figure is for a table whose check is
// left out, which is what the mapping alone costs.
func BenchmarkOpenMillion(b *testing.B) {
	path := filepath.Join(b.TempDir(), "catalog")
	put(b, open(b, path), "hall", million())
	b.Run("checked", func(b *testing.B) {
		for b.Loop() {
			d, err := Open(path)
			if err != nil {
				b.Fatal(err)
			}
			if _, t, _, err := d.FindTable("hall"); err != nil || t.N != 1_000_000 {
				b.Fatal(err)
			}
			d.Close()
		}
	})
	b.Run("mapped", func(b *testing.B) {
		d := open(b, path)
		rec, _, _ := d.Find("hall")
		for b.Loop() {
			data, unmap, err := mapFile(d.tablePath(rec.File.Name))
			if err != nil {
				b.Fatal(err)
			}
			if _, err := Decode(data); err != nil {
				b.Fatal(err)
			}
			unmap()
		}
	})
}

func BenchmarkChange(b *testing.B) {
	d := open(b, filepath.Join(b.TempDir(), "catalog"))
	for b.Loop() {
		if err := d.Change(context.Background(), func(tx *Tx) error { return tx.Put("view", "SELECT 1", nil) }); err != nil {
			b.Fatal(err)
		}
	}
}
