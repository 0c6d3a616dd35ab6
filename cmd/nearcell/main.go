// Command nearcell asks scattered 3D readings about space.
package main

import "os"

func main() {
	collectLater()
	os.Exit(execute(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
