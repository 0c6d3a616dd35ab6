// Package solid owns the regions of space that a partition is closed by.
package solid
