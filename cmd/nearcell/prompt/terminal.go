package prompt

import (
	"io"
	"os"

	"golang.org/x/term"
)

// Terminal is what people read: where results and words are written, how wide
// it is, and the line of progress. Where a stream is no terminal, it is passed
// through as it is.
type Terminal struct {
	in, out, err *os.File
	outIs, errIs bool // a terminal
	progress     *progress
	colour       bool
}

const (
	// screenRows is how many rows of a result the prompt prints.
	screenRows  = 40
	usualWidth  = 80
	usualHeight = 24
)

// NewTerminal looks at the three streams. showPlain is for no colour and no
// progress, silent for no progress.
func NewTerminal(in, out, err *os.File, showPlain, silent bool) *Terminal {
	t := &Terminal{in: in, out: out, err: err, outIs: isTerminal(out), errIs: isTerminal(err)}
	smart := os.Getenv("TERM") != "dumb"
	t.colour = t.errIs && !showPlain && smart && os.Getenv("NO_COLOR") == ""
	if t.errIs && !showPlain && !silent && smart {
		t.progress = newProgress(err, func() int { w, _ := sizeOf(err); return w })
	}
	return t
}

func isTerminal(f *os.File) bool { return f != nil && term.IsTerminal(int(f.Fd())) }

// Interactive tells whether somebody can be asked.
func (t *Terminal) Interactive() bool { return isTerminal(t.in) }

// sizeOf is the size of a terminal; the usual one where it does not say.
func sizeOf(f *os.File) (width, height int) {
	width, height, err := term.GetSize(int(f.Fd()))
	if err != nil || width <= 0 {
		width = usualWidth
	}
	if err != nil || height <= 0 {
		height = usualHeight
	}
	return width, height
}

// Out is where results go: w, or the standard output.
func (t *Terminal) Out(w io.Writer) io.Writer {
	if t.progress == nil {
		return w
	}
	return t.progress.writer(w)
}

// Err is where words go.
func (t *Terminal) Err() io.Writer {
	var w io.Writer = t.err
	if t.errIs {
		w = words{w, func() int { width, _ := sizeOf(t.err); return width }, t.colour}
	}
	if t.progress == nil {
		return w
	}
	return t.progress.writer(w)
}

// Progress takes how far work has come; nil where nobody looks.
func (t *Terminal) Progress() func(done, total int) {
	if t.progress == nil {
		return nil
	}
	return t.progress.report
}

// Working shows progress until the function it gives is called.
func (t *Terminal) Working() (stop func()) {
	if t.progress == nil {
		return func() {}
	}
	return t.progress.start()
}

// Screen is the limit of tables for engine.Options; nil where the standard
// output is no terminal, since files and pipes get everything. rows limits the
// rows too, as the prompt does.
func (t *Terminal) Screen(rows bool) func() (width, most int) {
	if !t.outIs {
		return nil
	}
	return func() (int, int) {
		width, _ := sizeOf(t.out)
		if rows {
			return width, screenRows
		}
		return width, 0
	}
}
