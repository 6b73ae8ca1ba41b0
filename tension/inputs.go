package tension

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/fit"
	"tautbook/survey"
)

// The numbers that an assessment rests on, as places in one vector, so that an input that enters the measured and the
// expected tension moves both at once when its uncertainty is propagated. Listed loads follow after inFixed.
const (
	inZA          = iota // elevation of the fitted curve at the chord ends, m
	inZB                 //
	inCurvature          // 1/m
	inStationA           // station of the chord ends, m
	inStationB           //
	inSelfWeight         // filed, N/m
	inDeckLoad           //
	inTemperature        // of the cable on the day, degC
	inAxial              // EA, N
	inExpansion          // 1/degC
	inTension            // design horizontal tension, N
	inSag                // design sag, m
	inSpan               // design span, m
	inRise               // design rise, m
	inDesignTemp         // degC
	inBreaking           // MBL, N
	inReading            // tension read directly on the day, N
	inTilt               // swing of the plane on the day, rad
	inFixed
)

// inputs are the estimates, their uncertainties and which of them exist.
type inputs struct {
	x       []float64
	have    []bool
	sources []source
	listed  []survey.ListedLoad // those that concern this span
	local   []localInput        // loads that hang at one place
	plane   fit.Frame
	readOf  survey.ReadOf // what inReading is of
	curve   fit.Curve     // shape family and share; its numbers are overwritten from x
	frame   spanFrame
	filed   *State  // the designer's cable at the estimates, for draws and moves that leave its inputs alone; nil = none
	near    outputs // figures at the estimates: first guesses for the states nearby; zero = none
	few     float64 // factor on u of the survey for an accuracy estimated from few residuals; 1 = none
}

// spanFrame says which chord the states use.
type spanFrame struct {
	surveyed bool // both supports surveyed: today's chord is measured
}

// source is one origin of uncertainty: a set of directions in input space, each one standard deviation long.
type source struct {
	name       string
	value, u   string
	directions [][]step
	survey     bool // the shape of the cable
}

// step is a move of one input.
type step struct {
	at int
	by float64
}

func (in *inputs) set(at int, q *Quantity, name string, scale Scale) {
	if q == nil {
		return
	}
	in.x[at], in.have[at] = q.Value, true
	if q.U > 0 {
		in.sources = append(in.sources, source{name: name, value: scale.Value(*q), u: scale.About(q.U),
			directions: [][]step{{{at, q.U}}}})
	}
}

// read adds the direct reading of the span, if there is one.
func (in *inputs) read(r *survey.Reading) {
	if r != nil {
		in.readOf = r.Of
		in.set(inReading, &r.Value, "direct reading: "+orUnnamed(r.How), ForceScale(r.Value.Value))
	}
}

// uncertain reports whether an input has an uncertainty.
func (in *inputs) uncertain(at int) bool {
	for _, s := range in.sources {
		for _, d := range s.directions {
			if d[0].at == at {
				return true
			}
		}
	}
	return false
}

// gather lays out the vector for one span.
func gather(r *fit.Result, d *survey.Design, temperature *Quantity, listed []survey.ListedLoad, told []survey.LocalLoad) *inputs {
	local, n, shape := layLocal(r, told, inFixed+len(listed))
	in := &inputs{local: local, x: make([]float64, n), have: make([]bool, n), listed: listed, curve: r.Curve, few: 1}
	in.frame.surveyed = r.A.Surveyed && r.B.Surveyed
	if !r.APriori || r.ScaledBy != 1 {
		// Student's t with few degrees of freedom has longer tails than k = 2 covers: u is widened so that 2 u covers 95.45 %
		// all the same (JCGM 100:2008, G.3; the same idea as JCGM 101:2008, 6.4.9.4).
		in.few = distuv.StudentsT{Sigma: 1, Nu: float64(r.DegreesOfFreedom)}.Quantile(distuv.UnitNormal.CDF(2)) / 2
	}
	in.x[inZA], in.x[inZB], in.x[inCurvature] = r.Curve.Z1, r.Curve.Z2, r.Curve.Curvature
	in.x[inStationA], in.x[inStationB] = r.A.Station, r.B.Station
	for i := range inSelfWeight {
		in.have[i] = true
	}
	in.sources = append(in.sources, source{name: "shape of the cable (survey)",
		value: fmt.Sprintf("%d points", len(r.Observations)), u: "rms " + Millimetre.About(r.RMS),
		directions: cholesky(r.Full, shape, in.few), survey: true})
	in.ends(r)
	in.swing(r)
	in.set(inTemperature, temperature, "cable temperature on the day", DegreeCelsius)
	if d == nil {
		return in
	}
	if d.Load != survey.LoadDeck {
		in.set(inSelfWeight, d.SelfWeight, "self weight on file", NewtonPerMetre)
	}
	if d.Load != survey.LoadSelfWeight {
		in.set(inDeckLoad, d.DeckLoad, "deck load on file", NewtonPerMetre)
	}
	in.set(inAxial, d.AxialStiffness, "axial stiffness", Meganewton)
	in.set(inExpansion, d.Expansion, "expansion", Scale{"ppm/°C", 1e-6})
	if d.Tension != nil {
		in.set(inTension, d.Tension, "design tension", ForceScale(d.Tension.Value))
	} else {
		in.set(inSag, d.Sag, "design sag", Metre)
	}
	in.set(inSpan, d.SpanLength, "design span", Metre)
	in.set(inRise, d.Rise, "design rise", Metre)
	in.set(inDesignTemp, d.Temperature, "design temperature", DegreeCelsius)
	in.set(inBreaking, d.BreakingLoad, "breaking load", Kilonewton)
	for i, l := range listed {
		load := l.Load
		in.set(inFixed+i, &load, "load seen: "+l.What, NewtonPerMetre)
	}
	in.setLocal(r)
	return in
}

// swing adds the angle of a swung plane.
func (in *inputs) swing(r *fit.Result) {
	in.plane = r.Frame
	if r.Frame.Tilt == 0 {
		return
	}
	in.x[inTilt], in.have[inTilt] = r.Frame.Tilt, true
	deg := Quantity{Value: r.Frame.Tilt * 180 / math.Pi, U: r.Frame.UTilt * 180 / math.Pi}
	in.sources = append(in.sources, source{name: "swing angle (survey)", value: Degree.Value(deg), u: Degree.About(deg.U), directions: [][]step{{{inTilt, r.Frame.UTilt}}}})
}

// ends adds the uncertainty of the surveyed supports.
func (in *inputs) ends(r *fit.Result) {
	u := math.Hypot(r.A.UStation, r.B.UStation)
	s := source{name: "supports (survey)", value: Metre.Value(Quantity{Value: r.B.Station - r.A.Station, U: u}), u: Millimetre.About(u)}
	if r.A.Surveyed && r.A.UStation > 0 {
		s.directions = append(s.directions, []step{{inStationA, r.A.UStation}})
	}
	if r.B.Surveyed && r.B.UStation > 0 {
		s.directions = append(s.directions, []step{{inStationB, r.B.UStation}})
	}
	if len(s.directions) > 0 {
		in.sources = append(in.sources, s)
	}
}

// cholesky splits the covariance c (row by row) of what the survey determines, standing at the given places of the vector, into
// independent moves, each a factor times one sigma.
func cholesky(c []float64, at []int, factor float64) [][]step {
	n := len(at)
	l := make([]float64, n*n)
	for i := range n {
		for j := range i + 1 {
			sum := c[i*n+j]
			for k := range j {
				sum -= l[i*n+k] * l[j*n+k]
			}
			switch {
			case i == j:
				l[i*n+i] = math.Sqrt(math.Max(sum, 0))
			case l[j*n+j] > 0:
				l[i*n+j] = sum / l[j*n+j]
			}
		}
	}
	var out [][]step
	for j := range n {
		var d []step
		for i := j; i < n; i++ {
			if l[i*n+j] != 0 {
				d = append(d, step{at[i], factor * l[i*n+j]})
			}
		}
		if d != nil {
			out = append(out, d)
		}
	}
	return out
}
