package fit

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// swingChance is how improbable the plan of the points must be for a cable that hangs straight down before its plane is tilted.
const swingChance = 0.001

// Swing is what the plan of the points says of a cable blown or pulled out of the vertical plane: it then hangs in a plane
// through the chord along the resultant load, and the depth of every point below the chord shows in plan as depth times the tangent
// of the angle.
type Swing struct {
	Angle   float64 // rad, positive to the left of A -> B
	U       float64 // standard uncertainty, rad
	Chance  float64 // of so large an angle for a cable that hangs straight down
	Taken   bool    // Chance is below one in a thousand: the curve was fitted in the tilted plane
	Scatter float64 // root mean square across the plane, tilted or not, m
	Gusty   bool    // the points scatter more across the plane than their accuracy, or their scatter in height, allows: they were not taken in one position
}

// swing estimates the angle by weighted least squares of the offsets across the vertical plane on a straight line and the depth of
// the fitted curve. The straight line takes up a plane that was laid a little off. Nil without offsets or with fewer than five points.
func (r *Result) swing() (s *Swing, offset, turn float64) {
	n := len(r.Observations)
	a, b, w := mat.NewDense(n, 3, nil), mat.NewVecDense(n, nil), 0.0
	flat := true
	for i, o := range r.Observations {
		w = 1.0
		if r.APriori && o.varA > 0 {
			w = 1 / math.Sqrt(o.varA)
		}
		flat = flat && o.Across == 0
		a.SetRow(i, []float64{w, w * o.S, w * r.Curve.Sag(o.S, r.A.Station, r.B.Station)})
		b.SetVec(i, w*o.Across)
	}
	if flat || n < 5 {
		return nil, 0, 0
	}
	var qr mat.QR
	qr.Factorize(a)
	var x mat.VecDense
	if qr.Cond() > conditionLimit || qr.SolveVecTo(&x, false, b) != nil {
		return nil, 0, 0
	}
	var left, rt, cov mat.Dense
	left.Mul(a, &x)
	sum := 0.0
	for i := range n {
		d := left.At(i, 0) - b.AtVec(i)
		sum += d * d
	}
	rt.Mul(a.T(), a)
	if cov.Inverse(&rt) != nil {
		return nil, 0, 0
	}
	f := float64(n - 3)
	tan, u := x.AtVec(2), math.Sqrt(cov.At(2, 2))
	chi := distuv.ChiSquared{K: f}
	s = &Swing{Angle: math.Atan(tan)}
	stated := r.APriori && r.Observations[0].varA > 0
	test := SingleTest{W: tan / u, Dof: math.Inf(1)}
	switch {
	case !stated:
		s.Gusty = sum/f > 9*r.RMS*r.RMS
	case sum/f > chi.Quantile(0.975)/f:
		s.Gusty = chi.Survival(sum) < swingChance
	}
	if !stated || sum/f > chi.Quantile(0.975)/f {
		u *= math.Sqrt(sum / f)
		test = SingleTest{W: tan / u, Dof: f}
	}
	u *= r.Widening // neighbours that err alike in height do so in plan
	test.W /= r.Widening
	// The depth below the chord is as uncertain as the curvature, and the tangent is offset over depth.
	u = math.Hypot(u, tan*math.Sqrt(r.Cov[2][2])/r.Curve.Curvature)
	s.U = u / (1 + tan*tan)
	s.Chance = test.p()
	s.Taken = s.Chance < swingChance
	return s, x.AtVec(0), x.AtVec(1)
}

// tilted is the plane through the chord, turned by the swing, with axes along and up in it. P are coordinates from the end A of
// the chord: along and across the first plane, and up.
type tilted struct {
	along, up, across [3]float64
	a                 [3]float64 // the end A of the chord in the first plane
	length            float64    // of the chord along the axis, m
}

// tilt lays the plane; offset and turn are the straight line in plan that the chord follows.
func (r *Result) tilt(angle, offset, turn float64) tilted {
	sin, cos := math.Sincos(angle)
	norm := math.Hypot(1, turn)
	run := (r.B.Station - r.A.Station) * norm
	rise := r.Curve.Z(r.B.Station) - r.Curve.Z(r.A.Station)
	// In axes along the chord in plan (1, turn)/norm, across it to the left, and up.
	length := math.Hypot(run, rise*sin)
	along := [3]float64{run / length, rise * sin * cos / length, rise * sin * sin / length}
	up := [3]float64{0, -sin, cos}
	across := [3]float64{up[1]*along[2] - up[2]*along[1], up[2]*along[0] - up[0]*along[2], up[0]*along[1] - up[1]*along[0]}
	back := func(v [3]float64) [3]float64 {
		return [3]float64{(v[0] - turn*v[1]) / norm, (turn*v[0] + v[1]) / norm, v[2]}
	}
	return tilted{back(along), back(up), back(across), [3]float64{r.A.Station, offset + turn*r.A.Station, r.Curve.Z(r.A.Station)}, length}
}

// place is an observation in the tilted plane; heights count up the plane from the elevation of the end A.
func (t tilted) place(o Observation) Observation {
	p := [3]float64{o.S - t.a[0], o.Across - t.a[1], o.Z - t.a[2]}
	cov := [3][3]float64{{o.VarS, o.covSA, o.CovSZ}, {o.covSA, o.varA, o.covAZ}, {o.CovSZ, o.covAZ, o.VarZ}}
	form := func(x, y [3]float64) (sum float64) {
		for i := range 3 {
			for j := range 3 {
				sum += x[i] * cov[i][j] * y[j]
			}
		}
		return sum
	}
	dot := func(x [3]float64) float64 { return x[0]*p[0] + x[1]*p[1] + x[2]*p[2] }
	q := o
	q.S, q.Z, q.Across = dot(t.along), t.a[2]+dot(t.up), dot(t.across)
	q.VarS, q.CovSZ, q.VarZ = form(t.along, t.along), form(t.along, t.up), form(t.up, t.up)
	q.varA, q.covSA, q.covAZ = form(t.across, t.across), form(t.along, t.across), form(t.across, t.up)
	return q
}

// inSwing fits again in the tilted plane when the plan of the points asks for it, and says what it found either way. obs are all
// observations in the vertical plane, those too that r dropped.
func (r *Result) inSwing(obs []Observation, o Options) (*Result, error) {
	if o.NoSwing {
		return r, nil
	}
	s, offset, turn := r.swing()
	if s == nil {
		return r, nil
	}
	if s.Taken {
		t := r.tilt(s.Angle, offset, turn)
		moved := make([]Observation, len(obs))
		for i := range obs {
			moved[i] = t.place(obs[i])
		}
		frame := r.Frame
		sin, cos := math.Sincos(frame.Azimuth)
		frame.shift(r.A.Station, sin, cos)
		frame.E0, frame.N0 = frame.E0-t.a[1]*cos, frame.N0+t.a[1]*sin
		frame.Azimuth = math.Mod(frame.Azimuth-math.Atan(turn)+2*math.Pi, 2*math.Pi)
		frame.Tilt, frame.UTilt, frame.level, frame.along, frame.across = s.Angle, s.U, t.a[2], t.along[2], (t.along[1]-turn*t.along[0])/math.Hypot(1, turn)
		a, b := r.A, r.B
		mark := func(e *End) {
			e.MarkZ = t.place(Observation{S: e.Station, Z: e.MarkZ}).Z
		}
		mark(&a)
		mark(&b)
		a.Station, b.Station = 0, t.length
		again, err := InPlane(moved, frame, a, b, o)
		if err != nil {
			return nil, err
		}
		r = again
	}
	s.Scatter = r.AcrossRMS
	r.Swing = s
	return r, nil
}

// Elevation is the true elevation, m, of a point given by station and height in the plane of the frame; the two differ when the plane is
// tilted.
func (f Frame) Elevation(station, height float64) float64 {
	if f.Tilt == 0 {
		return height
	}
	return f.level + station*f.along + (height-f.level)*math.Cos(f.Tilt)
}

// Components turns a force along the plane's axes (N) into its part up and its part across to the left of A -> B.
func (f Frame) Components(along, up float64) (vertical, left float64) {
	sin, cos := math.Sincos(f.Tilt)
	return along*f.along + up*cos, along*f.across - up*sin
}
