package store

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"nearcell/catalog/column"
)

// count is a table of n rows.
func count(n int) *column.Table {
	v := column.New(column.Integer, nil, n)
	for i := range v.I {
		v.I[i] = int64(n)
	}
	return &column.Table{N: n, Cols: []column.Vector{v}, Schema: column.Schema{{Name: "n", Type: column.Integer}}}
}

func files(t *testing.T, path string) []string {
	t.Helper()
	var names []string
	for _, folder := range []string{path, filepath.Join(path, columnsName)} {
		entries, err := os.ReadDir(folder)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range entries {
			names = append(names, e.Name())
		}
	}
	return names
}

var errCrash = errors.New("crash")

// A change that stops dead after any of its steps leaves the old state or the
// new one, and nothing behind after the next change.
func TestCrash(t *testing.T) {
	steps := []string{"table written", "table renamed", "manifest written", "manifest renamed"}
	for i, step := range steps {
		t.Run(step, func(t *testing.T) {
			path := filepath.Join(t.TempDir(), "catalog")
			d := open(t, path)
			put(t, d, "hall", count(10))
			put(t, d, "gone", count(5))

			// A program that dies leaves its lock to the system; here the deferred
			// unlocking stands for that, and the panic for the death.
			d.step = func(s string) {
				if s == step {
					panic(errCrash)
				}
			}
			func() {
				defer func() {
					if p := recover(); p != errCrash {
						t.Fatalf("it did not stop: %v", p)
					}
				}()
				d.Change(context.Background(), func(tx *Tx) error {
					tx.Delete("gone")
					return tx.Put("hall", "new", count(20))
				})
			}()

			after := open(t, path)
			want, goneThere := 10, true
			if i == len(steps)-1 {
				want, goneThere = 20, false
			}
			if got := table(t, after, "hall"); got.N != want || got.Cols[0].I[0] != int64(want) {
				t.Errorf("hall has %d rows, want %d", got.N, want)
			}
			if _, ok, _ := after.Find("gone"); ok != goneThere {
				t.Errorf("gone is there: %v", ok)
			}
			put(t, after, "next", count(1))
			recs, err := after.Records()
			if err != nil {
				t.Fatal(err)
			}
			if got := files(t, path); len(got) != 3+len(recs) || slices.ContainsFunc(got, func(s string) bool { return strings.HasSuffix(s, asideSuffix) }) {
				t.Errorf("left behind: %v for %d records", got, len(recs))
			}
			for _, rec := range recs {
				table(t, after, rec.Key)
			}
		})
	}
}

// A change that fails by itself leaves nothing behind at once.
func TestFailedChange(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	d := open(t, path)
	put(t, d, "hall", count(10))
	before := files(t, path)
	err := d.Change(context.Background(), func(tx *Tx) error {
		if err := tx.Put("a", nil, count(3)); err != nil {
			return err
		}
		tx.Delete("hall")
		return errCrash
	})
	if !errors.Is(err, errCrash) {
		t.Fatal(err)
	}
	if got := files(t, path); !slices.Equal(got, before) {
		t.Errorf("before %v, after %v", before, got)
	}
	if table(t, d, "hall").N != 10 {
		t.Error("hall has changed")
	}
}

// Two that have the folder open see each other's changes, and what one has
// mapped stays good when the other replaces and deletes it.
func TestTwoAtOnce(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	a, b := open(t, path), open(t, path)
	put(t, a, "hall", count(100))
	held := table(t, b, "hall")
	put(t, a, "hall", count(200))
	if held.N != 100 || held.Cols[0].I[99] != 100 {
		t.Error("a mapped table has changed")
	}
	if got := table(t, b, "hall"); got.N != 200 {
		t.Errorf("the other sees %d rows", got.N)
	}
	err := b.Change(context.Background(), func(tx *Tx) error { tx.Delete("hall"); return nil })
	if err != nil {
		t.Fatal(err)
	}
	if _, ok, err := a.Find("hall"); ok || err != nil {
		t.Errorf("deleted and still there: %v, %v", ok, err)
	}
	if held.Cols[0].I[99] != 100 {
		t.Error("a mapped table has changed")
	}
}

// Changes of many at once do not get lost.
func TestInterleavedChanges(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	const writers, each = 4, 5
	var all sync.WaitGroup
	for w := range writers {
		d := open(t, path)
		all.Add(1)
		go func() {
			defer all.Done()
			for i := range each {
				if err := d.Change(context.Background(), func(tx *Tx) error {
					return tx.Put(fmt.Sprint(w, "-", i), nil, count(w*each+i+1))
				}); err != nil {
					t.Error(err)
				}
				if _, got, ok, err := d.FindTable(fmt.Sprint(w, "-", i)); err != nil || !ok || got.N != w*each+i+1 {
					t.Errorf("%d-%d: %v, %v", w, i, ok, err)
				}
			}
		}()
	}
	all.Wait()
	d := open(t, path)
	recs, err := d.Records()
	if err != nil || len(recs) != writers*each || d.now.Generation != writers*each {
		t.Errorf("%d records at generation %d, %v", len(recs), d.now.Generation, err)
	}
}

// A reader that looks while others replace never meets a missing file.
func TestReadingWhileReplacing(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	w := open(t, path)
	put(t, w, "hall", count(1))
	stop := make(chan struct{})
	var readers sync.WaitGroup
	for range 2 {
		d := open(t, path)
		readers.Add(1)
		go func() {
			defer readers.Done()
			for last := 0; ; {
				select {
				case <-stop:
					return
				default:
				}
				_, got, ok, err := d.FindTable("hall")
				if err != nil || !ok || got.N < last || got.Cols[0].I[0] != int64(got.N) {
					t.Errorf("after %d rows: %v, %v", last, ok, err)
					return
				}
				last = got.N
			}
		}()
	}
	for i := range 30 {
		put(t, w, "hall", count(i+2))
	}
	close(stop)
	readers.Wait()
}

func TestLocked(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	a, b := open(t, path), open(t, path)
	err := a.Change(context.Background(), func(*Tx) error {
		ctx, cancel := context.WithTimeout(context.Background(), 30*time.Millisecond)
		defer cancel()
		var locked *LockedError
		if err := b.Change(ctx, func(*Tx) error { return nil }); !errors.As(err, &locked) {
			t.Errorf("%v", err)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
}

func TestClosed(t *testing.T) {
	d := open(t, filepath.Join(t.TempDir(), "catalog"))
	put(t, d, "hall", count(1))
	d.Close()
	if _, err := d.Records(); err == nil {
		t.Error("used after Close")
	}
	if _, _, _, err := d.FindTable("hall"); err == nil {
		t.Error("used after Close")
	}
}

// Only files that a change makes are ever removed.
func TestSweepLeavesOthersAlone(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	d := open(t, path)
	put(t, d, "hall", count(1))
	for _, name := range []string{"notes.txt", "columns/readme.md"} {
		if err := os.WriteFile(filepath.Join(path, name), nil, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	orphan := filepath.Join(path, columnsName, "x-000009-0"+tableSuffix)
	if err := os.WriteFile(orphan, []byte("half a table"), 0o666); err != nil {
		t.Fatal(err)
	}
	put(t, d, "hall", count(2))
	got := files(t, path)
	if !slices.Contains(got, "notes.txt") || !slices.Contains(got, "readme.md") || slices.Contains(got, filepath.Base(orphan)) {
		t.Errorf("%v", got)
	}
}
