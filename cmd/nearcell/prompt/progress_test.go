package prompt

import (
	"fmt"
	"strings"
	"testing"
	"time"
)

// clock is a progress whose time the test sets.
func clock(w *strings.Builder) (p *progress, forward func(time.Duration)) {
	now := time.Unix(1e9, 0)
	p = newProgress(w, func() int { return 60 })
	p.now = func() time.Time { return now }
	p.rest()
	return p, func(d time.Duration) { now = now.Add(d) }
}

func TestProgressLine(t *testing.T) {
	var w strings.Builder
	p, forward := clock(&w)
	forward(900 * time.Millisecond)
	p.draw()
	if w.Len() > 0 {
		t.Fatalf("short work is told of: %q", w.String())
	}
	p.report(0, 1000)
	forward(2 * time.Second)
	p.report(250, 1000)
	p.draw()
	if got, want := w.String(), "\r25 % (250 of 1000), 125 a second, 6 s left\x1b[K"; got != want {
		t.Fatalf("%q, not %q", got, want)
	}
	w.Reset()
	fmt.Fprint(p.writer(&w), "a note\n")
	if got, want := w.String(), "\r\x1b[Ka note\n"; got != want {
		t.Fatalf("%q, not %q", got, want)
	}
	w.Reset()
	p.draw()
	if w.Len() > 0 {
		t.Fatalf("told of work that is over: %q", w.String())
	}
}

// A new total, or less done than before, is a new piece of work: the rate is its
// own.
func TestProgressBeginsAnew(t *testing.T) {
	var w strings.Builder
	p, forward := clock(&w)
	p.report(0, 100)
	forward(10 * time.Second)
	p.report(90, 100)
	forward(time.Second)
	p.report(0, 500)
	forward(time.Second)
	p.report(50, 500)
	if got, want := p.line(p.now()), "10 % (50 of 500), 50 a second, 9 s left"; got != want {
		t.Errorf("%q, not %q", got, want)
	}
	p.report(500, 500)
	if got := p.line(p.now()); !strings.HasPrefix(got, "working, 12 s") {
		t.Errorf("after the last cell: %q", got)
	}
}

func TestProgressFitsTheTerminal(t *testing.T) {
	var w strings.Builder
	p, forward := clock(&w)
	p.width = func() int { return 12 }
	p.report(0, 1_000_000_000)
	forward(5 * time.Second)
	p.report(3, 1_000_000_000)
	p.draw()
	line := strings.TrimSuffix(strings.TrimPrefix(w.String(), "\r"), "\x1b[K")
	if len(line) > 11 || line == "" {
		t.Errorf("%q is wider than the terminal, or nothing", line)
	}
}

func TestDurations(t *testing.T) {
	for d, want := range map[time.Duration]string{
		400 * time.Millisecond: "0 s", 59 * time.Second: "59 s", 61 * time.Second: "1 min 1 s",
		2*time.Hour + 3*time.Minute: "2 h 3 min", 59*time.Second + 600*time.Millisecond: "1 min 0 s",
	} {
		if got := duration(d); got != want {
			t.Errorf("%v is written %q, not %q", d, got, want)
		}
	}
}

func TestWords(t *testing.T) {
	said := "input:1: wrong\n  SELECT x\n         ^\n"
	for _, c := range []struct {
		colour    bool
		say, want string
	}{
		{false, said, said},
		{true, said, "input:1: wrong\n  SELECT x\n" + red + "         ^" + plain + "\n"},
		{true, "note: short\n", dim + "note: short" + plain + "\n"},
		{true, "warning: short\n", yellow + "warning: short" + plain + "\n"},
		{true, "1 row, 0.1 s\n", "1 row, 0.1 s\n"},
		{false, "input:1: there is no such thing\n  a + b\n      ^\n", "input:1: there is no\n    such thing\n  a + b\n      ^\n"},
		{false, "input:1: no\n  SELECT a, b, c FROM somewhere;\n                      ^^^^^\n", "input:1: no\n… , c FROM somewhere\n           ^^^^^\n"},
		{false, "note: one two three four five six\n", "note: one two three\n      four five six\n"},
		{false, "note: onetwothreefourfivesixseveneight nine\n", "note: onetwothreefourfivesixseveneight\n      nine\n"},
	} {
		var b strings.Builder
		n, err := words{&b, func() int { return 22 }, c.colour}.Write([]byte(c.say))
		if n != len(c.say) || err != nil || b.String() != c.want {
			t.Errorf("%q was written %q, not %q (%d, %v)", c.say, b.String(), c.want, n, err)
		}
	}
}
