package present

import (
	"bytes"
	"context"
	"fmt"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
)

// TestTables prints small files as tables and in the other formats:
//
//	print [as=csv] [width=40] [rows=2] [digits=3] [units]
//	CSV text; a heading such as volume [m³] gives the unit
func TestTables(t *testing.T) {
	datadriven.RunTest(t, "testdata/tables", func(t *testing.T, d *datadriven.TestData) string {
		o := Options{Units: d.HasArg("units")}
		format := "table"
		d.MaybeScanArgs(t, "as", &format)
		d.MaybeScanArgs(t, "width", &o.Width)
		d.MaybeScanArgs(t, "rows", &o.Rows)
		d.MaybeScanArgs(t, "digits", &o.Digits)
		source := &reader.Source{Name: "x.csv", Data: []byte(d.Input + "\n")}
		read, err := csv.Reader{}.Read(context.Background(), source, reader.Options{})
		if err != nil {
			return err.Error()
		}
		var out bytes.Buffer
		w, err := New(Format(format), &out, o)
		if err != nil {
			return err.Error()
		}
		if err := w.Begin(read.Table.Schema); err != nil {
			return err.Error()
		}
		b := read.Table.Batch(0, read.Table.N)
		if err := w.Batch(&b); err != nil {
			return err.Error()
		}
		rows, unwritten, err := w.End()
		if err != nil {
			return err.Error()
		}
		fmt.Fprintf(&out, "(%d rows, %d not written)\n", rows, unwritten)
		if fitted, ok := w.(Fitted); ok && len(fitted.LeftOut()) > 0 {
			fmt.Fprintf(&out, "(left out: %s)\n", strings.Join(fitted.LeftOut(), ", "))
		}
		return out.String()
	})
}
