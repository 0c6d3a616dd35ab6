package exec

import (
	"math/bits"
	"sync"
	"time"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// pairSet is the different pairs of group and value of a COUNT(DISTINCT x) over all
// chunks. How often a pair comes and when does not matter to a count, so that the
// workers put the pairs of their chunks there side by side, after their parts are
// merged and it is known which group is which.
//
// Values with a code are one bit of a word for each group and 64 codes; the others, and
// those of groups with high numbers, are pairs in a hash table.
type pairSet struct {
	env   *Env
	codes valueCodes
	dense struct {
		sync.Mutex
		blocks [mostCodes / 64][]uint64 // by code/64, then by group
	}
	shards [pairShards]pairShard // by the upper bits of the hash
	texts  struct {
		sync.Mutex
		textCodes
	}
}

const (
	pairShardBits = 6
	pairShards    = 1 << pairShardBits
	recentPairs   = 1 << 10
	denseGroups   = 1 << 14
)

type pairShard struct {
	mu    sync.Mutex
	slots []pair // the length is a power of two; open addressing by the lower bits
	n     int
}

// pair is a value of a group. In a pairSet group is one more, 0: free; below 0 it is
// that of a code.
type pair struct {
	word  uint64
	group int32
}

// codedPair is a value with a code of a group.
type codedPair struct{ code, group int32 }

// hash mixes both, so that each group has places of its own.
func (p pair) hash() uint64 { return mix(p.word ^ mix(uint64(uint32(p.group))+1)) }

// countsPairs reports whether a call is a COUNT(DISTINCT x) of single words or texts.
func countsPairs(c *plan.Call) bool {
	if c.Fn.Name != "COUNT" || !c.Distinct || len(c.Args) != 1 || len(c.OrderBy) > 0 {
		return false
	}
	t := c.Args[0].Type()
	return t != column.Point && t != column.Null
}

func newPairSet(env *Env) *pairSet {
	s := &pairSet{env: env}
	s.texts.codes = map[string]int32{}
	return s
}

// pairPart is the pairs of one chunk, most of them once.
type pairPart struct {
	set   *pairSet
	coded []codedPair
	pairs []pair
	codes codeMap
	kept  int64
}

// pairScratch lets a worker pass over what it has just seen.
type pairScratch struct {
	of     *pairPart
	recent [recentPairs]pair // group one more, 0: none
	idx    []int32
	codes  localCodes
}

// add takes the active rows that have a value.
func (p *pairPart) add(w *Worker, v *column.Vector, on []uint64, n int, groups []int32) error {
	if v.Type == column.Null {
		return nil
	}
	s := localOf(w, p.set, func() *pairScratch { return &pairScratch{codes: localCodes{of: &p.set.codes}} })
	if s.of != p {
		s.of, s.recent = p, [recentPairs]pair{}
	}
	before := 16*len(p.pairs) + 8*len(p.coded)
	s.idx = activeRows(s.idx, on, n)
	if v.Type == column.Text {
		p.translate(v, s.idx)
	}
	last := pair{}
	for _, i := range s.idx {
		if v.Valid != nil && !column.Bit(v.Valid, int(i)) {
			continue
		}
		x := pair{group: groups[i] + 1}
		if v.Type == column.Text {
			x.word = uint64(p.codes.to[v.C[i]])
		} else {
			x.word = wordAt(v, int(i))
		}
		if x == last {
			continue
		}
		last = x
		if code := s.codes.code(x.word); code >= 0 {
			p.coded = append(p.coded, codedPair{code, x.group - 1})
			continue
		}
		r := &s.recent[(x.word^uint64(x.group)<<7)*0x9e3779b97f4a7c15>>54]
		if *r != x {
			*r = x
			p.pairs = append(p.pairs, x)
		}
	}
	bytes := int64(16*len(p.pairs) + 8*len(p.coded) - before)
	p.kept += bytes
	return p.set.env.keep(bytes)
}

// translate learns the set's codes of the texts in the rows.
func (p *pairPart) translate(v *column.Vector, rows []int32) {
	m := &p.codes
	if m.from != v.Dict {
		m.from = v.Dict
		m.to = room(m.to, len(v.Dict.Texts))
		for i := range m.to {
			m.to[i] = unseen
		}
	}
	for _, i := range rows {
		if c := v.C[i]; m.to[c] == unseen && (v.Valid == nil || column.Bit(v.Valid, int(i))) {
			p.set.texts.Lock()
			m.to[c] = p.set.texts.code(v.Dict.Texts[c])
			p.set.texts.Unlock()
		}
	}
}

// settle puts the pairs of a chunk into the set, now that its group g is known to be
// group to[g] (nil: g). Shards are visited from another one on for each chunk, so
// that workers seldom wait for one another.
func (p *pairPart) settle(to []int32, chunk int) error {
	if m := p.set.env.holder; m != nil {
		defer m.took(time.Now())
	}
	grown := p.settleCoded(to)
	var start [pairShards + 1]int32
	hashes := make([]uint64, len(p.pairs))
	for k := range p.pairs {
		x := &p.pairs[k]
		if to != nil && x.group > 0 {
			x.group = to[x.group-1] + 1
		}
		hashes[k] = x.hash()
		start[hashes[k]>>(64-pairShardBits)+1]++
	}
	for s := range pairShards {
		start[s+1] += start[s]
	}
	next := start
	order := make([]int32, len(p.pairs))
	for k, h := range hashes {
		s := h >> (64 - pairShardBits)
		order[next[s]] = int32(k)
		next[s]++
	}
	for i := range pairShards {
		s := (i + 7*chunk) % pairShards
		if of := order[start[s]:start[s+1]]; len(of) > 0 {
			if err := p.set.env.stop(); err != nil {
				return err
			}
			grown += p.set.shards[s].putAll(p.pairs, hashes, of, p.set.env.stop)
		}
	}
	p.pairs = nil
	p.set.env.release(p.kept)
	return p.set.env.keep(grown)
}

// settleCoded sets the bits of pairs that have codes, and gives the bytes by which the
// set grew. Groups beyond what bits are kept for become pairs.
func (p *pairPart) settleCoded(to []int32) int64 {
	d := &p.set.dense
	d.Lock()
	defer d.Unlock()
	grown := int64(0)
	for _, x := range p.coded {
		if to != nil {
			x.group = to[x.group]
		}
		if x.group >= denseGroups {
			p.pairs = append(p.pairs, pair{uint64(x.code), -x.group - 1})
			continue
		}
		block := d.blocks[x.code>>6]
		if int(x.group) >= len(block) {
			more := make([]uint64, min(denseGroups, max(64, 2*len(block), int(x.group)+1)))
			copy(more, block)
			grown += 8 * int64(len(more)-len(block))
			d.blocks[x.code>>6], block = more, more
		}
		block[x.group] |= 1 << (uint(x.code) & 63)
	}
	p.coded = nil
	return grown
}

// putAll adds pairs and gives the bytes by which the shard grew. Where stop gives an error
// the shard is left as it is: nobody wants it any more.
func (s *pairShard) putAll(pairs []pair, hashes []uint64, of []int32, stop func() error) int64 {
	s.mu.Lock()
	defer s.mu.Unlock()
	before := len(s.slots)
	if s.slots == nil {
		s.slots = make([]pair, 64)
	}
	mask := len(s.slots) - 1
	for _, k := range of {
		x := pairs[k]
		for i := int(hashes[k]) & mask; ; i = (i + 1) & mask {
			have := &s.slots[i]
			if have.group == 0 {
				*have = x
				if s.n++; 2*s.n > len(s.slots) {
					if !s.grow(stop) {
						return int64(16 * (len(s.slots) - before))
					}
					mask = len(s.slots) - 1
				}
				break
			}
			if *have == x {
				break
			}
		}
	}
	return int64(16 * (len(s.slots) - before))
}

// grow makes room for more pairs, and reports whether it came to the end of it.
func (s *pairShard) grow(stop func() error) bool {
	old := s.slots
	s.slots = large[pair](stop, grownPairs(len(old)))
	mask := len(s.slots) - 1
	for k, x := range old {
		if k&(freshRows-1) == 0 && stop() != nil {
			return false
		}
		if x.group == 0 {
			continue
		}
		i := int(x.hash()) & mask
		for s.slots[i].group != 0 {
			i = (i + 1) & mask
		}
		s.slots[i] = x
	}
	return true
}

// grownPairs is the next size of a shard: large ones, of which there are many, grow less.
func grownPairs(n int) int {
	if n >= 1<<16 {
		return 2 * n
	}
	return 4 * n
}

// counts is the number of different values of each group.
func (s *pairSet) counts(groups int) (column.Vector, error) {
	v := column.New(column.Integer, nil, groups)
	for _, block := range s.dense.blocks {
		for g, word := range block {
			if word != 0 {
				v.I[g] += int64(bits.OnesCount64(word))
			}
		}
	}
	for k := range s.shards {
		if err := s.env.stop(); err != nil {
			return v, err
		}
		for _, x := range s.shards[k].slots {
			if x.group > 0 {
				v.I[x.group-1]++
			} else if x.group < 0 {
				v.I[-x.group-1]++
			}
		}
	}
	return v, nil
}
