package oracle

import "testing"

// Random windows give the rows that the other database gives, in every way in which
// this one runs them.
func TestWindowsAgainstTheOther(t *testing.T) {
	against(t, func(g *Gen, n uint64) *Query { return g.Windowed(int(n) % 2) })
}
