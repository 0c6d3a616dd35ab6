package store

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"sync"
	"time"

	"github.com/cespare/xxhash/v2"
	"github.com/gofrs/flock"

	"nearcell/catalog/column"
)

const (
	manifestName = "manifest.json"
	columnsName  = "columns"
	lockName     = "lock"
	asideSuffix  = ".new" // of files that are being written
	tableSuffix  = ".arrow"
)

// LockPatience is how long a change waits for another program's.
const LockPatience = 10 * time.Second

// Dir is a folder of tables. It may be used by many goroutines.
type Dir struct {
	path string

	change sync.Mutex // one change at a time in this program; flock sees to others

	mu     sync.Mutex // over what follows
	now    *manifest
	seen   fs.FileInfo // of the manifest's file, nil where there was none
	files  map[string]*mapped
	closed bool

	step func(string) // tests stop a change with it; nil otherwise
}

// mapped is an open file.
type mapped struct {
	table  *column.Table // one of the two
	arrays Arrays
	unmap  func() error
}

// Open is the folder at path. One that does not exist is empty, and is made by
// the first change.
func Open(path string) (*Dir, error) {
	path, err := filepath.Abs(path) // the program may change its working folder
	if err != nil {
		return nil, err
	}
	info, err := os.Stat(path)
	if err == nil && !info.IsDir() {
		return nil, &os.PathError{Op: "open", Path: path, Err: errors.New("not a folder")}
	}
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return nil, err
	}
	d := &Dir{path: path, files: map[string]*mapped{}}
	d.mu.Lock()
	defer d.mu.Unlock()
	return d, d.refresh()
}

// Path is the folder.
func (d *Dir) Path() string { return d.path }

func (d *Dir) manifestPath() string         { return filepath.Join(d.path, manifestName) }
func (d *Dir) columnsPath() string          { return filepath.Join(d.path, columnsName) }
func (d *Dir) tablePath(name string) string { return filepath.Join(d.path, columnsName, name) }

var errClosed = errors.New("store: used after Close")

// refresh reads the manifest if it is another file than the one seen last.
func (d *Dir) refresh() error {
	if d.closed {
		return errClosed
	}
	info, err := os.Stat(d.manifestPath())
	if errors.Is(err, fs.ErrNotExist) {
		d.now, d.seen = &manifest{}, nil
		return nil
	}
	if err != nil {
		return err
	}
	if d.seen != nil && os.SameFile(d.seen, info) && d.seen.Size() == info.Size() && d.seen.ModTime().Equal(info.ModTime()) {
		return nil
	}
	// The stat comes first: should the file be replaced in between, the next
	// refresh reads it once more.
	data, err := os.ReadFile(d.manifestPath())
	if err != nil {
		return err
	}
	m, err := parseManifest(d.manifestPath(), data)
	if err != nil {
		return err
	}
	d.now, d.seen = m, info
	return nil
}

// Records is what the folder holds now, sorted by key.
func (d *Dir) Records() ([]Record, error) {
	d.mu.Lock()
	defer d.mu.Unlock()
	if err := d.refresh(); err != nil {
		return nil, err
	}
	return append([]Record(nil), d.now.Objects...), nil
}

// Find is the record of a key; ok is false if there is none.
func (d *Dir) Find(key string) (rec Record, ok bool, err error) {
	d.mu.Lock()
	defer d.mu.Unlock()
	if err := d.refresh(); err != nil {
		return rec, false, err
	}
	if i := d.now.find(key); i >= 0 {
		return d.now.Objects[i], true, nil
	}
	return rec, false, nil
}

// FindTable is the record of a key and its table, nil if it has none.
func (d *Dir) FindTable(key string) (rec Record, t *column.Table, ok bool, err error) {
	rec, m, ok, err := d.find(key, func(m *mapped, data []byte) (err error) {
		m.table, err = Decode(data)
		return err
	})
	if m != nil {
		t = m.table
	}
	return rec, t, ok, err
}

// FindArrays is the record of a key and its arrays, nil if it has none.
func (d *Dir) FindArrays(key string) (rec Record, a Arrays, ok bool, err error) {
	rec, m, ok, err := d.find(key, func(m *mapped, data []byte) (err error) {
		m.arrays, err = DecodeArrays(data)
		return err
	})
	if m != nil {
		a = m.arrays
	}
	return rec, a, ok, err
}

// decoder makes of a file's bytes what the file holds.
type decoder func(m *mapped, data []byte) error

func (d *Dir) find(key string, decode decoder) (rec Record, m *mapped, ok bool, err error) {
	for last := ""; ; {
		rec, ok, err = d.Find(key)
		if err != nil || !ok || rec.File == nil {
			return rec, nil, ok, err
		}
		m, err = d.load(rec.File, decode)
		if err == nil || !errors.Is(err, fs.ErrNotExist) {
			return rec, m, true, err
		}
		// Another program may have replaced it between the two looks.
		if rec.File.Name == last {
			return rec, nil, true, &DamagedError{Path: d.tablePath(last), Reason: "the file is missing"}
		}
		last = rec.File.Name
	}
}

// load maps a file, checks it and takes it over, once.
func (d *Dir) load(f *File, decode decoder) (*mapped, error) {
	d.mu.Lock()
	defer d.mu.Unlock()
	if d.closed {
		return nil, errClosed
	}
	if m := d.files[f.Name]; m != nil {
		return m, nil
	}
	path := d.tablePath(f.Name)
	data, unmap, err := mapFile(path)
	if err != nil {
		return nil, err
	}
	m := &mapped{unmap: unmap}
	if err := check(path, f, data, func() error { return decode(m, data) }); err != nil {
		return nil, errors.Join(err, unmap())
	}
	d.files[f.Name] = m
	return m, nil
}

// check compares a file with what the manifest says of it, and reads it.
func check(path string, f *File, data []byte, decode func() error) error {
	if int64(len(data)) != f.Size {
		return &DamagedError{Path: path, Reason: fmt.Sprintf("%d bytes, expected %d", len(data), f.Size)}
	}
	if sum := hashText(xxhash.Sum64(data)); sum != f.XXH64 {
		return &DamagedError{Path: path, Reason: fmt.Sprintf("checksum %s, expected %s", sum, f.XXH64)}
	}
	if err := decode(); err != nil {
		return &DamagedError{Path: path, Reason: err.Error()}
	}
	return nil
}

// Touch marks the file of a record as used now, and Used tells when that was. A folder
// that may not be written keeps what it says.
func (d *Dir) Touch(rec Record) {
	if rec.File != nil {
		now := time.Now()
		_ = os.Chtimes(d.tablePath(rec.File.Name), now, now)
	}
}

// Used is when the file of a record was written or last touched; zero without one.
func (d *Dir) Used(rec Record) time.Time {
	if rec.File == nil {
		return time.Time{}
	}
	info, err := os.Stat(d.tablePath(rec.File.Name))
	if err != nil {
		return time.Time{}
	}
	return info.ModTime()
}

// Close lets the files go. Tables must not be used afterwards.
func (d *Dir) Close() error {
	d.mu.Lock()
	defer d.mu.Unlock()
	var errs []error
	for _, m := range d.files {
		errs = append(errs, m.unmap())
	}
	d.files, d.closed = nil, true
	return errors.Join(errs...)
}

// lock takes the folder's lock, and makes the folder if need be.
func (d *Dir) lock(ctx context.Context) (unlock func(), err error) {
	if err := makeFolder(d.columnsPath()); err != nil {
		return nil, err
	}
	l := flock.New(filepath.Join(d.path, lockName))
	ctx, cancel := context.WithTimeout(ctx, LockPatience)
	defer cancel()
	ok, err := l.TryLockContext(ctx, 10*time.Millisecond)
	switch {
	case errors.Is(err, context.DeadlineExceeded), err == nil && !ok:
		return nil, &LockedError{Path: d.path}
	case err != nil:
		return nil, err
	}
	return func() { l.Close() }, nil
}

// makeFolder makes a folder and those above it that are missing, and flushes the
// one that holds each, so that a crash cannot take a new catalog away whole.
func makeFolder(path string) error {
	if _, err := os.Stat(path); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	above := filepath.Dir(path)
	if above != path {
		if err := makeFolder(above); err != nil {
			return err
		}
	}
	if err := os.Mkdir(path, 0o777); err != nil && !errors.Is(err, fs.ErrExist) {
		return err
	}
	return syncFolder(above)
}
