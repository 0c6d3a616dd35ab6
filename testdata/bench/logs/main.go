package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"regexp"
	"runtime"
	"runtime/pprof"
	"slices"
	"strconv"
	"syscall"
	"time"

	"nearcell/catalog/column"
)

var (
	rows     = flag.Int("rows", 10_000_000, "rows of the log")
	runs     = flag.Int("runs", 5, "timed rounds")
	threads  = flag.Int("threads", 2, "threads of nearcell and of DuckDB")
	only     = flag.String("only", "", "regular expression of the queries to run")
	patience = flag.Duration("patience", 60*time.Second, "after which SQLite is given up")
	without  = flag.Bool("without-sqlite", false, "leave SQLite out")
	alone    = flag.Bool("alone", false, "leave DuckDB out, too")
	busy     = flag.Bool("busy", false, "measure processor time, all threads together: on a machine that others use, too, it says more than the clock")
	profile  = flag.String("profile", "", "write a processor profile of nearcell's timed rounds here")
)

func main() {
	flag.Parse()
	if err := run(); err != nil {
		fmt.Fprintln(os.Stderr, "logs:", err)
		os.Exit(1)
	}
}

func run() error {
	wanted, err := regexp.Compile(*only)
	if err != nil {
		return err
	}
	engines, names, err := load()
	if err != nil {
		return err
	}
	what := "by the clock"
	if *busy {
		what = "of processor time"
	}
	fmt.Printf("%d rows, %d threads of %d cores, %d rounds, medians in ms %s\n\n", *rows, *threads, runtime.NumCPU(), *runs, what)
	fmt.Println("| query | nearcell | DuckDB | SQLite | of DuckDB's time | times SQLite's speed |")
	fmt.Println("|---|---|---|---|---|---|")
	for i := range queries {
		q := &queries[i]
		if !wanted.MatchString(q.name) {
			continue
		}
		if err := measure(q, engines, names); err != nil {
			return fmt.Errorf("%s: %w", q.name, err)
		}
	}
	return nil
}

func load() (engines []engine, names []string, err error) {
	tables := map[string]*column.Table{"log": log(*rows), "places": places()}
	add := func(name string, e engine, failed error) {
		if failed != nil && err == nil {
			err = fmt.Errorf("%s: %w", name, failed)
		}
		engines, names = append(engines, e), append(names, name)
	}
	o, failed := newOwn(tables, *threads)
	add("nearcell", o, failed)
	if !*alone {
		d, failed := newDuck(tables, *threads)
		add("DuckDB", d, failed)
		if !*without {
			l, failed := newLite(tables)
			add("SQLite", l, failed)
		}
	}
	return engines, names, err
}

// measure compares the answers of one query and times it in turn.
func measure(q *query, engines []engine, names []string) error {
	times := make([][]time.Duration, len(engines))
	gaveUp := make([]bool, len(engines))
	var first answer
	for round := range *runs + 1 { // the first one compares and warms up
		for k, e := range engines {
			if gaveUp[k] || names[k] == "SQLite" && round > 3 {
				continue // its times are long and steady
			}
			got, took, err := timed(e, q, names[k], round > 0)
			if errors.Is(err, errPatience) {
				gaveUp[k] = true
				times[k] = []time.Duration{took}
				continue
			}
			if err != nil {
				return fmt.Errorf("%s: %w", names[k], err)
			}
			if round > 0 {
				times[k] = append(times[k], took)
			} else if k == 0 {
				first = got
			} else if d := difference(first, got); d != "" {
				return fmt.Errorf("%s differs: %s", names[k], d)
			}
		}
	}
	print(q, times, gaveUp)
	return nil
}

var errPatience = errors.New("it takes too long")

func timed(e engine, q *query, name string, counts bool) (answer, time.Duration, error) {
	ctx := context.Background()
	if name == "SQLite" {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, *patience)
		defer cancel()
	}
	if counts && name == "nearcell" && *profile != "" {
		f, err := os.OpenFile(*profile, os.O_CREATE|os.O_TRUNC|os.O_WRONLY, 0o644)
		if err != nil {
			return nil, 0, err
		}
		defer f.Close()
		if err := pprof.StartCPUProfile(f); err != nil {
			return nil, 0, err
		}
		defer pprof.StopCPUProfile()
	}
	runtime.GC() // nobody pays for the garbage of another
	start := now()
	got, err := e.ask(ctx, q)
	took := now() - start
	if ctx.Err() != nil {
		return nil, took, errPatience
	}
	return got, took, err
}

// now is the clock, or the processor time that the program has taken so far.
func now() time.Duration {
	if !*busy {
		return time.Since(began)
	}
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		panic(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

var began = time.Now()

func difference(a, b answer) string {
	if len(a) != len(b) {
		return fmt.Sprintf("%d rows, not %d", len(b), len(a))
	}
	for i := range a {
		if !slices.EqualFunc(a[i], b[i], alike) {
			return fmt.Sprintf("row %d is %q, not %q", i+1, b[i], a[i])
		}
	}
	return ""
}

// alike compares two values, numbers to nine digits.
func alike(a, b string) bool {
	if a == b {
		return true
	}
	x, err1 := strconv.ParseFloat(a, 64)
	y, err2 := strconv.ParseFloat(b, 64)
	return err1 == nil && err2 == nil && math.Abs(x-y) <= 1e-9*max(math.Abs(x), math.Abs(y))
}

func median(d []time.Duration) float64 {
	if len(d) == 0 {
		return 0
	}
	d = slices.Clone(d)
	slices.Sort(d)
	return d[len(d)/2].Seconds() * 1e3
}

func print(q *query, times [][]time.Duration, gaveUp []bool) {
	own := median(times[0])
	cells := []string{"", ""}
	ratios := []string{"", ""}
	for k := 1; k < len(times); k++ {
		m := median(times[k])
		more := ""
		if gaveUp[k] {
			more = "> "
		}
		cells[k-1] = fmt.Sprintf("%s%.0f", more, m)
		if k == 1 {
			ratios[0] = fmt.Sprintf("%.2f", own/m)
		} else {
			ratios[1] = fmt.Sprintf("%s%.1f", more, m/own)
		}
	}
	fmt.Printf("| %s | %.1f | %s | %s | %s | %s |\n", q.name, own, cells[0], cells[1], ratios[0], ratios[1])
}
