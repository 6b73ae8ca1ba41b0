package fit

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// Below fewestForLag1 points correlation cannot be told from chance; from fewestForBlocks on, the points are taken for a
// laser cloud, whose errors are correlated as a rule, and the blocks count whether or not they are significant.
const (
	fewestForLag1   = 30
	fewestForBlocks = 100
)

// correlation looks at the residuals in the order of their stations: lag-1 autocorrelation, a runs test on their signs (Wald
// and Wolfowitz 1940, Annals of Mathematical Statistics 11, 147-162), and how much wider than under independent errors the
// curvature scatters. Scan lines and passes make laser errors alike over metres. The factor on u is the larger of that of
// a first-order autoregression, when significant (Bayley and Hammersley 1946, Supplement to the JRSS 8, 184-197), and,
// for clouds, of the covariance that allows any correlation within blocks of neighbours (Liang and Zeger 1986,
// Biometrika 73, 13-22), corrected for the three parameters.
func (r *Result) correlation() {
	n := len(r.Observations)
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(r.Observations[a].S, r.Observations[b].S) })
	v := make([]float64, n)
	scores := make([][3]float64, n)
	e := r.Curve.evaluator()
	var g gradient
	for i, k := range order {
		o := r.Observations[k]
		_, slope, _ := e.at(o.S, &g)
		sigma := math.Sqrt(o.VarZ - 2*slope*o.CovSZ + slope*slope*o.VarS)
		v[i] = r.Residuals[k] / sigma
		for j := range scores[i] {
			scores[i][j] = g[j] / sigma * v[i]
		}
	}
	r.RunsP = runs(v)
	var square, product float64
	for i, x := range v {
		square += x * x
		if i > 0 {
			product += x * v[i-1]
		}
	}
	r.Widening = 1
	if square == 0 {
		return
	}
	r.Lag1 = product / square
	if n >= fewestForLag1 && r.Lag1 > distuv.UnitNormal.Quantile(0.975)/math.Sqrt(float64(n)) {
		r.Widening = math.Sqrt((1 + r.Lag1) / (1 - r.Lag1))
	}
	if n >= fewestForBlocks {
		r.Widening = math.Max(r.Widening, r.blockWidening(scores))
	}
}

// blockWidening is the factor on the uncertainty of the curvature that correlation within blocks of neighbours makes; scores
// are the weighted gradients times the normalised residuals, by station. It may be below 1. The covariance of r must not
// be scaled yet.
func (r *Result) blockWidening(scores [][3]float64) float64 {
	blocks := min(max(int(math.Sqrt(float64(len(scores)))/2), 8), 40)
	sum := 0.0
	for b := range blocks {
		part := 0.0
		for _, s := range scores[b*len(scores)/blocks : (b+1)*len(scores)/blocks] {
			part += r.Cov[2][0]*s[0] + r.Cov[2][1]*s[1] + r.Cov[2][2]*s[2]
		}
		sum += part * part
	}
	k := float64(blocks)
	return math.Sqrt(sum * k / (k - 3) / (r.Cov[2][2] * r.VarianceFactor))
}

// runs is the two-sided probability of a number of runs of equal sign as far from its mean, by the normal approximation.
func runs(v []float64) float64 {
	var plus, minus, count float64
	last := 0.0
	for _, x := range v {
		if x == 0 {
			continue
		}
		sign := math.Copysign(1, x)
		if sign > 0 {
			plus++
		} else {
			minus++
		}
		if sign != last {
			count++
		}
		last = sign
	}
	n := plus + minus
	mean := 2*plus*minus/n + 1
	variance := (mean - 1) * (mean - 2) / (n - 1)
	if !(variance > 0) {
		return 1
	}
	far := math.Max(0, math.Abs(count-mean)-0.5)
	return 2 * distuv.UnitNormal.Survival(far/math.Sqrt(variance))
}
