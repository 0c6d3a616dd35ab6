package prompt

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"slices"
	"strings"
	"sync/atomic"
	"time"

	"github.com/chzyer/readline"
	"golang.org/x/term"

	"nearcell/engine"
)

const (
	ask      = "ask: "
	goOn     = "   : "
	textName = "input" // what errors call what was typed
)

// patience is how long a statement may take to stop before the user is told.
const patience = time.Second

// Options are what a prompt is for.
type Options struct {
	Terminal *Terminal
	Session  *engine.Session
	Version  string
	Catalog  string // folder of the catalog, where the history is kept; "" for none
	Folder   string // where relative paths start
	Quiet    bool   // no greeting
}

// ErrTerminated says that a signal has ended the prompt.
var ErrTerminated = errors.New("terminated")

// prompt is one run of the prompt.
type prompt struct {
	o       Options
	edit    *readline.Instance
	adapter *adapter
	history *history
	words   io.Writer // hints and the greeting
	keys    chan struct{}
	lines   chan typedLine
	signals chan os.Signal
	length  int                      // of the line; known to the library's goroutine only
	asked   atomic.Pointer[[]string] // what the library's history is to become
}

// typedLine is what the library gives for a line.
type typedLine struct {
	text string
	err  error
}

// Run asks until the user ends it. It leaves the terminal as it was, whatever
// happens.
func Run(o Options) (err error) {
	fd := int(o.Terminal.in.Fd())
	before, err := term.GetState(fd)
	if err != nil {
		return fmt.Errorf("the terminal gives no state: %w", err)
	}
	defer func() { _ = term.Restore(fd, before) }() // it is gone if this fails
	p := &prompt{
		o: o, history: openHistory(o.Catalog), words: o.Terminal.err,
		keys: make(chan struct{}), lines: make(chan typedLine), signals: make(chan os.Signal, 4),
	}
	signal.Notify(p.signals, endingSignals...)
	defer signal.Stop(p.signals)
	if err := p.open(before); err != nil {
		return err
	}
	if !o.Quiet {
		where := "nothing is kept"
		if o.Catalog != "" {
			where = "catalog " + o.Catalog
		}
		fmt.Fprint(p.screen(), greeting(o.Session, o.Version, where, o.Folder))
	}
	go p.read()
	return p.loop()
}

// screen is where the line is edited: the standard output, or the standard error
// if that goes to a file.
func (p *prompt) screen() *os.File {
	if p.o.Terminal.outIs {
		return p.o.Terminal.out
	}
	return p.o.Terminal.err
}

// open makes the line editor.
func (p *prompt) open(before *term.State) error {
	screen := p.screen()
	fd := int(p.o.Terminal.in.Fd())
	size := func() (int, int) { return sizeOf(screen) }
	p.adapter = &adapter{c: &completer{session: p.o.Session, folder: p.o.Folder}, size: size}
	enter := func() error {
		_, err := readline.MakeRaw(fd) // the library's: output lines still begin at the left
		return err
	}
	exit := func() error { return term.Restore(fd, before) }
	config := p.config(&keys{in: p.o.Terminal.in}, screen, enter, exit)
	edit, err := readline.NewEx(config)
	p.edit = edit
	p.renewHistory()
	return err
}

// config sets the line editor up.
func (p *prompt) config(in io.ReadCloser, out io.Writer, enter, exit func() error) *readline.Config {
	return &readline.Config{
		Prompt:                 ask,
		Stdin:                  in,
		Stdout:                 out,
		Stderr:                 out,
		HistoryLimit:           historyLines + 1,
		DisableAutoSaveHistory: true,
		HistorySearchFold:      true,
		AutoComplete:           p.adapter,
		InterruptPrompt:        "^C",
		EOFPrompt:              "\n",
		FuncGetWidth:           p.adapter.width,
		FuncIsTerminal:         func() bool { return true },
		FuncMakeRaw:            enter,
		FuncExitRaw:            exit,
		FuncFilterInputRune: func(r rune) (rune, bool) {
			p.loadHistory()
			if op := p.edit.Operation; r == readline.CharKill && op.IsInCompleteMode() {
				op.ExitCompleteMode(false) // it would show candidates that it has forgotten, and die of it
			}
			return filter(r, p.length, func() { suspend(exit, enter) })
		},
		Listener: readline.FuncListener(func(line []rune, _ int, _ rune) ([]rune, int, bool) {
			p.length = len(line)
			return nil, 0, false
		}),
	}
}

// renewHistory says that the library is to get what was asked so far. It gets it
// anew after each statement, since it would put a line that was recalled and
// changed in another's place.
func (p *prompt) renewHistory() {
	lines := slices.Clone(p.history.lines)
	p.asked.Store(&lines)
}

// loadHistory gives the library its history before it looks at the next key. It
// runs in the library's own goroutine, which may be busy with keys that were
// typed ahead: a history that changes under it ends the program.
func (p *prompt) loadHistory() {
	lines := p.asked.Swap(nil)
	if lines == nil {
		return
	}
	p.edit.ResetHistory()
	if len(*lines) == 0 {
		p.edit.SaveHistory("") // its search dies of a history without any line
	}
	for _, line := range *lines {
		p.edit.SaveHistory(line) // fails only where the library keeps a file, and it keeps none
	}
}

// read reads a line each time it is asked to.
func (p *prompt) read() {
	for range p.keys {
		text, err := p.edit.Readline()
		p.lines <- typedLine{text, err}
	}
}

// line asks for one line.
func (p *prompt) line(mark string) (string, error) {
	p.edit.SetPrompt(mark)
	p.adapter.need.Store(0)
	fmt.Fprint(p.screen(), askForPaste)
	defer fmt.Fprint(p.screen(), noMorePaste)
	p.keys <- struct{}{}
	for {
		select {
		case l := <-p.lines:
			return l.text, l.err
		case s := <-p.signals:
			if s != os.Interrupt {
				fmt.Fprintln(p.screen())
				return "", ErrTerminated
			}
		}
	}
}

// loop gathers lines and runs statements.
func (p *prompt) loop() error {
	var g gathered
	for {
		mark := ask
		if g.text != "" {
			mark = goOn
		}
		p.adapter.gathered = g.text
		line, err := p.line(mark)
		switch {
		case errors.Is(err, readline.ErrInterrupt):
			if g.text == "" && strings.TrimSpace(line) == "" {
				p.hint("QUIT; or Ctrl-D ends")
			}
			g.take()
			continue
		case errors.Is(err, io.EOF): // the line editor has ended its line
			if !g.empty() {
				p.hint("the last statement was not ended with ; and did not run")
			}
			return nil
		case err != nil:
			return err
		}
		if !g.add(line) {
			p.hint(g.hint())
			continue
		}
		if g.empty() {
			g.take()
			continue
		}
		if ended, err := p.run(g.take()); ended || err != nil {
			return err
		}
	}
}

// hint says something beside results.
func (p *prompt) hint(text string) {
	if text == "" || p.o.Quiet {
		return
	}
	if p.o.Terminal.colour {
		text = dim + text + plain
	}
	fmt.Fprintln(p.words, text)
}

// run runs statements and remembers them.
func (p *prompt) run(text string) (ended bool, err error) {
	if isExit(text) {
		return true, nil
	}
	for _, line := range oneLines(text) {
		p.history.add(line)
	}
	p.renewHistory()
	return p.execute(text)
}

// execute runs a text until it is done or stopped by Ctrl-C, which ends nothing
// but the statement.
func (p *prompt) execute(text string) (ended bool, err error) {
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	done := make(chan struct{})
	watched := make(chan os.Signal, 1)
	go p.watch(cancel, done, watched)
	stop := p.o.Terminal.Working()
	quit, err := p.o.Session.RunUntilQuit(ctx, textName, text, p.o.Folder)
	stop()
	close(done)
	if s := <-watched; s != nil && s != os.Interrupt {
		return true, ErrTerminated
	}
	switch {
	case ctx.Err() != nil:
		fmt.Fprintln(p.words, "interrupted")
	case err != nil && !errors.Is(err, engine.ErrFailed):
		return true, err
	}
	return quit, nil
}

// watch cancels at a signal and says which one it was when the work is done. Who
// asks a second time and has waited long enough ends the program.
func (p *prompt) watch(cancel func(), done <-chan struct{}, got chan<- os.Signal) {
	var first os.Signal
	var slow <-chan time.Time
	told := false
	for {
		select {
		case <-done:
			got <- first
			return
		case s := <-p.signals:
			if told {
				leave(p)
			}
			if first == nil || s != os.Interrupt {
				first = s
			}
			cancel()
			slow = time.After(patience)
		case <-slow:
			told = true
			fmt.Fprintln(p.o.Terminal.Err(), "stopping; Ctrl-C once more ends the program at once")
		}
	}
}

// leave ends the program while a statement does not stop. The terminal is not
// raw while a statement runs; what the catalog keeps is whole at any moment.
func leave(p *prompt) {
	fmt.Fprintln(p.screen())
	os.Exit(exitInterrupted)
}

const exitInterrupted = 130
