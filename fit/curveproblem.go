package fit

import "math"

// curveProblem is the fit of one curve to points with errors in both coordinates: each residual is the distance of a point
// from the curve in units of its standard deviation across the curve, signed, at the foot point where that distance is
// least (orthogonal distance regression: Boggs, Byrd and Schnabel 1987, SIAM J. Sci. Stat. Comput. 8, 1052-1078). With
// errors in height alone it is vertical least squares. Heights are held relative to z0 so that none of their digits are lost.
//
// Parameters are the heights at both ends of the base, the curvature, and then the free sizes and places of local loads.
type curveProblem struct {
	obs  []Observation
	base Curve // stations and shape; heights and curvature come from theta
	z0   float64

	loads   []local
	columns []column
	n       int // number of parameters
	cusps   []Cusp
	records []record
	e       evaluator
}

func (p *curveProblem) Size() (m, n int) { return len(p.obs) + len(p.records), p.n }

func (p *curveProblem) curve(theta []float64) Curve {
	c := p.base
	c.Z1, c.Z2, c.Curvature = theta[0], theta[1], theta[2]
	if p.loads != nil {
		p.cusps = cuspsOf(p.loads, p.columns, theta, p.cusps)
		c.Cusps = p.cusps
	}
	return c
}

// foot is the point of the curve nearest to the observation in the metric of its covariance: its distance in standard
// deviations and the standard deviation across the curve there; g gets the gradient of the height at the foot.
func (e *evaluator) foot(o *Observation, z0 float64, g *gradient) (r, sigma float64) {
	dz := o.Z - z0
	if e.loads != nil { // the foot is sought on the part that holds the point: at a cusp there is no tangent
		e.hold = e.loads.pieceAt(o.S)
	}
	if o.VarS == 0 {
		z, _, _ := e.at(o.S, g)
		e.hold = -1
		sigma = math.Sqrt(o.VarZ)
		return (dz - z) / sigma, sigma
	}
	// Stationarity along the curve: (1, f') W d = 0 with W the inverse covariance and d = (S - t, Z - f(t)). Newton's method
	// where the distance is convex along the curve, else, for a point beyond the centre of curvature, a Gauss-Newton step,
	// which goes down as well; a step that lengthens the distance is halved.
	t, step := o.S, 0.0
	least := math.Inf(1)
	for range 50 {
		z, slope, bend := e.at(t, nil)
		ds, dh := o.S-t, dz-z
		ws, wz := o.VarZ*ds-o.CovSZ*dh, o.VarS*dh-o.CovSZ*ds // W d times the determinant of the covariance
		if far := ds*ws + dh*wz; far <= least*(1+1e-9) {
			least = far
			along := o.VarZ - 2*o.CovSZ*slope + o.VarS*slope*slope
			down := along - bend*wz
			if down < along/10 {
				down = along
			}
			step = (ws + slope*wz) / down
			t += step
		} else {
			step /= 2
			t -= step
		}
		if math.Abs(step) <= 1e-13*(math.Abs(t)+1) {
			break
		}
	}
	z, slope, _ := e.at(t, g)
	e.hold = -1
	sigma = math.Sqrt(o.VarZ - 2*o.CovSZ*slope + o.VarS*slope*slope)
	return (dz - z - slope*(o.S-t)) / sigma, sigma
}

// Evaluate: at the foot the derivative by the foot's own station vanishes, so that of the distance is exactly that of the
// height there over the standard deviation across the curve.
func (p *curveProblem) Evaluate(theta, r, j []float64) {
	e := &p.e
	e.set(p.curve(theta), p.columns)
	if j == nil {
		for i := range p.obs {
			r[i], _ = e.foot(&p.obs[i], p.z0, nil)
		}
		p.recordRows(theta, r, nil)
		return
	}
	m := len(p.obs) + len(p.records)
	var g gradient
	var sigma float64
	for i := range p.obs {
		r[i], sigma = e.foot(&p.obs[i], p.z0, &g)
		weight := -1 / sigma
		j[i], j[m+i], j[2*m+i] = weight*g[0], weight*g[1], weight*g[2]
		for k := 3; k < p.n; k++ {
			j[k*m+i] = weight * g[k]
		}
	}
	p.recordRows(theta, r, j)
}

// recordRows fills the rows of what is on record of the sizes of local loads; they stand after those of the points.
func (p *curveProblem) recordRows(theta, r, j []float64) {
	m, first := len(p.obs)+len(p.records), len(p.obs)
	for i, rec := range p.records {
		r[first+i] = rec.weight * (rec.ratio*theta[2] - theta[rec.kink])
		if j == nil {
			continue
		}
		for k := range p.n {
			j[k*m+first+i] = 0
		}
		j[2*m+first+i], j[rec.kink*m+first+i] = rec.weight*rec.ratio, -rec.weight
	}
}

// start fits a parabola by linear least squares; its curvature is that of the curve at the chord's slope.
func (p *curveProblem) start(theta []float64) {
	s1, l := p.base.S1, p.base.length()
	// Orthogonal moments of u in [-1, 1]: sums for the normal equations of 1, u, u^2.
	var n, a1, a2, a3, a4, b0, b1, b2 float64
	for _, o := range p.obs {
		u := 2*(o.S-s1)/l - 1
		z := o.Z - p.z0
		u2 := u * u
		n, a1, a2, a3, a4 = n+1, a1+u, a2+u2, a3+u2*u, a4+u2*u2
		b0, b1, b2 = b0+z, b1+z*u, b2+z*u2
	}
	// Gauss elimination of the 3 x 3 normal equations; the points have at least three stations.
	m1, m2, m0 := a1/n, a2/n, b0/n
	c11, c12, c22 := a2-a1*m1, a3-a1*m2, a4-a2*m2
	d1, d2 := b1-a1*m0, b2-a2*m0
	q := (d2 - c12/c11*d1) / (c22 - c12/c11*c12)
	t := (d1 - c12*q) / c11
	c := m0 - m1*t - m2*q
	theta[0], theta[1] = c-t+q, c+t+q
	theta[2] = p.base.curvatureOf(8*q/(l*l), (theta[1]-theta[0])/l)
}

// deep is the curvature times length above which the slope varies so much that a start from the slope of the chord is too
// far off: a sag of about a tenth of the length.
const deep = 0.7

// curvatureOf is the curvature of the curve over the base whose least-squares parabola has second derivative second, for a
// chord of slope t. Evenly spread points weigh the second derivative of a curve by (1 - u^2)^2, u in [-1, 1] along the
// base; for a nearly straight curve it is that at the slope of the chord. The slopes of a deep curve of any shape are taken
// from the catenary, which is near enough to start from.
func (c Curve) curvatureOf(second, t float64) float64 {
	half := c.length() / 2
	high := second / c.bend(t)
	if math.Abs(high)*half*2 < deep || c.SelfShare == 0 {
		return high
	}
	mean := func(k float64) float64 {
		s := sinhc(k * half)
		psi := math.Asinh(t / s)
		sum := 0.0
		for _, n := range [...]struct{ u, w float64 }{{-0.8, 0.1296}, {-0.4, 0.7056}, {0, 1}, {0.4, 0.7056}, {0.8, 0.1296}} {
			sum += n.w / 2.6704 * c.bend(math.Sinh(k*half*n.u+psi))
		}
		return sum
	}
	low := 0.0
	for range 12 {
		if mid := (low + high) / 2; math.Abs(mid*mean(mid)) < math.Abs(second) {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}
