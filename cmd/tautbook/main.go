// Command tautbook turns a point survey of a hanging cable into the tension that is in it today, says how sure that is,
// holds it against the design and prints the condition summary.
package main

import (
	"os"
	"time"
)

func main() {
	os.Exit(run(os.Args[1:], streams{in: os.Stdin, out: os.Stdout, err: os.Stderr, color: wantsColor(os.Stdout), progress: isTerminal(os.Stderr), now: time.Now}))
}
