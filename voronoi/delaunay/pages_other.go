//go:build !linux

package delaunay

func adviseHugePages[E any]([]E) {}
