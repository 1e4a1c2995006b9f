// Quietbus is a workbench for harmonic studies of electrical installations.
//
// Without a command it opens its window; the commands handout and check work
// without a display. See usage.
package main

import "os"

func main() { os.Exit(run(os.Args[1:], os.Stdout, os.Stderr)) }
