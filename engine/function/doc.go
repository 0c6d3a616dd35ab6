// Package function is the one registry of scalar and aggregate functions:
// signature, unit rule, meaning, kernel. The binder, HELP, LIST FUNCTIONS and
// completion read it.
package function
