package hanging

import "flag"

// Property tests draw the same cases in every run; -rapid.seed draws others.
func init() {
	if err := flag.Set("rapid.seed", "1"); err != nil {
		panic(err)
	}
}
