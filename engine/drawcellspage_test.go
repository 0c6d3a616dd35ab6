package engine

import (
	"bytes"
	"fmt"
	"image"
	"image/png"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"nearcell/engine/browser"
	"nearcell/engine/view"
)

// pageState is what the page says of itself.
type pageState struct {
	Picked *string
	Show   string
	Shown  []string
	View   string
	Dist   float64
	Cut    struct {
		Axis, Side int
		At, Area   float64
	}
	Cam struct{ Yaw, Pitch, Zoom float64 }
}

func stateOf(p *browser.Page) (s pageState) {
	p.Eval("cells.draw(), cells.state", &s)
	return s
}

// sightLine is a ray through the picture, in the coordinates of the sites.
type sightLine struct{ From, Along [3]float64 }

func (l sightLine) at(t float64) (p [3]float64) {
	for k := range 3 {
		p[k] = l.From[k] + t*l.Along[k]
	}
	return p
}

// through gives where the line runs within a box.
func (l sightLine) through(lo, hi [3]float64) (in, out float64) {
	in, out = 0, math.Inf(1)
	for k := range 3 {
		a, b := (lo[k]-l.From[k])/l.Along[k], (hi[k]-l.From[k])/l.Along[k]
		in, out = max(in, min(a, b)), min(out, max(a, b))
	}
	return in, out
}

// racksMeet is where a line first meets the hall of manySites, cut off at the height top;
// it knows nothing of cells.
func racksMeet(l sightLine, top float64) (p [3]float64, hit bool) {
	in, out := l.through([3]float64{0, 0, 0}, [3]float64{40, 25, top})
	for in < out {
		p = l.at(in + 1e-7)
		beyond := in
		for _, x := range [...]float64{10, 22} {
			if p[0] > x && p[0] < x+4 && p[1] > 5 && p[1] < 20 {
				_, beyond = l.through([3]float64{x, 5, -1}, [3]float64{x + 4, 20, 10})
			}
		}
		if beyond == in {
			return p, true
		}
		in = beyond
	}
	return p, false
}

// nearestOf is the nearest site, with how much nearer it is than the second.
func nearestOf(d *view.Data, p [3]float64) (id string, body int32, by float64) {
	sites, rows := singles(d.Sites), ints(d.Rows)
	best, second := math.Inf(1), math.Inf(1)
	for r, b := range rows {
		far := 0.0
		for k := range 3 {
			far += math.Pow(sites[3*b+int32(k)]+d.Middle[k]-p[k], 2)
		}
		if far < best {
			best, second, id, body = far, best, d.IDs[r], b
		} else {
			second = min(second, far)
		}
	}
	return id, body, math.Sqrt(second) - math.Sqrt(best)
}

// pickAll asks on a lattice of places what a pick there is, and compares it with the nearest
// site at the place that the line of sight meets, and the colour that is seen with the one of
// its cell. On some of them it clicks.
func pickAll(t *testing.T, p *browser.Page, d *view.Data, top float64) {
	t.Helper()
	p.Eval("cells.pick(''), cells.draw(), 0", nil)
	p.Wait("!cells.state.coarse") // it rests, and is shown in full
	p.Eval("new Promise(r => setTimeout(() => requestAnimationFrame(() => requestAnimationFrame(() => r(0))), 300))", nil)
	var stage [4]float64
	p.Eval("(r => [r.left, r.top, r.width, r.height])(document.getElementById('over').getBoundingClientRect())", &stage)
	picture, err := png.Decode(bytes.NewReader(p.Picture(false)))
	if err != nil {
		t.Fatal(err)
	}
	const wide, high = 15, 11
	var lines []sightLine
	var names []string
	all := fmt.Sprintf("Array.from({length: %d}, (_, k) => cells.%%s(%v * (k %%%% %d + 1), %v * (Math.floor(k / %d) + 1)))", wide*high, stage[2]/(wide+1), wide, stage[3]/(high+1), wide)
	p.Eval(fmt.Sprintf(all, "ray"), &lines)
	p.Eval(fmt.Sprintf(all, "at"), &names)
	met, missed, coloured := 0, 0, 0
	for j := range high {
		for i := range wide {
			x, y := stage[2]/(wide+1)*float64(i+1), stage[3]/(high+1)*float64(j+1)
			l, got := lines[j*wide+i], names[j*wide+i]
			place, hit := racksMeet(l, top)
			id, body, by := nearestOf(d, place)
			if hit && by < 0.02 {
				continue // on the border of two cells
			}
			if (j*wide+i)%29 == 7 {
				p.Click(stage[0]+x, stage[1]+y)
				if clicked := stateOf(p).Picked; (clicked == nil) != (got == "") || clicked != nil && *clicked != got {
					t.Errorf("a click at %v, %v picks %s, not %q", x, y, p.Text("cells.state.picked"), got)
				}
			}
			if !hit {
				if missed++; got != "" {
					t.Errorf("beside the hall %s is met", got)
				}
				continue
			}
			if met++; got != id {
				t.Errorf("%s is met at %v, and %s is nearest", got, place, id)
			}
			if paint := d.Paint[4*body:]; paint[3] == 0 && by > 0.4 {
				coloured++
				if !coloured9(picture, stage[0]+x, stage[1]+y, paint) {
					t.Errorf("%s at %v, %v has not its colour %v, but %v", id, x, y, paint[:3], picture.At(int(stage[0]+x), int(stage[1]+y)))
				}
			}
		}
	}
	if met < 40 || missed < 20 || coloured < 5 {
		t.Errorf("%d places meet a cell, %d none; %d have the colour of the scale", met, missed, coloured)
	}
}

// coloured9 tells whether most of the nine dots about a place have a colour: an edge of the
// room may be seen through the cell there.
func coloured9(p image.Image, x, y float64, want []byte) bool {
	n := 0
	for k := range 9 {
		r, g, b, _ := p.At(int(x)+3*(k%3-1), int(y)+3*(k/3-1)).RGBA()
		if math.Abs(float64(r>>8)-float64(want[0]))+math.Abs(float64(g>>8)-float64(want[1]))+math.Abs(float64(b>>8)-float64(want[2])) < 6 {
			n++
		}
	}
	return n >= 5
}

func check(t *testing.T, is bool, format string, args ...any) {
	t.Helper()
	if !is {
		t.Errorf(format, args...)
	}
}

// TestCellsPageInBrowser opens the page as a reader would: nothing of it fails or asks for
// anything; picks, cuts, single cells and keys do what they say.
func TestCellsPageInBrowser(t *testing.T) {
	b := browser.Open(t)
	folder := drawnIn(t, manySites(), "DRAW CELLS OF many SHADED BY temp LIMITS (2, 8) TO 'p.html';")
	file := filepath.Join(folder, "p.html")
	d := pageData(t, file)
	p := b.Page(file, 1400, 900)
	check(t, stateOf(p).View == "turning", "the cells are not there: %+v", stateOf(p))
	pickAll(t, p, d, 9)

	// The keyboard: focus is seen, z cuts in the middle, n picks.
	p.ClickOn("h1")
	p.Key("Tab")
	check(t, p.Text("document.activeElement.id") == "over" && p.Text("getComputedStyle(document.activeElement).outlineStyle") == "solid",
		"Tab leads to %q, outline %q", p.Text("document.activeElement.id"), p.Text("getComputedStyle(document.activeElement).outlineStyle"))
	p.Key("Escape", "z")
	s := stateOf(p)
	check(t, s.Cut.Axis == 2 && s.Cut.At == 4.5 && math.Abs(s.Cut.Area-880) < 0.01 && strings.Contains(p.Text("document.getElementById('cut').textContent"), "Cut at z = 4.5 m: 880 m² of"),
		"z cuts %+v: %s", s.Cut, p.Text("document.getElementById('cut').textContent"))
	pickAll(t, p, d, 4.5)
	p.ClickOn("#over")
	p.Key("Escape", "o")
	check(t, stateOf(p).Cut.Side == -1 && math.Abs(stateOf(p).Cut.Area-880) < 0.01, "o gives %+v", stateOf(p).Cut)
	p.Key("z", "x")
	s = stateOf(p)
	check(t, s.Cut.Axis == 0 && s.Cut.At == 20 && math.Abs(s.Cut.Area-225) < 0.01, "x gives %+v", s.Cut)
	p.Key("PageUp") // along the side of a rack: what is kept, at more x, has only the ways beside it
	s = stateOf(p)
	check(t, s.Cut.At == 22 && s.Cut.Side == -1 && math.Abs(s.Cut.Area-90) < 0.01, "PageUp gives %+v", s.Cut)
	p.Key("x")
	check(t, stateOf(p).Cut.Axis == -1 && p.Text("document.getElementById('cut').textContent") == "not cut", "x again leaves %+v", stateOf(p).Cut)
	singleOut(t, p, look(d))

	was := stateOf(p)
	p.Key("ArrowRight", "ArrowUp", "+")
	s = stateOf(p)
	check(t, s.Cam.Yaw > was.Cam.Yaw && s.Cam.Pitch > was.Cam.Pitch && s.Dist < was.Dist, "arrows and + turn %+v to %+v", was.Cam, s.Cam)
	p.Drag(300, 300, 400, 330)
	check(t, stateOf(p).Cam.Yaw < s.Cam.Yaw, "dragging to the right does not turn")
	p.Wheel(400, 300, -120)
	check(t, stateOf(p).Dist < s.Dist, "the wheel does not zoom")
	s = stateOf(p)
	p.Touch("touchStart", [2]float64{300, 300}, [2]float64{400, 300})
	p.Touch("touchMove", [2]float64{250, 300}, [2]float64{450, 300})
	p.Touch("touchEnd")
	check(t, stateOf(p).Dist < s.Dist*0.7, "two fingers do not zoom: %v from %v", stateOf(p).Dist, s.Dist)
	surroundings(t, p)
	if faults := p.Faults(); len(faults) > 0 {
		t.Errorf("faults: %q", faults)
	}
	withoutGraphics(t, b)
}

// singleOut picks by name, and shows one cell, those about it, and the marked ones.
func singleOut(t *testing.T, p *browser.Page, d *seen) {
	t.Helper()
	const id = "S010"
	p.ClickOn("#name")
	p.Eval("document.getElementById('name').select(), 0", nil)
	p.Type(strings.ToLower(id))
	k := slices.Index(d.IDs, id)
	text := p.Text("document.getElementById('picked').textContent")
	check(t, strings.Contains(text, id) && strings.Contains(text, "volume"+d.Volumes[k]) && strings.Contains(text, "temp"+d.Values[k]),
		"the facts of %s: %s", id, text)
	p.Eval("document.getElementById('over').focus(), 0", nil)
	p.Key("Enter")
	check(t, slices.Equal(stateOf(p).Shown, []string{id}), "alone: %v", stateOf(p).Shown)
	p.Key("Enter")
	want := []string{id}
	for near := range d.near[id] {
		want = append(want, near)
	}
	slices.Sort(want)
	check(t, slices.Equal(stateOf(p).Shown, want), "with neighbours: %v, want %v", stateOf(p).Shown, want)
	buttons := strings.Split(p.Text("[...document.querySelectorAll('#picked li button')].map(b => b.textContent).join()"), ",")
	check(t, slices.Equal(append(buttons, id), append(slices.DeleteFunc(want, func(w string) bool { return w == id }), id)), "the list of neighbours is %v", buttons)
	p.Key("Enter")
	check(t, len(stateOf(p).Shown) == len(d.Paint)/4, "all again: %d", len(stateOf(p).Shown))
	p.ClickOn("#picked li button")
	check(t, p.Text("cells.state.picked") == buttons[0], "the first neighbour picks %s", p.Text("cells.state.picked"))
	p.Eval("document.getElementById('over').focus(), 0", nil)
	p.Key("Escape", "n", "n", "p", "n")
	check(t, p.Text("cells.state.picked") == slices.Sorted(slices.Values(d.IDs))[1], "n n p n picks %s", p.Text("cells.state.picked"))
	p.Eval("cells.show('over'), 0", nil)
	var over []string
	for r, body := range ints(d.Rows) {
		if d.Paint[4*body+3] == 1 {
			over = append(over, d.IDs[r])
		}
	}
	check(t, len(over) > 5 && slices.Equal(stateOf(p).Shown, over), "over the limit: %v, want %v", stateOf(p).Shown, over)
	p.Key("Escape", "Home")
}

// surroundings: narrow and wide nothing is beside the page; on paper the still stands alone.
func surroundings(t *testing.T, p *browser.Page) {
	t.Helper()
	for _, width := range [...]int{320, 390, 800, 1400} {
		p.Size(width, 800)
		p.Wait("document.getElementById('over').width > 100")
		check(t, p.Text("document.documentElement.scrollWidth <= innerWidth") == "true", "at %d the page is %s wide", width, p.Text("document.documentElement.scrollWidth"))
	}
	visible := func(id string) string {
		return p.Text("document.getElementById('" + id + "').getBoundingClientRect().height > 0")
	}
	check(t, visible("live") == "true" && visible("still") == "false", "on the screen: live %s, still %s", visible("live"), visible("still"))
	p.Paper(true)
	check(t, visible("live") == "false" && visible("still") == "true", "on paper: live %s, still %s", visible("live"), visible("still"))
	if pages := bytes.Count(p.PDF(210, 297), []byte("/Type /Page\n")); pages != 1 {
		t.Errorf("on A4 it has %d pages", pages)
	}
	p.Paper(false)
}

// withoutGraphics: where nothing can be turned, the still is shown with the reason, and
// numbers can be looked up all the same.
func withoutGraphics(t *testing.T, b *browser.Browser) {
	t.Helper()
	b.First = "HTMLCanvasElement.prototype.getContext = () => null"
	folder := drawnIn(t, drawingSetting, "DRAW CELLS OF hall SHADED BY temp TO 'p.html';")
	p := b.Page(filepath.Join(folder, "p.html"), 900, 700)
	check(t, p.Text("document.documentElement.dataset.view") == "still", "the view is %s", p.Text("document.documentElement.dataset.view"))
	check(t, strings.Contains(p.Text("document.getElementById('sorry').innerText"), "no WebGL"), "it says %q", p.Text("document.getElementById('sorry').innerText"))
	check(t, p.Text("document.querySelector('#still svg').getBoundingClientRect().height > 300") == "true", "the still is not seen")
	p.ClickOn("#name")
	p.Type("L08")
	check(t, strings.Contains(p.Text("document.getElementById('picked').innerText"), "L07, L08"), "looked up: %s", p.Text("document.getElementById('picked').innerText"))
	if faults := p.Faults(); len(faults) > 0 {
		t.Errorf("faults: %q", faults)
	}
}
