package csv

import (
	"bytes"
	"context"
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/reader"
)

// readings is a file of n rows and six columns, as a campaign's are.
func readings(n int) []byte {
	r := rand.New(rand.NewPCG(1, 2))
	var b bytes.Buffer
	b.WriteString("logger,t,x,y,temp [°C],note\n")
	for i := range n {
		fmt.Fprintf(&b, "L%02d,2031-04-%02d %02d:%02d:00,%.3f,%.3f,%.2f,%s\n", i%54+1, i/96/54%28+1, i/4%24, i%4*15,
			30*r.Float64(), 18*r.Float64(), 2+6*r.Float64(), []string{"", "dock", "\"aisle, north\""}[i%3])
	}
	return b.Bytes()
}

func benchmarkRead(b *testing.B, data []byte, o reader.Options) {
	src := &reader.Source{Name: "f", Data: data}
	b.SetBytes(int64(len(data)))
	b.ReportAllocs()
	for b.Loop() {
		r, err := Reader{}.Read(context.Background(), src, o)
		if err != nil || r.Table.N == 0 {
			b.Fatal(err)
		}
	}
}

func BenchmarkRead36k(b *testing.B)  { benchmarkRead(b, readings(36_288), reader.Options{}) }
func BenchmarkRead100k(b *testing.B) { benchmarkRead(b, readings(100_000), reader.Options{}) }

func BenchmarkRead100kMissing(b *testing.B) {
	benchmarkRead(b, readings(100_000), reader.Options{Missing: []string{"n/a", "-999"}})
}

func BenchmarkRead100kSites(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	var w bytes.Buffer
	w.WriteString("id,x,y,z,v\n")
	for i := range 100_000 {
		fmt.Fprintf(&w, "%d,%v,%v,%v,%v\n", i, r.Float64(), r.Float64(), r.Float64(), r.NormFloat64())
	}
	benchmarkRead(b, w.Bytes(), reader.Options{})
}

// Hostile files must not take more than their size's share of time: a million
// bytes of each shape.
func BenchmarkHostile(b *testing.B) {
	const n = 1 << 20
	for name, data := range map[string][]byte{
		"quotes":        bytes.Repeat([]byte(`"`), n),
		"quote lines":   bytes.Repeat([]byte("\"\"\"\n"), n/4),
		"open quotes":   append([]byte("a,b\n"), bytes.Repeat([]byte("1,\"x\n"), n/5)...),
		"commas":        bytes.Repeat([]byte(","), n),
		"same headings": bytes.Repeat([]byte("a,"), n/2),
		"wide faults":   append(append(append([]byte("h0"), wide(n/20)...), '\n'), bytes.Repeat([]byte("x,"), n/20)...),
		"one field":     bytes.Repeat([]byte("9"), n),
		"short lines":   bytes.Repeat([]byte("\n1"), n/2),
		"faulty lines":  append([]byte("a,b\n"), bytes.Repeat([]byte("1\n"), n/2)...),
		"bad bytes":     append([]byte("a,b\n"), bytes.Repeat([]byte("1,\xff\n"), n/4)...),
	} {
		b.Run(name, func(b *testing.B) {
			src := &reader.Source{Name: "f", Data: data}
			b.SetBytes(int64(len(data)))
			for b.Loop() {
				Reader{}.Read(context.Background(), src, reader.Options{})
			}
		})
	}
}

// wide is n further headings.
func wide(n int) []byte {
	var b bytes.Buffer
	for i := range n {
		fmt.Fprintf(&b, ",h%d", i+1)
	}
	return b.Bytes()
}

// BenchmarkReadLog is a numeric log as loggers write it: a time and six numbers a row.
func BenchmarkReadLog(b *testing.B) {
	r := rand.New(rand.NewPCG(3, 4))
	var w bytes.Buffer
	w.WriteString("t,temp,rh,co2,dust,x,y\n")
	for i := range 300_000 {
		fmt.Fprintf(&w, "2031-04-%02d %02d:%02d:%02d,%.2f,%.1f,%d,%.4f,%.3f,%.3f\n", i/86400%28+1, i/3600%24, i/60%60, i%60,
			2+6*r.Float64(), 100*r.Float64(), 400+r.IntN(900), r.Float64(), 30*r.Float64(), 18*r.Float64())
	}
	for _, threads := range []int{1, 2} {
		b.Run(fmt.Sprintf("threads=%d", threads), func(b *testing.B) { benchmarkRead(b, w.Bytes(), reader.Options{Threads: threads}) })
	}
}
