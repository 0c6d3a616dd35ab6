package main

import (
	"errors"
	"fmt"
	"io"
	"os"

	"nearcell/cmd/nearcell/prompt"
	"nearcell/engine"
)

// terminal is what the three streams are, as far as they are files.
func (a *app) terminal() *prompt.Terminal {
	in, _ := a.in.(*os.File)
	out, _ := a.out.(*os.File)
	err, _ := a.err.(*os.File)
	return prompt.NewTerminal(in, out, err, a.flags.plain, a.flags.quiet)
}

// words is where notes and errors go: the terminal with its line of progress, or
// what stands in for it.
func (a *app) words(t *prompt.Terminal) io.Writer {
	if _, ok := a.err.(*os.File); ok {
		return t.Err()
	}
	return a.err
}

// ask is the prompt. A failing statement has been told; it does not make the
// program fail; a requirement that failed shows in the exit code, as it does of a
// script.
func (a *app) ask() error {
	options, err := a.flags.options()
	if err != nil {
		return err
	}
	t := a.terminal()
	options.Err, options.Progress = t.Err(), t.Progress()
	if a.flags.to == "" {
		options.Screen = t.Screen(true)
	}
	c, err := a.openCatalog()
	if err != nil {
		return err
	}
	defer c.Close()
	folder := a.flags.catalog
	if a.flags.noCatalog {
		folder = ""
	}
	unmet := 0
	err = a.withOutput(func(out io.Writer) error {
		options.Out = t.Out(out)
		s := engine.New(c, options)
		defer func() { unmet = s.FailedRequirements() }()
		if err := a.flags.letAll(s); err != nil {
			return err
		}
		err := prompt.Run(prompt.Options{
			Terminal: t, Session: s, Version: version, Catalog: folder, Folder: ".", Quiet: a.flags.quiet,
		})
		return reported(s, err)
	})
	switch {
	case err == nil && unmet > 0:
		return exit(exitUnmet)
	case err == nil:
		return nil
	case errors.Is(err, prompt.ErrTerminated):
		return exit(exitInterrupted)
	case errors.As(err, new(usageError)):
		return err
	}
	fmt.Fprintf(a.err, "nearcell: %v\n", err)
	return exit(exitFailed)
}
