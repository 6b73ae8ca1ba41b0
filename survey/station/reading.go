package station

import "math"

// EarthRadius is the mean radius of the earth, m (IUGG 1980, rounded as surveyors do).
const EarthRadius = 6371e3

// Refraction is the coefficient of refraction k where none is given: common practice over land by day (Gauss).
const Refraction = 0.13

// Reading is one line of a field book: what the instrument showed towards one target on one face.
type Reading struct {
	Setup, Target  string
	FaceTwo        bool
	Horizontal     float64 // circle reading, rad
	Zenith         float64 // circle reading, rad; above pi on face II
	Slope          float64 // slope distance as read, m; 0 when no distance was read
	TargetHeight   float64 // of the target above the point, m
	PrismConstant  float64 // m, added to the slope distance
	Round          string  // "" when there is one
	InstrumentHigh float64 // tilting axis above the mark of the set-up, m
	Line           int     // of the file, for messages
}

// Instrument is the stated accuracy and the corrections of an instrument.
type Instrument struct {
	Angle      float64 // standard deviation of a direction and of a zenith angle read on both faces (ISO 17123-3), rad
	Distance   float64 // constant part of the standard deviation of a distance (ISO 17123-4), m
	DistancePM float64 // proportional part, m per m
	Centring   float64 // standard deviation of instrument over mark and of a prism over mark, in each of E, N and Z, m
	K          float64 // coefficient of refraction
	Scale      float64 // factor on horizontal distances; 0 = 1
	Met        float64 // proportional correction of distances, m per m
}

// distanceSigma is the standard deviation of a distance of d m.
func (in Instrument) distanceSigma(d float64) float64 { return in.Distance + in.DistancePM*d }

// scale is the factor on horizontal distances.
func (in Instrument) scale() float64 {
	if in.Scale == 0 {
		return 1
	}
	return in.Scale
}

// IndexError is half of what two zenith readings exceed a full circle by, rad: subtract it from a face I reading.
// Source: Deumlich and Staiger (2002), Instrumentenkunde der Vermessungstechnik.
func IndexError(one, two float64) float64 { return (one + two - 2*math.Pi) / 2 }

// Collimation is the horizontal collimation error, rad, of a pair at a zenith angle: half the difference of the faces times its sine.
func Collimation(one, two, zenith float64) float64 {
	return turn(one-two-math.Pi) / 2 * math.Sin(zenith)
}

// turn brings an angle into (-pi, pi].
func turn(a float64) float64 { return math.Remainder(a, 2*math.Pi) }

// Reduce is the horizontal distance and the difference in height from tilting axis to target, m, of a slope distance at a zenith angle:
//
//	hd = S sin z,  dh = S cos z + (1 - k) hd^2 / 2R
//
// Source: Ghilani and Wolf, Elementary Surveying, trigonometric levelling with curvature and refraction.
func Reduce(slope, zenith, k float64) (hd, dh float64) {
	hd = slope * math.Sin(zenith)
	return hd, slope*math.Cos(zenith) + (1-k)*hd*hd/(2*EarthRadius)
}
