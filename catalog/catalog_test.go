package catalog

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"sort"
	"sync"
	"testing"
	"time"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/catalog/store"
)

func numbers(n int) *column.Table {
	v := column.New(column.Real, column.Symbol("°C"), n)
	for i := range v.F {
		v.F[i] = float64(n) + 0.5
	}
	return &column.Table{N: n, Cols: []column.Vector{v},
		Schema: column.Schema{{Name: "temp", Type: column.Real, Unit: column.Symbol("°C"), Meaning: "air temperature"}}}
}

// hall is a campaign with everything an object can have.
func hall() Object {
	when := time.Date(2031, 4, 7, 8, 15, 0, 250_000_000, time.UTC)
	return Object{
		Kind: Campaign, Key: "hall", Name: "Hall", Table: numbers(54),
		Options: CampaignOptions{LengthUnit: "m", Within: "air", Zones: []string{"a", "b"}, Stretched: [3]float64{1, 1, 5},
			Duplicates: "MEAN", Tolerance: 0.05},
		Sources: []SourceFile{{Path: "sites.csv", SHA256: "ab12", Size: 1 << 40, ModTime: when, Rows: 54}},
		Notes:   []string{"t has no zone – taken as UTC"},
		Created: when,
	}
}

func folder(t testing.TB) string { return filepath.Join(t.TempDir(), "catalog") }

func open(t testing.TB, path string) *Catalog {
	t.Helper()
	c, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { c.Close() })
	return c
}

// both runs a test on a catalog in memory and on one in a folder.
func both(t *testing.T, f func(t *testing.T, c *Catalog)) {
	t.Run("memory", func(t *testing.T) { f(t, Memory()) })
	t.Run("folder", func(t *testing.T) { f(t, open(t, folder(t))) })
}

// same compares all that is kept of an object, and its table.
func same(t testing.TB, got *Object, want Object) {
	t.Helper()
	g, w := *got, want
	g.Table, w.Table, g.key, w.key = nil, nil, nil, nil
	w.Rows = 0
	if want.Table != nil {
		w.Rows = want.Table.N
	}
	if !reflect.DeepEqual(g, w) {
		t.Errorf("got  %+v\nwant %+v", g, w)
	}
	switch {
	case (got.Table == nil) != (want.Table == nil):
		t.Errorf("%s: table there: %v", want.Key, got.Table != nil)
	case want.Table != nil:
		if d := column.DiffTables(got.Table, want.Table); d != "" {
			t.Errorf("%s: %s", want.Key, d)
		}
	}
}

func TestEverythingIsKept(t *testing.T) {
	air := Object{Kind: Solid, Key: "air", Name: "air", Text: "BOX (0, 0, 0) TO (30, 18, 7.5)", Created: time.Unix(0, 0).UTC()}
	path := folder(t)
	c := open(t, path)
	for _, o := range []Object{hall(), air} {
		if err := c.Put(o, false); err != nil {
			t.Fatal(err)
		}
	}
	for _, c := range []*Catalog{c, open(t, path)} {
		for _, want := range []Object{hall(), air} {
			got, err := c.Get(want.Key)
			if err != nil {
				t.Fatal(err)
			}
			same(t, got, want)
			if want := want; got.ContentKey() != want.ContentKey() {
				t.Errorf("%s: the content key has changed", want.Key)
			}
		}
	}
}

func TestErrors(t *testing.T) {
	both(t, func(t *testing.T, c *Catalog) {
		var none *ErrNoSuch
		var exists *ErrExists
		if _, err := c.Get("hall"); !errors.As(err, &none) || none.Key != "hall" {
			t.Errorf("Get of nothing: %v", err)
		}
		if err := c.Drop(Campaign, "hall"); !errors.As(err, &none) || none.Found != 0 {
			t.Errorf("Drop of nothing: %v", err)
		}
		if err := c.Put(hall(), false); err != nil {
			t.Fatal(err)
		}
		if err := c.Put(hall(), false); !errors.As(err, &exists) || exists.Kind != Campaign || exists.Name != "Hall" {
			t.Errorf("Put twice: %v", err)
		}
		other := Object{Kind: View, Key: "hall", Name: "HALL", Text: "SELECT 1"}
		if err := c.Put(other, true); !errors.As(err, &exists) || exists.Kind != Campaign {
			t.Errorf("Put of another kind: %v", err)
		}
		if err := c.Drop(View, "hall"); !errors.As(err, &none) || none.Found != Campaign || none.Kind != View {
			t.Errorf("Drop of another kind: %v", err)
		}
		for _, bad := range []Object{{Kind: View}, {Key: "x"}, {Kind: View, Key: "x", Text: "\xff"}} {
			if c.Put(bad, false) == nil {
				t.Errorf("%+v was put", bad)
			}
		}
		broken := hall()
		broken.Key, broken.Table.N = "broken", 55
		if c.Put(broken, false) == nil {
			t.Error("a table whose columns are too short was put")
		}
		got, err := c.Get("hall")
		if err != nil {
			t.Fatal(err)
		}
		same(t, got, hall())
		if err := c.Drop(Campaign, "hall"); err != nil {
			t.Fatal(err)
		}
		if list, err := c.List(); err != nil || len(list) != 0 {
			t.Errorf("%v, %v", list, err)
		}
	})
}

// A look, or a Drop of nothing, does not make the folder; the first change does.
func TestFolderIsMadeByTheFirstChange(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a", "b")
	c := open(t, path)
	c.Get("x")
	c.List()
	c.Drop(Table, "x")
	if _, err := os.Stat(path); !errors.Is(err, os.ErrNotExist) {
		t.Fatal("the folder was made")
	}
	if err := c.Put(hall(), false); err != nil {
		t.Fatal(err)
	}
	if _, err := open(t, path).Get("hall"); err != nil {
		t.Error(err)
	}
}

// Whatever is done, a catalog holds what a map would, in memory and in a folder,
// whether or not it is opened anew in between.
func TestAgainstMap(t *testing.T) {
	base := t.TempDir()
	n := 0
	rapid.Check(t, func(rt *rapid.T) {
		n++
		path := filepath.Join(base, fmt.Sprint(n))
		inFolder := rapid.Bool().Draw(rt, "in a folder")
		c := Memory()
		if inFolder {
			var err error
			if c, err = Open(path); err != nil {
				rt.Fatal(err)
			}
		}
		defer func() { c.Close() }()
		model := map[string]Object{}
		key := rapid.SampledFrom([]string{"a", "b", "Ö l"})
		kind := rapid.SampledFrom([]Kind{Campaign, Table, Solid, View})
		for range rapid.IntRange(1, 6).Draw(rt, "steps") {
			k, kd := key.Draw(rt, "key"), kind.Draw(rt, "kind")
			old, there := model[k]
			switch rapid.IntRange(0, 3).Draw(rt, "what") {
			case 0, 1:
				replace := rapid.Bool().Draw(rt, "replace")
				o := Object{Kind: kd, Key: k, Name: "N" + k, Created: time.Unix(7, 0).UTC()}
				if kd == Campaign || kd == Table {
					o.Table = numbers(rapid.IntRange(0, 70).Draw(rt, "rows"))
				} else {
					o.Text = rapid.StringN(0, 5, -1).Draw(rt, "text")
				}
				want := !there || replace && old.Kind == kd
				if err := c.Put(o, replace); (err == nil) != want {
					rt.Fatalf("Put: %v", err)
				}
				if want {
					model[k] = o
				}
			case 2:
				want := there && old.Kind == kd
				if err := c.Drop(kd, k); (err == nil) != want {
					rt.Fatalf("Drop: %v", err)
				}
				if want {
					delete(model, k)
				}
			case 3:
				if inFolder {
					c.Close()
					var err error
					if c, err = Open(path); err != nil {
						rt.Fatal(err)
					}
				}
			}
		}
		for k, want := range model {
			got, err := c.Get(k)
			if err != nil {
				rt.Fatal(err)
			}
			same(t, got, want)
		}
		for _, kinds := range [][]Kind{nil, {Table}, {Campaign, View}} {
			var want, got []string
			for _, o := range model {
				if len(kinds) == 0 || o.Kind == kinds[0] || o.Kind == kinds[len(kinds)-1] {
					want = append(want, o.Key)
				}
			}
			sort.Strings(want)
			list, err := c.List(kinds...)
			if err != nil {
				rt.Fatal(err)
			}
			for _, o := range list {
				got = append(got, o.Key)
				if o.Table != nil || model[o.Key].Table != nil && o.Rows != model[o.Key].Table.N {
					rt.Fatalf("in the list: %+v", o)
				}
			}
			if fmt.Sprint(got) != fmt.Sprint(want) {
				rt.Fatalf("List(%v) = %v, want %v", kinds, got, want)
			}
		}
	})
}

// An object that was got stays as it was when another program replaces it.
func TestGotStaysGood(t *testing.T) {
	path := folder(t)
	a, b := open(t, path), open(t, path)
	if err := a.Put(hall(), false); err != nil {
		t.Fatal(err)
	}
	held, err := b.Get("hall")
	if err != nil {
		t.Fatal(err)
	}
	if again, _ := b.Get("hall"); again != held {
		t.Error("the same object was read twice")
	}
	next := hall()
	next.Table = numbers(60)
	if err := a.Put(next, true); err != nil {
		t.Fatal(err)
	}
	same(t, held, hall())
	got, err := b.Get("hall")
	if err != nil {
		t.Fatal(err)
	}
	same(t, got, next)
	if got.ContentKey() == held.ContentKey() {
		t.Error("other values, same content key")
	}
}

// Damage is an error that names the file; the object can be listed, replaced
// and dropped all the same.
func TestDamagedTable(t *testing.T) {
	path := folder(t)
	if err := open(t, path).Put(hall(), false); err != nil {
		t.Fatal(err)
	}
	names, err := filepath.Glob(filepath.Join(path, "columns", "*.arrow"))
	if err != nil || len(names) != 1 {
		t.Fatalf("%v, %v", names, err)
	}
	if err := os.Truncate(names[0], 100); err != nil {
		t.Fatal(err)
	}
	c := open(t, path)
	var damaged *store.DamagedError
	if _, err := c.Get("hall"); !errors.As(err, &damaged) || damaged.Path != names[0] {
		t.Errorf("%v", err)
	}
	if list, err := c.List(Campaign); err != nil || len(list) != 1 || list[0].Rows != 54 {
		t.Errorf("%v, %v", list, err)
	}
	if err := c.Put(hall(), true); err != nil {
		t.Fatal(err)
	}
	got, err := c.Get("hall")
	if err != nil {
		t.Fatal(err)
	}
	same(t, got, hall())
}

func TestManyReaders(t *testing.T) {
	path := folder(t)
	c := open(t, path)
	for i := range 4 {
		o := hall()
		o.Key = fmt.Sprint("hall", i)
		if err := c.Put(o, false); err != nil {
			t.Fatal(err)
		}
	}
	c = open(t, path)
	var all sync.WaitGroup
	for g := range 8 {
		all.Add(1)
		go func() {
			defer all.Done()
			for i := range 4 {
				o, err := c.Get(fmt.Sprint("hall", (g+i)%4))
				if err != nil || o.Table.Cols[0].F[53] != 54.5 || o.ContentKey() == [16]byte{} {
					t.Errorf("%v", err)
				}
			}
		}()
	}
	all.Wait()
}
