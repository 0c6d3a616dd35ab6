// Package expr holds typed expressions and computes them, a batch of rows at a
// time, for the active rows only.
package expr
