package fit

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// gross is how far beyond RejectBeyond an error in height must be to be dropped before the distances are looked at.
const gross = 10

// rejection is the search for points to drop from one fit.
type rejection struct {
	*Result
	w             *workspace
	share         float64
	o             Options
	alpha         float64       // of RejectBeyond, two-sided
	all           []Observation // in order of input
	left, dropped []int         // places in all
}

// reject drops the most unlikely point and fits again until none is beyond the limit or a third of the points is gone; then
// points that fit the final curve after all come back. solved is the error of the fit to all points: a gross error may
// have spoilt it.
func (r *Result) reject(w *workspace, share float64, o Options, solved error) error {
	x := rejection{Result: r, w: w, share: share, o: o, alpha: 2 * distuv.UnitNormal.Survival(o.RejectBeyond), all: slices.Clone(r.Observations)}
	for i := range x.all {
		x.left = append(x.left, i)
	}
	if err := x.dropGross(solved); err != nil {
		return err
	}
	for x.mayDrop() && r.DegreesOfFreedom > 1 {
		tests := r.singleTests(w)
		worst := worstOf(tests)
		t := tests[worst]
		if !(t.p() < x.alpha) || !x.enough(worst) {
			break
		}
		x.drop(worst, r.suspect(r.Observations[worst], t, o.RejectBeyond,
			fmt.Sprintf("w = %.1f, as unlikely as %.2g standard deviations", t.W, equivalent(t))))
		if err := r.solve(w, share, o); err != nil {
			return err
		}
	}
	return x.bringBack()
}

// mayDrop holds while less than a third of the points is dropped.
func (x *rejection) mayDrop() bool { return len(x.dropped) < len(x.all)/3 }

// enough reports whether a curve is still determined without one more point.
func (x *rejection) enough(without int) bool {
	count, _, _ := stations(slices.Delete(slices.Clone(x.Observations), without, without+1))
	return count >= 4
}

// drop takes one of the present observations out.
func (x *rejection) drop(i int, s Suspect) {
	x.Rejected = append(x.Rejected, s)
	x.dropped = append(x.dropped, x.left[i])
	x.left = slices.Delete(x.left, i, i+1)
	x.Observations = slices.Delete(x.Observations, i, i+1)
}

// worstOf is the place of the least likely statistic.
func worstOf(tests []SingleTest) int {
	worst, p := 0, tests[0].p()
	for i, t := range tests {
		if math.Abs(t.W) < math.Abs(tests[worst].W) && t.Dof >= tests[worst].Dof {
			continue // certainly more likely
		}
		if q := t.p(); q < p || (q == p && math.Abs(t.W) > math.Abs(tests[worst].W)) {
			worst, p = i, q
		}
	}
	return worst
}

// dropGross drops errors so large that distances cannot show them. It does nothing when the fit is sound; solved is the error
// of that fit.
func (x *rejection) dropGross(solved error) error {
	if solved == nil && x.sound() {
		return nil
	}
	h := x.heights()
	for x.mayDrop() {
		i, s, found := h.grossest(x.w, x.o, x.o.RejectBeyond)
		if !found || !x.enough(i) {
			break
		}
		x.drop(i, s)
		h.Observations = slices.Delete(h.Observations, i, i+1)
	}
	return x.solve(x.w, x.share, x.o)
}

// heights are the observations with errors in height alone.
func (r *Result) heights() *Result {
	h := Result{A: r.A, B: r.B, Observations: slices.Clone(r.Observations), locals: slices.Clone(r.locals)}
	for i := range h.Observations {
		h.Observations[i].VarS, h.Observations[i].CovSZ = 0, 0
	}
	return &h
}

// grossest is the place of the point that is farthest off a parabola in heights alone, found when it is off by gross times the
// level (standard deviations of a normal error). An error of the size of the span bends the nearest curve to itself: the
// foot of such a point lies on a steep part of the curve, its distance is small, and the single-point test on distances
// cannot see it. A parabola in heights cannot follow one point so; the scatter of the heights themselves, and how far the
// cable is from a parabola, is the measure.
func (h *Result) grossest(w *workspace, o Options, level float64) (place int, s Suspect, found bool) {
	if h.solve(w, 0, o) != nil || h.DegreesOfFreedom < 2 {
		return 0, Suspect{}, false
	}
	tests := h.singleTests(w)
	place = worstOf(tests)
	t := tests[place]
	found = math.Abs(t.W) >= gross*level && t.p() < 2*distuv.UnitNormal.Survival(level)
	return place, h.suspect(h.Observations[place], t, gross*level, fmt.Sprintf("gross error in height: w = %.3g", t.W)), found
}

// nameGross looks for a gross error when nothing may be dropped and the fit failed or is poor: more than gross times a stated
// accuracy, or, without one, a scatter of a fiftieth of the sag or a five-hundredth of the chord. It returns the point as a
// suspect.
func (r *Result) nameGross(w *workspace, o Options, solved error) (Suspect, bool) {
	if solved == nil {
		limit := float64(gross * gross)
		if !r.APriori {
			_, sag := r.Curve.GreatestSag(r.A.Station, r.B.Station)
			limit = min(sag*sag/2500, math.Pow(r.B.Station-r.A.Station, 2)/250000)
		}
		if !(r.VarianceFactor > limit) {
			return Suspect{}, false
		}
	}
	_, s, found := r.heights().grossest(w, o, grossLevel)
	return s, found
}

// grossLevel is the level of nameGross, standard deviations.
const grossLevel = 5

// sound reports whether the fit keeps a stated accuracy nearly enough that no error in it can be gross.
func (x *rejection) sound() bool {
	if !x.APriori || x.VarianceFactor > gross*gross {
		return false
	}
	for _, t := range x.singleTests(x.w) {
		if t.unchecked || math.Abs(t.W) > gross*x.o.RejectBeyond {
			return false
		}
	}
	return true
}

// bringBack returns dropped points that lie within the suspect level of the final curve.
func (x *rejection) bringBack() error {
	var kept []Suspect
	scale := x.scale(x.w)
	for i, place := range x.dropped {
		v := x.all[place]
		residual, sd := x.prediction(v, x.w.problem.z0, scale)
		t := SingleTest{W: residual / sd, Dof: math.Inf(1)}
		if !x.APriori {
			t.Dof = float64(x.DegreesOfFreedom)
		}
		if t.p() >= x.o.alpha() {
			x.left = append(x.left, place)
			continue
		}
		s := x.Rejected[i]
		s.Residual = v.Z - x.Curve.Z(v.S)
		kept = append(kept, s)
	}
	x.Rejected = kept
	if len(x.left) == len(x.Observations) {
		return nil
	}
	slices.Sort(x.left)
	x.Observations = x.Observations[:0]
	for _, place := range x.left {
		x.Observations = append(x.Observations, x.all[place])
	}
	return x.solve(x.w, x.share, x.o)
}

// equivalent is the number of standard deviations of a normal error that is as unlikely.
func equivalent(t SingleTest) float64 {
	if p := t.p(); p > 1e-300 && !math.IsInf(t.Dof, 1) {
		return -distuv.UnitNormal.Quantile(p / 2)
	}
	return math.Abs(t.W)
}

// prediction is the residual of a point that is not in the fit across the curve, and its standard deviation, m.
func (r *Result) prediction(v Observation, z0, scale float64) (residual, sd float64) {
	e := r.evaluator(z0)
	var g gradient
	q, sigma := e.foot(&v, z0, &g)
	return q * sigma, math.Sqrt(scale * (sigma*sigma + r.variance(&g)))
}
