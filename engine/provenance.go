package engine

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"io"
	"os"
	"sort"
	"time"

	"nearcell/catalog"
	"nearcell/engine/note"
	"nearcell/lang"
)

// provenanceEnding is what the name of the file beside a saved one ends with.
const provenanceEnding = ".provenance.json"

// provenance is what a saved result rests on, so that it can be made again and
// so that its notes travel with it.
type provenance struct {
	File      string            `json:"file"`
	SHA256    string            `json:"sha256"`
	Rows      int64             `json:"rows"`
	Written   time.Time         `json:"written"`
	Program   string            `json:"program"`
	Script    string            `json:"script"`
	Statement string            `json:"statement"`
	Values    map[string]string `json:"values,omitempty"` // of the :names that are set
	Inputs    []provenanceInput `json:"inputs"`
	Notes     []string          `json:"notes,omitempty"`
	// Requirements are those whose verdicts the statement reads.
	Requirements []provenanceRequirement `json:"requirements,omitempty"`
}

// provenanceRequirement is what a verdict rests on.
type provenanceRequirement struct {
	Requirement string `json:"requirement"`
	Verdict     string `json:"verdict"`
	Script      string `json:"script"`
	Statement   string `json:"statement"`
}

// provenanceInput is an object of the catalog that the statement reads, or that
// something it reads rests on.
type provenanceInput struct {
	Name    string             `json:"name"`
	Kind    string             `json:"kind"`
	Text    string             `json:"text,omitempty"`   // a solid's or a view's
	System  string             `json:"system,omitempty"` // the frame, or the origin, that its coordinates were brought from
	Options *provenanceOptions `json:"options,omitempty"`
	Rows    int                `json:"rows,omitempty"`
	Created time.Time          `json:"created"`
	Files   []provenanceFile   `json:"files,omitempty"`
	Notes   []string           `json:"notes,omitempty"` // of its making
}

// provenanceOptions are the clauses of a campaign, those not said included.
type provenanceOptions struct {
	Within      string      `json:"within,omitempty"` // zones in parentheses
	Stretched   *[3]float64 `json:"stretched,omitempty"`
	Duplicates  string      `json:"duplicates"`
	Tolerance   float64     `json:"tolerance"`
	Coordinates string      `json:"coordinates"`
}

type provenanceFile struct {
	Path     string    `json:"path"`
	SHA256   string    `json:"sha256"`
	Bytes    int64     `json:"bytes"`
	Rows     int       `json:"rows"`
	Modified time.Time `json:"modified"`
}

// saveProvenance writes the file beside a saved one.
func (s *Session) saveProvenance(st *statement, t *lang.Save, rows int64) error {
	path := st.path(t.To.Value)
	sum, err := fileSum(path)
	if err != nil {
		return fileProblem(err, st.at(t.To), t.To.Value, "be read again")
	}
	p := provenance{
		File: t.To.Value, SHA256: sum, Rows: rows, Written: time.Now().UTC().Truncate(time.Second),
		Program: s.o.Program, Script: st.source.Name,
		Statement: st.source.Text[t.Span().Start:t.Span().End],
		Inputs:    s.inputs(t),
	}
	if s.readsVerdicts(t) {
		for i := range s.verdicts {
			v := &s.verdicts[i]
			p.Requirements = append(p.Requirements, provenanceRequirement{v.label, v.result, v.script, v.text})
		}
	}
	for name, v := range s.params {
		if p.Values == nil {
			p.Values = map[string]string{}
		}
		p.Values[name] = v.Type.String() + " " + v.String()
	}
	for _, l := range st.notes.Lines() {
		p.Notes = append(p.Notes, l.Level.String()+": "+l.Text)
	}
	var text bytes.Buffer
	e := json.NewEncoder(&text)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	if err := e.Encode(p); err != nil {
		return err
	}
	beside := t.To.Value + provenanceEnding
	err = WriteAside(path+provenanceEnding, func(f *os.File) error {
		_, err := f.Write(text.Bytes())
		return err
	})
	return fileProblem(err, st.at(t.To), beside, "be written")
}

// noteStaleProvenance says that a file beside the saved one tells of an older one.
func noteStaleProvenance(st *statement, t *lang.Save) {
	if _, err := os.Stat(st.path(t.To.Value) + provenanceEnding); err == nil {
		st.notes.Add(note.Warning, note.Output, "%s%s tells of an older file: WITH PROVENANCE writes it anew",
			t.To.Value, provenanceEnding)
	}
}

func fileSum(path string) (string, error) {
	f, err := os.Open(path)
	if err != nil {
		return "", err
	}
	defer f.Close()
	h := sha256.New()
	if _, err := io.Copy(h, f); err != nil {
		return "", err
	}
	return hex.EncodeToString(h.Sum(nil)), nil
}

// inputs are the things of the catalog that a statement names, and those that
// they name in turn, by name.
func (s *Session) inputs(tree lang.Node) []provenanceInput {
	found := map[string]*catalog.Object{}
	s.follow(tree, found)
	if s.readsVerdicts(tree) {
		for i := range s.verdicts {
			s.follow(s.verdicts[i].tree, found)
		}
	}
	keys := make([]string, 0, len(found))
	for k := range found {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	list := []provenanceInput{}
	for _, k := range keys {
		o := found[k]
		in := provenanceInput{Name: o.Name, Kind: o.Kind.String(), Text: o.Text, System: o.System, Rows: o.Rows, Created: o.Created, Notes: o.Notes}
		if o.Kind == catalog.Frame {
			var k keptFrame
			if err := json.Unmarshal([]byte(o.Text), &k); err == nil {
				in.Text = s.frameText(&k)
			}
		}
		if o.Kind == catalog.Campaign {
			in.Options = &provenanceOptions{
				Within: withinOf(o), Duplicates: duplicatesOf(o), Tolerance: o.Options.Tolerance,
				Coordinates: lengthUnitOf(o),
			}
			if o.Options.Stretched != [3]float64{} {
				in.Options.Stretched = &o.Options.Stretched
			}
		}
		for _, f := range o.Sources {
			in.Files = append(in.Files, provenanceFile{Path: f.Path, SHA256: f.SHA256, Bytes: f.Size, Rows: f.Rows, Modified: f.ModTime})
		}
		list = append(list, in)
	}
	return list
}

// readsVerdicts reports whether a statement reads the list of verdicts; a view
// between them hides it.
func (s *Session) readsVerdicts(tree lang.Node) bool {
	reads := false
	lang.Walk(tree, func(n lang.Node) bool {
		if source, ok := n.(*lang.NameSource); ok && source.Name.Is(verdictsName) {
			_, err := s.catalog.Get(source.Name.Key())
			reads = reads || err != nil
		}
		return true
	})
	return reads
}

// followFrame adds the frame by which an object's coordinates were brought over, where it
// is still the one that it was then.
func (s *Session) followFrame(o *catalog.Object, found map[string]*catalog.Object) {
	if o.System == "" {
		return
	}
	frames, err := s.catalog.List(catalog.Frame)
	if err != nil {
		return
	}
	for i := range frames {
		if f, err := s.catalog.Get(frames[i].Key); err == nil && catalog.FrameSystem(f.Name, f.Text) == o.System {
			found[f.Key] = f
		}
	}
}

// follow collects what a tree names. A name that WITH gave to a query of its own
// may stand for something of the catalog too; one too many is the lesser evil.
func (s *Session) follow(tree lang.Node, found map[string]*catalog.Object) {
	add := func(n lang.Name) {
		if n.IsZero() || found[n.Key()] != nil {
			return
		}
		o, err := s.catalog.Get(n.Key())
		if err != nil {
			return
		}
		found[n.Key()] = o
		s.followFrame(o, found)
		switch o.Kind {
		case catalog.View, catalog.Table:
			if o.Text == "" {
				return // read from files
			}
			if q, err := lang.ParseQuery(o.Text); err == nil {
				s.follow(q, found)
			}
		case catalog.Solid:
			s.followSolid(o.Text, found)
		case catalog.Campaign:
			s.followSolid(o.Options.Within, found)
			if q, err := lang.ParseQuery(o.Text); o.Text != "" && err == nil {
				s.follow(q, found)
			}
			for _, z := range o.Options.Zones {
				s.followSolid(z, found)
			}
		}
	}
	lang.Walk(tree, func(n lang.Node) bool {
		switch n := n.(type) {
		case *lang.NameSource:
			add(n.Name)
		case *lang.Name:
			add(*n)
		case *lang.SolidName:
			add(n.Name)
		case *lang.EnvelopeSolid:
			add(n.Of)
		case *lang.MeasuredInClause:
			for _, part := range n.Parts {
				add(part)
			}
		}
		return true
	})
}

func (s *Session) followSolid(text string, found map[string]*catalog.Object) {
	if text == "" {
		return
	}
	if tree, err := lang.ParseSolid(text); err == nil {
		s.follow(tree, found)
	}
}
