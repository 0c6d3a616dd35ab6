//go:build unix

package store

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
	"time"
)

const killVariable = "STORE_TEST_CHANGES_UNTIL_KILLED"

// TestMain lets the test binary be the program that TestKilled kills.
func TestMain(m *testing.M) {
	if path := os.Getenv(killVariable); path != "" {
		changeForever(path)
	}
	os.Exit(m.Run())
}

// changeForever replaces two tables of equal length together, again and again.
func changeForever(path string) {
	d, err := Open(path)
	for n := 1; err == nil; n++ {
		err = d.Change(context.Background(), func(tx *Tx) error {
			if err := tx.Put("a", n, count(100*n)); err != nil {
				return err
			}
			return tx.Put("b", n, count(100*n))
		})
	}
	fmt.Fprintln(os.Stderr, err)
	os.Exit(1)
}

// A program that is killed while it changes the folder, at any moment, leaves
// tables that fit together, a folder that can be changed, and no lock.
func TestKilled(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	put(t, open(t, path), "a", count(1))
	put(t, open(t, path), "b", count(1))
	for round := range 8 {
		program := exec.Command(os.Args[0])
		program.Env = append(os.Environ(), killVariable+"="+path)
		program.Stderr = os.Stderr
		if err := program.Start(); err != nil {
			t.Fatal(err)
		}
		time.Sleep(time.Duration(60+37*round) * time.Millisecond)
		if err := program.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		program.Wait()

		d := open(t, path)
		a, b := table(t, d, "a"), table(t, d, "b")
		if a.N != b.N || a.Cols[0].I[a.N-1] != int64(a.N) {
			t.Fatalf("round %d: %d and %d rows", round, a.N, b.N)
		}
		put(t, d, "after", count(round+1))
		if got := files(t, path); len(got) != 3+3 {
			t.Fatalf("round %d: left behind: %v", round, got)
		}
		d.Close()
	}
}
