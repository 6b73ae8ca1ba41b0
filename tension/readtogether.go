package tension

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// vague is the relative standard uncertainty of a tension from one reading beyond which the reading is not taken for one of the
// tension, because its answer is no longer a straight line there: common practice, no source.
const vague = 0.25

// weigh finds what each reading says of the tension and the shares by which they are taken together: the best linear unbiased
// mean under their full covariance, the shape being common to all (Aitken 1936). Readings that scatter more than they should are widened
// by the Birge ratio (Birge 1932, Phys. Rev. 40, 207). chance is the probability of such a scatter, 1 for a single reading.
func (in *inputs) weigh() (chance float64) {
	if len(in.readings) == 0 || !(in.x[inCurvature] > 0) {
		return 1
	}
	load := in.load(in.x)
	near := (load.self + load.deck) / in.x[inCurvature]
	if !(near > 0) {
		return 1 // without a load on file nothing is worked out
	}
	at := in.sight(in.x)
	var used []*readInput
	var effects [][]float64
	moves := in.moves()
	for i := range in.readings {
		r := &in.readings[i]
		if _, err := at.predicted(r, near); err != nil {
			r.unused = strings.TrimPrefix(err.Error(), errNoReading.Error()+": ")
			continue
		}
		h := at.implied(r, near)
		if math.IsNaN(h) {
			continue
		}
		effect := make([]float64, len(moves))
		sum := 0.0
		for d, m := range moves {
			effect[d] = (in.sight(in.stepped(m, probe)).implied(r, h) - h) / probe
			sum += effect[d] * effect[d]
		}
		if u := math.Sqrt(sum); u < vague*h {
			r.h = Quantity{Value: h, U: u}
			used, effects = append(used, r), append(effects, effect)
		}
	}
	return in.share(used, effects)
}

// share sets the weights and widens the readings when they scatter.
func (in *inputs) share(used []*readInput, effects [][]float64) (chance float64) {
	n := len(used)
	if n == 0 {
		return 1
	}
	c := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			sum := 0.0
			for d := range effects[i] {
				sum += effects[i][d] * effects[j][d]
			}
			c.SetSym(i, j, sum)
		}
	}
	var chol mat.Cholesky
	ones, w := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	for i := range n {
		ones.SetVec(i, 1)
	}
	if !chol.Factorize(c) || chol.SolveVecTo(w, ones) != nil {
		used[0].weight = 1
		return 1
	}
	total, mean := mat.Sum(w), 0.0
	for i, r := range used {
		r.weight = w.AtVec(i) / total
		mean += r.weight * r.h.Value
	}
	if n == 1 {
		return 1
	}
	off, solved := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	for i, r := range used {
		off.SetVec(i, r.h.Value-mean)
	}
	if chol.SolveVecTo(solved, off) != nil {
		return 1
	}
	chi := mat.Dot(off, solved)
	if ratio := chi / float64(n-1); ratio > 1 {
		in.widen(used, math.Sqrt(ratio))
	}
	return distuv.ChiSquared{K: float64(n - 1)}.Survival(chi)
}

// widen multiplies the uncertainty of readings. The reconciliation, which tests it, goes by the uncertainty as stated.
func (in *inputs) widen(used []*readInput, factor float64) {
	in.stated = in.moves()
	for _, r := range used {
		for s := range in.sources {
			for d, steps := range in.sources[s].directions {
				if steps[0].at == r.at {
					in.sources[s].directions[d] = []step{{r.at, factor * steps[0].by}}
				}
			}
		}
	}
}

// statedMoves are the moves before readings that scatter were widened.
func (in *inputs) statedMoves() [][]step {
	if in.stated != nil {
		return in.stated
	}
	return in.moves()
}

// together is the horizontal tension that the readings give for one value of the inputs, NaN when they give none.
func (in *inputs) together(x []float64) float64 {
	sum, n := 0.0, 0
	var s sight
	for i := range in.readings {
		r := &in.readings[i]
		if r.weight == 0 {
			continue
		}
		if n == 0 {
			s = in.sight(x)
		}
		n++
		sum += r.weight * s.implied(r, r.h.Value)
	}
	if n == 0 {
		return math.NaN()
	}
	return sum
}

// moves are all directions of all sources, one standard deviation each.
func (in *inputs) moves() (out [][]step) {
	for _, s := range in.sources {
		out = append(out, s.directions...)
	}
	return out
}

// stepped is the vector moved by a multiple of one direction.
func (in *inputs) stepped(move []step, by float64) []float64 {
	x := append([]float64(nil), in.x...)
	for _, m := range move {
		x[m.at] += by * m.by
	}
	return x
}

// readNames says what was read, for one reading or several.
func (in *inputs) readNames() (of, how string) {
	var names []string
	for _, r := range in.readings {
		if r.weight != 0 {
			names = append(names, r.name)
			of, how = r.What(), r.How
		}
	}
	if len(names) > 1 {
		return fmt.Sprintf("%d readings together", len(names)), strings.Join(names, "; ")
	}
	return of, how
}

// unusable joins what is wrong with the readings that could not be used.
func (in *inputs) unusable() (out []error) {
	for _, r := range in.readings {
		if r.unused != "" {
			out = append(out, errors.New(r.name+": "+r.unused))
		}
	}
	return out
}
