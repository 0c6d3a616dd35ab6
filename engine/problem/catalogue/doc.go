// Package catalogue documents every code that a problem can have: what it means,
// the way out, and a small script that brings it about. HELP and LIST ERRORS read
// it.
//
// # Laws
//
// The tests hold the catalogue to the program's source:
//
//  1. Every code that the source uses has an entry, and every entry's code is used.
//  2. The last statement of every example gives the entry's code and no other
//     statement of it gives any, in the setting that Setting makes.
//
// # Limitations
//
// A few codes cannot be brought about by a small script; their entries say why in
// Unshown.
package catalogue
