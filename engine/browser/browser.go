package browser

import (
	"encoding/base64"
	"encoding/json"
	"fmt"
	"net/url"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"
)

// names are those under which systems have it.
var names = []string{"chromium", "chromium-browser", "google-chrome", "google-chrome-stable", "chrome", "headless_shell"}

// Browser is a running Chromium.
type Browser struct {
	// First is a script that runs in pages before their own, to make surroundings that
	// this Chromium is not.
	First string

	t testing.TB
	w *wire
}

// Open starts Chromium for a test, with further switches of its command line, and stops it
// when the test ends. Without a Chromium the test is skipped.
func Open(t testing.TB, switches ...string) *Browser {
	t.Helper()
	program := os.Getenv("CHROMIUM")
	for _, name := range names {
		if program == "" {
			program, _ = exec.LookPath(name)
		}
	}
	if program == "" {
		t.Skip("there is no Chromium on this machine: what a browser makes of the page is not tried (Debian's package: chromium)")
	}
	args := append([]string{"--headless=new", "--remote-debugging-pipe", "--no-sandbox", "--no-first-run", "--disable-extensions",
		"--disable-background-networking", "--disable-component-update", "--disable-default-apps", "--disable-sync", "--mute-audio",
		"--hide-scrollbars", "--force-color-profile=srgb", "--enable-unsafe-swiftshader", "--disable-dev-shm-usage", "--user-data-dir=" + t.TempDir()},
		switches...)
	w, err := start(program, append(args, "about:blank"))
	if err != nil {
		t.Skipf("Chromium cannot be started, what a browser makes of the page is not tried: %v", err)
	}
	t.Cleanup(w.stop)
	return &Browser{t: t, w: w}
}

// Page is a tab.
type Page struct {
	t             testing.TB
	w             *wire
	target        string
	session       string
	address       string
	width, height int

	mu     sync.Mutex
	faults []string
	loaded chan struct{}
}

// Page opens a file in a tab so many CSS pixels wide and high, and waits until it is
// loaded. The file may have a fragment behind it (#…).
func (b *Browser) Page(file string, width, height int) *Page {
	b.t.Helper()
	name, fragment, _ := strings.Cut(file, "#")
	whole, err := filepath.Abs(name)
	if err != nil {
		b.t.Fatal(err)
	}
	p := &Page{t: b.t, w: b.w, address: (&url.URL{Scheme: "file", Path: filepath.ToSlash(whole)}).String(), width: width, height: height, loaded: make(chan struct{})}
	var target struct {
		TargetID string `json:"targetId"`
	}
	p.ask(b.w, "", "Target.createTarget", map[string]any{"url": "about:blank"}, &target)
	var session struct {
		SessionID string `json:"sessionId"`
	}
	p.ask(b.w, "", "Target.attachToTarget", map[string]any{"targetId": target.TargetID, "flatten": true}, &session)
	p.target, p.session = target.TargetID, session.SessionID
	b.w.mu.Lock()
	b.w.events[p.session] = p.event
	b.w.mu.Unlock()
	for _, domain := range [...]string{"Page", "Runtime", "Log", "Network"} {
		p.do(domain+".enable", map[string]any{})
	}
	p.do("Emulation.setDeviceMetricsOverride", map[string]any{"width": width, "height": height, "deviceScaleFactor": 1, "mobile": false})
	if b.First != "" {
		p.do("Page.addScriptToEvaluateOnNewDocument", map[string]any{"source": b.First})
	}
	address := p.address
	if fragment != "" {
		address += "#" + fragment
	}
	p.do("Page.navigate", map[string]any{"url": address})
	select {
	case <-p.loaded:
	case <-time.After(patience):
		p.t.Fatalf("%s was not loaded in %v", file, patience)
	}
	return p
}

// Close closes the tab.
func (p *Page) Close() {
	p.t.Helper()
	p.ask(p.w, "", "Target.closeTarget", map[string]any{"targetId": p.target}, nil)
}

func (p *Page) ask(w *wire, session, method string, params, result any) {
	p.t.Helper()
	if err := w.ask(session, method, params, result); err != nil {
		p.t.Fatal(err)
	}
}

func (p *Page) do(method string, params map[string]any) {
	p.t.Helper()
	p.ask(p.w, p.session, method, params, nil)
}

// event takes note of what a page must not do, and of its being loaded.
func (p *Page) event(m message) {
	var e struct {
		Type    string `json:"type"`
		Request struct {
			URL string `json:"url"`
		} `json:"request"`
		Entry struct {
			Level, Text string
		} `json:"entry"`
		ExceptionDetails struct {
			Text      string `json:"text"`
			Exception struct {
				Description string `json:"description"`
			} `json:"exception"`
		} `json:"exceptionDetails"`
		Args []struct {
			Value any `json:"value"`
		} `json:"args"`
	}
	if json.Unmarshal(m.Params, &e) != nil {
		return
	}
	fault := ""
	switch m.Method {
	case "Page.loadEventFired":
		p.mu.Lock()
		select {
		case <-p.loaded:
		default:
			close(p.loaded)
		}
		p.mu.Unlock()
	case "Network.requestWillBeSent":
		if a, _, _ := strings.Cut(e.Request.URL, "#"); a != p.address {
			fault = "request: " + e.Request.URL
		}
	case "Log.entryAdded":
		if strings.Contains(e.Entry.Text, "GL Driver Message (OpenGL, Performance") {
			break // taking a picture waits for the graphics: that is ours, not the page's
		}
		if e.Entry.Level == "error" || e.Entry.Level == "warning" {
			fault = e.Entry.Level + ": " + e.Entry.Text
		}
	case "Runtime.exceptionThrown":
		fault = "exception: " + e.ExceptionDetails.Text + " " + e.ExceptionDetails.Exception.Description
	case "Runtime.consoleAPICalled":
		if e.Type == "error" || e.Type == "warning" || e.Type == "assert" {
			fault = fmt.Sprintf("console.%s: %v", e.Type, e.Args)
		}
	}
	if fault != "" {
		p.mu.Lock()
		p.faults = append(p.faults, fault)
		p.mu.Unlock()
	}
}

// Faults are what the page must not have, so far.
func (p *Page) Faults() []string {
	p.t.Helper()
	p.Eval("0", nil) // what happened before is told before
	p.mu.Lock()
	defer p.mu.Unlock()
	return append([]string(nil), p.faults...)
}

// Eval evaluates an expression of JavaScript, waits for it if it is a promise, and reads
// its value into result unless that is nil.
func (p *Page) Eval(expression string, result any) {
	p.t.Helper()
	var got struct {
		Result struct {
			Value json.RawMessage `json:"value"`
		} `json:"result"`
		ExceptionDetails *struct {
			Text      string `json:"text"`
			Exception struct {
				Description string `json:"description"`
			} `json:"exception"`
		} `json:"exceptionDetails"`
	}
	p.ask(p.w, p.session, "Runtime.evaluate", map[string]any{"expression": expression, "returnByValue": true, "awaitPromise": true}, &got)
	switch {
	case got.ExceptionDetails != nil:
		p.t.Fatalf("%s: %s %s", expression, got.ExceptionDetails.Text, got.ExceptionDetails.Exception.Description)
	case result == nil:
	case got.Result.Value == nil:
		p.t.Fatalf("%s has no value", expression)
	default:
		if err := json.Unmarshal(got.Result.Value, result); err != nil {
			p.t.Fatalf("%s is %s: %v", expression, got.Result.Value, err)
		}
	}
}

// Text is an expression's value as a text.
func (p *Page) Text(expression string) string {
	p.t.Helper()
	var text string
	p.Eval("String("+expression+")", &text)
	return text
}

// Wait waits until an expression is true.
func (p *Page) Wait(expression string) {
	p.t.Helper()
	for end := time.Now().Add(10 * time.Second); ; time.Sleep(20 * time.Millisecond) {
		var is bool
		if p.Eval("!!("+expression+")", &is); is {
			return
		}
		if time.Now().After(end) {
			p.t.Fatalf("never true: %s", expression)
		}
	}
}

// Picture is what the tab looks like, as a PNG; of the whole page if whole is set.
func (p *Page) Picture(whole bool) []byte {
	p.t.Helper()
	var got struct {
		Data string `json:"data"`
	}
	p.ask(p.w, p.session, "Page.captureScreenshot", map[string]any{"format": "png", "captureBeyondViewport": whole}, &got)
	return p.decoded(got.Data)
}

// PDF is the page as it is printed, on paper of this size in millimetres.
func (p *Page) PDF(width, height float64) []byte {
	p.t.Helper()
	var got struct {
		Data string `json:"data"`
	}
	p.ask(p.w, p.session, "Page.printToPDF", map[string]any{"paperWidth": width / 25.4, "paperHeight": height / 25.4, "printBackground": true,
		"preferCSSPageSize": false}, &got)
	return p.decoded(got.Data)
}

func (p *Page) decoded(text string) []byte {
	p.t.Helper()
	data, err := base64.StdEncoding.DecodeString(text)
	if err != nil {
		p.t.Fatal(err)
	}
	return data
}
