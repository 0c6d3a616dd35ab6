package voronoi

import (
	"context"
	"reflect"
	"slices"
	"testing"

	"nearcell/voronoi/solid"
)

// A diagram out of its arrays is the one that was stored: the same facts, and the same
// bits of all measures, contacts and nearest sites, either way, with duplicates, sites
// outside and stretched distances.
func TestRestoredDiagramIsTheSame(t *testing.T) {
	body, err := solid.NewBox(Vec{X: 500000}, Vec{X: 500029, Y: 18, Z: 7})
	if err != nil {
		t.Fatal(err)
	}
	sites := stretchedSites(900, 5)
	sites = append(sites, sites[3], sites[3], sites[70], Vec{X: 500029, Y: 3, Z: 3})
	for _, o := range []Options{
		{}, {Solid: body}, {Solid: body, Tolerance: 0.1}, {Solid: body, Stretch: Vec{X: 1, Y: 1, Z: 4}}, {Stretch: Vec{X: 2, Y: 1, Z: 3}},
	} {
		a, err := New(sites, o)
		if err != nil {
			t.Fatal(err)
		}
		b, err := Restore(a.Store(), o)
		if err != nil {
			t.Fatal(err)
		}
		if a.Key() != b.Key() || !reflect.DeepEqual(a.Facts(), b.Facts()) {
			t.Fatalf("%+v: facts %+v became %+v", o, a.Facts(), b.Facts())
		}
		ask := func(d *Diagram) (list []any) {
			some := []int32{900, 17, 3, 250}
			for _, whole := range []bool{false, true} {
				c, went, err := d.MeasureWay(context.Background(), whole, All, nil)
				if err != nil || went != whole {
					t.Fatalf("%v, %v", went, err)
				}
				few, _, err := d.MeasureWay(context.Background(), whole, Volume|Area, some)
				if err != nil {
					t.Fatal(err)
				}
				for i, s := range some { // each cell has the bits of its way, whatever is asked beside it
					if few.Volume[i] != c.Volume[s] || few.Area[i] != c.Area[s] {
						t.Fatalf("whole %v: site %d: %v and %v", whole, s, few.Volume[i], c.Volume[s])
					}
				}
				list = append(list, c, few)
			}
			err := d.Contacts(context.Background(), some, func(site int32, c []Contact) error {
				list = append(list, slices.Clone(c))
				return nil
			})
			if err != nil {
				t.Fatal(err)
			}
			site, distance := d.Nearest(Vec{X: 500003, Y: 4, Z: 5})
			return append(list, site, distance, d.offered)
		}
		if x, y := ask(a), ask(b); !reflect.DeepEqual(x, y) {
			t.Errorf("%+v: answers differ", o)
		}
	}
}

// Arrays that do not go together are refused, not used.
func TestRestoreRefusesWhatIsNoDiagram(t *testing.T) {
	sites := stretchedSites(50, 6)
	sites = append(sites, sites[1])
	d, err := New(sites, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for name, spoil := range map[string]func(*Stored){
		"key":     func(s *Stored) { s.Key = s.Key[1:] },
		"facts":   func(s *Stored) { s.Facts = nil },
		"points":  func(s *Stored) { s.Points = s.Points[3:] },
		"order":   func(s *Stored) { s.Order = append([]int32{50}, s.Order[1:]...) },
		"cell":    func(s *Stored) { s.Cell = append([]int32{-2}, s.Cell[1:]...) },
		"site":    func(s *Stored) { s.Site = append([]int32{51}, s.Site[1:]...) },
		"count":   func(s *Stored) { s.Count = nil },
		"outside": func(s *Stored) { s.Outside = []int32{4} },
		"groups":  func(s *Stored) { s.Groups = []int32{3, 1, 2} },
		"zero":    func(s *Stored) { s.Groups = []int32{0, 0, 0} },
		"members": func(s *Stored) { s.Groups = []int32{2, 1, 51} },
	} {
		s := d.Store()
		spoil(s)
		if _, err := Restore(s, Options{}); err == nil {
			t.Errorf("%s: taken", name)
		}
	}
	if _, err := Restore(d.Store(), Options{Stretch: Vec{X: 1, Y: 1, Z: 2}}); err == nil {
		t.Error("stretched: taken")
	}
}
