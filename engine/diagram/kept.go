package diagram

import (
	"context"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"runtime"
	"slices"
	"strings"
	"syscall"
	"time"

	"nearcell/catalog/store"
	"nearcell/voronoi"
)

// KeptFrom is the number of sites from which a diagram is kept. Below it all cells are
// made in less time than their files take to be written and read.
const KeptFrom = 20_000

// DefaultKeptLimit is what kept diagrams may take until SetLimit says otherwise.
const DefaultKeptLimit = 2 << 30

// form names the way of storing and computing. What another program's version or kind of
// machine has kept is computed anew, since its last bits may be others.
var form = "1/" + runtime.GOARCH

// Keeper keeps diagrams in a folder from one run of the program to the next. A diagram
// has a record of what voronoi.New computes, and one for each measure of all its cells
// and each of the two ways of computing it.
type Keeper struct {
	dir  *store.Dir
	from int
}

// NewKeeper keeps diagrams of KeptFrom sites and more in the folder.
func NewKeeper(dir *store.Dir) *Keeper { return &Keeper{dir: dir, from: KeptFrom} }

const (
	settingsKey = "settings"
	indexPart   = "index"
)

// keptMeta is what stands beside the arrays of a record.
type keptMeta struct {
	Form   string    `json:"form"`
	Sites  int       `json:"sites"`
	Of     string    `json:"of,omitempty"`
	Within string    `json:"within,omitempty"`
	Made   time.Time `json:"made"`
}

type keptSettings struct {
	Limit int64 `json:"limit"`
}

// Kept is a diagram in the folder.
type Kept struct {
	Key        string
	Of, Within string // the campaign and the solid that it was first computed for
	Sites      int
	Parts      []string // the measures
	Bytes      int64
	Made, Used time.Time
}

// partKey is the key of the record of a part of a diagram.
func partKey(key Key, part string) string { return hex.EncodeToString(key[:]) + "." + part }

// List is what is kept, most recently used first.
func (k *Keeper) List() ([]Kept, error) {
	recs, err := k.dir.Records()
	if err != nil {
		return nil, err
	}
	return k.group(recs), nil
}

// group puts the records of each diagram together.
func (k *Keeper) group(recs []store.Record) []Kept {
	at := map[string]int{}
	var list []Kept
	for _, rec := range recs {
		key, part, ok := strings.Cut(rec.Key, ".")
		var m keptMeta
		if !ok || rec.File == nil || json.Unmarshal(rec.Meta, &m) != nil {
			continue
		}
		i, known := at[key]
		if !known {
			i = len(list)
			at[key] = i
			list = append(list, Kept{Key: key, Made: m.Made, Sites: m.Sites})
		}
		d := &list[i]
		d.Bytes += rec.File.Size
		if used := k.dir.Used(rec); used.After(d.Used) {
			d.Used = used
		}
		if m.Made.Before(d.Made) {
			d.Made = m.Made
		}
		if part == indexPart {
			d.Of, d.Within = m.Of, m.Within
			continue
		}
		_, name, _ := strings.Cut(part, ".")
		if !slices.Contains(d.Parts, name) {
			d.Parts = append(d.Parts, name)
		}
	}
	slices.SortFunc(list, func(a, b Kept) int {
		if c := b.Used.Compare(a.Used); c != 0 {
			return c
		}
		return strings.Compare(a.Key, b.Key)
	})
	return list
}

// Limit is how many bytes kept diagrams may take; 0: none is kept.
func (k *Keeper) Limit() (int64, error) {
	rec, ok, err := k.dir.Find(settingsKey)
	if err != nil || !ok {
		return DefaultKeptLimit, err
	}
	return limitOf(rec), nil
}

func limitOf(rec store.Record) int64 {
	var s keptSettings
	if json.Unmarshal(rec.Meta, &s) != nil {
		return DefaultKeptLimit
	}
	return s.Limit
}

// SetLimit changes the limit for good, and drops what is beyond it.
func (k *Keeper) SetLimit(ctx context.Context, bytes int64) error {
	return k.change(ctx, func(tx *store.Tx) error {
		if err := tx.Put(settingsKey, keptSettings{bytes}, nil); err != nil {
			return err
		}
		k.shrink(tx, bytes, "")
		return nil
	})
}

// Drop removes all kept diagrams and tells how many there were.
func (k *Keeper) Drop(ctx context.Context) (n int, bytes int64, err error) {
	if list, err := k.List(); err == nil && len(list) == 0 {
		return 0, 0, nil // a folder that is not there need not be made for it
	}
	err = k.change(ctx, func(tx *store.Tx) error {
		n, bytes = 0, 0
		for _, d := range k.group(tx.Records()) {
			n++
			bytes += d.Bytes
			k.remove(tx, d.Key)
		}
		return nil
	})
	return n, bytes, err
}

// change is a change of the folder; one whose list is damaged is begun anew, as all in
// it can be computed again.
func (k *Keeper) change(ctx context.Context, f func(tx *store.Tx) error) error {
	err := k.dir.Change(ctx, f)
	var damaged *store.DamagedError
	if !errors.As(err, &damaged) {
		return err
	}
	if err := k.dir.Renew(ctx); err != nil {
		return err
	}
	return k.dir.Change(ctx, f)
}

// shrink drops the diagrams used least recently, but not the one of the key, until the
// rest fits the limit.
func (k *Keeper) shrink(tx *store.Tx, limit int64, but string) {
	list := k.group(tx.Records())
	var sum int64
	for _, d := range list {
		sum += d.Bytes
	}
	for i := len(list) - 1; i >= 0 && sum > limit; i-- {
		if list[i].Key != but {
			k.remove(tx, list[i].Key)
			sum -= list[i].Bytes
		}
	}
}

func (k *Keeper) remove(tx *store.Tx, key string) {
	for _, rec := range tx.Records() {
		if strings.HasPrefix(rec.Key, key+".") {
			tx.Delete(rec.Key)
		}
	}
}

// find is the arrays of a part, nil where it is not kept in the form that is read.
func (k *Keeper) find(key Key, part string) (store.Arrays, error) {
	rec, arrays, ok, err := k.dir.FindArrays(partKey(key, part))
	if err != nil || !ok {
		return nil, err
	}
	var m keptMeta
	if json.Unmarshal(rec.Meta, &m) != nil || m.Form != form {
		return nil, nil
	}
	if part == indexPart {
		k.dir.Touch(rec)
	}
	return arrays, nil
}

// part is what is to be kept of a diagram under one name.
type part struct {
	name   string
	arrays store.Arrays
}

// tooLargeError says that a diagram alone takes more than the limit.
type tooLargeError struct{ bytes, limit int64 }

func (e *tooLargeError) Error() string {
	return fmt.Sprintf("it takes %d bytes, and the limit of kept diagrams is %d", e.bytes, e.limit)
}

// keep keeps parts of a diagram, all or none.
func (k *Keeper) keep(ctx context.Context, h *Handle, parts []part) error {
	var bytes int64
	for _, p := range parts {
		for _, a := range p.arrays {
			bytes += int64(4*len(a.I32) + 8*len(a.F64) + len(a.U8))
		}
	}
	limit, err := k.Limit()
	var damaged *store.DamagedError
	if err != nil && !errors.As(err, &damaged) {
		return err
	}
	if limit == 0 {
		return nil
	}
	if bytes > limit {
		return &tooLargeError{bytes, limit}
	}
	meta := keptMeta{Form: form, Sites: h.Len(), Of: h.of, Within: h.within, Made: time.Now().UTC().Truncate(time.Second)}
	return k.change(ctx, func(tx *store.Tx) error {
		if rec, ok := tx.Find(settingsKey); ok {
			limit = limitOf(rec)
		}
		if err := k.makeRoom(tx, h.key, parts, bytes, limit); err != nil {
			return err
		}
		for _, p := range parts {
			if err := tx.PutArrays(partKey(h.key, p.name), meta, p.arrays); err != nil {
				return err
			}
		}
		k.shrink(tx, limit, hex.EncodeToString(h.key[:]))
		return nil
	})
}

// makeRoom sees to it that a diagram with its new parts stays within the limit. Its
// tetrahedralisation is the largest part and goes first: measures save more.
func (k *Keeper) makeRoom(tx *store.Tx, key Key, parts []part, bytes, limit int64) error {
	sum := bytes
	for _, rec := range tx.Records() {
		if rec.File != nil && strings.HasPrefix(rec.Key, hex.EncodeToString(key[:])+".") &&
			!slices.ContainsFunc(parts, func(p part) bool { return partKey(key, p.name) == rec.Key }) {
			sum += rec.File.Size
		}
	}
	if sum <= limit {
		return nil
	}
	rec, ok := tx.Find(partKey(key, tetrahedraPart))
	if !ok || rec.File == nil || slices.ContainsFunc(parts, func(p part) bool { return p.name == tetrahedraPart }) {
		return &tooLargeError{sum, limit}
	}
	tx.Delete(rec.Key)
	if sum -= rec.File.Size; sum > limit {
		return &tooLargeError{sum, limit}
	}
	return nil
}

// mayNotWrite tells of an error that the folder may be read and not written.
func mayNotWrite(err error) bool {
	return errors.Is(err, fs.ErrPermission) || errors.Is(err, syscall.EROFS)
}

// storedArrays is a diagram as the arrays of a record.
func storedArrays(s *voronoi.Stored) store.Arrays {
	return store.Arrays{
		{Name: "key", U8: s.Key}, {Name: "facts", F64: s.Facts}, {Name: "points", F64: s.Points}, {Name: "order", I32: s.Order},
		{Name: "cell", I32: s.Cell}, {Name: "site", I32: s.Site}, {Name: "count", I32: s.Count},
		{Name: "outside", I32: s.Outside}, {Name: "outside_distance", F64: s.OutsideDistance}, {Name: "on_wall", I32: s.OnWall},
		{Name: "groups", I32: s.Groups}, {Name: "places", F64: s.Places}, {Name: "plain", F64: s.Plain},
		{Name: "plain_order", I32: s.PlainOrder}, {Name: "plain_of", I32: s.PlainOf},
	}
}

// stored is the way back.
func stored(a store.Arrays) *voronoi.Stored {
	f64 := func(name string) []float64 { return a.Find(name).F64 }
	i32 := func(name string) []int32 { return a.Find(name).I32 }
	return &voronoi.Stored{
		Key: a.Find("key").U8, Facts: f64("facts"), Points: f64("points"), Order: i32("order"),
		Cell: i32("cell"), Site: i32("site"), Count: i32("count"),
		Outside: i32("outside"), OutsideDistance: f64("outside_distance"), OnWall: i32("on_wall"),
		Groups: i32("groups"), Places: f64("places"), Plain: f64("plain"),
		PlainOrder: i32("plain_order"), PlainOf: i32("plain_of"),
	}
}

// distinct tells whether a kept diagram has so many sites, each inside and alone at its
// place. Errors are told by whoever uses it.
func (k *Keeper) distinct(key Key, sites int) bool {
	arrays, err := k.find(key, indexPart)
	return err == nil && arrays != nil && stored(arrays).Distinct() == sites
}

// diagram is the kept diagram of a key; nil where there is none.
func (k *Keeper) diagram(key Key, sites int, o voronoi.Options) (*voronoi.Diagram, error) {
	arrays, err := k.find(key, indexPart)
	if err != nil || arrays == nil {
		return nil, err
	}
	d, err := voronoi.Restore(stored(arrays), o)
	if err == nil && d.Len() != sites {
		err = errors.New("it has another number of sites")
	}
	if err != nil {
		return nil, fmt.Errorf("the kept diagram %s is not used: %w", hex.EncodeToString(key[:]), err)
	}
	return d, nil
}
