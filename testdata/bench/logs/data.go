package main

import (
	"fmt"
	"math"
	"math/rand/v2"

	"nearcell/catalog/column"
)

// sites is how many loggers there are; each gives one row for an instant.
const sites = 1000

// rounds of a quarter of an hour, in microseconds.
const quarter = int64(15 * 60 * 1e6)

// log is the rows: an instant, the logger's name, its number, and a temperature in
// steps of 0.01 of which 1 % is missing. The loggers of an instant come in an order
// of its own, as they do from a gateway.
func log(rows int) *column.Table {
	rng := rand.New(rand.NewPCG(54, 15))
	t := &column.Table{N: rows, Schema: column.Schema{
		{Name: "t", Type: column.Timestamp}, {Name: "logger", Type: column.Text},
		{Name: "site", Type: column.Integer}, {Name: "temp", Type: column.Real}}}
	for _, f := range t.Schema {
		t.Cols = append(t.Cols, column.New(f.Type, nil, rows))
	}
	dict := &column.Dict{}
	for i := range sites {
		dict.Texts = append(dict.Texts, name(i))
	}
	t.Cols[1].Dict = dict
	const start = int64(1932998400e6) // 2031-04-03 00:00
	order := rng.Perm(sites)
	for i := range rows {
		if i%sites == 0 {
			rng.Shuffle(sites, func(a, b int) { order[a], order[b] = order[b], order[a] })
		}
		s := order[i%sites]
		instant := int64(i / sites)
		t.Cols[0].I[i] = start + instant*quarter
		t.Cols[1].C[i] = uint32(s)
		t.Cols[2].I[i] = number(s)
		if rng.IntN(100) == 0 {
			t.Cols[3].SetNull(i)
			continue
		}
		day := 1.5 * math.Sin(2*math.Pi*float64(instant%96)/96)
		t.Cols[3].F[i] = math.Round((5+day+rng.NormFloat64()*1.2+float64(s%7)*0.1)*100)/100 + 0 // no -0: others may print it
	}
	return t
}

func name(s int) string { return fmt.Sprintf("L%04d", s) }

// number is a logger's number: not 0 to 999, so that nobody gets the index for
// nothing.
func number(s int) int64 { return 20_000 + 17*int64(s) }

// places is the table of the sites with the share of the space that is each one's.
func places() *column.Table {
	rng := rand.New(rand.NewPCG(7, 7))
	t := &column.Table{N: sites, Schema: column.Schema{
		{Name: "id", Type: column.Text}, {Name: "site", Type: column.Integer}, {Name: "volume", Type: column.Real}}}
	for _, f := range t.Schema {
		t.Cols = append(t.Cols, column.New(f.Type, nil, sites))
	}
	dict := &column.Dict{}
	for k, s := range rng.Perm(sites) {
		dict.Texts = append(dict.Texts, name(s))
		t.Cols[0].C[k] = uint32(k)
		t.Cols[1].I[k] = number(s)
		t.Cols[2].F[k] = 40 + 30*rng.Float64()
	}
	t.Cols[0].Dict = dict
	return t
}
