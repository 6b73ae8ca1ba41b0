package fit

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// SingleTest holds the residual of one point against its own standard deviation (Baarda 1968, A testing procedure for use in
// geodetic networks). The standard deviation is estimated without the point (externally studentised) and never taken
// below a stated accuracy, so that one blunder does not hide itself by inflating the scatter; with a stated accuracy that
// holds this is Baarda's w, without one it is Pope's test (1976) in Student's form.
type SingleTest struct {
	W   float64 // statistic, signed
	Dof float64 // degrees of freedom of its Student distribution, +Inf for normal

	unchecked bool // the curve follows this point: the others say nothing of it
}

// p is the two-sided probability of a statistic at least this large.
func (t SingleTest) p() float64 {
	if math.IsInf(t.Dof, 1) {
		return 2 * distuv.UnitNormal.Survival(math.Abs(t.W))
	}
	return 2 * distuv.StudentsT{Sigma: 1, Nu: t.Dof}.Survival(math.Abs(t.W))
}

// critical is the value beyond which a statistic has a two-sided probability below alpha.
func (t SingleTest) critical(alpha float64) float64 {
	if math.IsInf(t.Dof, 1) {
		return distuv.UnitNormal.Quantile(1 - alpha/2)
	}
	return distuv.StudentsT{Sigma: 1, Nu: t.Dof}.Quantile(1 - alpha/2)
}

// quantiles keeps the quantiles asked for: one of many cables has mostly the degrees of freedom of the one before, and a
// quantile costs as much as the fit.
type quantiles struct {
	t            map[[2]float64]float64 // critical, by alpha and degrees of freedom
	k, low, high float64                // of region
}

// mostQuantiles is how many quantiles are kept; surveys of very many different sizes start anew.
const mostQuantiles = 256

// critical is t.critical(alpha).
func (q *quantiles) critical(t SingleTest, alpha float64) float64 {
	key := [2]float64{alpha, t.Dof}
	v, ok := q.t[key]
	if !ok {
		if q.t == nil || len(q.t) >= mostQuantiles {
			q.t = make(map[[2]float64]float64)
		}
		v = t.critical(alpha)
		q.t[key] = v
	}
	return v
}

// region is the 95 % acceptance region of a variance factor with k degrees of freedom.
func (q *quantiles) region(k float64) (low, high float64) {
	if q.k != k {
		chi := distuv.ChiSquared{K: k}
		q.k, q.low, q.high = k, chi.Quantile(0.025)/k, chi.Quantile(0.975)/k
	}
	return q.low, q.high
}

// singleTests are the tests of all points against the last solution in w.
func (r *Result) singleTests(w *workspace) []SingleTest {
	n := len(r.Observations)
	e := r.evaluator(w.problem.z0)
	f := float64(r.DegreesOfFreedom)
	sum := r.VarianceFactor * f
	out := make([]SingleTest, n)
	var g gradient
	for i := range r.Observations {
		v, sigma := e.foot(&r.Observations[i], w.problem.z0, &g)
		left := 1 - r.variance(&g)/(sigma*sigma) // share of the point's variance left in its residual
		if left < 1e-6 {
			out[i] = SingleTest{Dof: math.Inf(1), unchecked: true}
			continue
		}
		v2 := v * v / left
		rest := 1.0
		out[i].Dof = math.Inf(1)
		if f > 1 {
			// The rest may be rounding only, or less where the curve bends: the point then stands out, it is not clean.
			without := math.Max(sum-v2, 1e-12*sum) / (f - 1)
			if !r.APriori || without > 1 {
				rest, out[i].Dof = without, f-1
			}
		} else if !r.APriori {
			out[i] = SingleTest{Dof: math.Inf(1)} // one redundant point cannot tell which of all is wrong
			continue
		}
		out[i].W = v / math.Sqrt(left*rest)
		if rest == 0 {
			out[i].W = 0
		}
	}
	return out
}

func (o Options) alpha() float64 {
	if o.Alpha > 0 {
		return o.Alpha
	}
	return 0.001
}

func (r *Result) suspect(v Observation, t SingleTest, critical float64, reason string) Suspect {
	return Suspect{ID: v.ID, Line: v.Line, Station: v.S, Residual: v.Z - r.Curve.Z(v.S), W: t.W, Critical: critical, Reason: reason}
}

// scale is the factor on the covariance: the variance factor when the accuracy is estimated or the stated one fails its test
// on the high side, else 1.
func (r *Result) scale(w *workspace) float64 {
	if !r.APriori {
		return r.VarianceFactor
	}
	r.ChiSquareLow, r.ChiSquareHigh = w.quantiles.region(float64(r.DegreesOfFreedom))
	r.VarianceOK = r.VarianceFactor >= r.ChiSquareLow && r.VarianceFactor <= r.ChiSquareHigh
	if r.VarianceFactor > r.ChiSquareHigh {
		return r.VarianceFactor
	}
	return 1
}

// residuals fills the vertical residuals and returns the sum of their squares, m2.
func (r *Result) residuals() (sum float64) {
	r.Residuals = make([]float64, len(r.Observations))
	e := r.Curve.evaluator()
	for i, v := range r.Observations {
		z, _, _ := e.at(v.S, nil)
		r.Residuals[i] = v.Z - z
		sum += r.Residuals[i] * r.Residuals[i]
	}
	return sum
}

// judge fills everything that is said about the final fit and scales its covariance.
func (r *Result) judge(w *workspace, o Options) {
	n := len(r.Observations)
	tests := r.singleTests(w)
	r.W = make([]float64, n)
	sum := r.residuals()
	for i, v := range r.Observations {
		r.W[i] = tests[i].W
		if crit := w.quantiles.critical(tests[i], o.alpha()); math.Abs(tests[i].W) > crit {
			r.Suspects = append(r.Suspects, r.suspect(v, tests[i], crit, fmt.Sprintf("|w| = %.2f > %.2f", math.Abs(tests[i].W), crit)))
		}
	}
	r.RMS = math.Sqrt(sum / float64(n))
	r.AcrossRMS = acrossRMS(r.Observations)
	r.ScaledBy = r.scale(w)
	r.correlation()
	factor := r.ScaledBy * r.Widening * r.Widening
	r.scaleCovariance(factor)
}
