package catalog

import (
	"fmt"
	"sort"
	"sync"
	"time"

	"nearcell/catalog/column"
)

// Kind is the kind of an object. All kinds share one namespace.
type Kind uint8

const (
	Campaign Kind = iota + 1
	Table
	Solid
	View
)

var kindNames = [...]string{"", "CAMPAIGN", "TABLE", "SOLID", "VIEW"}

// String is the kind as the language writes it.
func (k Kind) String() string {
	if int(k) < len(kindNames) {
		return kindNames[k]
	}
	return "?"
}

// Object is anything that has a name in the catalog. An object that came out
// of a catalog is shared and must not be changed.
type Object struct {
	Kind Kind
	Key  string // what it is found by: the folded name of a bare one, the name itself of a quoted one
	Name string // as the user wrote it

	Table   *column.Table // Campaign: id, x, y, z and the attributes; Table: as read. Nil in a List.
	Text    string        // Solid, View: the canonical text
	Options CampaignOptions
	Sources []SourceFile
	Notes   []string // facts of the import worth repeating
	Created time.Time
	Rows    int // of the table, also where Table is nil

	key *contentKey
}

// CampaignOptions are the clauses of a campaign.
type CampaignOptions struct {
	LengthUnit string     // "" is taken as m by the engine
	Within     string     // solid expression, canonical text
	Zones      []string   // solids that are zones
	Stretched  [3]float64 // all zero: not stretched
	Duplicates string     // SPLIT, MEAN, FIRST, FAIL; "": not said
	Tolerance  float64
}

// SourceFile is a file that an object was read from.
type SourceFile struct {
	Path    string
	SHA256  string
	Size    int64
	ModTime time.Time
	Rows    int
}

// ErrExists says that the name is taken by an object of the kind.
type ErrExists struct {
	Kind Kind
	Name string
}

func (e *ErrExists) Error() string { return fmt.Sprintf("catalog: %s %s exists", e.Kind, e.Name) }

// ErrNoSuch says that there is no such object. Found, if not 0, is the kind of
// the object that has the name, where another kind was asked for.
type ErrNoSuch struct {
	Kind  Kind // the kind asked for, 0 for any
	Key   string
	Found Kind
}

func (e *ErrNoSuch) Error() string {
	if e.Found != 0 {
		return fmt.Sprintf("catalog: %s is a %s, not a %s", e.Key, e.Found, e.Kind)
	}
	return fmt.Sprintf("catalog: no object %s", e.Key)
}

type contentKey struct {
	once sync.Once
	sum  [16]byte
}

// Catalog holds the objects, in memory or in a folder. It may be read by many
// goroutines and changed by one at a time; changes wait for each other.
type Catalog struct {
	mu      sync.RWMutex
	objects map[string]*Object
}

// Memory is a catalog that keeps nothing.
func Memory() *Catalog { return &Catalog{objects: map[string]*Object{}} }

// Open is the catalog in a folder. A folder that does not exist is made by the
// first change.
func Open(dir string) (*Catalog, error) { return Memory(), nil }

// Close lets go of the files. Tables that came out of the catalog must not be
// used after it.
func (c *Catalog) Close() error { return nil }

// Get is the object with the key, with its table; *ErrNoSuch where there is none.
func (c *Catalog) Get(key string) (*Object, error) {
	c.mu.RLock()
	defer c.mu.RUnlock()
	if o := c.objects[key]; o != nil {
		return o, nil
	}
	return nil, &ErrNoSuch{Key: key}
}

// List is the objects of the given kinds (all, if none is given) sorted by
// name, without their tables.
func (c *Catalog) List(kinds ...Kind) ([]Object, error) {
	c.mu.RLock()
	defer c.mu.RUnlock()
	var list []Object
	for _, o := range c.objects {
		ok := len(kinds) == 0
		for _, k := range kinds {
			ok = ok || k == o.Kind
		}
		if ok {
			x := *o
			x.Table = nil
			list = append(list, x)
		}
	}
	sort.Slice(list, func(i, j int) bool { return list[i].Key < list[j].Key })
	return list, nil
}

// Put adds an object, or replaces one of the same kind and key where replace
// says so; else *ErrExists.
func (c *Catalog) Put(o Object, replace bool) error {
	c.mu.Lock()
	defer c.mu.Unlock()
	if old := c.objects[o.Key]; old != nil && (!replace || old.Kind != o.Kind) {
		return &ErrExists{Kind: old.Kind, Name: old.Name}
	}
	if o.Table != nil {
		o.Rows = o.Table.N
	}
	o.key = &contentKey{}
	c.objects[o.Key] = &o
	return nil
}

// Drop removes an object of the kind; *ErrNoSuch where there is none.
func (c *Catalog) Drop(kind Kind, key string) error {
	c.mu.Lock()
	defer c.mu.Unlock()
	old := c.objects[key]
	if old == nil {
		return &ErrNoSuch{Kind: kind, Key: key}
	}
	if old.Kind != kind {
		return &ErrNoSuch{Kind: kind, Key: key, Found: old.Kind}
	}
	delete(c.objects, key)
	return nil
}
