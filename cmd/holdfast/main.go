// Command holdfast tells how reliably a designed bistable gene switch holds its
// state: resting states, hold times with intervals, sample paths and Arrow records.
package main

import "os"

func main() { os.Exit(runMain()) }
