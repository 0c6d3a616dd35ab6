package voronoi

import (
	"bufio"
	"context"
	"fmt"
	"os"
	"strings"
	"testing"
)

// goldenSite is a line of testdata/twenty.txt.
type goldenSite struct {
	at                     Vec
	volume, surface        float64
	faces, edges, vertices int32
}

type goldenContact struct {
	a, b int32
	area float64
}

func readGolden(t *testing.T) (sites []goldenSite, contacts []goldenContact) {
	t.Helper()
	f, err := os.Open("testdata/twenty.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for lines := bufio.NewScanner(f); lines.Scan(); {
		kind, rest, _ := strings.Cut(lines.Text(), " ")
		switch kind {
		case "site":
			var s goldenSite
			if _, err := fmt.Sscan(rest, &s.at.X, &s.at.Y, &s.at.Z, &s.volume, &s.faces, &s.edges, &s.vertices, &s.surface); err != nil {
				t.Fatal(err)
			}
			sites = append(sites, s)
		case "contact":
			var c goldenContact
			if _, err := fmt.Sscan(rest, &c.a, &c.b, &c.area); err != nil {
				t.Fatal(err)
			}
			c.a--
			c.b--
			contacts = append(contacts, c)
		}
	}
	if len(sites) != 20 || len(contacts) != 69 {
		t.Fatalf("%d sites and %d contacts", len(sites), len(contacts))
	}
	return sites, contacts
}

func places(golden []goldenSite) []Vec {
	p := make([]Vec, len(golden))
	for i, g := range golden {
		p[i] = g.at
	}
	return p
}

var goldenBox = brick{v(0, 0, 0), v(10, 8, 4)}

func TestTwentySitesInTheirBox(t *testing.T) {
	golden, wantContacts := readGolden(t)
	d := diagram(t, places(golden), Options{Solid: goldenBox})
	c := measure(t, d, All)
	touching := make([]int32, 20)
	for _, w := range wantContacts {
		touching[w.a]++
		touching[w.b]++
	}
	for i, g := range golden {
		near(t, fmt.Sprintf("volume of %d", i+1), c.Volume[i], g.volume, 5.1e-10)
		near(t, fmt.Sprintf("surface of %d", i+1), c.Area[i], g.surface, 5.1e-7)
		if c.Faces[i] != g.faces || c.Edges[i] != g.edges || c.Vertices[i] != g.vertices || !c.Shaped[i] {
			t.Errorf("site %d: %d faces, %d edges, %d vertices, want %d, %d, %d", i+1,
				c.Faces[i], c.Edges[i], c.Vertices[i], g.faces, g.edges, g.vertices)
		}
		if c.Neighbours[i] != touching[i] || !c.Bounded[i] || !c.Inside[i] || c.Multiplicity[i] != 1 {
			t.Errorf("site %d: %d neighbours, want %d", i+1, c.Neighbours[i], touching[i])
		}
		if c.Clipped[i] != (c.Faces[i] > c.Neighbours[i]) || c.Clipped[i] != (c.WallArea[i] > 0) {
			t.Errorf("site %d: clipped %v with %d faces, %d neighbours, wall area %v", i+1, c.Clipped[i], c.Faces[i], c.Neighbours[i], c.WallArea[i])
		}
	}
	near(t, "total volume", Total(c.Volume), 320, 1e-12*320)
	near(t, "total wall area", Total(c.WallArea), goldenBox.Area(), 1e-12*goldenBox.Area())
}

func TestTwentySitesContacts(t *testing.T) {
	golden, want := readGolden(t)
	d := diagram(t, places(golden), Options{Solid: goldenBox})
	type pair struct{ a, b int32 }
	areas := map[pair]float64{}
	err := d.Contacts(context.Background(), nil, func(site int32, contacts []Contact) error {
		for _, c := range contacts {
			areas[pair{site, c.Other}] = c.Area
			near(t, "distance", c.Distance, length(sub(golden[site].at, golden[c.Other].at)), 1e-14)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if len(areas) != 2*len(want) {
		t.Errorf("%d ordered contacts, want %d", len(areas), 2*len(want))
	}
	for _, w := range want {
		near(t, fmt.Sprintf("contact %d-%d", w.a+1, w.b+1), areas[pair{w.a, w.b}], w.area, 5.1e-7)
		if areas[pair{w.a, w.b}] != areas[pair{w.b, w.a}] {
			t.Errorf("contact %d-%d has two areas", w.a+1, w.b+1)
		}
	}
}

func TestTwentySitesWithoutASolid(t *testing.T) {
	golden, _ := readGolden(t)
	d := diagram(t, places(golden), Options{})
	c := measure(t, d, All)
	pairs := int32(0)
	for i := range golden {
		inner := i == 6 || i == 7 || i == 13 || i == 18 || i == 19
		if c.Bounded[i] != inner {
			t.Errorf("site %d: bounded %v", i+1, c.Bounded[i])
		}
		pairs += c.Neighbours[i]
	}
	if pairs != 2*82 {
		t.Errorf("%d ordered pairs of neighbours, want 164", pairs)
	}
	if d.Facts().Dimension != 3 {
		t.Errorf("dimension %d", d.Facts().Dimension)
	}
}
