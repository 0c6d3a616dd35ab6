package prompt

import (
	"fmt"
	"io"
	"strings"
	"sync"
	"time"

	"github.com/clipperhouse/displaywidth"
)

const (
	// quiet is how long work goes on before a line tells of it.
	quiet = time.Second
	// redraw is how often the line is written anew.
	redraw = 200 * time.Millisecond
)

// progress is the line that tells how far long work has come. It is rewritten in
// place, and gone before anything else is written.
type progress struct {
	mu    sync.Mutex
	w     io.Writer
	width func() int
	now   func() time.Time

	since       time.Time // when the work at hand began
	done, total int
	first       int // done when the phase was first told of
	begun       time.Time
	drawn       bool
}

func newProgress(w io.Writer, width func() int) *progress {
	return &progress{w: w, width: width, now: time.Now}
}

// report takes how much of the work is done; a new total is a new piece of work.
func (p *progress) report(done, total int) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if total != p.total || done < p.done || p.begun.IsZero() {
		p.begun, p.first = p.now(), done
	}
	p.done, p.total = done, total
}

// start and stop stand around work; stop takes the line away.
func (p *progress) start() (stop func()) {
	p.mu.Lock()
	p.rest()
	p.mu.Unlock()
	end, ended := make(chan struct{}), make(chan struct{})
	go func() {
		defer close(ended)
		tick := time.NewTicker(redraw)
		defer tick.Stop()
		for {
			select {
			case <-end:
				return
			case <-tick.C:
				p.draw()
			}
		}
	}()
	return func() {
		close(end)
		<-ended
		p.mu.Lock()
		defer p.mu.Unlock()
		p.clear()
	}
}

// rest forgets the work that was told of.
func (p *progress) rest() {
	p.since, p.begun = p.now(), time.Time{}
	p.done, p.total, p.first = 0, 0, 0
}

func (p *progress) clear() {
	if p.drawn {
		io.WriteString(p.w, "\r\x1b[K")
		p.drawn = false
	}
}

func (p *progress) draw() {
	p.mu.Lock()
	defer p.mu.Unlock()
	now := p.now()
	if now.Sub(p.since) < quiet {
		return
	}
	line := cutTo(p.line(now), max(1, p.width()-1))
	io.WriteString(p.w, "\r"+line+"\x1b[K")
	p.drawn = true
}

// line is what the user reads: share, rate and time left where they are known.
func (p *progress) line(now time.Time) string {
	if p.total <= 0 || p.done >= p.total || p.begun.IsZero() {
		return "working, " + duration(now.Sub(p.since)) + "   Ctrl-C stops it"
	}
	share := 100 * float64(p.done) / float64(p.total)
	line := fmt.Sprintf("%.0f %% (%d of %d)", share, p.done, p.total)
	spent := now.Sub(p.begun)
	if spent < redraw || p.done <= p.first {
		return line
	}
	rate := float64(p.done-p.first) / spent.Seconds()
	left := time.Duration(float64(p.total-p.done) / rate * float64(time.Second))
	return fmt.Sprintf("%s, %s a second, %s left", line, rateText(rate), duration(left))
}

func rateText(rate float64) string {
	if rate < 10 {
		return fmt.Sprintf("%.1f", rate)
	}
	return fmt.Sprintf("%.0f", rate)
}

// duration is a time to the second, in words short enough for a line.
func duration(d time.Duration) string {
	s := int(d.Round(time.Second) / time.Second)
	switch {
	case s < 60:
		return fmt.Sprintf("%d s", s)
	case s < 3600:
		return fmt.Sprintf("%d min %d s", s/60, s%60)
	}
	return fmt.Sprintf("%d h %d min", s/3600, s%3600/60)
}

// writer is w, with the line gone before anything is written to it.
func (p *progress) writer(w io.Writer) io.Writer { return clearing{p, w} }

type clearing struct {
	p *progress
	w io.Writer
}

// Write implements io.Writer.
func (c clearing) Write(b []byte) (int, error) {
	c.p.mu.Lock()
	defer c.p.mu.Unlock()
	c.p.clear()
	c.p.rest()
	return c.w.Write(b)
}

// words dims notes and marks warnings and carets, and breaks notes that are wider
// than the terminal at their blanks.
type words struct {
	w      io.Writer
	width  func() int
	colour bool
}

const (
	dim    = "\x1b[2m"
	yellow = "\x1b[33m"
	red    = "\x1b[31m"
	plain  = "\x1b[0m"
)

// Write implements io.Writer: what is written at once are whole lines.
func (c words) Write(b []byte) (int, error) {
	lines := strings.SplitAfter(string(b), "\n")
	for i, line := range lines {
		body, ended := strings.CutSuffix(line, "\n")
		style := ""
		switch {
		case strings.HasPrefix(line, "note: "):
			style, body = dim, broken(body, "      ", c.width())
		case strings.HasPrefix(line, "warning: "):
			style, body = yellow, broken(body, "         ", c.width())
		case isCaret(body):
			style = red
		case i+2 < len(lines) && isCaret(lines[i+2]): // what an error says
			body = broken(body, "    ", c.width())
		case i+1 < len(lines) && isCaret(lines[i+1]):
			body, lines[i+1] = nearCaret(body, lines[i+1], c.width())
		}
		if c.colour && style != "" {
			body = style + body + plain
		}
		if ended {
			body += "\n"
		}
		lines[i] = body
	}
	if _, err := io.WriteString(c.w, strings.Join(lines, "")); err != nil {
		return 0, err
	}
	return len(b), nil
}

// isCaret tells whether a line is the marks under a place.
func isCaret(line string) bool {
	return strings.Contains(line, "^") && strings.Trim(line, " \t^\n") == ""
}

// nearCaret cuts a line that is wider than the terminal to the part around the
// marks under it, so that both stay one below the other.
func nearCaret(line, marks string, width int) (string, string) {
	source, under := []rune(line), []rune(strings.TrimRight(marks, "\n"))
	if displaywidth.String(line) < width || width < leastWidth {
		return line, marks
	}
	caret := strings.IndexByte(marks, '^')
	left := max(0, min(caret-width/2, len(source)-width+2))
	source = source[left:min(len(source), left+width-2)]
	under = under[min(left, len(under)):min(len(under), left+width-2)]
	if left > 0 {
		source[0], source[1] = '…', ' '
	}
	return string(source), string(under) + "\n"
}

// broken breaks a line at blanks so that it fits, with the lines after the first
// indented.
func broken(line, indent string, width int) string {
	var b strings.Builder
	used := 0
	for i, word := range strings.Split(line, " ") {
		n := displaywidth.String(word)
		switch {
		case i == 0:
		case used+1+n >= width && used > len(indent):
			b.WriteString("\n" + indent)
			used = len(indent)
		default:
			b.WriteByte(' ')
			used++
		}
		b.WriteString(word)
		used += n
	}
	return b.String()
}
