// Package note collects what a statement has to say beside its numbers: what
// was left out, merged, unbounded or assumed. Notes are merged and sorted, so
// that they do not depend on timing.
package note

import (
	"fmt"
	"sort"
	"sync"
)

// Level is how loud a note is.
type Level uint8

// A Warning fails a run under --strict, a Note never does.
const (
	Warning Level = iota
	Note
)

// String is the word that begins the printed line.
func (l Level) String() string {
	if l == Warning {
		return "warning"
	}
	return "note"
}

// Line is one note. Rank orders the lines of one level: small ranks are about
// the input, large ones about the answer.
type Line struct {
	Level Level
	Rank  int
	Text  string
}

// Ranks of the subjects, in the order in which they are read.
const (
	Import   = 10 // files and campaigns
	Sites    = 20 // sites left out, merged, on walls
	Cells    = 30 // unbounded, clipped, undefined measures
	Rows     = 40 // rows removed or repeated
	Weights  = 50 // weights, n_eff, weight without value
	Output   = 60 // what the table leaves out, what was saved
	Slowness = 70 // why it took long
)

// Notes is the collection of one statement; safe for concurrent use.
type Notes struct {
	mu    sync.Mutex
	lines map[Line]struct{}
}

// Add records a line once, however often it is said.
func (n *Notes) Add(level Level, rank int, format string, args ...any) {
	n.mu.Lock()
	defer n.mu.Unlock()
	if n.lines == nil {
		n.lines = map[Line]struct{}{}
	}
	n.lines[Line{level, rank, fmt.Sprintf(format, args...)}] = struct{}{}
}

// Lines are the notes so far: warnings first, then by rank and text.
func (n *Notes) Lines() []Line {
	n.mu.Lock()
	defer n.mu.Unlock()
	lines := make([]Line, 0, len(n.lines))
	for l := range n.lines {
		lines = append(lines, l)
	}
	sort.Slice(lines, func(i, j int) bool {
		a, b := lines[i], lines[j]
		if a.Level != b.Level {
			return a.Level < b.Level
		}
		if a.Rank != b.Rank {
			return a.Rank < b.Rank
		}
		return a.Text < b.Text
	})
	return lines
}
