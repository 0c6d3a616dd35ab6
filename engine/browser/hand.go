package browser

import "encoding/json"

// Dark makes the reader prefer dark pages, or light ones.
func (p *Page) Dark(dark bool) {
	p.t.Helper()
	value := "light"
	if dark {
		value = "dark"
	}
	p.do("Emulation.setEmulatedMedia", map[string]any{"features": []map[string]string{{"name": "prefers-color-scheme", "value": value}}})
}

// Paper shows the page as if printed, or on the screen again.
func (p *Page) Paper(paper bool) {
	p.t.Helper()
	media := ""
	if paper {
		media = "print"
	}
	p.do("Emulation.setEmulatedMedia", map[string]any{"media": media})
}

// Size changes the size of the tab.
func (p *Page) Size(width, height int) {
	p.t.Helper()
	p.do("Emulation.setDeviceMetricsOverride", map[string]any{"width": width, "height": height, "deviceScaleFactor": 1, "mobile": false})
}

func (p *Page) mouse(kind string, x, y float64, button string, buttons int) {
	p.t.Helper()
	p.do("Input.dispatchMouseEvent", map[string]any{"type": kind, "x": x, "y": y, "button": button, "buttons": buttons, "clickCount": 1})
}

// Click presses and lets go the left button at a place of the tab.
func (p *Page) Click(x, y float64) {
	p.t.Helper()
	p.mouse("mouseMoved", x, y, "none", 0)
	p.mouse("mousePressed", x, y, "left", 1)
	p.mouse("mouseReleased", x, y, "left", 0)
}

// ClickOn clicks on the middle of the first element that a selector finds.
func (p *Page) ClickOn(selector string) {
	p.t.Helper()
	var at [2]float64
	p.Eval("(e => { e.scrollIntoView({block: 'nearest'}); const r = e.getBoundingClientRect(); return [r.left + r.width / 2, r.top + r.height / 2]; })(document.querySelector("+
		quoted(selector)+"))", &at)
	p.Click(at[0], at[1])
}

// Drag moves the pointer from one place to another with the left button down.
func (p *Page) Drag(x0, y0, x1, y1 float64) {
	p.t.Helper()
	p.mouse("mouseMoved", x0, y0, "none", 0)
	p.mouse("mousePressed", x0, y0, "left", 1)
	for k := 1.0; k <= 8; k++ {
		p.mouse("mouseMoved", x0+(x1-x0)*k/8, y0+(y1-y0)*k/8, "left", 1)
	}
	p.mouse("mouseReleased", x1, y1, "left", 0)
}

// Wheel turns the wheel at a place; up is below zero.
func (p *Page) Wheel(x, y, by float64) {
	p.t.Helper()
	p.do("Input.dispatchMouseEvent", map[string]any{"type": "mouseWheel", "x": x, "y": y, "deltaX": 0, "deltaY": by})
}

// Touch puts fingers on the tab, moves or lifts them ("touchStart", "touchMove",
// "touchEnd"), each a place.
func (p *Page) Touch(kind string, fingers ...[2]float64) {
	p.t.Helper()
	points := []map[string]float64{}
	for i, f := range fingers {
		points = append(points, map[string]float64{"x": f[0], "y": f[1], "id": float64(i)})
	}
	p.do("Input.dispatchTouchEvent", map[string]any{"type": kind, "touchPoints": points})
}

// codes are those of keys that write no character.
var codes = map[string]int{"ArrowLeft": 37, "ArrowUp": 38, "ArrowRight": 39, "ArrowDown": 40, "Enter": 13, "Escape": 27, "Tab": 9,
	"PageUp": 33, "PageDown": 34, "Home": 36, "End": 35, "Backspace": 8}

// Key presses keys one after the other, each by its name ("ArrowLeft", "Enter", "a").
func (p *Page) Key(keys ...string) {
	p.t.Helper()
	for _, key := range keys {
		event := map[string]any{"type": "keyDown", "key": key}
		switch code, named := codes[key]; {
		case key == "Enter":
			event["windowsVirtualKeyCode"], event["text"], event["code"] = code, "\r", key
		case named:
			event["windowsVirtualKeyCode"], event["code"] = code, key
		default:
			event["text"] = key
		}
		p.do("Input.dispatchKeyEvent", event)
		event["type"] = "keyUp"
		delete(event, "text")
		p.do("Input.dispatchKeyEvent", event)
	}
}

// Type writes a text where the focus is.
func (p *Page) Type(text string) {
	p.t.Helper()
	p.do("Input.insertText", map[string]any{"text": text})
}

// quoted is a text as a literal of JavaScript.
func quoted(text string) string {
	literal, err := json.Marshal(text)
	if err != nil {
		panic("browser: " + err.Error())
	}
	return string(literal)
}
