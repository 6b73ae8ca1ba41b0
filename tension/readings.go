package tension

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"tautbook/fit"
	"tautbook/survey"
	"tautbook/tension/vibration"
)

// readInput is one reading among the inputs.
type readInput struct {
	survey.Reading
	name                string  // what was read and by what, told from the others
	at, lifted, bending int     // places in the vector; 0 = none
	weight              float64 // share in the tension that all readings give together; 0 = says nothing of it
	h                   Quantity
	unused              string // why it could not be used; "" = it was
}

// Acceleration of gravity, by which a load has a mass: it lies between 9.780 and 9.832 m/s2 on the ground (WGS 84), taken as even
// between these (JCGM 100:2008, 4.3.7).
const (
	gravity  = 9.80665
	uGravity = 0.015
)

// read adds the readings of the span behind all other inputs. A frequency without a bending stiffness takes the one on file.
func (in *inputs) read(readings []survey.Reading, d *survey.Design) {
	add := func(q Quantity, name string, scale Scale) int {
		at := len(in.x)
		in.x, in.have = append(in.x, 0), append(in.have, false)
		in.set(at, &q, name, scale)
		return at
	}
	bending := map[Quantity]int{} // several frequencies of one cable share its stiffness
	for _, r := range readings {
		if r.Of == survey.NaturalFrequency && r.Bending.Value == 0 && d != nil && d.BendingStiffness != nil {
			r.Bending = *d.BendingStiffness
		}
		i := readInput{Reading: r, name: in.readingName(r)}
		i.at = add(in.withModel(r), pieceReading+i.name, Piece{Unit: r.Unit(), Given: r.Value}.Scale())
		if r.Lifted.Value > 0 {
			i.lifted = add(r.Lifted, "lift of the anchor", Millimetre)
		}
		if r.Bending.Value > 0 {
			if bending[r.Bending] == 0 {
				bending[r.Bending] = add(r.Bending, "bending stiffness", Scale{"kN m²", 1e3})
			}
			i.bending = bending[r.Bending]
		}
		if in.gravity == 0 && (r.Of == survey.NaturalFrequency || r.Of == survey.WaveReturn) {
			in.gravity = add(Quantity{Value: gravity, U: uGravity}, "gravity", Scale{"m/s²", 1})
		}
		in.readings = append(in.readings, i)
	}
}

// withModel is the value with the error of the small-sag theory added for frequencies and waves: up to 5.2 (sag / chord)^2 against finite
// elements (vibration/testdata/finite-element.csv), taken as even on both sides.
func (in *inputs) withModel(r survey.Reading) Quantity {
	q := r.Value
	if r.Of == survey.NaturalFrequency || r.Of == survey.WaveReturn {
		a, b := in.x[inStationA], in.x[inStationB]
		sag := in.curve.Sag((a+b)/2, a, b) / (b - a)
		q.U = math.Hypot(q.U, 5.2/math.Sqrt(3)*sag*sag*q.Value)
	}
	return q
}

// readingName is what was read and by what; a second reading of that name is numbered.
func (in *inputs) readingName(r survey.Reading) string {
	name := r.What()
	if r.How != "" {
		name += ", " + r.How
	}
	same := 1
	for _, other := range in.readings {
		if other.name == name || strings.HasPrefix(other.name, name+" (") {
			same++
		}
	}
	if same > 1 {
		name += fmt.Sprintf(" (%d)", same)
	}
	return name
}

// sight is the measured curve for one value of the inputs, against which readings are held. With it the load follows from the
// horizontal tension: load = H x curvature.
type sight struct {
	in   *inputs
	x    []float64
	c    fit.Curve
	load carried
	ch   Chord
	far  string // why there is no chord between supports; "" = there is
	per  float64
}

func (in *inputs) sight(x []float64) sight {
	s := sight{in: in, x: x, load: in.load(x)}
	s.c = in.curveAt(x, s.load)
	s.per = s.c.ArcLength(x[inStationA], x[inStationB]) / (x[inStationB] - x[inStationA])
	s.ch, s.far = in.chordToday(x, s.c)
	return s
}

// curveAt is the measured curve for one value of the inputs.
func (in *inputs) curveAt(x []float64, load carried) fit.Curve {
	c := in.curve
	c.Z1, c.Z2, c.Curvature = x[inZA], x[inZB], x[inCurvature]
	c.S1, c.S2 = in.x[inStationA], in.x[inStationB] // the curve stays where it was measured when a support station moves
	c.Cusps = in.cusps(x, load)
	return c
}

var errNoReading = errors.New("tension: the reading cannot be used")

// predicted is what a reading would show under horizontal tension h, in its SI unit.
func (s sight) predicted(r *readInput, h float64) (float64, error) {
	switch r.Of {
	case survey.NaturalFrequency, survey.WaveReturn:
		return s.swinging(r, h)
	case survey.SagAtMidSpan:
		a, b := s.x[inStationA], s.x[inStationB]
		if s.far != "" || !s.in.frame.surveyed {
			return 0, fmt.Errorf("%w: the sag of the whole span needs both supports surveyed", errNoReading)
		}
		return s.c.Sag((a+b)/2, a, b), nil
	case survey.TangentAtB:
		return s.sighted(r.Below)
	}
	t := h * s.endFactor(r.Of)
	if r.lifted == 0 {
		return t, nil
	}
	k, err := s.anchorStiffness(h)
	return t + k*s.x[r.lifted], err
}

// sighted is how far below support B a line meets it that starts a length below support A and touches the cable, m. For a parabola
// sqrt(a) + sqrt(b) = 2 sqrt(sag) (IEEE Std 524, transit methods; from memory); here it is the tangent of the measured curve.
func (s sight) sighted(below float64) (float64, error) {
	a, b := s.x[inStationA], s.x[inStationB]
	switch {
	case s.far != "" || !s.in.frame.surveyed:
		return 0, fmt.Errorf("%w: a line of sight needs both supports surveyed", errNoReading)
	case len(s.in.local) > 0 || s.in.have[inTilt]:
		return 0, fmt.Errorf("%w: a line of sight touches a cable with kinks or wind elsewhere", errNoReading)
	}
	from := s.c.Z(a) - below
	lo, hi := a, b
	under := func(at float64) bool { return s.c.Z(at)+s.c.Slope(at)*(a-at) > from } // the tangent there passes A above the start
	if under(b) {
		return 0, fmt.Errorf("%w: a line from %.3g m below A does not touch the cable in the span", errNoReading, below)
	}
	for range 60 {
		if mid := (lo + hi) / 2; under(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	at := (lo + hi) / 2
	return s.c.Z(b) - s.c.Z(at) - s.c.Slope(at)*(b-at), nil
}

// endFactor is the tension that a force reading is of over the horizontal one.
func (s sight) endFactor(of survey.ReadOf) float64 {
	switch of {
	case survey.TensionAtA, survey.LiftOffAtA:
		return math.Hypot(1, s.c.Slope(s.x[inStationA]))
	case survey.TensionAtB, survey.LiftOffAtB:
		return math.Hypot(1, s.c.Slope(s.x[inStationB]))
	}
	return 1
}

// anchorStiffness is the force per metre by which the tension grows while the anchor is drawn off its seat.
func (s sight) anchorStiffness(h float64) (float64, error) {
	if !s.in.have[inAxial] || s.far != "" {
		return 0, fmt.Errorf("%w: a lift-off at a lifted anchor needs axial_stiffness and the whole span", errNoReading)
	}
	c := s.along(h)
	return EquivalentStiffness(s.x[inAxial], c.across*c.size/s.ch.Length, s.ch.Length, c.pull) / c.size, nil
}

// EquivalentStiffness is the axial stiffness, N, of a sagging cable along its chord, EA / (1 + (w l)^2 EA / (12 T^3)): axial EA in N, weight
// w in N per metre of horizontal, span l in m horizontal, tension T along the chord in N (Ernst 1965, Bauingenieur 40, 52-55; EN
// 1993-1-11:2006, 5.4.2).
func EquivalentStiffness(axial, weight, span, tension float64) float64 {
	return axial / (1 + weight*weight*span*span*axial/(12*tension*tension*tension))
}

// chordwise is the cable along its chord under one horizontal tension: Irvine (1981), sec. 2.5.
type chordwise struct{ size, pull, across, hang float64 } // m, N, N per metre of chord across it, N per metre of chord

func (s sight) along(h float64) chordwise {
	size := math.Hypot(s.ch.Length, s.ch.Rise)
	cos := s.ch.Length / size
	load := h * s.x[inCurvature]
	self, deck := load*s.c.SelfShare, load*(1-s.c.SelfShare)*cos
	return chordwise{size: size, pull: h / cos, across: (self + deck) * cos, hang: self + deck}
}

// swinging is the frequency or the return time under horizontal tension h. All load is taken to swing with the cable.
func (s sight) swinging(r *readInput, h float64) (float64, error) {
	switch {
	case s.far != "":
		return 0, fmt.Errorf("%w: %s", errNoReading, s.far)
	case len(s.in.local) > 0:
		return 0, fmt.Errorf("%w: with a load at one place the frequencies are others", errNoReading)
	case !(h > 0) || !(s.x[inCurvature] > 0):
		return 0, fmt.Errorf("%w: the curve is too flat", errNoReading)
	}
	c := s.along(h)
	mass := c.hang / s.x[s.in.gravity]
	if s.in.have[inTilt] {
		mass *= math.Cos(s.x[inTilt]) // wind swings the plane but has no mass
	}
	v := vibration.Cable{Length: c.size, Tension: c.pull, Mass: mass}
	if r.Of == survey.WaveReturn {
		return v.ReturnTime(r.Returns)
	}
	if r.bending > 0 {
		v.Bending = s.x[r.bending]
	}
	if r.Clamped {
		v.Ends = vibration.Clamped
	}
	if r.Mode%2 == 1 && !r.Sideways {
		if !s.in.have[inAxial] {
			return 0, fmt.Errorf("%w: a symmetric mode needs axial_stiffness", errNoReading)
		}
		bow := c.across * c.size / c.pull
		v.Lambda2 = bow * bow * s.x[inAxial] / (c.pull * (1 + bow*bow/8))
	}
	return v.Frequency(vibration.Mode{Number: r.Mode, Sideways: r.Sideways})
}

// implied is the horizontal tension at which a reading shows what it shows, NaN when there is none near; near is a first guess. Secant
// steps on the logarithm of the tension.
func (s sight) implied(r *readInput, near float64) float64 {
	miss := func(ln float64) (float64, bool) {
		p, err := s.predicted(r, math.Exp(ln))
		return math.Log(p / s.x[r.at]), err == nil && p > 0
	}
	a := math.Log(near)
	b := a + 0.01
	fa, ok := miss(a)
	fb, ok2 := miss(b)
	if !ok || !ok2 {
		return math.NaN()
	}
	for range 40 {
		slope := (fb - fa) / (b - a)
		if math.Abs(slope) < 1e-6 {
			return math.NaN() // the reading does not depend on the tension
		}
		step := math.Max(-0.7, math.Min(0.7, -fb/slope))
		if math.Abs(b+step-math.Log(near)) > 5 {
			return math.NaN()
		}
		a, fa, b = b, fb, b+step
		if fb, ok = miss(b); !ok {
			return math.NaN()
		}
		if math.Abs(step) < 1e-13 || fb == fa {
			return math.Exp(b)
		}
	}
	return math.NaN()
}
