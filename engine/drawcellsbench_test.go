package engine

import (
	"fmt"
	"math/rand/v2"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/engine/browser"
)

// BenchmarkCellsPage is one picture of a page of 10,000 cells after the other, as the browser
// asks for them, each turned by two degrees: whole, while the cut moves through it, and of the
// half of the cells that are over the limit. Chromium paints in software here, so that the page
// takes the coarser pictures that it makes while it moves; a reader's graphics need less.
func BenchmarkCellsPage(b *testing.B) {
	var s strings.Builder
	s.WriteString("CREATE SOLID box AS BOX (0, 0, 0) TO (40, 25, 9); CREATE CAMPAIGN big AS (SELECT * FROM (VALUES ")
	random := rand.New(rand.NewPCG(1, 2))
	for i := range 10_000 {
		if i > 0 {
			s.WriteString(", ")
		}
		fmt.Fprintf(&s, "('S%05d', %.4f, %.4f, %.4f, %.3f)", i, 40*random.Float64(), 25*random.Float64(), 9*random.Float64(), 10*random.Float64())
	}
	s.WriteString(") AS v (id, x, y, z, temp)) WITHIN box;\n")
	folder := drawnIn(b, s.String(), "DRAW CELLS OF big SHADED BY temp LIMITS (2, 5) TO 'p.html';")
	p := browser.Open(b).Page(filepath.Join(folder, "p.html"), 1400, 900)
	for _, c := range []struct{ name, before, each string }{
		{"whole", "", ""},
		{"cut", "", "cells.cut('x', 2 + k % 36);"},
		{"half", "cells.cut('', 0); cells.show('over');", ""},
	} {
		b.Run(c.name, func(b *testing.B) {
			p.Eval("{ "+c.before+" cells.draw(); cells.finish() }", nil)
			b.ResetTimer()
			p.Eval(fmt.Sprintf("(async () => { for (let k = 0; k < %d; k++) { cells.turn(Math.PI / 90, 0); %s await new Promise(requestAnimationFrame); cells.finish(); } })()", b.N, c.each), nil)
		})
	}
}
