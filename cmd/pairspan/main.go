// Command pairspan plans entanglement-based quantum key distribution over
// fibre: it reads a scenario and says whether the link meets its need, by how
// much, and what stands in the way.
package main

import "os"

func main() {
	os.Exit(run(os.Args[1:], os.Stdout, os.Stderr))
}
