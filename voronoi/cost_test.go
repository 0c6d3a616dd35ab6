package voronoi

import "testing"

func TestCost(t *testing.T) {
	sphere := sets(4000)["sphere"]
	for _, k := range []struct {
		name  string
		sites []Vec
		slow  bool
	}{{"uniform", random(4000, 41), false}, {"sheet", sheet(4000, 42), false}, {"lattice", grid(15), false}, {"sphere", sphere, true}} {
		d := diagram(t, k.sites, Options{Solid: unitBox, Threads: 1})
		c := d.Cost(Volume, -1)
		if c.Slow != k.slow || !c.OneByOne || c.Cells != d.Facts().Distinct || c.Bytes < 8*int64(c.Cells) {
			t.Errorf("%s: %+v", k.name, c)
		}
		if perCell := c.Seconds / float64(c.Cells); perCell < 5e-6 || !k.slow && perCell > 50e-6 {
			t.Errorf("%s: %v s a cell", k.name, perCell)
		}
		if again := diagram(t, k.sites, Options{Solid: unitBox, Threads: 1}).Cost(Volume, -1); again != c {
			t.Errorf("%s: %+v, then %+v", k.name, c, again)
		}
		if one := d.Cost(All, 1); one.Cells != 1 || one.Seconds >= c.Seconds {
			t.Errorf("%s: one cell costs %+v", k.name, one)
		}
		if none := d.Cost(NearestFace|Bounded, -1); none.Cells != 0 || none.Seconds >= c.Seconds || none.Slow {
			t.Errorf("%s: no cell costs %+v", k.name, none)
		}
	}
}

func TestProgress(t *testing.T) {
	last, total := 0, 0
	d := diagram(t, random(1000, 43), Options{Solid: unitBox, Threads: 3, Progress: func(done, of int) {
		last, total = max(last, done), of
	}})
	measure(t, d, Volume)
	if last != 1000 || total != 1000 {
		t.Errorf("%d of %d done at the end", last, total)
	}
}
