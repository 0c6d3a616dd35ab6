package oracle

import "testing"

// Queries of the shapes of question collections give the rows that the other
// database gives.
func TestCorpusAgainstTheOther(t *testing.T) {
	against(t, func(g *Gen, _ uint64) *Query { return g.Corpus() })
}
