package main

import (
	"context"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"runtime/pprof"
	"strconv"
	"time"

	"nearcell/voronoi/delaunay"
)

func main() {
	b, err := os.ReadFile(os.Args[1])
	if err != nil {
		panic(err)
	}
	th := 1
	if len(os.Args) > 2 {
		th, _ = strconv.Atoi(os.Args[2])
	}
	s := make([]float64, len(b)/8)
	for i := range s {
		s[i] = math.Float64frombits(binary.LittleEndian.Uint64(b[8*i:]))
	}
	b = nil
	if p := os.Getenv("PROF"); p != "" {
		f, _ := os.Create(p)
		pprof.StartCPUProfile(f)
		defer pprof.StopCPUProfile()
	}
	t0 := time.Now()
	t, err := delaunay.BuildFlat(context.Background(), s, delaunay.Options{Threads: th})
	el := time.Since(t0)
	if err != nil {
		panic(err)
	}
	fmt.Printf("n=%d tets=%d seconds=%.3f fp=%016x\n", len(s)/3, t.NumTets(), el.Seconds(), t.Fingerprint())
}
