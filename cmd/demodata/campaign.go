package main

import (
	"bytes"
	"fmt"
	"time"
)

// station is a mast or rack with three loggers, one on each level.
type station struct {
	x, y  float64
	place string
}

// stations are where the loggers hang. Nine of the eighteen stand in the eastern
// third of the hall, where the dock is: it was easy to get at, and it was where
// trouble was expected.
var stations = []station{
	{1.15, 5.2, "west wall"},
	{1.0, 16.7, "north-west corner"},
	{5.3, 9.3, "rack A"},
	{6.2, 1.5, "rack B"},
	{8.6, 16.3, "north wall"},
	{13.2, 4.75, "rack C"},
	{11.1, 11.7, "rack D"},
	{16.5, 16.3, "north-east corner"},
	{15.4, 8.4, "rack E"},
	{20.7, 10.9, "re-entrant corner"},
	{21.1, 3.1, "rack F"},
	{25.3, 10.8, "rack G"},
	{25.7, 1.1, "rack H"},
	{26.4, 6.2, "dock aisle"},
	{28.8, 3.6, "dock south"},
	{29.0, 8.5, "dock north"},
	{28.3, 6.0, "dock door"},
	{28.6, 11.1, "dock corner"},
}

// levels are the three heights, in metres, at which loggers hang at a station.
var levels = []struct {
	z    float64
	name string
}{{0.4, "floor"}, {3.6, "middle"}, {6.8, "top"}}

// The loggers with a trouble, by number.
const (
	miskeyed = 17 // x of 13.20 m written down as 31.20 m: outside the east wall
	drifting = 23
	dying    = 38
)

// logger is one instrument and how it was hung.
type logger struct {
	number int
	at     point // where it really hangs, in whole centimetres
	keyed  point // where sites.csv says it hangs
	level  string
	place  string
}

func (l logger) id() string { return fmt.Sprintf("L%02d", l.number) }

// campaign is a week of logging.
type campaign struct {
	number  uint64 // part of every stream's number
	start   time.Time
	step    time.Duration
	air     *air
	loggers []logger
	trouble bool // drift, death and a transposed coordinate
	fence   fence
}

// firstCampaign has the fans as they were found: one throws too little.
func firstCampaign() *campaign {
	fans := []evaporator{
		{point{0.4, 12.5, 6.3}, 1.7, 7.5, 3.25},
		{point{10.5, 17.6, 6.3}, 1.5, 7, 5.75},
	}
	c := &campaign{number: 1, start: time.Date(2031, 4, 7, 0, 0, 0, 0, time.UTC), step: 15 * time.Minute, trouble: true}
	c.air = newAir(5, fans, newStream(c.number<<32))
	c.hang()
	return c
}

// secondCampaign comes three weeks later, after the fans were re-balanced towards
// the dock and the transposed coordinate was put right.
func secondCampaign() *campaign {
	fans := []evaporator{
		{point{0.4, 12.5, 6.3}, 1.1, 7.5, 3.25},
		{point{10.5, 17.6, 6.3}, 1.0, 7, 5.75},
		{point{22, 0.4, 6.3}, 1.6, 6.5, 4.5},
	}
	c := &campaign{number: 2, start: time.Date(2031, 4, 28, 0, 0, 0, 0, time.UTC), step: time.Hour}
	c.air = newAir(5.2, fans, newStream(c.number<<32))
	c.hang()
	return c
}

// hang places three loggers at each station. Nobody hits the drawing: each hangs a
// few centimetres off, on its own.
func (c *campaign) hang() {
	for i, s := range stations {
		for j, level := range levels {
			l := logger{number: 3*i + j + 1, level: level.name, place: s.place}
			r := newStream(c.number<<32 + 1000 + uint64(l.number))
			l.at = point{
				centimetres(&c.fence, s.x+r.between(-0.17, 0.17)),
				centimetres(&c.fence, s.y+r.between(-0.17, 0.17)),
				centimetres(&c.fence, level.z+r.between(-0.08, 0.08)),
			}
			l.keyed = l.at
			if c.trouble && l.number == miskeyed {
				l.at.x, l.keyed.x = 13.2, 31.2
			}
			c.loggers = append(c.loggers, l)
		}
	}
}

// centimetres rounds a length in metres to whole centimetres.
func centimetres(f *fence, v float64) float64 { return float64(f.steps(v, 100)) / 100 }

func (c *campaign) writeSites(b *bytes.Buffer, f *fence) {
	if f.err == nil {
		f.err = c.fence.err
	}
	b.WriteString("id,x,y,z,level,place\n")
	for _, l := range c.loggers {
		fmt.Fprintf(b, "%s,%s,%s,%s,%s,%s\n", l.id(), metres(l.keyed.x), metres(l.keyed.y), metres(l.keyed.z), l.level, l.place)
	}
}

// metres writes a length that is a whole number of centimetres.
func metres(v float64) string { return fmt.Sprintf("%.2f", v) }
