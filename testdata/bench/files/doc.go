// Package files checks files that the program writes with other programs' readers.
package files
