package csv

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/reader"
)

// told is all that comes of a reading: the table, the facts, the faults, the lines set aside.
func told(data string, threads int, refuse bool) string {
	var set strings.Builder
	o := reader.Options{Threads: threads, Missing: []string{"n/a"}, MaxFaults: 4}
	if refuse {
		o.Refused = func(line int, raw []byte, f reader.Fault) error {
			fmt.Fprintf(&set, "%d %q %v\n", line, raw, f)
			return nil
		}
	}
	r, err := Reader{}.Read(context.Background(), &reader.Source{Name: "f", Data: []byte(data)}, o)
	if err != nil {
		if f, ok := err.(*reader.Faults); ok {
			return fmt.Sprintf("%+v", *f) + set.String()
		}
		return err.Error()
	}
	var b strings.Builder
	for i := range r.Table.Cols {
		c := &r.Table.Cols[i]
		if err := c.Validate(); err != nil {
			return "invalid: " + err.Error()
		}
		fmt.Fprintln(&b, r.Table.Schema[i].Name, c.Type, c.N, c.I, c.F, c.C, c.Bits, c.Valid)
		if c.Dict != nil {
			fmt.Fprintf(&b, "%q\n", c.Dict.Texts)
		}
	}
	return b.String() + fmt.Sprintf("%+v %+v\n", r.Facts, r.Files) + set.String()
}

// What comes of a file is the same however it is cut and by how many threads it is read.
func TestChunks(t *testing.T) {
	usual := chunkBytes
	defer func() { chunkBytes = usual }()
	piece := rapid.SampledFrom([]string{"1", "2.5", "x", "", "n/a", "nan", "true", "2031-04-07 08:15:00", "07.04.2031", "\"a\"", "\"a\nb\"", "\"a\r\nb,c\"", "\"\"", "\"x\"\"y\n\n\"",
		"\"\n", "x\"", "\"a\"b", "007", "1,5", "\x00", "\xff", "-0", "99999999999999999999", "1,2,3"})
	brk := rapid.SampledFrom([]string{"\n", "\n", "\n", "\r\n", "\r", "\n\n", "\n \n"})
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		b.WriteString("a,b" + rapid.SampledFrom([]string{"", "", "", ",", ",c"}).Draw(t, "more") + "\n")
		plain := rapid.Bool().Draw(t, "plain")
		for range rapid.IntRange(0, 60).Draw(t, "rows") {
			if plain {
				b.WriteString(rapid.SampledFrom([]string{"1,2", "3,", "4,\"x\ny\"", "5,z", "\"\",7", "6,n/a"}).Draw(t, "row"))
			} else {
				b.WriteString(piece.Draw(t, "a") + "," + piece.Draw(t, "b"))
			}
			b.WriteString(brk.Draw(t, "break"))
		}
		refuse := rapid.Bool().Draw(t, "refuse")
		chunkBytes = usual
		want := told(b.String(), 1, refuse)
		chunkBytes = rapid.IntRange(1, 40).Draw(t, "chunk")
		for _, threads := range []int{1, 3} {
			if got := told(b.String(), threads, refuse); got != want {
				t.Fatalf("in chunks of %d bytes, by %d threads %q gives\n%s\nwant\n%s", chunkBytes, threads, b.String(), got, want)
			}
		}
	})
}

// The quick way to a number gives the number, or leaves it to the slow one.
func TestQuickReal(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`[+-]?[0-9]{0,17}(\.[0-9]{0,20})?`).Draw(t, "text")
		if text == "" {
			return
		}
		f, ok := quickReal([]byte(text), '.')
		want, err := strconv.ParseFloat(text, 64)
		if ok && (err != nil || math.Float64bits(f) != math.Float64bits(want)) {
			t.Fatalf("%s is %v, want %v", text, f, want)
		}
		if digits := strings.Trim(text, "+-."); err == nil && len(digits) <= 15 && !ok {
			t.Fatalf("%s is left to the slow way", text)
		}
	})
	for _, text := range []string{"-", "+", ".", "-.", "1e5", "1.2.3", "1 ", "nan"} {
		if _, ok := quickReal([]byte(text), '.'); ok {
			t.Errorf("%q is taken for a number", text)
		}
	}
}

// A reading that is stopped ends.
func TestStopped(t *testing.T) {
	ctx, stop := context.WithCancel(context.Background())
	n := 0
	o := reader.Options{Threads: 2, Progress: func(done, total int64) {
		if n++; n == 3 {
			stop()
		}
	}}
	usual := chunkBytes
	defer func() { chunkBytes = usual }()
	chunkBytes = 4096
	_, err := Reader{}.Read(ctx, &reader.Source{Name: "f", Data: readings(5000)}, o)
	if err != context.Canceled {
		t.Errorf("stopped after three steps: %v", err)
	}
}
