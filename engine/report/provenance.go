package report

// Provenance is what a report rests on.
type Provenance struct {
	Program string // name and version
	Values  []Value
	Inputs  []Input
	Scripts []Script
}

// Value is one that was set from outside the script.
type Value struct{ Name, Text string }

// Input is an object of the catalog that a statement read, and the files that it was
// made from.
type Input struct {
	Name, Kind string
	Text       string // a solid's or a view's
	Rows       int
	Files      []File
}

// File is a file as it was when it was read.
type File struct {
	Path, SHA256 string
	Bytes        int64
	Rows         int
}

// Script is the text of a script that ran.
type Script struct{ Name, SHA256, Text string }

// Shown is the text with what no XML may hold replaced.
func (s Script) Shown() string { return lines(s.Text) }
