package main

import (
	"os"
	"strings"

	"github.com/spf13/pflag"

	"nearcell/engine"
	"nearcell/engine/problem"
)

// flags are the choices of a call that the language does not make.
type flags struct {
	catalog   string
	noCatalog bool
	as, to    string
	let       []string
	strict    bool
	keepGoing bool
	threads   int
	memory    string
	quiet     bool
	plain     bool
}

func (f *flags) add(set *pflag.FlagSet) {
	set.StringVar(&f.catalog, "catalog", ".nearcell", "the folder `DIR` holds the catalog")
	set.BoolVar(&f.noCatalog, "no-catalog", false, "keep nothing")
	set.StringVar(&f.as, "as", "", "how results are written, as `FORMAT` table, csv, json, jsonl or html, one report of everything (default table, or by the ending of --to)")
	set.StringVar(&f.to, "to", "", "write results to `FILE`")
	set.StringArrayVar(&f.let, "let", nil, "sets a value, `name=value`, that statements read as :name; wins over LET")
	set.BoolVar(&f.strict, "strict", false, "a warning fails its statement")
	set.BoolVar(&f.keepGoing, "keep-going", false, "go on after a failing statement; the exit code still tells")
	set.IntVar(&f.threads, "threads", 0, "use `n` threads (default all cores)")
	set.StringVar(&f.memory, "memory", "", "memory for kept diagrams (default 2GiB), and for the tetrahedra of one and the results in between of one statement (default no limit), a `SIZE` such as 8GiB")
	set.BoolVar(&f.quiet, "quiet", false, "no confirmations and row counts; notes and warnings stay")
	set.BoolVar(&f.plain, "plain", false, "no colour, no progress")
}

// options are the engine's, after the values have been looked at.
func (f *flags) options() (engine.Options, error) {
	o := engine.Options{Program: "nearcell " + version, Strict: f.strict, KeepGoing: f.keepGoing, Quiet: f.quiet, Threads: f.threads, PlainText: !hasUTF8(os.Getenv)}
	if f.threads < 0 {
		return o, usage("--threads takes a number of 1 or more")
	}
	format, err := formatFor(f.as, f.to)
	if err != nil {
		return o, err
	}
	o.Format = format
	if f.memory != "" {
		if o.Memory, err = bytesOf(f.memory); err != nil {
			return o, err
		}
	}
	return o, nil
}

// letAll gives the session the values of --let.
func (f *flags) letAll(s *engine.Session) error {
	for _, l := range f.let {
		name, value, found := strings.Cut(l, "=")
		if !found || name == "" {
			return usage("--let takes name=value, not '%s'", l)
		}
		if err := s.Let(name, value); err != nil {
			return usage("--let %s: %s", name, problem.Render(err))
		}
	}
	return nil
}

// bytesOf reads a size such as 8GiB or 500MB.
func bytesOf(text string) (int64, error) {
	n, ok := engine.ParseSize(text)
	if !ok || n == 0 {
		return 0, usage("--memory takes a size such as 8GiB, not '%s'", text)
	}
	return n, nil
}

// hasUTF8 tells by the first of the locale's variables that is set whether the terminal
// writes UTF-8.
func hasUTF8(variable func(string) string) bool {
	for _, name := range []string{"LC_ALL", "LC_CTYPE", "LANG"} {
		if v := strings.ToUpper(variable(name)); v != "" {
			return strings.Contains(v, "UTF-8") || strings.Contains(v, "UTF8")
		}
	}
	return false
}
