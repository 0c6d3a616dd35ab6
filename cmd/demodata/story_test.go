package main

import (
	"math"
	"testing"
	"time"
)

// grid is the hall's air in points a quarter of a metre apart, each with the
// logger nearest to it: an estimate of the space each logger speaks for that owes
// nothing to any geometry but the distance.
func grid(loggers map[string]point, ids []string) map[string]float64 {
	const step = 0.25
	share := map[string]float64{}
	all := 0.0
	for x := step / 2; x < 30; x += step {
		for y := step / 2; y < 18; y += step {
			for z := step / 2; z < height; z += step {
				p := point{x, y, z}
				if !inside(p, 0) {
					continue
				}
				best, nearest := math.Inf(1), ""
				for _, id := range ids {
					q := loggers[id]
					if d := square(p.x-q.x) + square(p.y-q.y) + square(p.z-q.z); d < best {
						best, nearest = d, id
					}
				}
				share[nearest]++
				all++
			}
		}
	}
	for id := range share {
		share[id] /= all
	}
	return share
}

// The story that the demo tells: counting samples overrates the dock, space does
// not; the limit is passed by a few per cent of the space, by day.
func TestStory(t *testing.T) {
	loggers := sites(t, "sites.csv")
	delete(loggers, "L17") // outside the wall
	var ids []string
	for id := range loggers {
		ids = append(ids, id)
	}
	share := grid(loggers, ids)

	var plain, space, over, plainOver, weight, rows float64
	overAt := map[int]float64{} // share over 8 °C by hour of the day
	weightAt := map[int]float64{}
	for _, r := range table(t, "log.csv") {
		w := share[r[1]]
		if r[2] == "" || w == 0 {
			continue
		}
		at, err := time.Parse(time.RFC3339, r[0])
		if err != nil {
			t.Fatal(err)
		}
		temp := number(t, r[2])
		rows++
		weight += w
		weightAt[at.Hour()] += w
		plain += temp
		space += w * temp
		if temp > 8 {
			over += w
			plainOver++
			overAt[at.Hour()] += w
		}
	}
	plain, space = plain/rows, space/weight
	over, plainOver = over/weight, plainOver/rows
	t.Logf("mean %.3f by count, %.3f by space; over 8 °C %.4f by count, %.4f by space", plain, space, plainOver, over)
	if plain-space < 0.2 {
		t.Errorf("means %.3f by count and %.3f by space: too near to each other to tell a story", plain, space)
	}
	if over < 0.02 || over > 0.08 {
		t.Errorf("%.4f of the space and time over 8 °C, want a few per cent", over)
	}
	if night, day := overAt[2]/weightAt[2], overAt[9]/weightAt[9]; night > 0.01 || day < 0.05 {
		t.Errorf("over 8 °C: %.4f at night, %.4f in the morning", night, day)
	}
}

// The drifting logger parts from the two on its own mast within the week: by more
// than any calibration error could explain.
func TestDriftShows(t *testing.T) {
	difference := map[int]float64{} // L23 less the mean of L22 and L24, by day
	for _, r := range table(t, "log.csv") {
		weight := map[string]float64{"L23": 1, "L22": -0.5, "L24": -0.5}[r[1]]
		if weight == 0 || r[2] == "" {
			continue
		}
		at, err := time.Parse(time.RFC3339, r[0])
		if err != nil {
			t.Fatal(err)
		}
		difference[at.Day()] += weight * number(t, r[2]) / 96
	}
	if first, last := difference[7], difference[13]; last-first < 1.4 || last-first > 2 {
		t.Errorf("L23 less its mast: %.2f K on the first day, %.2f K on the last; want a drift of about 1.7 K", first, last)
	}
}
