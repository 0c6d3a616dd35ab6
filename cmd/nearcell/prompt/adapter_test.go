package prompt

import (
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/chzyer/readline"
	"github.com/clipperhouse/displaywidth"
	"pgregory.net/rapid"
)

// wideSession has names of all widths.
func wideSession(t testing.TB) *completer {
	folder := t.TempDir()
	for _, n := range []string{strings.Repeat("long", 40) + ".csv", "幅の広い名前のファイル.csv", "x.csv"} {
		if err := os.WriteFile(filepath.Join(folder, n), nil, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	s := session(t, folder, `CREATE TABLE w AS (SELECT 1 AS "`+strings.Repeat("wide", 50)+`", 2 AS wider, 3 AS 幅の広い列名, 4 AS 幅, 5 AS a);`)
	return &completer{session: s, folder: folder}
}

// What is offered never is wider than the terminal, begins with what is typed,
// and is never empty, whatever the terminal's size.
func TestAdapterFitsTheTerminal(t *testing.T) {
	c := wideSession(t)
	lines := []string{"", "SELECT ", "SELECT w", "SELECT 幅", "SELECT a, 幅の", "SELECT \"w", "CREATE TABLE t FROM '", "CREATE TABLE t FROM '幅", "RUN ", "S"}
	rapid.Check(t, func(t *rapid.T) {
		width, height := rapid.IntRange(1, 100).Draw(t, "width"), rapid.IntRange(1, 30).Draw(t, "height")
		a := &adapter{c: c, size: func() (int, int) { return width, height }}
		line := []rune(rapid.SampledFrom(lines).Draw(t, "line"))
		rest, length := a.Do(line, len(line))
		for _, r := range rest {
			if len(r) == 0 {
				t.Fatal("an empty candidate")
			}
			if w := displaywidth.String(string(r)) + length + 2; w > width {
				t.Fatalf("%q needs %d of %d columns", string(r), w, width)
			}
		}
		if length > 0 && displaywidth.String(string(line[len(line)-length:])) != length {
			t.Fatalf("the library would take %d characters for as many columns", length)
		}
	})
}

// What is dropped for want of lines never makes the rest have more in common.
func TestFittingKeepsWhatIsCommon(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		all := rapid.SliceOfN(rapid.StringMatching(`[ab]{1,4}`), 1, 60).Draw(t, "all")
		kept, _ := fitting(slices.Clone(all), 0, 10, 5)
		if common(kept) != common(all) {
			t.Fatalf("%q have %q in common, all have %q", kept, common(kept), common(all))
		}
	})
}

func common(list []string) string {
	c := list[0]
	for _, s := range list {
		for !strings.HasPrefix(s, c) {
			c = c[:len(c)-1]
		}
	}
	return c
}

// TestRandomKeys types at random into the line editor as the prompt sets it up. A
// panic of the library would be in a goroutine of its own and end this test.
func TestRandomKeys(t *testing.T) {
	c := wideSession(t)
	pieces := []string{"\t", "\t\t", "\x12", "\x13", "\x07", "\x03", "\x01", "\x05", "\x02", "\x06", "\x0b", "\x0e", "\x10", "\x14", "\x15",
		"\x17", "\x19", "\x7f", "\x08", "\x0c", "\x1b[A", "\x1b[B", "\x1b[C", "\x1b[D", "\x1b[H", "\x1b[F", "\x1b[3~", "\x1bb", "\x1bf", "\x1bd", "\x1b\x7f",
		"\x1bt", "\x1b\x1b", "\x0f", "\x1c", "\x1b\x14", "\xff", "\r", "\r", "SELECT ", "w", "幅", "a", "'", "\"", "CREATE TABLE t FROM '", "(", ";", " ", "é́", "QU"}
	for seed := uint64(1); seed <= 8; seed++ {
		typeAtRandom(t, c, pieces, seed)
	}
}

func typeAtRandom(t *testing.T, c *completer, pieces []string, seed uint64) {
	t.Helper()
	input, typing := io.Pipe()
	state := seed
	next := func(n int) int {
		state = state*6364136223846793005 + 1442695040888963407
		return int(state>>33) % n
	}
	width := 4 + next(40)
	a := &adapter{c: c, size: func() (int, int) { return width, 8 }}
	p := &prompt{history: &history{lines: []string{"SELECT 1;", "SELECT wider FROM w;"}[:next(3)]}, adapter: a}
	config := p.config(&keys{in: input}, io.Discard, func() error { return nil }, func() error { return nil })
	edit, err := readline.NewEx(config)
	if err != nil {
		t.Fatal(err)
	}
	p.edit = edit
	p.renewHistory()
	const most = 1000
	go func() {
		for range most {
			fmt.Fprint(typing, pieces[next(len(pieces))])
		}
		typing.Close()
	}()
	lines := make(chan error, 1)
	end := time.After(patient)
	for {
		go func() { _, err := edit.Readline(); lines <- err }()
		select {
		case err := <-lines:
			if err == io.EOF {
				return
			}
			p.renewHistory()
		case <-end:
			t.Fatalf("seed %d: the editor hangs", seed)
		}
	}
}
