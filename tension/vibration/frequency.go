package vibration

import (
	"errors"
	"fmt"
	"math"
)

// Ends says how the ends of a cable with bending stiffness are held.
type Ends string

// The two ways; without bending stiffness they are the same.
const (
	Pinned  Ends = "pinned"
	Clamped Ends = "clamped"
)

// ErrInput marks input for which there is no frequency; test with errors.Is.
var ErrInput = errors.New("vibration: impossible input")

// Cable is a cable along its chord. Irvine's theory for an inclined cable is that of a level one along the chord, with the load
// across the chord and the tension along it (Irvine 1981, Cable Structures, sec. 2.5 and 3.2).
type Cable struct {
	Length  float64 // of the chord between the supports, m, > 0
	Tension float64 // along the chord, H / cos(theta), N, > 0
	Mass    float64 // of all that swings with the cable, kg per metre of chord, > 0
	Lambda2 float64 // Irvine's parameter on the chord, dimensionless, >= 0; +Inf for an inextensible cable
	Bending float64 // EI, N m2, >= 0
	Ends    Ends    // "" = Pinned
}

// Mode names one natural mode by the half waves that the taut string has in it: an odd number is symmetric about mid-span, an
// even one antisymmetric. A sagging cable keeps the number: mode 1 is the first symmetric one even where it has become
// faster than mode 2 (lambda squared above 4 pi^2).
type Mode struct {
	Number   int  // from 1
	Sideways bool // out of the plane of the cable
}

// String is for example "in-plane mode 2".
func (m Mode) String() string {
	if m.Sideways {
		return fmt.Sprintf("sideways mode %d", m.Number)
	}
	return fmt.Sprintf("in-plane mode %d", m.Number)
}

// Frequency is the natural frequency of a mode, Hz. Sideways and antisymmetric modes are those of a string; symmetric ones in the plane are
// the roots of Irvine and Caughey (1974), Proc. R. Soc. A 341, 299-315. Bending stiffness with pinned ends is exact within that theory
// (f_n = n f_0 sqrt(1 + B n^2), Fletcher 1964, J. Acoust. Soc. Am. 36, 203; for symmetric modes the same in the secular equation), with
// clamped ends it is the expansion 1 + 2/q + (4 + n^2 pi^2/2)/q^2, q = L sqrt(T/EI) (Morse and Ingard 1968, Theoretical
// Acoustics), times the root of the sagging cable as in Mehrabi and Tabatabai (1998), J. Struct. Eng. 124, 1313-1322; it asks for q >= 10 n.
// The theory is of small sag: against finite elements see testdata/finite-element.csv. The error wraps ErrInput.
func (c Cable) Frequency(m Mode) (float64, error) {
	if err := c.check(m); err != nil {
		return 0, err
	}
	n := float64(m.Number)
	f0 := math.Sqrt(c.Tension/c.Mass) / (2 * c.Length)
	b := math.Pi * math.Pi * c.Bending / (c.Tension * c.Length * c.Length)
	ratio := n
	if m.Number%2 == 1 && !m.Sideways && c.Lambda2 > 0 {
		if c.Ends == Clamped {
			b = 0
		}
		ratio = SymmetricRoot(c.Lambda2, b, (m.Number+1)/2)
	} else if c.Ends != Clamped {
		ratio *= math.Sqrt(1 + b*n*n)
	}
	if c.Ends == Clamped && c.Bending > 0 {
		q := c.Length * math.Sqrt(c.Tension/c.Bending)
		if q < 10*n {
			return 0, fmt.Errorf("%w: bending stiffness %.4g N m2 makes a beam of this cable: q = L sqrt(T/EI) = %.3g, mode %d needs at least %g", ErrInput, c.Bending, q, m.Number, 10*n)
		}
		ratio *= 1 + 2/q + (4+n*n*math.Pi*math.Pi/2)/(q*q)
	}
	return ratio * f0, nil
}

func (c Cable) check(m Mode) error {
	finite := func(v float64) bool { return v > 0 && !math.IsInf(v, 0) }
	switch {
	case m.Number < 1 || m.Number > 100:
		return fmt.Errorf("%w: mode %d, expected 1 to 100", ErrInput, m.Number)
	case !finite(c.Length) || !finite(c.Tension) || !finite(c.Mass):
		return fmt.Errorf("%w: length %g m, tension %g N, mass %g kg/m", ErrInput, c.Length, c.Tension, c.Mass)
	case !(c.Lambda2 >= 0):
		return fmt.Errorf("%w: lambda squared %g", ErrInput, c.Lambda2)
	case !(c.Bending >= 0) || math.IsInf(c.Bending, 0):
		return fmt.Errorf("%w: bending stiffness %g N m2", ErrInput, c.Bending)
	case c.Ends != "" && c.Ends != Pinned && c.Ends != Clamped:
		return fmt.Errorf("%w: ends %q", ErrInput, c.Ends)
	}
	return nil
}
