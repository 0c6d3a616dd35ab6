package csv

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

func form(t fataler, pattern string) *timeform.Form {
	f, err := timeform.Parse(pattern)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return f
}

func zurich(t fataler) *timeform.Zone {
	z, err := timeform.LoadZone("Europe/Zurich")
	if err != nil {
		t.Fatalf("%v", err)
	}
	return z
}

// A file that is cut into several, each with the heading, its columns in another
// order, and read as one, is the whole file again: same types, same values, in the
// same order. Its faults are the same, on lines that the cut moves.
func TestFilesMakeTheWhole(t *testing.T) {
	kinds := [][]string{{"1", "-2", "12", "err"}, {"1.5", "-.5", "7"}, {"true", "FALSE"}, {"2031-04-07", "2031-04-07T08:15:00+02:00"},
		{"L01", "L02", "007"}, {""}, {"05.04.2031 08:15", "26.10.2031 12:00", "30.03.2031 03:30"}}
	rapid.Check(t, func(t *rapid.T) {
		columns := rapid.SliceOfN(rapid.SampledFrom(kinds), 1, 5).Draw(t, "columns")
		o := reader.Options{Delimiter: ',', MaxFaults: 1000}
		if rapid.Bool().Draw(t, "with times") {
			columns = append(columns, kinds[6])
			o.Times = []reader.TimeColumn{{Column: fmt.Sprintf("c%d", len(columns)-1), Form: form(t, "DD.MM.YYYY hh:mm"), Zone: zurich(t)}}
		}
		n := rapid.IntRange(0, 30).Draw(t, "rows")
		rows := make([][]string, n)
		for i := range rows {
			for _, kind := range columns {
				rows[i] = append(rows[i], rapid.SampledFrom(kind).Draw(t, "value"))
			}
		}
		order := make([]int, len(columns))
		for i := range order {
			order[i] = i
		}
		write := func(from, to int) *reader.Source {
			var b bytes.Buffer
			for _, k := range order {
				fmt.Fprintf(&b, "c%d,", k)
			}
			for _, row := range rows[from:to] {
				b.WriteByte('\n')
				for _, k := range order {
					b.WriteString(row[k] + ",")
				}
			}
			return &reader.Source{Name: fmt.Sprintf("%d.csv", from), Data: b.Bytes()}
		}
		whole, wholeError := Reader{}.Read(context.Background(), write(0, n), o)
		var parts []*reader.Source
		for from := 0; from < n || from == 0; {
			to := min(n, from+rapid.IntRange(1, 12).Draw(t, "lines"))
			parts = append(parts, write(from, to))
			order = rapid.Permutation(order).Draw(t, "order")
			if from = to; from == 0 {
				break
			}
		}
		together, err := Reader{}.ReadFiles(context.Background(), parts, o)
		if wholeError != nil {
			sameFaults(t, wholeError, err)
			return
		}
		if err != nil {
			t.Fatalf("%v", err)
		}
		if d := column.DiffTables(together.Table, whole.Table); d != "" {
			t.Fatalf("%s", d)
		}
		if len(together.Files) != len(parts) || together.Facts.Rows != n {
			t.Fatalf("%d files, %d rows", len(together.Files), together.Facts.Rows)
		}
	})
}

func sameFaults(t *rapid.T, whole, parts error) {
	var a, b *reader.Faults
	if !errors.As(whole, &a) || !errors.As(parts, &b) || len(a.List) != len(b.List) {
		t.Fatalf("%v\nin parts: %v", whole, parts)
	}
	count := map[string]int{}
	for i := range a.List {
		count[fmt.Sprint(a.List[i].Kind, a.List[i].FieldName, a.List[i].Text)]++
		count[fmt.Sprint(b.List[i].Kind, b.List[i].FieldName, b.List[i].Text)]--
	}
	for what, n := range count {
		if n != 0 {
			t.Fatalf("%s: %d more in the whole", what, n)
		}
	}
}

// Loggers on a wall clock in Zurich, without a loss, around the end of summer time
// (01:00 UTC on 26 October 2031): in one file, one after the other or in turn, at
// any step and offset, they get their instants back.
func TestLoggersThroughTheClockChange(t *testing.T) {
	change := time.Date(2031, 10, 26, 1, 0, 0, 0, time.UTC)
	summer, winter := time.FixedZone("", 7200), time.FixedZone("", 3600)
	rapid.Check(t, func(t *rapid.T) {
		loggers := rapid.IntRange(1, 4).Draw(t, "loggers")
		step := time.Duration(rapid.IntRange(1, 60).Draw(t, "minutes")) * time.Minute
		start := change.Add(-time.Hour - time.Duration(rapid.IntRange(1, 5*3600).Draw(t, "before"))*time.Second)
		inTurn := rapid.Bool().Draw(t, "in turn")
		var lines []string
		want := map[string]int{}
		add := func(logger int, at time.Time) {
			zone := summer
			if !at.Before(change) {
				zone = winter
			}
			lines = append(lines, fmt.Sprintf("L%d,%s", logger, at.In(zone).Format("02.01.2006 15:04:05")))
			want[fmt.Sprintf("L%d %s", logger, at.Format("2006-01-02 15:04:05"))]++
		}
		end := change.Add(3 * time.Hour)
		if inTurn {
			for at := start; at.Before(end); at = at.Add(step) {
				for l := range loggers {
					add(l, at)
				}
			}
		} else {
			for l := range loggers {
				for at := start; at.Before(end); at = at.Add(step) {
					add(l, at)
				}
			}
		}
		text := "logger,t\n" + strings.Join(lines, "\n")
		r, err := Reader{}.Read(context.Background(), &reader.Source{Name: "f", Data: []byte(text)}, reader.Options{
			Times: []reader.TimeColumn{{Column: "t", Form: form(t, "DD.MM.YYYY hh:mm:ss"), Zone: zurich(t)}},
		})
		if err != nil {
			t.Fatalf("%v", err)
		}
		for i := range r.Table.N {
			want[r.Table.Cols[0].Text(i)+" "+r.Table.Cols[1].Value(i).String()]--
		}
		for row, n := range want {
			if n != 0 {
				t.Fatalf("%s: %d times too few", row, n)
			}
		}
	})
}

// FuzzFiles: whatever two files are, and with every option at once, reading them
// does not panic and gives a table that is valid, or faults with their file.
func FuzzFiles(f *testing.F) {
	f.Add([]byte("Serial: 7\nt,v\n26.10.2031 02:30,1\n26.10.2031 02:15,2\n"), []byte("Serial: 8\nv;t\n1,5;30.03.2031 02:30\n"), uint8(1))
	f.Add([]byte("x\nt,v\nUTC,°C\n26.10.2031 02:30,1\n"), []byte("\"Serial:\",\"9\nx\"\nt,v,\n"), uint8(3))
	for i, s := range seeds {
		f.Add([]byte(s), []byte(seeds[len(seeds)-1-i]), uint8(i))
	}
	f.Fuzz(func(t *testing.T, a, b []byte, how uint8) {
		o := reader.Options{MaxFaults: 4, Missing: []string{"n/a"}}
		if how&1 != 0 {
			o.Heading = 2
			o.Preamble = []reader.PreambleField{{Column: "serial", After: "Serial:"}}
		}
		if how&2 != 0 {
			o.Times = []reader.TimeColumn{{Column: "t", Form: form(t, "DD.MM.YYYY hh:mm"), Zone: zurich(t)}}
		}
		if how&4 != 0 {
			o.Encoding = reader.Encodings[how>>5&3]
		}
		if how&8 != 0 {
			o.Refused = func(int, []byte, reader.Fault) error { return nil }
		}
		sources := []*reader.Source{{Name: "a", Data: a}, {Name: "b", Data: b}}
		r, err := Reader{}.ReadFiles(context.Background(), sources, o)
		var faults *reader.Faults
		var column *reader.ColumnError
		switch {
		case errors.As(err, &faults):
			for _, x := range faults.List {
				if x.File != "a" && x.File != "b" || x.Kind == reader.NoFault {
					t.Fatalf("%+v", x)
				}
			}
		case errors.As(err, &column):
			if how&2 == 0 {
				t.Fatal(err)
			}
		case err != nil:
			t.Fatal(err)
		default:
			if err := r.Table.Validate(); err != nil {
				t.Fatal(err)
			}
			if len(r.Files) != 2 || r.Files[0].Rows+r.Files[1].Rows != r.Table.N {
				t.Fatalf("%d rows in %+v", r.Table.N, r.Files)
			}
		}
	})
}

// FuzzSniff: a guess is about the file: its heading is a line of it.
func FuzzSniff(f *testing.F) {
	for _, s := range seeds {
		f.Add([]byte(s))
	}
	f.Add([]byte("Serial:;7\nPlace:;A\n\nt;temp\n;°C\n26.10.2031 02:30;4,5\n26.10.2031 02:45;4,5\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		l := Sniff(data)
		lines := bytes.Count(data, []byte("\n")) + bytes.Count(data, []byte("\r")) + 1
		if l.Heading < 1 || l.Heading > lines || l.Delimiter == 0 || l.DecimalMark == l.Delimiter && l.DecimalMark == ',' && l.Comma != "" {
			t.Fatalf("%+v of %d lines", l, lines)
		}
	})
}

func TestSniff(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"a,b\n1,2\n", "',' '.' line 1"},
		{"t;temp\n07.04.2031 00:15;4,2\n07.04.2031 00:30;4,3\n", "';' ',' line 1"},
		{"t;temp;rh\n07.04.2031 00:15;4,2;80,1\n07.04.2031 00:30;4,3;80,2\n", "';' ',' line 1"},
		{"Serial:;7\nPlace:;A\n\nt;temp\n07.04.2031 00:15;4\n07.04.2031 00:30;4\n", "';' '.' line 4"},
		{"Serial: 7\nPlace: A, B\nt,temp\nUTC,°C\n2031-04-07,4\n2031-04-08,4\n", "',' '.' line 3"},
		{"Serial,7\nPlace,A\nt\ttemp\tnote\n1\t2\tx, y\n2\t3\tz\n", "'\\t' '.' line 3"},
		{"v\n1\n2\n", "',' '.' line 1"},
		{"name,colour\nx,red\ny,blue\n", "',' '.' line 1"},
		{"t,v,\n2031-04-07,1,\n2031-04-08,2,\n", "',' '.' line 1"},
		{"k\xfchl;v\n1;2\n", "';' '.' line 1"},
		{"", "',' '.' line 1"},
	} {
		l := Sniff([]byte(c.text))
		if got := fmt.Sprintf("%q %q line %d", l.Delimiter, l.DecimalMark, l.Heading); got != c.want {
			t.Errorf("%q: %s, wanted %s", c.text, got, c.want)
		}
	}
}

func TestKnownUnits(t *testing.T) {
	for _, u := range []string{"°C", "m", "mm", "m³/h", "µg/m3", "kPa", "%", "%RH", "ppm", "m/s", "W/m²", "mS/cm", "dB(A)", "lx", "kWh"} {
		if !KnownUnit(u) {
			t.Errorf("%s is a unit", u)
		}
	}
	for _, u := range []string{"err", "L01", "rack", "-", "", "temp", "n/a", "ok", "open"} {
		if KnownUnit(u) {
			t.Errorf("%s is no unit", u)
		}
	}
}
