package main

import (
	"bytes"
	"fmt"
	"strings"
)

// floorPlan is the floor of the hall without the plant room, counter-clockwise, in metres.
var floorPlan = [][2]float64{{4, 0}, {30, 0}, {30, 12}, {18, 12}, {18, 18}, {0, 18}, {0, 3}, {4, 3}}

const ceilingHeight = 7.5

// writeMesh writes the hall as the drawing office exports it: polygons, counter-clockwise
// from outside, in metres.
func writeMesh(b *bytes.Buffer) {
	b.WriteString("# Brackwater Depot, Hall 4 (invented): the air of the hall, without the plant room\no hall4\n")
	for _, z := range [2]float64{0, ceilingHeight} {
		for _, p := range floorPlan {
			fmt.Fprintf(b, "v %g %g %g\n", p[0], p[1], z)
		}
	}
	n := len(floorPlan)
	b.WriteString("g floor\nf")
	for i := n; i > 0; i-- {
		fmt.Fprintf(b, " %d", i)
	}
	b.WriteString("\ng ceiling\nf")
	for i := range n {
		fmt.Fprintf(b, " %d", n+i+1)
	}
	b.WriteString("\ng walls\n")
	for i := range n {
		j := (i + 1) % n
		fmt.Fprintf(b, "f %d %d %d %d\n", i+1, j+1, n+j+1, n+i+1)
	}
}

// writeRacks writes the racks, in which loggers hang, as boxes.
func writeRacks(b *bytes.Buffer) {
	b.WriteString("name,x_from,x_to,y_from,y_to,z_from,z_to\n")
	for _, s := range stations {
		if strings.HasPrefix(s.place, "rack") {
			fmt.Fprintf(b, "%s,%.2f,%.2f,%.2f,%.2f,0,6\n", s.place, s.x-2, s.x+2, s.y-0.6, s.y+0.6)
		}
	}
}
