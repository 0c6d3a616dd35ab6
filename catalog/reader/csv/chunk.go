package csv

import (
	"bytes"
	"context"
	"runtime"
	"sync"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// chunkBytes is how long the stretches of a file are that are read side by side. They
// are the same for any number of threads, and so is everything that comes of them.
var chunkBytes = 2 << 20

// chunk is a stretch of a file: the records that begin in it.
type chunk struct {
	from, to int // the first record begins at from, none at or behind to
	line     int // of from
	first    int // the number of the first record
	records  int // that have no fault as such
	done     int // how many bytes are passed with it, for progress
}

// cut is where chunks are to begin: behind line breaks. Within quotation marks such
// a place is none where a record begins; whoever reads the chunk before finds out.
func (f *file) cut() []chunk {
	var list []chunk
	for from := f.body; ; {
		c := chunk{from: from, to: len(f.data), line: f.bodyLine}
		if aim := from + chunkBytes; aim < len(f.data) {
			end := lineEnd(f.data, aim)
			if end+breakLen(f.data[end:]) < len(f.data) {
				c.to = end + breakLen(f.data[end:])
			}
		}
		list = append(list, c)
		if from = c.to; from >= len(f.data) {
			return list
		}
	}
}

// scan starts a pass over the records of a chunk.
func (f *file) scan(c *chunk) *scanner {
	return newScanner(f.data, f.facts.Delimiter, c.from, c.line)
}

// within reads the next record of a chunk; false behind its last.
func (c *chunk) within(s *scanner) bool { return s.pos < c.to && s.next() }

func (im *importer) threads() int {
	if im.o.Threads > 0 {
		return im.o.Threads
	}
	return runtime.GOMAXPROCS(0)
}

// inOrder does work for 0 to n-1 on several threads and takes what comes of each in
// order. No more than twice as many as there are threads wait to be taken. Memory that
// cannot be looked at is an error, wherever that happens.
func inOrder[T any](ctx context.Context, threads, n int, work func(i int) T, take func(i int, x T) error) error {
	if threads == 1 || n == 1 {
		for i := range n {
			if err := ctx.Err(); err != nil {
				return err
			}
			if err := take(i, work(i)); err != nil {
				return err
			}
		}
		return ctx.Err()
	}
	type outcome struct {
		x   T
		err error
	}
	results := make([]chan outcome, n)
	for i := range results {
		results[i] = make(chan outcome, 1)
	}
	begin := make(chan int, n)
	room := make(chan struct{}, 2*threads)
	stop := make(chan struct{})
	var all sync.WaitGroup
	defer all.Wait()
	defer close(stop)
	for range min(threads, n) {
		all.Go(func() {
			for {
				// The place comes before the number: else the one that is waited for
				// could be without a place while later results fill them all.
				select {
				case room <- struct{}{}:
				case <-stop:
					return
				}
				i, more := <-begin
				if !more {
					return
				}
				var x outcome
				x.err = reader.Guard(func() error {
					x.x = work(i)
					return nil
				})
				results[i] <- x
			}
		})
	}
	for i := range n {
		begin <- i
	}
	close(begin)
	for i := range n {
		select {
		case x := <-results[i]:
			<-room
			if x.err != nil {
				return x.err
			}
			if err := take(i, x.x); err != nil {
				return err
			}
		case <-ctx.Done():
			return ctx.Err()
		}
	}
	return ctx.Err()
}

// surveyed is what the first pass learns from a chunk.
type surveyed struct {
	columns            []tally
	blank, records, n  int // n: with the blank ones
	undivided          int
	extraUsed          bool
	end, line, lastEnd int // where the next record begins; its line, counted from 1 at the chunk's first
}

// survey goes over a chunk whose lines count from 1.
func (im *importer) survey(f *file, c chunk) *surveyed {
	x := &surveyed{columns: make([]tally, len(im.columns))}
	for i := range x.columns {
		t := &im.columns[i]
		x.columns[i] = tally{time: t.time, censored: t.censored}
	}
	c.line = 1
	s := f.scan(&c)
	n := len(f.head.names)
	for c.within(s) {
		if x.n++; x.n&1023 == 0 && im.ctx.Err() != nil {
			break
		}
		if f.skips(s) {
			x.blank++
			continue
		}
		if _, bad := im.recordFault(s, f); bad {
			continue
		}
		if x.records++; n == 1 && bytes.ContainsAny(s.rec.fields[0].text, ",;\t|") && !s.rec.fields[0].quoted {
			x.undivided++
		}
		for i := range s.rec.fields {
			y := &s.rec.fields[i]
			b := trim(y.text)
			switch {
			case i >= n:
				x.extraUsed = x.extraUsed || len(b) > 0
			case !im.isNull(b):
				x.columns[f.column[i]].add(b, im.mark, y.line, f.src.Name)
			}
		}
	}
	x.end, x.line, x.lastEnd = s.pos, s.line, s.lineStart
	return x
}

// merge adds what later lines of a file tell to what earlier ones told; base is the
// line before the first of the later ones.
func (t *tally) merge(later *tally, base int) {
	t.present += later.present
	for i, n := range later.counts {
		t.counts[i] += n
	}
	t.zeros += later.zeros
	t.plain += later.plain
	t.other += later.other
	t.grouped += later.grouped
	t.guess.Merge(&later.guess)
	t.guessed += later.guessed
	t.firstText.merge(later.firstText, base)
	t.firstLong.merge(later.firstLong, base)
	t.firstZeros.merge(later.firstZeros, base)
	t.firstOther.merge(later.firstOther, base)
	t.firstGrouped.merge(later.firstGrouped, base)
	t.firstGuess.merge(later.firstGuess, base)
}

func (s *sample) merge(later sample, base int) {
	if s.line == 0 && later.line > 0 {
		later.line += base
		*s = later
	}
}

// built is what the second pass makes of a chunk.
type built struct {
	columns []column.Vector
	from    []*column.Builder // to be used again once columns are copied
	naive   []bool
	rows    int
	refused []refusedRecord
	faults  collector
}

type refusedRecord struct {
	line int
	raw  []byte
	x    reader.Fault
}

// part is an importer that reads one chunk: its faults and refused records are its own.
func (im *importer) part(f *file, out *built) *importer {
	p := &importer{ctx: im.ctx, o: im.o, mark: im.mark, missing: im.missing, columns: im.columns, types: im.types, files: im.files, spare: im.spare}
	p.faults.max = im.o.MaxFaults
	p.enter(f)
	if im.o.Refused != nil {
		p.o.Refused = func(line int, raw []byte, x reader.Fault) error {
			out.refused = append(out.refused, refusedRecord{line, raw, x})
			return nil
		}
	}
	return p
}

// makeChunk makes the columns of a chunk.
func (im *importer) makeChunk(f *file, c chunk, constants []cell) *built {
	out := &built{naive: make([]bool, len(im.columns))}
	p := im.part(f, out)
	cells := make([]cell, len(im.columns))
	copy(cells, constants)
	builders := im.spare.take()
	if builders == nil {
		for i := range im.columns {
			builders = append(builders, column.NewBuilder(im.types[i], im.columns[i].unit))
		}
	}
	for i := range builders {
		builders[i].Grow(c.records)
	}
	s := f.scan(&c)
	for n := c.first; c.within(s); n++ {
		if n&1023 == 0 && im.ctx.Err() != nil {
			break
		}
		if f.skips(s) {
			continue
		}
		ok, _ := p.convert(s, f, n, cells)
		if !ok || len(p.faults.List) > 0 {
			continue
		}
		out.rows++
		for i := range cells {
			appendCell(builders[i], im.types[i], &cells[i])
			out.naive[i] = out.naive[i] || cells[i].naive
		}
	}
	for _, b := range builders {
		out.columns = append(out.columns, b.Finish())
	}
	out.faults, out.from = p.faults, builders
	return out
}

// spareBuilders are those of chunks that are copied, to be used for others: fresh memory
// costs more than what is read into it.
type spareBuilders struct {
	mu   sync.Mutex
	list [][]*column.Builder
}

func (s *spareBuilders) take() []*column.Builder {
	s.mu.Lock()
	defer s.mu.Unlock()
	if len(s.list) == 0 {
		return nil
	}
	last := s.list[len(s.list)-1]
	s.list = s.list[:len(s.list)-1]
	return last
}

func (s *spareBuilders) give(builders []*column.Builder) {
	for _, b := range builders {
		b.Reset()
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	s.list = append(s.list, builders)
}

// merge takes the faults of a later chunk.
func (c *collector) merge(later *collector) {
	for _, x := range later.List {
		if !c.full() {
			c.List = append(c.List, x)
		}
	}
	c.More += later.More
}
