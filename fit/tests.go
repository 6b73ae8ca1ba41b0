package fit

import (
	"fmt"
	"math"
	"slices"

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

// singleTests are the tests of all points against the last solution in w.
func (r *Result) singleTests(w *workspace) []SingleTest {
	n := len(r.Observations)
	c := r.Curve
	c.Z1, c.Z2 = c.Z1-w.problem.z0, c.Z2-w.problem.z0
	e := c.evaluator()
	f := float64(r.DegreesOfFreedom)
	sum := r.VarianceFactor * f
	out := make([]SingleTest, n)
	var g [3]float64
	for i := range r.Observations {
		v, sigma := e.foot(&r.Observations[i], w.problem.z0, &g)
		left := 1 - r.Propagate(g)*r.Propagate(g)/(sigma*sigma) // share of the point's variance left in its residual
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

// reject drops the most unlikely point and fits again until none is beyond the limit or a third of the points is gone; then
// points that fit the final curve after all come back.
// solved is the error of the fit to all points: a gross error may have spoilt it.
func (r *Result) reject(w *workspace, share float64, o Options, solved error) error {
	alpha := 2 * distuv.UnitNormal.Survival(o.RejectBeyond)
	most := len(r.Observations) / 3
	dropped, err := r.dropGross(w, share, o, alpha, most, solved)
	if err != nil {
		return err
	}
	for len(dropped) < most && r.DegreesOfFreedom > 1 {
		tests := r.singleTests(w)
		worst := 0
		for i, t := range tests {
			if t.p() < tests[worst].p() || (t.p() == tests[worst].p() && math.Abs(t.W) > math.Abs(tests[worst].W)) {
				worst = i
			}
		}
		if count, _, _ := stations(slices.Delete(slices.Clone(r.Observations), worst, worst+1)); !(tests[worst].p() < alpha) || count < 4 {
			break
		}
		v := r.Observations[worst]
		dropped = append(dropped, v)
		r.Rejected = append(r.Rejected, r.suspect(v, tests[worst], o.RejectBeyond,
			fmt.Sprintf("w = %.1f, as unlikely as %.2g standard deviations", tests[worst].W, equivalent(tests[worst]))))
		r.Observations = slices.Delete(r.Observations, worst, worst+1)
		if err := r.solve(w, share, o); err != nil {
			return err
		}
	}
	return r.bringBack(w, share, o, dropped)
}

// gross is how far beyond RejectBeyond an error in height must be to be dropped before the distances are looked at.
const gross = 10

// dropGross drops errors so large that the nearest curve bends to them: the foot of such a point lies on a steep part of the
// curve, its distance is small, and the single-point test on distances cannot see it. A parabola in heights alone cannot
// follow one point so; the scatter of the heights themselves, and how far the cable is from a parabola, is the measure. It does nothing when
// the fit is sound; solved is the error of that fit.
func (r *Result) dropGross(w *workspace, share float64, o Options, alpha float64, most int, solved error) (dropped []Observation, err error) {
	if solved == nil && r.sound(w, o) {
		return nil, nil
	}
	h := Result{A: r.A, B: r.B, Observations: slices.Clone(r.Observations)}
	for i := range h.Observations {
		h.Observations[i].VarS, h.Observations[i].CovSZ = 0, 0
	}
	for len(dropped) < most {
		if h.solve(w, 0, o) != nil || h.DegreesOfFreedom < 2 {
			break
		}
		tests := h.singleTests(w)
		worst := 0
		for i, t := range tests {
			if math.Abs(t.W) > math.Abs(tests[worst].W) {
				worst = i
			}
		}
		rest := slices.Delete(slices.Clone(r.Observations), worst, worst+1)
		if count, _, _ := stations(rest); math.Abs(tests[worst].W) < gross*o.RejectBeyond || !(tests[worst].p() < alpha) || count < 4 {
			break
		}
		v := r.Observations[worst]
		dropped = append(dropped, v)
		s := h.suspect(v, tests[worst], gross*o.RejectBeyond, fmt.Sprintf("gross error in height: w = %.3g", tests[worst].W))
		r.Rejected = append(r.Rejected, s)
		r.Observations = rest
		h.Observations = slices.Delete(h.Observations, worst, worst+1)
	}
	return dropped, r.solve(w, share, o)
}

// sound reports whether the fit keeps a stated accuracy nearly enough that no error in it can be gross.
func (r *Result) sound(w *workspace, o Options) bool {
	if !r.APriori || r.VarianceFactor > gross*gross {
		return false
	}
	for _, t := range r.singleTests(w) {
		if t.unchecked || math.Abs(t.W) > gross*o.RejectBeyond {
			return false
		}
	}
	return true
}

// equivalent is the number of standard deviations of a normal error that is as unlikely.
func equivalent(t SingleTest) float64 {
	if p := t.p(); p > 1e-300 && !math.IsInf(t.Dof, 1) {
		return -distuv.UnitNormal.Quantile(p / 2)
	}
	return math.Abs(t.W)
}

// bringBack returns dropped points that lie within the suspect level of the final curve.
func (r *Result) bringBack(w *workspace, share float64, o Options, dropped []Observation) error {
	kept, back := r.Rejected[:0], false
	scale := r.scale()
	for i, v := range dropped {
		residual, sd := r.prediction(v, w.problem.z0, scale)
		t := SingleTest{W: residual / sd, Dof: math.Inf(1)}
		if !r.APriori {
			t.Dof = float64(r.DegreesOfFreedom)
		}
		if t.p() >= o.alpha() {
			r.Observations = append(r.Observations, v)
			back = true
			continue
		}
		s := r.Rejected[i]
		s.Residual = v.Z - r.Curve.Z(v.S)
		kept = append(kept, s)
	}
	r.Rejected = kept
	if back {
		return r.solve(w, share, o)
	}
	return nil
}

// prediction is the residual of a point that is not in the fit across the curve, and its standard deviation, m.
func (r *Result) prediction(v Observation, z0, scale float64) (residual, sd float64) {
	c := r.Curve
	c.Z1, c.Z2 = c.Z1-z0, c.Z2-z0
	e := c.evaluator()
	var g [3]float64
	q, sigma := e.foot(&v, z0, &g)
	u := r.Propagate(g)
	return q * sigma, math.Sqrt(scale * (sigma*sigma + u*u))
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
func (r *Result) scale() float64 {
	if !r.APriori {
		return r.VarianceFactor
	}
	f := float64(r.DegreesOfFreedom)
	chi := distuv.ChiSquared{K: f}
	r.ChiSquareLow, r.ChiSquareHigh = chi.Quantile(0.025)/f, chi.Quantile(0.975)/f
	r.VarianceOK = r.VarianceFactor >= r.ChiSquareLow && r.VarianceFactor <= r.ChiSquareHigh
	if r.VarianceFactor > r.ChiSquareHigh {
		return r.VarianceFactor
	}
	return 1
}

// judge fills everything that is said about the final fit and scales its covariance.
func (r *Result) judge(w *workspace, o Options) {
	n := len(r.Observations)
	tests := r.singleTests(w)
	r.W = make([]float64, n)
	r.Residuals = make([]float64, n)
	sum := 0.0
	e := r.Curve.evaluator()
	for i, v := range r.Observations {
		z, _, _ := e.at(v.S, nil)
		r.Residuals[i] = v.Z - z
		sum += r.Residuals[i] * r.Residuals[i]
		r.W[i] = tests[i].W
		if p := tests[i].p(); p < o.alpha() {
			crit := tests[i].critical(o.alpha())
			r.Suspects = append(r.Suspects, r.suspect(v, tests[i], crit, fmt.Sprintf("|w| = %.2f > %.2f", math.Abs(tests[i].W), crit)))
		}
	}
	r.RMS = math.Sqrt(sum / float64(n))
	r.AcrossRMS = acrossRMS(r.Observations)
	r.ScaledBy = r.scale()
	r.correlation()
	factor := r.ScaledBy * r.Widening * r.Widening
	for i := range 3 {
		for j := range 3 {
			r.Cov[i][j] *= factor
		}
	}
}
