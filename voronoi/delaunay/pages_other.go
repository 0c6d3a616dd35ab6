//go:build !linux

package delaunay

// AdviseHugePages does nothing here.
func AdviseHugePages[E any]([]E) {}
