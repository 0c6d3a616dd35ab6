package store

import (
	"bytes"
	"encoding/json"
	"fmt"
	"sort"

	"github.com/cespare/xxhash/v2"
)

// version is that of the folder's layout. A program refuses newer ones.
const version = 1

const format = "nearcell catalog"

// Record is one entry of the manifest.
type Record struct {
	Key  string          `json:"key"`
	File *File           `json:"file,omitempty"` // nil: it has no table
	Meta json.RawMessage `json:"meta"`           // the caller's, any JSON
}

// File is the file of a table.
type File struct {
	Name  string `json:"name"` // below columns
	Size  int64  `json:"size"`
	XXH64 string `json:"xxh64"`
	Rows  int    `json:"rows"`
}

// manifest is the list of what the folder holds.
type manifest struct {
	Generation uint64   `json:"generation"` // grows by one with every change
	Objects    []Record `json:"objects"`    // sorted by key
}

// envelope is the manifest's file. The body is kept byte for byte, since the
// checksum is over its bytes.
type envelope struct {
	Format   string          `json:"format"`
	Version  int             `json:"version"`
	Checksum string          `json:"checksum"`
	Body     json.RawMessage `json:"body"`
}

func checksum(b []byte) string { return hashText(xxhash.Sum64(b)) }

func hashText(sum uint64) string { return fmt.Sprintf("%016x", sum) }

// render is the manifest's file. It is JSON; a person may read it but a changed
// one is taken for damaged.
func (m *manifest) render() ([]byte, error) {
	sort.Slice(m.Objects, func(i, j int) bool { return m.Objects[i].Key < m.Objects[j].Key })
	body, err := json.MarshalIndent(m, "", "  ")
	if err != nil {
		return nil, err
	}
	return seal(version, body), nil
}

func seal(version int, body []byte) []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, "{\"format\": %q, \"version\": %d, \"checksum\": %q, \"body\": %s}\n", format, version, checksum(body), body)
	return b.Bytes()
}

// parseManifest reads a manifest's file and checks it.
func parseManifest(path string, data []byte) (*manifest, error) {
	var e envelope
	damaged := func(why string) error { return &DamagedError{Path: path, Reason: why} }
	if err := json.Unmarshal(data, &e); err != nil {
		return nil, damaged(err.Error())
	}
	if e.Format != format {
		return nil, damaged("it is no manifest")
	}
	if e.Version > version {
		return nil, &NewerError{Path: path, Version: e.Version, Newest: version}
	}
	if !bytes.Equal(data, seal(e.Version, e.Body)) || e.Version < 1 {
		return nil, damaged("its checksum does not fit")
	}
	m := &manifest{}
	if err := json.Unmarshal(e.Body, m); err != nil {
		return nil, damaged(err.Error())
	}
	return m, nil
}

// clone is a copy whose list can be changed.
func (m *manifest) clone() *manifest {
	return &manifest{Generation: m.Generation, Objects: append([]Record(nil), m.Objects...)}
}

func (m *manifest) find(key string) int {
	for i := range m.Objects {
		if m.Objects[i].Key == key {
			return i
		}
	}
	return -1
}
