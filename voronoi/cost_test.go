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
		few := d.Cost(Volume, 40)
		if few.Slow != (k.slow && few.OneByOne) || few.Cells != 40 || few.Bytes < 8*40 {
			t.Errorf("%s: %+v", k.name, few)
		}
		if perCell := few.Seconds / 40; !k.slow && (perCell < 5e-6 || perCell > 50e-6 || !few.OneByOne) {
			t.Errorf("%s: %+v for a few", k.name, few)
		}
		all := d.Cost(Volume, -1)
		if all.OneByOne || all.Slow || all.Cells != d.Facts().Distinct || all.Bytes < few.Bytes {
			t.Errorf("%s: %+v for all", k.name, all)
		}
		for _, again := range []Options{{Solid: unitBox, Threads: 1}, {Solid: unitBox, Threads: 5}} {
			c := diagram(t, k.sites, again).Cost(Volume, -1)
			if c.OneByOne != all.OneByOne || again.Threads == 1 && c != all {
				t.Errorf("%s: %+v, then %+v", k.name, all, c)
			}
		}
		if one := d.Cost(All, 1); one.Cells != 1 || one.Seconds >= all.Seconds || !one.OneByOne || one.Slow != k.slow {
			t.Errorf("%s: one cell costs %+v", k.name, one)
		}
		if none := d.Cost(NearestFace|Bounded, -1); none.Cells != 0 || none.Seconds >= all.Seconds || none.Slow || !none.OneByOne {
			t.Errorf("%s: no cell costs %+v", k.name, none)
		}
		small := diagram(t, k.sites, Options{Solid: unitBox, Memory: 1 << 16})
		if c := small.Cost(Volume, -1); !c.OneByOne || c.Slow != k.slow || c.Bytes >= all.Bytes {
			t.Errorf("%s: %+v with little memory", k.name, c)
		}
	}
}

// Progress never goes back, tells of the sums over the triangles, too, and ends with all.
func TestProgress(t *testing.T) {
	const n = 6000
	last, calls, early := 0, 0, 0
	d := diagram(t, random(n, 43), Options{Solid: unitBox, Threads: 3, Progress: func(done, of int) {
		if done < last || of != n {
			t.Errorf("%d of %d after %d", done, of, last)
		}
		last = done
		calls++
		if done > 0 && done <= n-n/restOfSums {
			early++
		}
	}})
	measure(t, d, Volume)
	if last != n || early < 3 {
		t.Errorf("%d of %d done at the end, %d calls, %d of them before the cells", last, n, calls, early)
	}
}
