package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"

	"github.com/spf13/cobra"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/present"
)

// version is the program's own; it changes with the language and the files it writes.
const version = "0.1.0"

// The exit codes that scripts may rely on.
const (
	exitFine        = 0
	exitFailed      = 1
	exitUsage       = 2
	exitUnmet       = 3
	exitInterrupted = 130
)

// app is one call of the program.
type app struct {
	in       io.Reader
	out, err io.Writer
	flags    flags
}

// exit is an error that has been told already and only carries its code.
type exit int

func (e exit) Error() string { return fmt.Sprintf("exit code %d", int(e)) }

// execute runs the program and gives its exit code.
func execute(args []string, in io.Reader, out, errOut io.Writer) int {
	a := &app{in: in, out: out, err: errOut}
	root := a.command()
	if err := completeInShells(root); err != nil {
		fmt.Fprintf(errOut, "nearcell: %v\n", err)
		return exitFailed
	}
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errOut)
	err := root.Execute()
	var code exit
	switch {
	case err == nil:
		return exitFine
	case errors.As(err, &code):
		return int(code)
	}
	fmt.Fprintf(errOut, "nearcell: %v\nnearcell --help shows how it is called\n", err)
	return exitUsage
}

const longHelp = `nearcell gives each reading of a 3D campaign the space nearest to it, closed at
the walls of the room, and answers questions about that space in tables.

  nearcell run mapping.ncell
  nearcell ask "CREATE CAMPAIGN hall FROM 'hall.csv' WITHIN BOX (0,0,0) TO (30,18,7.5);
                SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall;"

Point readings weighted by the space nearest to them are an estimate. This is no
alarm, no gas-free certificate and no release decision: those are matters of local
codes, of the standard that applies and of licensed people with calibrated instruments.`

func (a *app) command() *cobra.Command {
	root := &cobra.Command{
		Use:           "nearcell",
		Short:         "asks scattered 3D readings about space",
		Long:          longHelp,
		Args:          cobra.NoArgs,
		SilenceErrors: true,
		SilenceUsage:  true,
		RunE: func(c *cobra.Command, _ []string) error {
			if a.terminal().Interactive() {
				return a.ask()
			}
			return a.run([]string{"-"})
		},
	}
	a.flags.add(root.PersistentFlags())
	root.AddCommand(
		&cobra.Command{
			Use:   "run FILE…",
			Short: "runs scripts, '-' is the standard input",
			Args:  cobra.MinimumNArgs(1),
			RunE:  func(_ *cobra.Command, args []string) error { return a.run(args) },
		},
		&cobra.Command{
			Use:   "ask 'query; query;'",
			Short: "runs the statements of one text",
			Args:  cobra.ExactArgs(1),
			RunE:  func(_ *cobra.Command, args []string) error { return a.one(args[0]) },
		},
		&cobra.Command{
			Use:   "check FILE…",
			Short: "parses and binds scripts, computes and keeps nothing",
			Args:  cobra.MinimumNArgs(1),
			RunE:  func(_ *cobra.Command, args []string) error { return a.check(args) },
		},
		&cobra.Command{
			Use:   "version",
			Short: "prints the version",
			Args:  cobra.NoArgs,
			RunE: func(*cobra.Command, []string) error {
				_, err := fmt.Fprintf(a.out, "nearcell %s (%s, %s/%s)\n", version, runtime.Version(), runtime.GOOS, runtime.GOARCH)
				return err
			},
		},
		&cobra.Command{
			Use:   "man",
			Short: "prints the manual page, for man -l -",
			Args:  cobra.NoArgs,
			RunE:  func(*cobra.Command, []string) error { return manual(a.out, root) },
		},
	)
	return root
}

// run runs script files one after the other in one session.
func (a *app) run(files []string) error {
	return a.inSession(func(ctx context.Context, s *engine.Session) error {
		failed := false
		for _, name := range files {
			err := a.runOne(ctx, s, name)
			switch {
			case err == nil:
				continue
			case !errors.Is(err, engine.ErrFailed) || !a.flags.keepGoing:
				return err
			}
			failed = true
		}
		if failed {
			return engine.ErrFailed
		}
		return nil
	})
}

func (a *app) runOne(ctx context.Context, s *engine.Session, name string) error {
	if name != "-" {
		return s.RunFile(ctx, name)
	}
	text, err := io.ReadAll(a.in)
	if err != nil {
		return err
	}
	return s.Run(ctx, "standard input", string(text), ".")
}

func (a *app) one(text string) error {
	return a.inSession(func(ctx context.Context, s *engine.Session) error {
		return s.Run(ctx, "ask", text, ".")
	})
}

func (a *app) check(files []string) error {
	a.flags.as, a.flags.to = "", "" // nothing is computed, so nothing is written
	return a.inSession(func(ctx context.Context, s *engine.Session) error {
		return s.Check(ctx, files)
	})
}

// inSession opens the catalog, runs f until it is done or interrupted, and
// turns what comes back into an exit code.
func (a *app) inSession(f func(context.Context, *engine.Session) error) error {
	options, err := a.flags.options()
	if err != nil {
		return err
	}
	t := a.terminal()
	options.Err, options.Progress = a.words(t), t.Progress()
	options.CommandLine = switches()
	if a.flags.to == "" {
		options.Screen = t.Screen(false)
	}
	c, err := a.openCatalog()
	if err != nil {
		return err
	}
	defer c.Close()
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	unmet := 0
	err = a.withOutput(func(out io.Writer) error {
		options.Out = t.Out(out)
		s := engine.New(c, options)
		if err := a.flags.letAll(s); err != nil {
			return err
		}
		defer t.Working()()
		defer func() { unmet = s.FailedRequirements() }()
		return reported(s, f(ctx, s))
	})
	return a.outcome(ctx, err, unmet)
}

// reported writes the report of a session that makes one, also where a statement
// failed: the report says so.
func reported(s *engine.Session, err error) error {
	if err != nil && !errors.Is(err, engine.ErrFailed) {
		return err
	}
	return errors.Join(err, s.WriteReport())
}

// outcome maps an error and the number of requirements that failed to the exit
// code; what went wrong has been told already. A script that broke off says more
// than a requirement that failed before.
func (a *app) outcome(ctx context.Context, err error, unmet int) error {
	switch {
	case err == nil && unmet > 0:
		return exit(exitUnmet)
	case err == nil:
		return nil
	case ctx.Err() != nil:
		fmt.Fprintln(a.err, "interrupted")
		return exit(exitInterrupted)
	case errors.Is(err, engine.ErrFailed):
		return exit(exitFailed)
	case errors.As(err, new(usageError)):
		return err
	}
	fmt.Fprintf(a.err, "nearcell: %v\n", err)
	return exit(exitFailed)
}

func (a *app) openCatalog() (*catalog.Catalog, error) {
	if a.flags.noCatalog {
		return catalog.Memory(), nil
	}
	c, err := catalog.Open(a.flags.catalog)
	if err != nil {
		fmt.Fprintf(a.err, "nearcell: the catalog in %s cannot be opened: %v\n", a.flags.catalog, err)
		return nil, exit(exitFailed)
	}
	return c, nil
}

// withOutput gives f the standard output, or the file of --to: that file gets
// its name only when f went well (or was told to keep going, or makes a report,
// which says what failed).
func (a *app) withOutput(f func(io.Writer) error) error {
	if a.flags.to == "" {
		return f(a.out)
	}
	var failure error
	err := engine.WriteAside(a.flags.to, func(file *os.File) error {
		failure = f(file)
		if errors.Is(failure, engine.ErrFailed) && (a.flags.keepGoing || a.makesReport()) {
			return nil
		}
		return failure
	})
	if failure != nil {
		return failure
	}
	return err
}

// usageError is a wrong value of a flag.
type usageError struct{ text string }

func (e usageError) Error() string { return e.text }

func usage(format string, args ...any) error { return usageError{fmt.Sprintf(format, args...)} }

// formatFor is the format of the printed results.
func formatFor(as, to string) (present.Format, error) {
	if as == "" {
		as = string(present.AsTable)
		for _, f := range present.Formats {
			if strings.EqualFold(filepath.Ext(to), "."+string(f)) {
				as = string(f)
			}
		}
	}
	var names []string
	for _, f := range present.Formats {
		if as == string(f) {
			return f, nil
		}
		names = append(names, string(f))
	}
	return "", usage("--as takes %s, not '%s'", strings.Join(names, ", "), as)
}

// makesReport tells whether results are written as one report.
func (a *app) makesReport() bool {
	format, err := formatFor(a.flags.as, a.flags.to)
	return err == nil && format == present.AsHTML
}
