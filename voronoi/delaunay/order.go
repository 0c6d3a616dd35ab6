package delaunay

import (
	"math/bits"
	"runtime"
	"slices"
	"sync"
)

// The order of insertion (Amenta, Choi and Rote 2003): the sites are dealt at random
// into rounds, each roundRatio times as large as the one before it, and the sites of
// one round are sorted along a Hilbert curve, those of lattices along the Z-order curve
// (zCode). The deal depends on the site's index
// alone; since the result does not depend on the order of insertion, neither does it
// depend on the deal.

const (
	roundBits = 3 // a round is 1<<roundBits times as large as the one before
	maxRounds = 15
)

// ranked is a site with its place in the order, in one word: its round, its cell along
// the curve and its index, which takes as many bits as it needs. Small words
// are half of what a sort costs; cells that hold many sites are divided again.
type ranked uint64

// packing says where the parts of a ranked are.
type packing struct {
	index uint // bits of the index
	drop  uint // bits of the curve's code that are dropped
	round uint // where the round begins
}

func packingFor(n int) packing {
	p := packing{index: uint(bits.Len(uint(max(n-1, 1))))}
	for 3*hilbertBits-p.drop+p.index > 60 {
		p.drop += 3
	}
	p.round = p.index + 3*hilbertBits - p.drop
	return p
}

func (p packing) pack(round int, code uint64, index int) ranked {
	return ranked(uint64(round)<<p.round | code>>p.drop<<p.index | uint64(index))
}

func (p packing) site(r ranked) int { return int(r & (1<<p.index - 1)) }

// mix is the finaliser of splitmix64 (Steele, Lea and Flood 2014).
func mix(h uint64) uint64 {
	h ^= h >> 30
	h *= 0xbf58476d1ce4e5b9
	h ^= h >> 27
	h *= 0x94d049bb133111eb
	return h ^ h>>31
}

// roundOf deals a site into one of rounds+1 rounds; the last is the largest.
func roundOf(index int, rounds int) int {
	zeros := bits.TrailingZeros64(mix(uint64(index)+0x9e3779b97f4a7c15) | 1<<63)
	return rounds - min(zeros/roundBits, rounds)
}

// roundsFor leaves a few dozen sites in the first round.
func roundsFor(n int) int {
	rounds := 0
	for n > 64 && rounds < maxRounds {
		n >>= roundBits
		rounds++
	}
	return rounds
}

// insertionOrder returns the sites' indices in the order of insertion and where each
// round ends.
func insertionOrder(f *frame, sites []float64, threads int) (order []uint32, ends []int) {
	n := len(sites) / 3
	rounds := roundsFor(n)
	pack := packingFor(n)
	f.lattice = latticeLike(sites)
	list, spare := make([]ranked, n), make([]ranked, n)
	AdviseHugePages(list)
	AdviseHugePages(spare)
	counts := make([]int, rounds+1)
	var lock sync.Mutex
	inChunks(n, threads, func(lo, hi int) {
		mine := make([]int, rounds+1)
		cell := f.cells()
		for i := lo; i < hi; i++ {
			r := roundOf(i, rounds)
			mine[r]++
			x, y, z := f.internal(sites, i)
			list[i] = pack.pack(r, cell.code(x, y, z), i)
		}
		lock.Lock()
		for r, c := range mine {
			counts[r] += c
		}
		lock.Unlock()
	})
	list = radixSort(list, spare, pack.index)
	pack.refine(f, sites, list)
	order = make([]uint32, n)
	for i, r := range list {
		order[i] = uint32(pack.site(r))
	}
	end := 0
	for _, c := range counts {
		end += c
		ends = append(ends, end)
	}
	return order, ends
}

// grid places points in the cells of a cube.
type grid struct {
	x, y, z, factor float64
	lattice         bool // number cells along the Z-order curve
}

func (g *grid) code(x, y, z float64) uint64 {
	const top = 1<<hilbertBits - 1
	i, j, k := min(uint32((x-g.x)*g.factor), top), min(uint32((y-g.y)*g.factor), top), min(uint32((z-g.z)*g.factor), top)
	if g.lattice {
		return zCode(i, j, k)
	}
	return hilbertCode(i, j, k)
}

// latticeLike reports whether a sample of the sites takes few values along each axis,
// as the sites of a rectilinear lattice do.
func latticeLike(sites []float64) bool {
	const most = 1024
	n := len(sites) / 3
	if n < 64 {
		return false
	}
	count := min(n, most)
	values := make([]float64, count)
	for axis := range 3 {
		for i := range values {
			values[i] = sites[3*(int(mix(uint64(i)+1)%uint64(n)))+axis]
		}
		slices.Sort(values)
		if 2*len(slices.Compact(values)) > count {
			return false
		}
	}
	return true
}

const radixBits = 11

// radixSort sorts by the bits from low on, stable, least digit first; list and spare
// change roles and the sorted one is returned.
func radixSort(list, spare []ranked, low uint) []ranked {
	var differ ranked
	for i := range list {
		differ |= list[i] ^ list[0]
	}
	for shift := low; shift < 64; shift += radixBits {
		const mask = 1<<radixBits - 1
		if differ>>shift&mask == 0 {
			continue
		}
		var start [1 << radixBits]uint32
		for _, r := range list {
			start[r>>shift&mask]++
		}
		sum := uint32(0)
		for d := range start {
			start[d], sum = sum, sum+start[d]
		}
		for _, r := range list {
			d := r >> shift & mask
			spare[start[d]] = r
			start[d]++
		}
		list, spare = spare, list
	}
	return list
}

// refine sorts sites of one cell again, each cell in a cube of its own: far clusters
// share one cell of the cube around all sites.
func (p packing) refine(f *frame, sites []float64, list []ranked) {
	const enough = 16
	for lo := 0; lo < len(list); {
		hi := lo + 1
		for hi < len(list) && list[hi]>>p.index == list[lo]>>p.index {
			hi++
		}
		if hi-lo > enough {
			p.refineCell(f, sites, list[lo:hi])
		}
		lo = hi
	}
}

func (p packing) refineCell(f *frame, sites []float64, cell []ranked) {
	b := emptyBounds()
	for _, r := range cell {
		b.add(f.internal(sites, p.site(r)))
	}
	g, ok := b.grid()
	if !ok {
		return // all in one place
	}
	g.lattice = f.lattice
	for i, r := range cell {
		s := p.site(r)
		x, y, z := f.internal(sites, s)
		cell[i] = p.pack(0, g.code(x, y, z), s)
	}
	if len(cell) > 4096 {
		if sorted := radixSort(cell, make([]ranked, len(cell)), p.index); &sorted[0] != &cell[0] {
			copy(cell, sorted)
		}
	} else {
		slices.Sort(cell)
	}
	p.refine(f, sites, cell)
}

// inChunks calls f for parts of 0..n-1 from as many goroutines as threads.
func inChunks(n, threads int, f func(lo, hi int)) {
	const small = 1 << 14
	if threads <= 1 || n < small {
		f(0, n)
		return
	}
	var wait sync.WaitGroup
	for k := range threads {
		lo, hi := n*k/threads, n*(k+1)/threads
		wait.Go(func() { f(lo, hi) })
	}
	wait.Wait()
}

func defaultThreads(threads int) int {
	if threads > 0 {
		return threads
	}
	return runtime.GOMAXPROCS(0)
}
