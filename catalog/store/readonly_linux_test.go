package store

import (
	"errors"
	"os"
	"path/filepath"
	"runtime"
	"testing"

	"golang.org/x/sys/unix"
)

// asNobody runs f without root's right to write anywhere, which Linux gives up
// for one thread when its file system identity changes.
func asNobody(t *testing.T, f func()) {
	if os.Getuid() != 0 {
		f()
		return
	}
	done := make(chan struct{})
	go func() {
		defer close(done)
		runtime.LockOSThread() // and never unlock it: the thread ends with the goroutine
		if _, err := unix.SetfsuidRetUid(65534); err != nil {
			t.Error(err)
			return
		}
		f()
	}()
	<-done
}

// A folder that may not be written can be read; a change says what it lacks.
func TestReadOnlyFolder(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	put(t, open(t, path), "hall", count(10))
	for p := path; len(p) > len(os.TempDir()); p = filepath.Dir(p) {
		if err := os.Chmod(p, 0o755); err != nil {
			t.Fatal(err)
		}
	}
	asNobody(t, func() {
		if os.Getuid() != 0 {
			if err := os.Chmod(path, 0o555); err != nil {
				t.Error(err)
			}
			defer os.Chmod(path, 0o755)
			if err := os.Chmod(filepath.Join(path, lockName), 0o444); err != nil {
				t.Error(err)
			}
		}
		d, err := Open(path)
		if err != nil {
			t.Error(err)
			return
		}
		defer d.Close()
		if _, got, ok, err := d.FindTable("hall"); err != nil || !ok || got.N != 10 {
			t.Errorf("reading: %v, %v", ok, err)
		}
		err = d.Change(t.Context(), func(tx *Tx) error { return tx.Put("x", nil, nil) })
		if !errors.Is(err, os.ErrPermission) {
			t.Errorf("changing: %v", err)
		}
	})
}
