package tension

import (
	"math"
	"slices"
)

// coverage is the probability of the interval that Monte Carlo gives.
const coverage = 0.95

// finiteOnly are the values that are numbers.
func finiteOnly(v []float64) []float64 {
	out := make([]float64, 0, len(v))
	for _, x := range v {
		if !math.IsNaN(x) && !math.IsInf(x, 0) {
			out = append(out, x)
		}
	}
	return out
}

// moments are the mean and the standard deviation (JCGM 101:2008, 7.6), by differences from the first value.
func moments(v []float64) (mean, u float64) {
	if len(v) < 2 {
		return math.NaN(), math.NaN()
	}
	n := float64(len(v))
	var sum, sum2 float64
	for _, x := range v {
		sum += x - v[0]
	}
	mean = v[0] + sum/n
	for _, x := range v {
		sum2 += (x - mean) * (x - mean)
	}
	return mean, math.Sqrt(sum2 / (n - 1))
}

// shortest is the shortest interval that holds 95 % of sorted values (JCGM 101:2008, 7.7 and 5.3.4).
func shortest(sorted []float64) (low, high float64) {
	held := int(math.Round(coverage * float64(len(sorted))))
	best := math.Inf(1)
	for i := 0; i+held < len(sorted); i++ {
		if w := sorted[i+held] - sorted[i]; w < best {
			best, low, high = w, sorted[i], sorted[i+held]
		}
	}
	return low, high
}

// symmetric is the interval of 95 % with as much below as above, of sorted values.
func symmetric(sorted []float64) (low, high float64) {
	n := len(sorted)
	held := int(math.Round(coverage * float64(n)))
	r := (n - held) / 2
	return sorted[r], sorted[min(r+held, n-1)]
}

// toleranceOf is half a unit of the second significant digit of u (JCGM 101:2008, 7.9.2).
func toleranceOf(u float64) float64 {
	if !(u > 0) {
		return 0
	}
	return math.Pow(10, math.Floor(math.Log10(u))-1) / 2
}

// summary is one figure of the draws beside the linear one.
func summary(values []float64, linear Quantity) *Simulated {
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	s := &Simulated{}
	s.Mean, s.U = moments(values)
	s.Low, s.High = shortest(sorted)
	low, high := symmetric(sorted)
	s.LinearLowOff, s.LinearHighOff = linear.Value-apart*linear.U-low, linear.Value+apart*linear.U-high
	s.Tolerance = toleranceOf(linear.U)
	// The standard error of a quantile is sqrt(p (1 - p) / n) / density; the density at the ends is taken from the normal
	// distribution with the standard deviation of the draws (Stuart and Ord 1994, Kendall's Advanced Theory of Statistics, 10.10).
	tail := (1 - coverage) / 2
	density := math.Exp(-apart*apart/2) / math.Sqrt(2*math.Pi)
	s.SamplingError = s.U * math.Sqrt(tail*(1-tail)/float64(len(values))) / density
	limit := s.Tolerance + 3*s.SamplingError
	s.LinearAccepted = math.Abs(s.LinearLowOff) <= limit && math.Abs(s.LinearHighOff) <= limit
	return s
}

// look follows one figure of an adaptive run: the mean, u and the ends of the interval of each block.
type look struct {
	n         int
	sum, sum2 [4]float64 // over blocks, about the first
	first     [4]float64
	u         float64 // mean of u over blocks
	absent    bool    // the figure does not exist
}

func (l *look) add(values []float64) {
	if len(values) < block/10 {
		l.absent = true
		return
	}
	slices.Sort(values)
	var now [4]float64
	now[0], now[1] = moments(values)
	now[2], now[3] = symmetric(values) // the ends of the shortest interval scatter far more from block to block
	if l.n == 0 {
		l.first = now
	}
	l.n++
	l.u += (now[1] - l.u) / float64(l.n)
	for k := range now {
		d := now[k] - l.first[k]
		l.sum[k] += d
		l.sum2[k] += d * d
	}
}

// settled reports whether twice the standard deviation of the average of each of the four is within the tolerance.
func (l *look) settled() bool {
	if l.absent {
		return true
	}
	if l.n < 2 {
		return false
	}
	n := float64(l.n)
	for k := range l.sum {
		variance := math.Max(0, l.sum2[k]-l.sum[k]*l.sum[k]/n) / (n * (n - 1))
		if 2*math.Sqrt(variance) > toleranceOf(l.u) {
			return false
		}
	}
	return true
}
