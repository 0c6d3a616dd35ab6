package catalog

import (
	"crypto/sha256"
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
	Frame
)

var kindNames = [...]string{"", "CAMPAIGN", "TABLE", "SOLID", "VIEW", "FRAME"}

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

	Table   *column.Table // Campaign: id, x, y, z and the attributes; Table: as read; Solid: what it took from files. Nil in a List.
	Text    string        // Solid, View: the canonical text; Table, Campaign: that of the query that made it, if one did; Frame: how it brings coordinates over
	System  string        // of what has coordinates: the frame that they were brought from, "GEOGRAPHIC lat lon", or "": as they came
	Options CampaignOptions
	Sources []SourceFile
	Notes   []string // facts of the import worth repeating
	Created time.Time
	Rows    int // of the table, also where Table is nil

	key *contentKey
}

// CampaignOptions are the clauses of a campaign.
type CampaignOptions struct {
	LengthUnit string     `json:"length_unit,omitempty"` // "" is taken as m by the engine
	Within     string     `json:"within,omitempty"`      // solid expression, canonical text
	Zones      []string   `json:"zones,omitempty"`       // solids that are zones
	Stretched  [3]float64 `json:"stretched"`             // all zero: not stretched
	Duplicates string     `json:"duplicates,omitempty"`  // SPLIT, MEAN, FIRST, FAIL; "": not said
	Tolerance  float64    `json:"tolerance,omitempty"`
}

// SourceFile is a file that an object was read from.
type SourceFile struct {
	Path    string    `json:"path"`
	SHA256  string    `json:"sha256"`
	Size    int64     `json:"size"`
	ModTime time.Time `json:"modified"`
	Rows    int       `json:"rows"`
}

type contentKey struct {
	once sync.Once
	sum  [16]byte
}

// ContentKey is a fingerprint of what the object holds, of its table or, where
// it has none, of its text. It does not depend on its name. It is computed at
// the first call.
func (o *Object) ContentKey() [16]byte {
	if o.key == nil { // not out of a catalog
		return o.fingerprint()
	}
	o.key.once.Do(func() { o.key.sum = o.fingerprint() })
	return o.key.sum
}

func (o *Object) fingerprint() [16]byte {
	if o.Table != nil && o.Kind == Solid {
		key := o.Table.Key()
		sum := sha256.Sum256(append(key[:], o.Text...))
		return [16]byte(sum[:16])
	}
	if o.Table != nil {
		return o.Table.Key()
	}
	sum := sha256.Sum256([]byte(o.Text))
	return [16]byte(sum[:16])
}
