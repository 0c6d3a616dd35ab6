package engine

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"time"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/diagram"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// Options are what a session does not ask the language for.
type Options struct {
	Out, Err  io.Writer
	Program   string         // name and version, for provenance
	Format    present.Format // of printed results; "": table
	Threads   int            // 0: all cores
	Memory    int64          // bytes for kept diagrams, and for one statement's intermediate results; 0: a default, no limit
	Strict    bool           // a warning fails its statement
	KeepGoing bool           // go on after a failing statement
	PlainText bool           // ASCII alone in maps: the terminal may have no UTF-8
	Quiet     bool           // no confirmations, no row counts; notes stay
	Progress  func(done, total int)
	// CommandLine are the commands and options of the program, for HELP.
	CommandLine []Switch
	// Screen gives the characters of a line and the rows that tables may take
	// where people read them, 0: no limit. It is asked for every result; nil is
	// for files and pipes, which get everything.
	Screen func() (width, rows int)
}

// Session is one user at one catalog. It is not safe for concurrent use.
type Session struct {
	o         Options
	catalog   *catalog.Catalog
	params    map[string]column.Value // under lang.Fold(name)
	fixed     map[string]bool         // set from outside (--let): LET does not change them
	diagrams  *diagram.Store
	places    *exec.Places // search trees of stored tables
	digits    int
	rowLimit  int      // of tables on a screen, 0: what the screen says
	results   int      // printed so far
	running   []string // scripts that RUN one another, for cycles
	last      error    // that was printed, for HELP ERROR
	checkOnly bool
	solids    *bind.SolidCache
	verdicts  []verdict  // of REQUIRE, in their order
	untold    []error    // of kept diagrams, for the next statement
	report    *reporting // nil unless results are written as one report
}

// defaultDiagramMemory is what the diagrams of a session may hold on to.
const defaultDiagramMemory = 2 << 30

// New starts a session on a catalog, which stays the caller's to close.
func New(c *catalog.Catalog, o Options) *Session {
	if o.Format == "" {
		o.Format = present.AsTable
	}
	memory := o.Memory
	if memory == 0 {
		memory = defaultDiagramMemory
	}
	var made *reporting
	if o.Format == present.AsHTML {
		made = newReporting()
	}
	s := &Session{
		report:   made,
		o:        o,
		catalog:  c,
		solids:   &bind.SolidCache{},
		params:   map[string]column.Value{},
		fixed:    map[string]bool{},
		diagrams: diagram.NewStore(memory),
		places:   &exec.Places{},
		digits:   present.DefaultDigits,
	}
	s.keepDiagrams()
	return s
}

// ErrFailed says that a statement failed and that its error has been printed.
var ErrFailed = errors.New("a statement failed")

// errQuit ends a script without an error.
var errQuit = errors.New("quit")

// statement is one statement on its way through the engine.
type statement struct {
	source *problem.Source
	folder string // relative paths start here
	tree   lang.Statement
	notes  *note.Notes
	start  time.Time
}

func (st *statement) at(n lang.Node) problem.Place {
	return problem.Place{Source: st.source, Span: n.Span()}
}

// Run runs the statements of a text. name is what errors call it, folder is
// where its relative paths start. Errors are printed as they come up; what is
// returned is ErrFailed, or the error of ctx.
func (s *Session) Run(ctx context.Context, name, text, folder string) error {
	err := s.runText(ctx, name, text, folder)
	if errors.Is(err, errQuit) {
		return nil
	}
	return err
}

// parsed is a statement of a script, or why it could not be parsed.
type parsed struct {
	tree lang.Statement
	err  error
}

func (s *Session) runText(ctx context.Context, name, text, folder string) error {
	source := &problem.Source{Name: name, Text: text}
	s.report.addScript(source)
	statements, faulty := parseAll(source)
	if faulty && !s.o.KeepGoing {
		for _, p := range statements {
			if p.err != nil {
				s.complain(p.err)
				return ErrFailed
			}
		}
	}
	failed := false
	defer s.report.follow(len(statements))()
	for _, p := range statements {
		s.report.next()
		err := p.err
		if err == nil {
			err = s.runStatement(ctx, source, folder, p.tree)
		}
		switch {
		case err == nil:
			continue
		case errors.Is(err, errQuit):
			if failed {
				return ErrFailed
			}
			return err
		case ctx.Err() != nil:
			return ctx.Err()
		case !errors.Is(err, ErrFailed):
			s.complain(err)
		}
		failed = true
		if !s.o.KeepGoing {
			return ErrFailed
		}
	}
	if failed {
		return ErrFailed
	}
	return nil
}

// parseAll parses every statement of a text before the first one runs.
func parseAll(source *problem.Source) (list []parsed, faulty bool) {
	for _, piece := range lang.Split(source.Text) {
		tree, err := lang.ParseStatement(source.Text, piece)
		if err != nil {
			faulty = true
			list = append(list, parsed{err: syntaxProblem(err, source)})
			continue
		}
		if tree != nil {
			list = append(list, parsed{tree: tree})
		}
	}
	return list, faulty
}

func syntaxProblem(err error, source *problem.Source) error {
	var e *lang.Error
	if !errors.As(err, &e) {
		return err
	}
	p := problem.New("syntax", problem.Place{Source: source, Span: e.Span}, "%s", e.Message)
	p.Hint = e.Hint
	return p
}

// runStatement runs one statement and prints what it has to say.
func (s *Session) runStatement(ctx context.Context, source *problem.Source, folder string, tree lang.Statement) error {
	st := &statement{source: source, folder: folder, tree: tree, notes: &note.Notes{}, start: time.Now()}
	err := s.dispatch(ctx, st, tree)
	if err != nil && ctx.Err() != nil {
		return ctx.Err()
	}
	s.tellOfKeeping(st)
	warned := s.printNotes(st.notes)
	s.report.remarks(st.notes)
	s.addInputs(tree)
	if err != nil && !errors.Is(err, errQuit) && !errors.Is(err, ErrFailed) {
		return wordStore(problem.At(err, st.at(tree)))
	}
	if err == nil && warned && s.o.Strict {
		return problem.New("strict", st.at(tree), "a warning fails this statement, since --strict was given")
	}
	return err
}

func (s *Session) printNotes(notes *note.Notes) (warned bool) {
	for _, l := range notes.Lines() {
		warned = warned || l.Level == note.Warning
		fmt.Fprintf(s.o.Err, "%s: %s\n", l.Level, l.Text)
	}
	return warned
}

// say prints a confirmation.
func (s *Session) say(format string, args ...any) {
	if !s.o.Quiet {
		fmt.Fprintf(s.o.Err, format+"\n", args...)
	}
}

func (s *Session) complain(err error) {
	s.last = err
	text := strings.TrimRight(problem.Render(err), "\n")
	fmt.Fprintln(s.o.Err, text)
	s.report.failed(text, s.o.KeepGoing)
}

// bindEnv is what the names of a statement may mean.
func (s *Session) bindEnv(st *statement) *bind.Env {
	return &bind.Env{Catalog: s.catalog, Source: st.source, Params: s.params, Folder: st.folder, Notes: st.notes,
		Solids: s.solids, Verdicts: s.verdictTable, VerdictWarnings: s.verdictWarnings}
}

func (s *Session) execEnv(st *statement) *exec.Env {
	return &exec.Env{Memory: s.o.Memory, Places: s.places, Env: relation.Env{
		Diagrams: s.diagrams, Notes: st.notes, Threads: s.o.Threads, Memory: s.o.Memory, Progress: s.o.Progress,
	}}
}

// path is where a file that a statement names lies.
func (st *statement) path(file string) string {
	if filepath.IsAbs(file) {
		return file
	}
	return filepath.Join(st.folder, filepath.FromSlash(file))
}

// seconds is the time that a statement took so far, for the line under a result.
func (st *statement) seconds() string {
	return fmt.Sprintf("%.3f s", time.Since(st.start).Seconds())
}
