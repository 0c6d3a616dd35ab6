package main

import (
	"bytes"
	"fmt"
	"time"
)

// Where and when the troubles of the first campaign happen.
const (
	driftFrom = 30 * time.Hour                                 // after the start
	driftRate = 0.3 / 24.0                                     // kelvin an hour: 1.7 K at the end of the week
	lastWords = 4*24*time.Hour + 11*time.Hour + 30*time.Minute // the dying logger's last reading
)

// missingIn is the chance, one in so many, that a reading was lost on the way.
const missingIn = 900

// instrument is a logger with its errors: a calibration error that stays, and a
// noise that remembers the reading before.
type instrument struct {
	logger
	random stream
	offset float64
	noise  float64
}

func (c *campaign) instruments() []*instrument {
	var all []*instrument
	for _, l := range c.loggers {
		r := newStream(c.number<<32 + 2000 + uint64(l.number))
		all = append(all, &instrument{logger: l, random: r, offset: 0.07 * r.bell(), noise: 0.04 * r.bell()})
	}
	return all
}

// read gives what the instrument shows for the air after the time since the start.
func (i *instrument) read(a *air, since time.Duration, drifts bool) float64 {
	i.noise = 0.7*i.noise + 0.03*i.random.bell()
	t := a.at(i.at, since.Hours()) + i.offset + i.noise
	if drifts && since > driftFrom {
		t += driftRate * (since - driftFrom).Hours()
	}
	return t
}

// writeLog writes the readings of a week, instant by instant: the time (UTC, with
// its mark), the logger, the temperature in °C to 0.01, empty where it was lost.
func (c *campaign) writeLog(b *bytes.Buffer, f *fence) {
	b.WriteString("t,logger,temp\n")
	all := c.instruments()
	for since := time.Duration(0); since < 7*24*time.Hour; since += c.step {
		stamp := c.start.Add(since).Format(time.RFC3339)
		for _, i := range all {
			temp := i.read(c.air, since, c.trouble && i.number == drifting)
			lost := i.random.below(missingIn) == 0
			if c.trouble && i.number == dying && since > lastWords {
				continue
			}
			value := decimal(f.steps(temp, 100), 100)
			if lost {
				value = ""
			}
			fmt.Fprintf(b, "%s,%s,%s\n", stamp, i.id(), value)
		}
	}
}
