package catalog

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"sort"
	"strings"
	"sync"
	"time"
	"unicode/utf8"

	"nearcell/catalog/store"
)

// Catalog holds the objects, in memory or in a folder. It may be used by many
// goroutines; changes wait for each other.
type Catalog struct {
	dir *store.Dir // nil: in memory

	derivedOnce sync.Once
	derived     *store.Dir // what was computed of the objects; see Derived
	derivedErr  error

	mu      sync.RWMutex
	objects map[string]*entry // in memory, all; in a folder, those read so far
}

// entry is an object and, in a folder, the record that it was made of.
type entry struct {
	object *Object
	file   string
	meta   string
}

// Memory is a catalog that keeps nothing.
func Memory() *Catalog { return &Catalog{objects: map[string]*entry{}} }

// Open is the catalog in a folder. A folder that does not exist is made by the
// first change. Errors are those of package store.
func Open(dir string) (*Catalog, error) {
	d, err := store.Open(dir)
	if err != nil {
		return nil, err
	}
	return &Catalog{dir: d, objects: map[string]*entry{}}, nil
}

// Close lets go of the files. Tables that came out of the catalog must not be
// used after it.
func (c *Catalog) Close() error {
	if c.dir == nil {
		return nil
	}
	err := c.dir.Close()
	if c.derived != nil {
		err = errors.Join(err, c.derived.Close())
	}
	return err
}

// derivedName is the folder in the catalog's of what was computed of its objects.
const derivedName = "diagrams"

// Derived is a folder for what is computed of the objects and can be computed again, nil
// of a catalog in memory. Its files are apart from those of the objects, so that nothing
// that befalls them touches these. It is open until Close.
func (c *Catalog) Derived() (*store.Dir, error) {
	if c.dir == nil {
		return nil, nil
	}
	c.derivedOnce.Do(func() {
		c.derived, c.derivedErr = store.Open(filepath.Join(c.dir.Path(), derivedName))
	})
	return c.derived, c.derivedErr
}

// Get is the object with the key, with its table; *ErrNoSuch where there is
// none, *store.DamagedError where its file is not what was written. A folder
// that another program has changed meanwhile is seen as it is now; an object got
// earlier stays as it was.
func (c *Catalog) Get(key string) (*Object, error) {
	if c.dir != nil {
		return c.read(key)
	}
	c.mu.RLock()
	defer c.mu.RUnlock()
	if e := c.objects[key]; e != nil {
		return e.object, nil
	}
	return nil, &ErrNoSuch{Key: key}
}

// read gets an object from the folder.
func (c *Catalog) read(key string) (*Object, error) {
	rec, t, ok, err := c.dir.FindTable(key)
	if err != nil {
		return nil, err
	}
	if !ok {
		return nil, &ErrNoSuch{Key: key}
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	file := ""
	if rec.File != nil {
		file = rec.File.Name
	}
	if e := c.objects[key]; e != nil && e.file == file && e.meta == string(rec.Meta) {
		return e.object, nil
	}
	o, err := fromRecord(rec)
	if err != nil {
		return nil, err
	}
	o.Table, o.key = t, &contentKey{}
	c.objects[key] = &entry{object: o, file: file, meta: string(rec.Meta)}
	return o, nil
}

// List is the objects of the given kinds (all, if none is given) sorted by
// name, without their tables.
func (c *Catalog) List(kinds ...Kind) ([]Object, error) {
	all, err := c.all()
	if err != nil {
		return nil, err
	}
	var list []Object
	for _, o := range all {
		if len(kinds) == 0 || slices.Contains(kinds, o.Kind) {
			o.Table, o.key = nil, nil
			list = append(list, o)
		}
	}
	sort.Slice(list, func(i, j int) bool {
		a, b := &list[i], &list[j]
		if x, y := strings.ToLower(a.Name), strings.ToLower(b.Name); x != y {
			return x < y
		}
		return a.Key < b.Key
	})
	return list, nil
}

func (c *Catalog) all() ([]Object, error) {
	var list []Object
	if c.dir == nil {
		c.mu.RLock()
		defer c.mu.RUnlock()
		for _, e := range c.objects {
			list = append(list, *e.object)
		}
		return list, nil
	}
	recs, err := c.dir.Records()
	if err != nil {
		return nil, err
	}
	for _, rec := range recs {
		o, err := fromRecord(rec)
		if err != nil {
			return nil, err
		}
		list = append(list, *o)
	}
	return list, nil
}

// Put adds an object, or replaces the one of its key where replace says so and
// the two are of one kind; else *ErrExists with the kind that has the name. The
// table must keep the rules of package column; it may be shared afterwards and
// must not be changed.
func (c *Catalog) Put(o Object, replace bool) error {
	if o.Key == "" || o.Kind < Campaign || o.Kind > Frame {
		return fmt.Errorf("catalog: an object without a key or a kind: %q, %s", o.Key, o.Kind)
	}
	for _, s := range []string{o.Key, o.Name, o.Text} {
		if !utf8.ValidString(s) {
			return fmt.Errorf("catalog: %q is no UTF-8", s)
		}
	}
	o.Rows = 0
	if o.Table != nil {
		o.Rows = o.Table.N
	}
	o.key = &contentKey{}
	if c.dir != nil {
		return c.dir.Change(context.Background(), func(tx *store.Tx) error {
			rec, ok := tx.Find(o.Key)
			if err := mayPut(&o, rec, ok, replace); err != nil {
				return err
			}
			return tx.Put(o.Key, metaOf(&o), o.Table)
		})
	}
	if o.Table != nil {
		if err := o.Table.Validate(); err != nil {
			return err
		}
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	if old := c.objects[o.Key]; old != nil && (!replace || old.object.Kind != o.Kind) {
		return &ErrExists{Kind: old.object.Kind, Name: old.object.Name}
	}
	c.objects[o.Key] = &entry{object: &o}
	return nil
}

func mayPut(o *Object, rec store.Record, found, replace bool) error {
	if !found {
		return nil
	}
	old, err := fromRecord(rec)
	if err != nil {
		return err
	}
	if !replace || old.Kind != o.Kind {
		return &ErrExists{Kind: old.Kind, Name: old.Name}
	}
	return nil
}

// Drop removes an object of the kind; *ErrNoSuch where there is none.
func (c *Catalog) Drop(kind Kind, key string) error {
	if c.dir != nil {
		// Dropping from a folder that is not there must not make it.
		if _, ok, err := c.dir.Find(key); err != nil || !ok {
			return mayDrop(kind, key, 0, err)
		}
		return c.dir.Change(context.Background(), func(tx *store.Tx) error {
			var found Kind
			if rec, ok := tx.Find(key); ok {
				old, err := fromRecord(rec)
				if err != nil {
					return err
				}
				found = old.Kind
			}
			if err := mayDrop(kind, key, found, nil); err != nil {
				return err
			}
			tx.Delete(key)
			return nil
		})
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	var found Kind
	if old := c.objects[key]; old != nil {
		found = old.object.Kind
	}
	if err := mayDrop(kind, key, found, nil); err != nil {
		return err
	}
	delete(c.objects, key)
	return nil
}

// mayDrop compares the kind that is to be dropped with the one found, 0 for none.
func mayDrop(kind Kind, key string, found Kind, err error) error {
	if err == nil && found != kind {
		return &ErrNoSuch{Kind: kind, Key: key, Found: found}
	}
	return err
}

// meta is what the manifest keeps of an object.
type meta struct {
	Kind    string           `json:"kind"`
	Name    string           `json:"name"`
	Text    string           `json:"text,omitempty"`
	System  string           `json:"system,omitempty"`
	Options *CampaignOptions `json:"options,omitempty"`
	Sources []SourceFile     `json:"sources,omitempty"`
	Notes   []string         `json:"notes,omitempty"`
	Created time.Time        `json:"created"`
}

func metaOf(o *Object) meta {
	m := meta{Kind: o.Kind.String(), Name: o.Name, Text: o.Text, System: o.System, Sources: o.Sources, Notes: o.Notes, Created: o.Created}
	if o.Kind == Campaign {
		m.Options = &o.Options
	}
	return m
}

// fromRecord is the object of a record, without its table.
func fromRecord(rec store.Record) (*Object, error) {
	var m meta
	if err := json.Unmarshal(rec.Meta, &m); err != nil {
		return nil, fmt.Errorf("catalog: the record of %s: %w", rec.Key, err)
	}
	kind := slices.Index(kindNames[:], m.Kind)
	if kind <= 0 {
		return nil, fmt.Errorf("catalog: the record of %s has the unknown kind %q", rec.Key, m.Kind)
	}
	o := &Object{Kind: Kind(kind), Key: rec.Key, Name: m.Name, Text: m.Text, System: m.System, Sources: m.Sources, Notes: m.Notes, Created: m.Created}
	if m.Options != nil {
		o.Options = *m.Options
	}
	if rec.File != nil {
		o.Rows = rec.File.Rows
	}
	return o, nil
}
