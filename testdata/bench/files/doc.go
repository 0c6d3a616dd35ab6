// Package files checks files that the program writes with other programs' readers, and
// measures how fast it reads beside them.
package files
