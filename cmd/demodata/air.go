package main

import "math"

// point is a place in the hall in metres: x to the east, y to the north, z up,
// from the south-west corner of the floor.
type point struct{ x, y, z float64 }

const (
	height = 7.5 // of the hall
	plantX = 4.0 // the plant room fills the corner at the origin up to here,
	plantY = 3.0 // from floor to ceiling
)

// plan is the floor plan of Hall 4: 30 m by 18 m with a 12 m by 6 m corner missing.
var plan = [][2]float64{{0, 0}, {30, 0}, {30, 12}, {18, 12}, {18, 18}, {0, 18}}

// inside tells whether p lies in the hall's air at least margin away from every
// wall, floor, ceiling and the plant room.
func inside(p point, margin float64) bool {
	long := p.x >= margin && p.x <= 30-margin && p.y >= margin && p.y <= 12-margin
	tall := p.x >= margin && p.x <= 18-margin && p.y >= margin && p.y <= 18-margin
	plant := p.x < plantX+margin && p.y < plantY+margin
	return (long || tall) && !plant && p.z >= margin && p.z <= height-margin
}

// door is the middle of the dock door in the east wall, on the floor.
var door = point{30, 6, 0}

// evaporator is a fan coil that cools the air around it.
type evaporator struct {
	at       point
	strength float64 // by how many kelvin it cools the air at its mouth
	reach    float64 // over how many metres that falls to 1/e
	defrost  float64 // hour of its first defrost of the day; one every six hours
}

// air is the temperature of the hall's air over a week.
type air struct {
	set     float64 // °C, where nothing warms or cools
	fans    []evaporator
	traffic [7]float64 // how busy the dock is, by day
	weather [7]float64 // °C outdoors, mean of the day
	bursts  []float64  // how far the door stands open, by quarter of an hour, mean 1
}

// newAir makes a week of weather and loading for a hall with the given fans.
func newAir(set float64, fans []evaporator, s stream) *air {
	a := &air{set: set, fans: fans, traffic: [7]float64{1, 0.9, 1.05, 1.1, 0.95, 0.4, 0.04}}
	for d := range a.weather {
		a.weather[d] = 12.5 + 1.6*s.bell()
	}
	for range 7*24*4 + 1 {
		a.bursts = append(a.bursts, s.between(0.45, 1.55))
	}
	return a
}

// at gives the temperature in °C at p, h hours (0 to 168) after the start.
func (a *air) at(p point, h float64) float64 {
	day := min(int(h/24), 6)
	hour := h - 24*float64(day)
	t := a.set + 0.13*(p.z-height/2)
	t += a.throughDoor(p, h, day, hour)
	for _, f := range a.fans {
		t += f.cooling(p, h)
	}
	t += 0.45 * daylight(hour-2) * math.Exp((p.z-height)/1.1)
	t += 0.8 * math.Exp(-distanceToPlant(p)/1.3)
	t += 0.7 * bump(math.Hypot(p.x-16.8, p.y-17), 3.2)
	return t
}

// throughDoor is the warmth of the air that comes in at the dock: it follows the
// loading, the weather and how far the door stands open, spreads along the floor
// plan and stays under the ceiling.
func (a *air) throughDoor(p point, h float64, day int, hour float64) float64 {
	loading := bump(hour-8.8, 2.4) + 0.75*bump(hour-14.8, 2.6)
	outdoors := a.weather[day] + 4.5*daylight(hour-2.5)
	quarter := min(int(h*4), len(a.bursts)-2)
	along := h*4 - float64(quarter)
	open := a.bursts[quarter]*(1-along) + a.bursts[quarter+1]*along
	warm := a.traffic[day] * loading * open * max(outdoors-4, 0)
	r := math.Hypot(p.x-door.x, p.y-door.y)
	return 0.85 * warm * math.Exp(-r/6.5) * (0.6 + 0.4*p.z/height)
}

// cooling is what one evaporator does to the air at p, in kelvin. For half an hour
// of defrost it warms instead, and the air needs about forty minutes to forget it.
func (f evaporator) cooling(p point, h float64) float64 {
	near := math.Exp(-math.Sqrt(square(p.x-f.at.x)+square(p.y-f.at.y)+square(p.z-f.at.z)) / f.reach)
	since := math.Mod(h-f.defrost+24, 6)
	warm := math.Exp(-(since - 0.5) / 0.65)
	if since < 0.5 {
		warm = since / 0.5
	}
	cycle := 1 + 0.14*math.Sin(2*math.Pi*h/0.87)
	return -f.strength*near*cycle + warm*(1.5*near+0.12)
}

// daylight runs from -1 at midnight to 1 at noon.
func daylight(hour float64) float64 { return -math.Cos(2 * math.Pi * hour / 24) }

// bump is 1 at 0 and falls off over the width, as a bell.
func bump(distance, width float64) float64 { return math.Exp(-square(distance / width)) }

// distanceToPlant is the way from p to the plant room's walls, in the plan.
func distanceToPlant(p point) float64 {
	return math.Hypot(max(p.x-plantX, 0), max(p.y-plantY, 0))
}

func square(x float64) float64 { return x * x }
