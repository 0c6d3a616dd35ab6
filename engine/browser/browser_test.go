package browser

import (
	"bytes"
	"image/png"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const good = `<!DOCTYPE html><meta charset="utf-8"><title>good</title><button id="b">press</button><input id="i">
<p id="p">nothing yet</p><script>
document.getElementById('b').onclick = () => { document.getElementById('p').textContent = 'pressed'; };
</script>`

const bad = `<!DOCTYPE html><meta charset="utf-8"><title>bad</title>
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; script-src 'unsafe-inline'; img-src file:">
<img src="other.png"><p style="color: red">x</p><script>console.error('told'); nothing.there;</script>`

func write(t *testing.T, text string) string {
	t.Helper()
	file := filepath.Join(t.TempDir(), "page.html")
	if err := os.WriteFile(file, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return file
}

// TestHand: clicks, keys and pictures arrive, and a page without faults has none.
func TestHand(t *testing.T) {
	p := Open(t).Page(write(t, good), 500, 300)
	p.ClickOn("#b")
	if got := p.Text("document.getElementById('p').textContent"); got != "pressed" {
		t.Errorf("after the click: %q", got)
	}
	p.ClickOn("#i")
	p.Key("a", "b", "Backspace")
	p.Type("cd")
	if got := p.Text("document.getElementById('i').value"); got != "acd" {
		t.Errorf("typed: %q", got)
	}
	picture, err := png.Decode(bytes.NewReader(p.Picture(false)))
	if err != nil {
		t.Fatal(err)
	}
	if at := picture.Bounds(); at.Dx() != 500 || at.Dy() != 300 {
		t.Errorf("the picture is %v", at)
	}
	if faults := p.Faults(); len(faults) > 0 {
		t.Errorf("faults of a good page: %q", faults)
	}
}

// TestFaults: what a page must not do is found out.
func TestFaults(t *testing.T) {
	p := Open(t).Page(write(t, bad), 500, 300)
	all := strings.Join(p.Faults(), "\n")
	for _, want := range []string{"request: file:///", "console.error", "exception", "style"} {
		if !strings.Contains(all, want) {
			t.Errorf("no %q among the faults:\n%s", want, all)
		}
	}
}
