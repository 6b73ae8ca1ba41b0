package fit

import (
	"cmp"
	"fmt"
	"math"
	"math/rand/v2"
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

// reject leaves out the points that no error of their accuracy explains. A survey without a suspicion is left as it is. Else the curve
// that most points agree on is found first, so that errors that are alike do not hide each other, and every point is tested against
// the curve through the good ones; with too few points for that, the most unlikely point is dropped and the curve fitted again until
// none is beyond the limit. Points that fit the final curve after all come back, and so do neighbours that went together: see
// Stretch. solved is the error of the fit to all points: a gross error may have spoilt it.
func (r *Result) reject(w *workspace, share float64, o Options, solved error) error {
	x := rejection{Result: r, w: w, share: share, o: o, alpha: 2 * distuv.UnitNormal.Survival(o.RejectBeyond)}
	if !x.suspicious(solved) {
		return nil
	}
	x.all = slices.Clone(r.Observations)
	for i := range x.all {
		x.left = append(x.left, i)
	}
	before := *r
	good := x.robustStart(solved)
	if good != nil && x.settle(good) {
		return x.giveBack()
	}
	*r = before
	x.Observations = slices.Clone(x.all)
	if err := x.dropSingly(solved); err != nil {
		return err
	}
	return x.giveBack()
}

// suspicionChance is the two-sided probability of the test of one point below which a gross error is looked for: rarer than the level
// at which points are listed, so that few clean surveys pay for the search, and far from that at which they are dropped.
const suspicionChance = 1e-4

// suspicious reports whether there is anything to look for: a fit that failed, a point that its own test speaks against, or more
// scatter than the stated accuracy or, without one, the better half of the points allows.
func (x *rejection) suspicious(solved error) bool {
	if solved != nil || x.DegreesOfFreedom < 1 {
		return true
	}
	for _, t := range x.singleTests(x.w) {
		if t.unchecked || math.Abs(t.W) > x.w.quantiles.critical(t, suspicionChance) {
			return true
		}
	}
	if x.APriori {
		if _, high := x.w.quantiles.region(float64(x.DegreesOfFreedom)); x.VarianceFactor <= high {
			return false
		}
	}
	return x.hidden()
}

// fewestForHidden is the number of points below which the better half of them scatters by chance so much less than the rest that it
// tells nothing.
const fewestForHidden = 12

// hiddenBeyond is the variance factor, in units of the variance that the better half of n points suggests, that about one clean
// survey in a hundred exceeds; by simulation.
func hiddenBeyond(n int) float64 { return 2 + 1500/float64(n*n) }

// hidden reports whether the better half of the points scatters so much less than all of them that errors may hide each other. It
// is rough, since a false suspicion costs only time.
func (x *rejection) hidden() bool {
	n := len(x.Observations)
	if n < fewestForHidden {
		return false
	}
	rng := rand.New(rand.NewPCG(uint64(n), 1976))
	probe := rejection{Result: x.Result, w: x.w, all: x.Observations}
	places := make([]int, min(n, probePoints))
	for i := range places {
		places[i] = i * n / len(places)
	}
	e := probe.elementals(places, nil)[0]
	samples := probeSamples
	if x.APriori { // the stated accuracy has failed already
		samples = elementalSamples
	}
	top := e.best(rng, samples, 1)
	if len(top) == 0 {
		return true
	}
	s := robustScale(quickSelect(e.sizes(top[0]), len(places)/2), len(places), x.parameters())
	return x.VarianceFactor > hiddenBeyond(n)*s*s
}

// settle tests every point against the curve through the good ones, those in it by their residual and those outside by their
// distance from it, and drops what is left. The good ones are not sought again with the points that came in: one wrong point among
// those would widen the scatter for the next.
func (x *rejection) settle(good []int) bool {
	if x.DegreesOfFreedom < 1 {
		return false
	}
	in := make([]bool, len(x.all))
	for _, i := range good {
		in[i] = true
	}
	tests := make([]SingleTest, len(x.all))
	own, scale, k := x.singleTests(x.w), x.scale(x.w), 0
	good = good[:0]
	for i, v := range x.all {
		if in[i] {
			tests[i] = own[k]
			k++
		} else {
			tests[i] = x.outside(v, scale)
		}
		in[i] = tests[i].unchecked || !(math.Abs(tests[i].W) > x.w.quantiles.critical(tests[i], x.alpha))
		if in[i] {
			good = append(good, i)
		}
	}
	if x.solveOn(good) != nil {
		return false
	}
	x.leave(good, in, tests)
	return true
}

// outside is the test of a point that is not in the fit.
func (x *rejection) outside(v Observation, scale float64) SingleTest {
	residual, sd := x.prediction(v, x.w.problem.z0, scale)
	t := SingleTest{W: residual / sd, Dof: math.Inf(1)}
	if !x.APriori || scale > 1 {
		t.Dof = float64(x.DegreesOfFreedom)
	}
	return t
}

// leave writes down the good points and the others, the most unlikely first.
func (x *rejection) leave(good []int, in []bool, tests []SingleTest) {
	x.left = good
	for i, keep := range in {
		if !keep {
			x.dropped = append(x.dropped, i)
		}
	}
	slices.SortStableFunc(x.dropped, func(a, b int) int { return cmp.Compare(math.Abs(tests[b].W), math.Abs(tests[a].W)) })
	for _, i := range x.dropped {
		t := tests[i]
		x.Rejected = append(x.Rejected, x.suspect(x.all[i], t, x.w.quantiles.critical(t, x.alpha),
			fmt.Sprintf("w = %.1f, as unlikely as %.2g standard deviations", t.W, equivalent(t))))
	}
}

// dropSingly drops one point after the other, less than a third of them.
func (x *rejection) dropSingly(solved error) error {
	if err := x.dropGross(solved); err != nil {
		return err
	}
	for x.mayDrop() && x.DegreesOfFreedom > 1 {
		tests := x.singleTests(x.w)
		worst := worstOf(tests)
		t := tests[worst]
		if !(t.p() < x.alpha) || !x.enough(worst) {
			break
		}
		x.drop(worst, x.suspect(x.Observations[worst], t, x.o.RejectBeyond,
			fmt.Sprintf("w = %.1f, as unlikely as %.2g standard deviations", t.W, equivalent(t))))
		if err := x.solve(x.w, x.share, x.o); err != nil {
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
	var still []int
	scale := x.scale(x.w)
	for i, place := range x.dropped {
		v := x.all[place]
		if t := x.outside(v, scale); t.p() >= x.o.alpha() {
			x.left = append(x.left, place)
			continue
		}
		s := x.Rejected[i]
		s.Residual = v.Z - x.Curve.Z(v.S)
		kept, still = append(kept, s), append(still, place)
	}
	x.Rejected, x.dropped = kept, still
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
