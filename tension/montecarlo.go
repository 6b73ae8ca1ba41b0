package tension

import (
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"sync"
)

// Sampling asks for a Monte Carlo propagation beside the linear one (JCGM 101:2008): every input is drawn from a normal
// distribution, what the survey determines with its covariance, and the whole chain is evaluated for each draw.
type Sampling struct {
	Trials   int              // number of draws; 0 = adaptive, JCGM 101:2008, 7.9
	Seed     uint64           // of the draws: the same seed gives the same digits on any number of cores
	Workers  int              // 0 = as many as there are cores
	Progress func(trials int) // told after each block how many draws were added; nil = nobody; called from several goroutines
}

// MostTrials is the greatest number of draws that is taken.
const MostTrials = 10_000_000

// adaptiveTrials is where an adaptive run gives up.
const adaptiveTrials = 2_000_000

// block is the number of draws between two looks, M of JCGM 101:2008, 7.9.4: at least 100/(1 - p) and 10 000.
const block = 10_000

// The figures that are simulated, as places of a sample.
var simulated = [...]int{outH, outInverse, outGreatestT}

// MonteCarlo is what the draws gave.
type MonteCarlo struct {
	Trials            int        `json:"trials"`
	Failed            int        `json:"failed"` // draws for which the cable has no state; the figures are of the others
	Seed              uint64     `json:"seed"`
	Adaptive          bool       `json:"adaptive"`
	Stable            bool       `json:"stable"` // an adaptive run met its tolerance; true for a run of fixed length
	HorizontalTension *Simulated `json:"horizontal_tension_N"`
	Ratio             *Simulated `json:"ratio"`
	GreatestTension   *Simulated `json:"greatest_tension_N"`
	PSlack            *float64   `json:"p_slack"`
	PInside           *float64   `json:"p_inside"`
	POverload         *float64   `json:"p_overload"`
	LinearHolds       bool       `json:"linear_holds"` // for every figure
	Text              string     `json:"text"`         // in one sentence
}

// Simulated is one figure by Monte Carlo, in the unit of its key, and how far the linear answer is from it: the test of
// JCGM 101:2008, clause 8, on the ends of the probabilistically symmetric 95 % interval.
type Simulated struct {
	Mean           float64 `json:"mean"`
	U              float64 `json:"u"`
	Low            float64 `json:"low_95"`  // of the shortest 95 % coverage interval
	High           float64 `json:"high_95"` //
	LinearLowOff   float64 `json:"linear_low_off"`
	LinearHighOff  float64 `json:"linear_high_off"`
	Tolerance      float64 `json:"tolerance"`       // half a unit of the second significant digit of u
	SamplingError  float64 `json:"sampling_error"`  // standard error of an end, for so few draws
	LinearAccepted bool    `json:"linear_accepted"` // no end is off by more than the tolerance, beyond what sampling explains
}

// samples are the draws of one block or more, one column a figure; NaN where a draw has none.
type samples [len(simulated)][]float64

// simulate draws and evaluates.
func (j *judgement) simulate(s Sampling) *MonteCarlo {
	d := drawer{in: j.in, seed: s.Seed, stream: streamOf(j.Points.Cable, j.Points.Span)}
	m := &MonteCarlo{Seed: s.Seed, Adaptive: s.Trials == 0, Stable: true}
	var all samples
	if m.Adaptive {
		all, m.Stable = d.adaptive(s)
	} else {
		all = joined(d.blocks(s, 0, (s.Trials+block-1)/block, s.Trials))
	}
	m.Trials = len(all[0])
	j.summarize(m, all)
	return m
}

// drawer draws blocks of inputs and evaluates the chain for them. A block has its own stream of random numbers, so it does not matter
// who draws it.
type drawer struct {
	in           *inputs
	seed, stream uint64
}

func streamOf(cable, span string) uint64 {
	h := fnv.New64a()
	fmt.Fprintf(h, "%s\x00%s", strings.ToLower(cable), strings.ToLower(span))
	return h.Sum64()
}

// block is block number n with so many draws.
func (d *drawer) block(n, trials int) (out samples) {
	rng := rand.New(rand.NewPCG(d.seed, d.stream+uint64(n)*0x9e3779b97f4a7c15))
	for k := range out {
		out[k] = make([]float64, trials)
	}
	x := make([]float64, len(d.in.x))
	for i := range trials {
		copy(x, d.in.x)
		for _, s := range d.in.sources {
			for _, direction := range s.directions {
				z := rng.NormFloat64()
				for _, move := range direction {
					x[move.at] += z * move.by
				}
			}
		}
		y, _ := d.in.evaluate(x)
		for k, at := range simulated {
			out[k][i] = y[at]
		}
		if !(y[outH] > 0) || math.IsInf(y[outH], 0) { // the draw does not hang: no tension, no figure
			for k := range out {
				out[k][i] = math.NaN()
			}
		}
	}
	return out
}

// blocks are blocks from to, in order, drawn by all workers; the last one is cut to the number of trials.
func (d *drawer) blocks(s Sampling, from, to, trials int) []samples {
	workers := s.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	out := make([]samples, to-from)
	next := make(chan int)
	var group sync.WaitGroup
	for range min(workers, to-from) {
		group.Go(func() {
			for n := range next {
				size := min(block, trials-n*block)
				out[n-from] = d.block(n, size)
				if s.Progress != nil {
					s.Progress(size)
				}
			}
		})
	}
	for n := from; n < to; n++ {
		next <- n
	}
	close(next)
	group.Wait()
	return out
}

// joined puts blocks together in their order.
func joined(blocks []samples) (all samples) {
	for _, b := range blocks {
		for k := range all {
			all[k] = append(all[k], b[k]...)
		}
	}
	return all
}

// summarize turns the draws into figures and holds the linear ones against them.
func (j *judgement) summarize(m *MonteCarlo, all samples) {
	p := &j.p
	for i, v := range all[0] {
		if math.IsNaN(v) || (j.a.Expected != nil && math.IsNaN(all[1][i])) {
			m.Failed++
		}
	}
	h, inverse, greatest := finiteOnly(all[0]), finiteOnly(all[1]), finiteOnly(all[2])
	m.LinearHolds = true
	add := func(into **Simulated, values []float64, linear *Quantity) {
		if linear == nil || len(values) < block/10 {
			return
		}
		*into = summary(values, *linear)
		m.LinearHolds = m.LinearHolds && (*into).LinearAccepted
	}
	if j.a.HorizontalTension != nil {
		add(&m.HorizontalTension, h, p.quantity(outH))
		add(&m.GreatestTension, greatest, p.quantity(outGreatestT))
	}
	if x := j.a.Expected; x != nil && x.Ratio != nil && len(inverse) > 0 {
		below, above := 0, 0
		ratio := make([]float64, len(inverse))
		for i, v := range inverse {
			ratio[i] = 1 / v
			if v > 1/x.SlackBelow {
				below++
			} else if v < 1/x.OverloadAbove {
				above++
			}
		}
		n := float64(len(inverse))
		slack, over := float64(below)/n, float64(above)/n
		inside := float64(len(inverse)-below-above) / n
		m.PSlack, m.PInside, m.POverload = &slack, &inside, &over
		add(&m.Ratio, ratio, x.Ratio)
	}
	m.Text = m.sentence()
}

// sentence says what the draws say of the linear answer.
func (m *MonteCarlo) sentence() string {
	text := fmt.Sprintf("Monte Carlo (JCGM 101, %d draws, seed %d)", m.Trials, m.Seed)
	if m.Failed > 0 {
		text += fmt.Sprintf(", %d of them without a state,", m.Failed)
	}
	var bad []string
	for _, f := range []struct {
		name string
		s    *Simulated
	}{{"H", m.HorizontalTension}, {"the ratio", m.Ratio}, {"the greatest tension", m.GreatestTension}} {
		if f.s != nil && !f.s.LinearAccepted {
			bad = append(bad, f.name)
		}
	}
	switch {
	case m.HorizontalTension == nil:
		text += " cannot give a tension either: the curve is too flat, or there is no load."
	case len(bad) == 0:
		text += " bears out the linear uncertainties to two significant digits."
	default:
		text += " says that linear propagation is not good enough for " + strings.Join(bad, " and ") + ": use its 95 % interval instead of U."
	}
	if !m.Stable {
		text += " It did not settle to two significant digits."
	}
	return text
}

// adaptive draws block after block until mean, u and both ends of the interval of every figure are known to the tolerance
// (JCGM 101:2008, 7.9.4). Blocks are drawn in bunches, but the end is looked for block by block, so that it does not depend on
// the number of cores.
func (d *drawer) adaptive(s Sampling) (samples, bool) {
	const bunch = 4
	most := adaptiveTrials / block
	var blocks []samples
	var looks [len(simulated)]look
	for len(blocks) < most {
		fresh := d.blocks(s, len(blocks), len(blocks)+bunch, adaptiveTrials)
		for _, b := range fresh {
			blocks = append(blocks, b)
			settled := true
			for k := range looks {
				looks[k].add(finiteOnly(b[k]))
				settled = settled && looks[k].settled()
			}
			if settled {
				return joined(blocks), true
			}
		}
	}
	return joined(blocks), false
}
