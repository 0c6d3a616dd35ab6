package main

import (
	"context"
	"encoding/binary"
	"errors"
	"flag"
	"fmt"
	"io"
	"math"
	"os"
	"runtime/pprof"
	"time"

	"nearcell/voronoi/delaunay"
)

func main() {
	if err := run(os.Args[1:], os.Stdout, os.Stderr); err != nil {
		if !errors.Is(err, flag.ErrHelp) {
			fmt.Fprintln(os.Stderr, "kernelbench:", err)
		}
		os.Exit(2)
	}
}

type arguments struct {
	file, cells, profile string
	threads              int
	measures             bool
}

// parse takes flags before and after the file.
func parse(args []string, stderr io.Writer) (a arguments, err error) {
	f := flag.NewFlagSet("kernelbench", flag.ContinueOnError)
	f.SetOutput(stderr)
	f.Usage = func() {
		fmt.Fprintln(stderr, "usage: kernelbench FILE [-threads n] [-profile OUT] [-cells OUT [-measures]]")
		f.PrintDefaults()
	}
	f.IntVar(&a.threads, "threads", 1, "goroutines that insert sites")
	f.StringVar(&a.cells, "cells", "", "write cell volumes to this file")
	f.BoolVar(&a.measures, "measures", false, "with -cells, compute areas and centroids too")
	f.StringVar(&a.profile, "profile", "", "write a processor profile of build and cells to this file")
	for {
		if err = f.Parse(args); err != nil {
			return a, err
		}
		if f.NArg() == 0 {
			break
		}
		if a.file != "" {
			return a, fmt.Errorf("one file, not %q too", f.Arg(0))
		}
		a.file, args = f.Arg(0), f.Args()[1:]
	}
	switch {
	case a.file == "":
		f.Usage()
		return a, errors.New("no file given")
	case a.threads < 1:
		return a, fmt.Errorf("-threads %d: at least one is needed", a.threads)
	}
	return a, nil
}

func run(args []string, stdout, stderr io.Writer) error {
	a, err := parse(args, stderr)
	if err != nil {
		return err
	}
	before := usage()
	sites, err := readSites(a.file)
	if err != nil {
		return err
	}
	if a.profile != "" {
		out, err := os.Create(a.profile)
		if err != nil {
			return err
		}
		defer out.Close()
		if err := pprof.StartCPUProfile(out); err != nil {
			return err
		}
		defer pprof.StopCPUProfile()
	}
	ready, start := usage(), time.Now()
	t, err := delaunay.BuildFlat(context.Background(), sites, delaunay.Options{Threads: a.threads})
	seconds := time.Since(start).Seconds()
	done := usage()
	if err != nil {
		return err
	}
	mode := "seq"
	if a.threads > 1 {
		mode = "parallel"
	}
	more := ""
	if a.cells != "" {
		c, err := writeCells(a.cells, t, a.threads, a.measures)
		if err != nil {
			return err
		}
		more = fmt.Sprintf(`,"cells_seconds":%.6f,"cells_cpu_seconds":%.6f,"cells_total":%.17g`, c.seconds, c.cpu, c.total)
	}
	_, err = fmt.Fprintf(stdout, `{"lib":"nearcell","mode":%q,"threads":%d,"points":%d,"vertices":%d,"tets":%d,`+
		`"seconds":%.6f,"cpu_seconds":%.6f,"rss_start":%d,"peak_rss":%d,"fingerprint":"%016x"%s}`+"\n",
		mode, a.threads, t.NumSites(), t.NumVertices(), t.NumTets(),
		seconds, done.cpu-ready.cpu, before.resident, done.peak, t.Fingerprint(), more)
	return err
}

// readSites reads raw little-endian float64 triples.
func readSites(name string) ([]float64, error) {
	f, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	if info.Size()%24 != 0 {
		return nil, fmt.Errorf("%s: %d bytes are not a whole number of triples", name, info.Size())
	}
	sites := make([]float64, info.Size()/8)
	buffer := make([]byte, 1<<20)
	for rest := sites; len(rest) > 0; {
		part := buffer[:min(len(buffer), 8*len(rest))]
		if _, err := io.ReadFull(f, part); err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		for i := 0; i < len(part); i += 8 {
			rest[i/8] = math.Float64frombits(binary.LittleEndian.Uint64(part[i:]))
		}
		rest = rest[len(part)/8:]
	}
	return sites, nil
}

// consumption is what the process has used so far.
type consumption struct {
	cpu            float64
	resident, peak int64
}
