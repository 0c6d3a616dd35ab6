package main

import (
	"bytes"
	"fmt"
	"time"
)

// The autumn week: eighteen loggers as they really come back. Each was started by
// hand, so that no two share a stamp; each shows the local time of its own clock,
// which runs a little fast or slow, through the night in which the clocks are put
// back; each has a certificate of three points. Two swap their places on the third
// day, one falls silent on the fifth, and the first hours, in which they took the
// hall's temperature, are to be left out.
const (
	rawLoggers  = 18
	rawStep     = 15 * time.Minute
	rawDays     = 7
	rawSilent   = 12
	rawSettling = 3 * time.Hour // the first hours, excluded
)

// rawSwapped are the loggers that change places after rawSwap.
var (
	rawStart   = time.Date(2031, 10, 20, 6, 0, 0, 0, time.UTC)
	rawSwap    = rawStart.Add(2*24*time.Hour + 5*time.Hour)
	rawDeath   = rawStart.Add(4*24*time.Hour + 7*time.Hour + 20*time.Minute)
	rawSwapped = [2]int{5, 14}
)

// rawLogger is one logger of the autumn week.
type rawLogger struct {
	number      int
	random      stream
	late        time.Duration // of its first reading, after the start
	ahead, gain time.Duration // of its clock at the start; what it gains in the week
	offset      float64       // error at 5 °C, in K
	slope       float64       // error for each K above
	noise       float64
}

func (l *rawLogger) id() string { return fmt.Sprintf("S%02d", l.number) }

// shown is what its clock shows at an instant.
func (l *rawLogger) shown(at time.Time) time.Time {
	gained := time.Duration(float64(l.gain) * float64(at.Sub(rawStart)) / float64(rawDays*24*time.Hour))
	return at.Add(l.ahead + gained).Truncate(time.Second)
}

// raw is the autumn week with the places of its loggers.
type raw struct {
	air     *air
	loggers []*rawLogger
	places  []logger // by number, before the swap
}

func newRaw(f *fence) *raw {
	r := &raw{}
	fans := []evaporator{
		{point{0.4, 12.5, 6.3}, 1.7, 7.5, 3.25},
		{point{10.5, 17.6, 6.3}, 1.5, 7, 5.75},
	}
	r.air = newAir(5, fans, newStream(3<<32))
	for i := range rawLoggers {
		s := newStream(3<<32 + 2000 + uint64(i))
		level := levels[i%len(levels)]
		r.places = append(r.places, logger{number: i + 1, level: level.name, place: stations[i].place,
			at: point{centimetres(f, stations[i].x+s.between(-0.15, 0.15)), centimetres(f, stations[i].y+s.between(-0.15, 0.15)), centimetres(f, level.z+s.between(-0.05, 0.05))}})
		r.loggers = append(r.loggers, &rawLogger{number: i + 1, random: s,
			late:  time.Duration(s.below(880)) * time.Second,
			ahead: time.Duration(s.below(41)-20) * time.Second, gain: time.Duration(s.below(181)-90) * time.Second,
			offset: 0.15 * s.bell(), slope: 0.01 * s.bell()})
	}
	return r
}

// clocksBack is when the clocks of the depot, until then an hour ahead of UTC, are put
// back. It is written out here, so that no table of zones on the machine can change
// the files.
var clocksBack = time.Date(2031, 10, 26, 1, 0, 0, 0, time.UTC)

// wall is what a clock on the wall shows when it is an instant in UTC.
func wall(at time.Time) string {
	if at.Before(clocksBack) {
		at = at.Add(time.Hour)
	}
	return at.Format("02.01.2006 15:04:05")
}

// place is where a logger hangs at an instant.
func (r *raw) place(l *rawLogger, at time.Time) point {
	n := l.number
	if !at.Before(rawSwap) {
		for i, other := range rawSwapped {
			if n == other {
				return r.places[rawSwapped[1-i]-1].at
			}
		}
	}
	return r.places[n-1].at
}

// writeExport writes what a logger hands over.
func (r *raw) writeExport(b *bytes.Buffer, f *fence, l *rawLogger) {
	fmt.Fprintf(b, "Data export (invented)\nSite: Brackwater Depot, Hall 4\nSerial: %s\nInterval: 15 min\nTime: local\n\n", l.id())
	b.WriteString("Date and time;Temperature [°C]\n")
	for at := rawStart.Add(l.late); at.Before(rawStart.Add(rawDays * 24 * time.Hour)); at = at.Add(rawStep) {
		if l.number == rawSilent && at.After(rawDeath) {
			break
		}
		l.noise = 0.7*l.noise + 0.03*l.random.bell()
		truth := r.air.at(r.place(l, at), at.Sub(rawStart).Hours()) + l.noise
		shown := decimal(f.steps(truth+l.offset+l.slope*(truth-5), 100), 100)
		b.WriteString(wall(l.shown(at)) + ";" + string(bytes.ReplaceAll([]byte(shown), []byte("."), []byte(","))) + "\n")
	}
}

// writeCalibration writes the certificates: what is to be added to what a logger
// indicates, at three points.
func (r *raw) writeCalibration(b *bytes.Buffer, f *fence) {
	b.WriteString("logger,indication [°C],correction [°C],u [°C]\n")
	for _, l := range r.loggers {
		for _, truth := range []float64{-5, 5, 25} {
			wrong := f.steps(l.offset+l.slope*(truth-5), 100)
			fmt.Fprintf(b, "%s,%s,%s,0.05\n", l.id(), decimal(int(truth)*100+wrong, 100), decimal(-wrong, 100))
		}
	}
}

// writeClocks writes the checks of the clocks, before and after the week, in UTC.
func (r *raw) writeClocks(b *bytes.Buffer, _ *fence) {
	b.WriteString("logger,shown,actual\n")
	for _, l := range r.loggers {
		for _, at := range []time.Time{rawStart.Add(-30 * time.Minute), rawStart.Add(rawDays*24*time.Hour + 45*time.Minute)} {
			fmt.Fprintf(b, "%s,%s,%s\n", l.id(), l.shown(at).Format(time.RFC3339), at.Format(time.RFC3339))
		}
	}
}

// The drawing on which places are taken down is in millimetres from a corner of its
// sheet, with the north of the hall to the right and its east upwards: turned and
// mirrored. Heights are in metres.
const (
	drawnRight = 12500 // of the south-west corner of the floor
	drawnUp    = 3400
)

// drawn is where a place of the hall, in whole centimetres, stands on the drawing.
func drawn(f *fence, x, y float64) string {
	return fmt.Sprintf("%d,%d", drawnRight+10*f.steps(y, 100), drawnUp+10*f.steps(x, 100))
}

// writeControl writes the corners of the hall by which the drawing is matched with it.
func writeControl(b *bytes.Buffer, f *fence) {
	b.WriteString("name,px,py,x,y\n")
	for i, c := range []point{{0, 0, 0}, {30, 0, 0}, {30, 12, 0}, {18, 18, 0}, {0, 18, 0}} {
		fmt.Fprintf(b, "C%d,%s,%s,%s\n", i+1, drawn(f, c.x, c.y), metres(c.x), metres(c.y))
	}
}

// writePlaces writes the register of places: where a logger hung on the drawing and at
// what height, since when and until when.
func (r *raw) writePlaces(b *bytes.Buffer, f *fence) {
	b.WriteString("logger,since,until,px,py,h [m],place\n")
	from, to := rawStart.Add(-2*time.Hour), rawStart.Add((rawDays+1)*24*time.Hour)
	row := func(l *rawLogger, at *logger, since, until time.Time) {
		fmt.Fprintf(b, "%s,%s,%s,%s,%s,%s\n", l.id(), since.Format(time.RFC3339), until.Format(time.RFC3339),
			drawn(f, at.at.x, at.at.y), metres(at.at.z), at.place)
	}
	for _, l := range r.loggers {
		other := 0
		for i, n := range rawSwapped {
			if n == l.number {
				other = rawSwapped[1-i]
			}
		}
		if other == 0 {
			row(l, &r.places[l.number-1], from, to)
			continue
		}
		row(l, &r.places[l.number-1], from, rawSwap)
		row(l, &r.places[other-1], rawSwap, to)
	}
}

// writeExclusions writes what is not to be used, with the reason.
func (r *raw) writeExclusions(b *bytes.Buffer, _ *fence) {
	b.WriteString("logger,since,until,reason\n")
	for _, l := range r.loggers {
		fmt.Fprintf(b, "%s,%s,%s,takes the temperature of the hall\n", l.id(), rawStart.Add(-time.Hour).Format(time.RFC3339), rawStart.Add(rawSettling).Format(time.RFC3339))
	}
	for _, n := range rawSwapped {
		fmt.Fprintf(b, "S%02d,%s,%s,carried from one place to the other\n", n, rawSwap.Add(-15*time.Minute).Format(time.RFC3339), rawSwap.Add(30*time.Minute).Format(time.RFC3339))
	}
}
