package store

import (
	"bufio"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/cespare/xxhash/v2"

	"nearcell/catalog/column"
)

// Tx is a change under way. Nothing of it can be seen before it is done.
type Tx struct {
	dir     *Dir
	m       *manifest
	written []string // the files of this change
	changed bool
}

// Change makes one change of the folder: what f does, or nothing if f fails. f
// sees the folder as it is under the lock.
func (d *Dir) Change(ctx context.Context, f func(tx *Tx) error) error {
	d.change.Lock()
	defer d.change.Unlock()
	unlock, err := d.lock(ctx)
	if err != nil {
		return err
	}
	defer unlock()

	d.mu.Lock()
	err = d.refresh()
	now := d.now
	d.mu.Unlock()
	if err != nil {
		return err
	}
	if err := d.sweep(now); err != nil {
		return err
	}
	tx := &Tx{dir: d, m: now.clone()}
	tx.m.Generation++
	if err := f(tx); err != nil {
		return errors.Join(err, tx.undo())
	}
	if !tx.changed {
		return nil
	}
	if err := tx.commit(); err != nil {
		return errors.Join(err, tx.undo())
	}
	d.at("manifest renamed")
	return d.sweep(tx.m)
}

// Renew empties a folder whose manifest is damaged, for callers who can make again all
// that it held. One that is good, or that a newer program has written, stays as it is.
func (d *Dir) Renew(ctx context.Context) error {
	d.change.Lock()
	defer d.change.Unlock()
	unlock, err := d.lock(ctx)
	if err != nil {
		return err
	}
	defer unlock()
	d.mu.Lock()
	err = d.refresh()
	d.mu.Unlock()
	var damaged *DamagedError
	if !errors.As(err, &damaged) {
		return err
	}
	tx := &Tx{dir: d, m: &manifest{Generation: uint64(time.Now().UnixNano())}} // names of files are not used again
	if err := tx.commit(); err != nil {
		return errors.Join(err, tx.undo())
	}
	return d.sweep(tx.m)
}

// at tells a test that a step is done.
func (d *Dir) at(step string) {
	if d.step != nil {
		d.step(step)
	}
}

// Find is the record of a key as this change sees it.
func (tx *Tx) Find(key string) (Record, bool) {
	if i := tx.m.find(key); i >= 0 {
		return tx.m.Objects[i], true
	}
	return Record{}, false
}

// Records is what this change sees, sorted by key but for what it has put.
func (tx *Tx) Records() []Record { return slices.Clone(tx.m.Objects) }

// Put adds a record, or replaces the one of its key. t may be nil. What meta
// turns into as JSON is kept with it.
func (tx *Tx) Put(key string, meta any, t *column.Table) error {
	var f *File
	if t != nil {
		err := t.Validate()
		if err != nil {
			return err
		}
		if f, err = tx.write(key, t.N, func(w io.Writer) error { return Encode(w, t) }); err != nil {
			return err
		}
	}
	return tx.put(key, meta, f)
}

// PutArrays is Put of a record with arrays in the place of a table.
func (tx *Tx) PutArrays(key string, meta any, arrays Arrays) error {
	f, err := tx.write(key, 1, func(w io.Writer) error { return EncodeArrays(w, arrays) })
	if err != nil {
		return err
	}
	return tx.put(key, meta, f)
}

func (tx *Tx) put(key string, meta any, f *File) error {
	raw, err := json.Marshal(meta)
	if err != nil {
		return err
	}
	rec := Record{Key: key, File: f, Meta: raw}
	tx.Delete(key)
	tx.m.Objects = append(tx.m.Objects, rec)
	tx.changed = true
	return nil
}

// Delete removes the record of a key, if there is one.
func (tx *Tx) Delete(key string) {
	if i := tx.m.find(key); i >= 0 {
		tx.m.Objects = slices.Delete(tx.m.Objects, i, i+1)
		tx.changed = true
	}
}

// write puts what encode writes into a file of its own.
func (tx *Tx) write(key string, rows int, encode func(io.Writer) error) (*File, error) {
	d := tx.dir
	name := fmt.Sprintf("%s-%06d-%d%s", plainName(key), tx.m.Generation, len(tx.written), tableSuffix)
	f := &File{Name: name, Rows: rows}
	tx.written = append(tx.written, name)
	sum := xxhash.New()
	err := writeAside(d.tablePath(name), func(w io.Writer) error {
		n := &counter{}
		if err := encode(io.MultiWriter(w, sum, n)); err != nil {
			return err
		}
		f.Size = n.n
		return nil
	})
	if err != nil {
		return nil, err
	}
	d.at("table written")
	f.XXH64 = hashText(sum.Sum64())
	if err := os.Rename(d.tablePath(name)+asideSuffix, d.tablePath(name)); err != nil {
		return nil, err
	}
	d.at("table renamed")
	return f, syncFolder(d.columnsPath())
}

// plainName makes a key fit for a file's name on any system.
func plainName(key string) string {
	var b strings.Builder
	for _, r := range strings.ToLower(key) {
		if b.Len() >= 40 {
			break
		}
		if r >= 'a' && r <= 'z' || r >= '0' && r <= '9' {
			b.WriteRune(r)
		} else {
			b.WriteByte('_')
		}
	}
	return b.String()
}

type counter struct{ n int64 }

func (c *counter) Write(b []byte) (int, error) {
	c.n += int64(len(b))
	return len(b), nil
}

// writeAside writes and flushes a file beside the one of the path.
func writeAside(path string, content func(io.Writer) error) error {
	f, err := os.OpenFile(path+asideSuffix, os.O_WRONLY|os.O_CREATE|os.O_TRUNC, 0o666)
	if err != nil {
		return err
	}
	w := bufio.NewWriterSize(f, 1<<16)
	err = content(w)
	if err == nil {
		err = w.Flush()
	}
	if err == nil {
		err = f.Sync()
	}
	return errors.Join(err, f.Close())
}

// commit puts the new manifest in the place of the old one.
func (tx *Tx) commit() error {
	d := tx.dir
	data, err := tx.m.render()
	if err != nil {
		return err
	}
	err = writeAside(d.manifestPath(), func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
	if err != nil {
		return err
	}
	d.at("manifest written")
	if err := os.Rename(d.manifestPath()+asideSuffix, d.manifestPath()); err != nil {
		return err
	}
	tx.written = nil // they belong to the folder now
	return syncFolder(d.path)
}

// undo removes the files of a change that failed.
func (tx *Tx) undo() error {
	var errs []error
	for _, name := range tx.written {
		path := tx.dir.tablePath(name)
		errs = append(errs, removeIfThere(path), removeIfThere(path+asideSuffix))
	}
	if len(tx.written) > 0 || tx.changed {
		errs = append(errs, removeIfThere(tx.dir.manifestPath()+asideSuffix))
	}
	return errors.Join(errs...)
}

func removeIfThere(path string) error {
	if err := os.Remove(path); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return nil
}

// sweep removes the files that the manifest does not name: those of a change
// that was interrupted, and those that were replaced. Only files of the kinds
// that changes make are touched. The lock must be held.
func (d *Dir) sweep(m *manifest) error {
	names := map[string]bool{}
	for _, rec := range m.Objects {
		if rec.File != nil {
			names[rec.File.Name] = true
		}
	}
	entries, err := os.ReadDir(d.columnsPath())
	if err != nil {
		return err
	}
	var errs []error
	for _, e := range entries {
		name := e.Name()
		if !names[name] && (strings.HasSuffix(name, tableSuffix) || strings.HasSuffix(name, tableSuffix+asideSuffix)) {
			errs = append(errs, removeIfThere(filepath.Join(d.columnsPath(), name)))
		}
	}
	errs = append(errs, removeIfThere(d.manifestPath()+asideSuffix))
	return errors.Join(errs...)
}
