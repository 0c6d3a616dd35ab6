package main

import (
	"bytes"
	"fmt"
	"time"
)

// leg is a straight stretch of the walk, or a stand where both ends are the same,
// with the number of readings taken on it.
type leg struct {
	x0, y0, x1, y1 float64
	readings       int
}

// route is the way of one pass along the aisles: 400 readings, more than a third
// of them within a few metres of the dock door, where the client wanted to see
// everything.
var route = []leg{
	{5, 0.8, 24, 0.8, 34},
	{24, 0.8, 29.3, 1.2, 12},
	{29.3, 1.2, 29.3, 11, 34},
	{28.2, 11, 28.2, 1.5, 32},
	{27.4, 3, 27.4, 9, 24},
	{29.2, 6, 29.2, 6, 42},
	{26.5, 6.4, 1.2, 6.4, 58},
	{1.2, 6.4, 1.2, 17, 24},
	{1.2, 17, 17, 17, 36},
	{17, 17, 17, 10, 16},
	{17, 10, 2.4, 10, 34},
	{2.4, 10, 2.4, 13.4, 8},
	{2.4, 13.4, 16.8, 13.4, 26},
	{17.2, 11.2, 28.2, 11.2, 20},
}

// passes are the heights of the probe, in metres, and when each pass began. The
// room changes from one to the next, and while each lasts.
var passes = []struct {
	z     float64
	start time.Duration
}{
	{0.1, 32*time.Hour + 40*time.Minute},
	{1.1, 34*time.Hour + 5*time.Minute},
	{1.7, 37*time.Hour + 20*time.Minute},
}

// writeWalk writes the handheld readings: number, time, position, temperature in
// °C to 0.1 and the pass.
func writeWalk(b *bytes.Buffer, f *fence, c *campaign) {
	b.WriteString("reading,t,x,y,z,temp,pass\n")
	r := newStream(c.number<<32 + 3000)
	number := 0
	for i, pass := range passes {
		since := pass.start
		for _, l := range route {
			for k := range l.readings {
				along := (float64(k) + 0.5) / float64(l.readings)
				p := point{
					centimetres(f, l.x0+(l.x1-l.x0)*along+r.between(-0.14, 0.14)),
					centimetres(f, l.y0+(l.y1-l.y0)*along+r.between(-0.14, 0.14)),
					centimetres(f, pass.z+r.between(-0.06, 0.06)),
				}
				temp := c.air.at(p, since.Hours()) + 0.06 + 0.05*r.bell()
				number++
				fmt.Fprintf(b, "%d,%s,%s,%s,%s,%s,%d\n", number, c.start.Add(since).Format(time.RFC3339),
					metres(p.x), metres(p.y), metres(p.z), decimal(f.steps(temp, 10), 10), i+1)
				since += time.Duration(6+r.below(3)) * time.Second
			}
		}
	}
}
