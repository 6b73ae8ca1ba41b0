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
// from the residuals. Surveyed supports fix plane and chord; they are points of the fit only with Options.ThroughSupports, since a
// pin or a saddle may lie off the centre line. Result says everything about the quality. The error wraps ErrRank when the points do not determine a
// curve; it says how many points are missing when there are fewer than four stations.
func Cable(p survey.SpanPoints, o Options) (*Result, error) {
	obs, frame, a, b, err := inPlane(p, o)
	if err != nil {
		return nil, err
	}
	obs, left, err := o.cleared(obs, a, b)
	if err != nil {
		return nil, err
	}
	r, err := InPlane(obs, frame, a, b, o)
	if err != nil {
		return nil, err
	}
	if r, err = r.inSwing(obs, o); err != nil {
		return nil, err
	}
	r.LeftOut = left
	return r, nil
}

// cleared takes out the points near supports and told local loads: within about five times sqrt(EI/H) of a clamp the bending
// stiffness carries part of the load (Timoshenko and Woinowsky-Krieger 1959, Theory of Plates and Shells, ch. 1, for the
// decay of a strip under tension).
func (o Options) cleared(obs []Observation, a, b End) (kept []Observation, left []Suspect, err error) {
	if !(o.Clear > 0) {
		return obs, nil, nil
	}
	near := func(v Observation) string {
		switch {
		case v.Support:
		case a.Surveyed && v.S-a.Station < o.Clear:
			return "support A"
		case b.Surveyed && b.Station-v.S < o.Clear:
			return "support B"
		}
		for _, l := range o.Loads {
			if math.Abs(v.S-l.Station) < o.Clear {
				return fmt.Sprintf("the local load at %.2f m", l.Station)
			}
		}
		return ""
	}
	for _, v := range obs {
		if what := near(v); what != "" {
			left = append(left, Suspect{ID: v.ID, Line: v.Line, Station: v.S, Reason: fmt.Sprintf("within %.2f m of %s, where bending makes another shape", o.Clear, what)})
			continue
		}
		kept = append(kept, v)
	}
	if len(kept) < 5 && len(left) > 0 {
		return nil, nil, fmt.Errorf("fit: %d of %d points lie within %.2f m of a support or a local load, where bending makes another shape: survey more points in the span", len(left), len(obs), o.Clear)
	}
	return kept, left, nil
}

// workspaces are reused from fit to fit, so that many cables do not allocate for each.
var workspaces = sync.Pool{New: func() any { return new(workspace) }}

type workspace struct {
	solver  Solver
	problem curveProblem
	cov     [len(gradient{}) * len(gradient{})]float64

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
	if r.locals, err = o.locals(a, b); err != nil {
		return nil, err
	}
	if err = r.adjust(w, share, o, false); o.FindLoads > 0 && (len(r.Rejected) > 1 || r.Stretches != nil || r.Torn != nil) {
		// What was dropped point by point may have been a local load: the other order is tried, and the one that keeps more points wins.
		other := &Result{Frame: frame, A: a, B: b, Widening: 1, APriori: r.APriori, Observations: slices.Clone(obs)}
		if _, err := accuracy(other.Observations); err != nil {
			return nil, err
		}
		other.locals, _ = o.locals(a, b)
		if other.adjust(w, share, o, true) == nil && len(other.locals) > len(r.locals) && len(other.Rejected)+other.together() < len(r.Rejected)+r.together() {
			r, err = other, nil
		}
	}
	if err == nil && o.FindLoads > 0 {
		err = r.solve(w, share, o) // the workspace may hold another one
	}
	if err != nil {
		return nil, err
	}
	r.judge(w, o)
	if err := r.tellLoads(w); err != nil {
		return nil, err
	}
	if bad, named := r.nameGross(w, o, nil); named && !slices.ContainsFunc(r.Suspects, func(s Suspect) bool { return s.Station == bad.Station && s.ID == bad.ID }) {
		r.Suspects = append(r.Suspects, bad)
	}
	if !o.NoAlternatives {
		r.compareShapes(w, share, o)
	}
	return r, nil
}

// adjust fits the curve, drops gross errors and searches for local loads, in that order or with the search first.
func (r *Result) adjust(w *workspace, share float64, o Options, searchFirst bool) error {
	err := r.solve(w, share, o)
	if searchFirst && err == nil {
		err = r.search(w, share, o)
	}
	if o.RejectBeyond > 0 && (err == nil || len(r.Observations) > 5) {
		err = r.reject(w, share, o, err)
	}
	if err != nil {
		if bad, named := r.nameGross(w, o, err); named {
			return fmt.Errorf("%w; point %q (line %d) is about %.3g m off in height: leave it out", err, bad.ID, bad.Line, bad.Residual)
		}
		return err
	}
	before := len(r.locals)
	err = r.search(w, share, o)
	if len(r.locals) > before { // the load is what they were off by
		r.Stretches, r.Torn = nil, nil
	}
	return err
}

// together is the number of points that were not dropped because they lie off the curve together.
func (r *Result) together() int {
	n := len(r.Torn)
	for _, s := range r.Stretches {
		n += len(s.Points)
	}
	return n
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
	p := &w.problem
	p.obs, p.base, p.z0, p.n = r.Observations, Curve{S1: lo, S2: hi, SelfShare: share}, z0, 3
	p.loads, p.columns, p.records = nil, nil, nil
	var start gradient
	if r.locals == nil {
		p.start(start[:])
	} else if err := r.prepareLoads(p, start[:]); err != nil {
		return err
	}
	w.solver.MaxIterations = o.MaxIterations
	if err := r.minimise(w, start[:p.n]); err != nil || r.locals == nil {
		return err
	}
	if p.records = r.records(); p.records == nil {
		return nil
	}
	r.startFrom(start[:], z0, lo, hi)
	return r.minimise(w, start[:p.n])
}

// minimise solves the problem in w from start and keeps the solution.
func (r *Result) minimise(w *workspace, start []float64) error {
	p := &w.problem
	sol := w.solver.Solve(p, start)
	r.Iterations, r.Converged = sol.Iterations, sol.Status.Err() == nil
	if err := sol.Status.Err(); err != nil {
		return err
	}
	condition, err := w.solver.Covariance(w.cov[:p.n*p.n])
	r.ConditionNumber = condition
	if err != nil {
		return err
	}
	r.DegreesOfFreedom = len(p.obs) + len(p.records) - p.n
	r.VarianceFactor = sol.Sum / float64(r.DegreesOfFreedom)
	r.n, r.columns = p.n, p.columns
	c := p.curve(sol.Theta)
	if r.locals != nil {
		c.Cusps = slices.Clone(c.Cusps)
		r.keep(p.columns, sol.Theta)
	}
	r.refer(c, p.z0, w.cov[:p.n*p.n])
	return nil
}

// startFrom is the parameter vector of the present curve over the base from lo to hi.
func (r *Result) startFrom(theta []float64, z0, lo, hi float64) {
	theta[0], theta[1], theta[2] = r.Curve.Z(lo)-z0, r.Curve.Z(hi)-z0, r.Curve.Curvature
	for i, l := range r.locals {
		if c := r.columns[i]; c.kink > 0 {
			theta[c.kink] = l.kink
			if c.place > 0 {
				theta[c.place] = l.station
			}
		}
	}
}

// prepareLoads sets the local loads of the problem and a first guess.
func (r *Result) prepareLoads(p *curveProblem, start []float64) error {
	var err error
	p.loads = r.locals
	if p.columns, p.n, err = layout(r.locals); err != nil {
		return err
	}
	if len(p.obs) <= p.n {
		return fmt.Errorf("fit: %d points; a curve with these local loads needs %d and one more to check it", len(p.obs), p.n)
	}
	return p.startLoaded(start[:p.n])
}

// refer moves the defining heights of the curve to the chord ends and carries the covariance along.
func (r *Result) refer(c Curve, z0 float64, cov []float64) {
	e := c.evaluatorBy(r.columns)
	var ga, gb gradient
	e.at(r.A.Station, &ga)
	e.at(r.B.Station, &gb)
	n := r.n
	if cap(r.Full) < n*n {
		r.Full = make([]float64, n*n)
	}
	r.Full = r.Full[:n*n]
	// Full = T cov T^T, where T is the identity but for the first two rows.
	copy(r.Full, cov)
	for j := range n {
		var a, b float64
		for k := range n {
			a += ga[k] * cov[n*k+j]
			b += gb[k] * cov[n*k+j]
		}
		r.Full[j], r.Full[n+j] = a, b
	}
	for i := range n {
		var a, b float64
		for k, v := range r.Full[n*i : n*i+n] {
			a += ga[k] * v
			b += gb[k] * v
		}
		r.Full[n*i], r.Full[n*i+1] = a, b
	}
	for i := range 3 {
		copy(r.Cov[i][:], r.Full[n*i:n*i+3])
	}
	c = c.Rebase(r.A.Station, r.B.Station)
	c.Z1, c.Z2 = c.Z1+z0, c.Z2+z0
	r.Curve = c
}

// evaluator is that of the fitted curve with heights relative to z0 and derivatives by every parameter.
func (r *Result) evaluator(z0 float64) evaluator {
	c := r.Curve
	c.Z1, c.Z2 = c.Z1-z0, c.Z2-z0
	return c.evaluatorBy(r.columns)
}

// variance is that of a figure with the given gradient by all parameters.
func (r *Result) variance(g *gradient) float64 {
	sum := 0.0
	for i := range r.n {
		for j := range r.n {
			sum += g[i] * r.Full[i*r.n+j] * g[j]
		}
	}
	return max(sum, 0)
}

// scaleCovariance multiplies all covariances.
func (r *Result) scaleCovariance(factor float64) {
	for i := range r.Full {
		r.Full[i] *= factor
	}
	for i := range 3 {
		for j := range 3 {
			r.Cov[i][j] *= factor
		}
	}
}

// HeightU is the standard uncertainty of the fitted elevation at a station, m.
func (r *Result) HeightU(s float64) float64 {
	e := r.evaluator(0)
	var g gradient
	e.at(s, &g)
	return math.Sqrt(r.variance(&g))
}

// Hangs reports whether the curvature is known to be positive: above two standard uncertainties.
func (r *Result) Hangs() bool { return r.Curve.Curvature > 2*math.Sqrt(r.Cov[2][2]) }
