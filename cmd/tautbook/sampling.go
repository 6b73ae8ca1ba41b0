package main

import (
	"fmt"
	"io"
	"os"
	"strconv"
	"sync"
	"time"

	"github.com/spf13/cobra"

	"tautbook/tension"
)

// samplingFlags ask for a Monte Carlo propagation beside the linear one.
type samplingFlags struct {
	trials string
	seed   uint64
}

// fewestTrials is the least number of draws for a 95 % interval worth printing.
const fewestTrials = 10_000

func (f *samplingFlags) bind(cmd *cobra.Command) {
	cmd.Flags().StringVar(&f.trials, "monte-carlo", "", "propagate distributions as well (JCGM 101): a number of draws, such as 200000, or \"adaptive\" for as many as two significant digits take")
	cmd.Flags().Uint64Var(&f.seed, "seed", 1, "seed of the draws of --monte-carlo; the same seed gives the same digits")
}

// sampling is what was asked for, nil when nothing was.
func (f *samplingFlags) sampling(cmd *cobra.Command) (*tension.Sampling, error) {
	switch f.trials {
	case "":
		if cmd.Flags().Changed("seed") {
			return nil, usageError{fmt.Errorf("--seed is of no use without --monte-carlo: add --monte-carlo adaptive, or leave the seed out")}
		}
		return nil, nil
	case "adaptive":
		return &tension.Sampling{Seed: f.seed}, nil
	}
	n, err := strconv.Atoi(f.trials)
	if err != nil || n < fewestTrials || n > tension.MostTrials {
		return nil, usageError{fmt.Errorf("--monte-carlo is %q, expected a number of draws from %d to %d, or adaptive", f.trials, fewestTrials, tension.MostTrials)}
	}
	return &tension.Sampling{Trials: n, Seed: f.seed}, nil
}

// progress tells on a terminal how many draws were made; elsewhere it is silent.
type progress struct {
	mu   sync.Mutex
	to   io.Writer // nil: nobody looks
	now  func() time.Time
	done int
	last time.Time
}

func newProgress(s streams) *progress {
	p := &progress{now: s.now}
	if f, ok := s.err.(*os.File); ok {
		if info, err := f.Stat(); err == nil && info.Mode()&os.ModeCharDevice != 0 {
			p.to = f
		}
	}
	return p
}

func (p *progress) add(n int) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.done += n
	if t := p.now(); p.to != nil && t.Sub(p.last) > 200*time.Millisecond {
		p.last = t
		fmt.Fprintf(p.to, "\rMonte Carlo: %d draws", p.done)
	}
}

// end takes the line away.
func (p *progress) end() {
	if p.to != nil && p.done > 0 {
		fmt.Fprintf(p.to, "\r%*s\r", 40, "")
	}
}
