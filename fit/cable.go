package fit

import (
	"fmt"
	"math"
	"slices"
	"sync"

	"tautbook/survey"
)

// Cable fits a hanging curve through the points of one span. The plane is found first (see Frame), then the curve by weighted
// least squares with errors in both coordinates. Accuracy comes with the points, else from Options, else it is estimated
// from the residuals. Surveyed supports fix plane and chord but are not points of the fit: a pin or a saddle may lie off
// the centre line. Result says everything about the quality. The error wraps ErrRank when the points do not determine a
// curve; it says how many points are missing when there are fewer than four stations.
func Cable(p survey.SpanPoints, o Options) (*Result, error) {
	obs, frame, a, b, err := inPlane(p, o)
	if err != nil {
		return nil, err
	}
	return InPlane(obs, frame, a, b, o)
}

// workspaces are reused from fit to fit, so that many cables do not allocate for each.
var workspaces = sync.Pool{New: func() any { return new(workspace) }}

type workspace struct {
	solver  Solver
	problem curveProblem
	cov     [9]float64

	quantiles quantiles
}

// InPlane is Cable for points that are already in the plane of the span; a and b are the ends of the chord. The observations
// are not changed.
func InPlane(obs []Observation, frame Frame, a, b End, o Options) (*Result, error) {
	w := workspaces.Get().(*workspace)
	defer workspaces.Put(w)
	r := &Result{Frame: frame, A: a, B: b, Widening: 1, Observations: slices.Clone(obs)}
	var err error
	if r.APriori, err = accuracy(r.Observations); err != nil {
		return nil, err
	}
	share, err := o.share()
	if err != nil {
		return nil, err
	}
	err = r.solve(w, share, o)
	if o.RejectBeyond > 0 && (err == nil || len(obs) > 5) {
		err = r.reject(w, share, o, err)
	}
	bad, named := r.nameGross(w, o, err)
	if err != nil && named {
		return nil, fmt.Errorf("%w; point %q (line %d) is about %.3g m off in height: leave it out", err, bad.ID, bad.Line, bad.Residual)
	}
	if err != nil {
		return nil, err
	}
	r.judge(w, o)
	if named && !slices.ContainsFunc(r.Suspects, func(s Suspect) bool { return s.Station == bad.Station && s.ID == bad.ID }) {
		r.Suspects = append(r.Suspects, bad)
	}
	if !o.NoAlternatives {
		r.compareShapes(w, share, o)
	}
	return r, nil
}

// share is the share of self weight that the shape stands for.
func (o Options) share() (float64, error) {
	switch o.Shape {
	case Catenary, "":
		return 1, nil
	case Parabola:
		return 0, nil
	case Mixed:
		if o.SelfShare > 0 && o.SelfShare < 1 {
			return o.SelfShare, nil
		}
		return 0, fmt.Errorf("fit: the mixed shape needs a share of self weight between 0 and 1, have %g", o.SelfShare)
	}
	return 0, fmt.Errorf("fit: unknown shape %q, expected catenary, parabola or mixed", o.Shape)
}

// accuracy reports whether all points come with an accuracy. When none does, all get the same unit variance in both
// coordinates; a mixture is refused, because the weights of the others would be a guess.
func accuracy(obs []Observation) (bool, error) {
	with, without := 0, -1
	for i, v := range obs {
		switch {
		case v.VarZ > 0 && v.VarS >= 0 && v.VarS*v.VarZ-v.CovSZ*v.CovSZ >= 0 && (v.VarS > 0 || v.CovSZ == 0):
			with++
		case v.VarZ == 0 && v.VarS == 0 && v.CovSZ == 0:
			without = i
		default:
			return false, fmt.Errorf("fit: point %s has an impossible covariance: variances %g and %g m2, covariance %g m2", obs[i].name(), v.VarS, v.VarZ, v.CovSZ)
		}
	}
	if with == len(obs) {
		return true, nil
	}
	if with > 0 {
		return false, fmt.Errorf("fit: point %s has no accuracy while %d others have: give one for all", obs[without].name(), with)
	}
	for i := range obs {
		obs[i].VarS, obs[i].VarZ = 1, 1
	}
	return false, nil
}

// name is how a point is called in messages.
func (o Observation) name() string {
	if o.ID != "" {
		return fmt.Sprintf("%q", o.ID)
	}
	return fmt.Sprintf("of line %d", o.Line)
}

// stations counts the distinct stations, up to four, and gives their range.
func stations(obs []Observation) (count int, lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for i := range obs {
		lo, hi = min(lo, obs[i].S), max(hi, obs[i].S)
	}
	var seen [4]float64
	near := 1e-6 * (hi - lo)
next:
	for i := range obs {
		for _, s := range seen[:count] {
			if math.Abs(obs[i].S-s) <= near {
				continue next
			}
		}
		seen[count] = obs[i].S
		if count++; count == len(seen) {
			break
		}
	}
	return count, lo, hi
}

// solve fits the curve through the present observations and refers it to the chord ends.
func (r *Result) solve(w *workspace, share float64, o Options) error {
	count, lo, hi := stations(r.Observations)
	if count < 4 {
		return fmt.Errorf("fit: %d points at different stations; a curve needs 3 and a fourth to check it", count)
	}
	z0 := 0.0
	for i := range r.Observations {
		z0 += r.Observations[i].Z
	}
	z0 /= float64(len(r.Observations))
	w.problem = curveProblem{obs: r.Observations, base: Curve{S1: lo, S2: hi, SelfShare: share}, z0: z0}
	var start [3]float64
	w.problem.start(start[:])
	w.solver.MaxIterations = o.MaxIterations
	sol := w.solver.Solve(&w.problem, start[:])
	r.Iterations, r.Converged = sol.Iterations, sol.Status.Err() == nil
	if err := sol.Status.Err(); err != nil {
		return err
	}
	condition, err := w.solver.Covariance(w.cov[:])
	r.ConditionNumber = condition
	if err != nil {
		return err
	}
	r.DegreesOfFreedom = len(r.Observations) - 3
	r.VarianceFactor = sol.Sum / float64(r.DegreesOfFreedom)
	r.refer(w.problem.curve(sol.Theta), z0, w.cov)
	return nil
}

// refer moves the defining heights of the curve to the chord ends and carries the covariance along.
func (r *Result) refer(c Curve, z0 float64, cov [9]float64) {
	var ga, gb [3]float64
	c.Gradient(r.A.Station, &ga)
	c.Gradient(r.B.Station, &gb)
	t := [3][3]float64{ga, gb, {0, 0, 1}}
	for i := range 3 {
		for j := range 3 {
			sum := 0.0
			for k := range 3 {
				for l := range 3 {
					sum += t[i][k] * cov[3*k+l] * t[j][l]
				}
			}
			r.Cov[i][j] = sum
		}
	}
	c = c.Rebase(r.A.Station, r.B.Station)
	c.Z1, c.Z2 = c.Z1+z0, c.Z2+z0
	r.Curve = c
}

// Propagate is the standard uncertainty of a figure whose gradient by (Z1, Z2, Curvature) is given.
func (r *Result) Propagate(g [3]float64) float64 {
	sum := 0.0
	for i := range 3 {
		for j := range 3 {
			sum += g[i] * r.Cov[i][j] * g[j]
		}
	}
	return math.Sqrt(max(sum, 0))
}

// HeightU is the standard uncertainty of the fitted elevation at a station, m.
func (r *Result) HeightU(s float64) float64 {
	var g [3]float64
	r.Curve.Gradient(s, &g)
	return r.Propagate(g)
}

// Hangs reports whether the curvature is known to be positive: above two standard uncertainties.
func (r *Result) Hangs() bool { return r.Curve.Curvature > 2*math.Sqrt(r.Cov[2][2]) }
