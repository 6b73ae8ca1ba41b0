package station

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// Sight is all that one set-up saw of one target, averaged.
type Sight struct {
	Setup, Target      string
	Horizontal, Zenith float64 // means, free of collimation and index error, rad
	Slope              float64 // mean, with prism constant and atmosphere, m; 0 when no distance was read
	TargetHeight       float64 // m
	InstrumentHigh     float64 // m
	SigmaHorizontal    float64 // rad
	SigmaZenith        float64 // rad
	SigmaSlope         float64 // m
	Pairs, Singles     int     // rounds read on both faces, and on one
	Line               int     // of its first reading
}

// Faces is what the pairs of readings on both faces say about the instrument.
type Faces struct {
	Pairs, Singles       int     // over all targets and rounds
	Index, Collimation   float64 // means, rad
	SIndex, SCollimation float64 // standard deviation of one pair, rad; 0 with a single pair
	Repeated             int     // sights with several rounds
	SpreadHorizontal     float64 // pooled standard deviation of one round, rad
	SpreadZenith         float64 // rad
	SpreadSlope          float64 // m
}

// round is one target in one round on one or two faces.
type round struct {
	one, two *Reading
	slope    float64
	distance int
}

// Average averages faces and rounds. Readings on one face only are corrected by the mean collimation and index error of all pairs, and
// count with sqrt(2) times the standard deviation of a pair. A target read twice on one face in one round is an error, and so are
// heights that differ between the readings of one target.
func Average(readings []Reading, in Instrument) ([]Sight, Faces, error) {
	type key struct{ setup, target, round string }
	rounds := map[key]*round{}
	var order []key
	for i := range readings {
		r := &readings[i]
		k := key{r.Setup, r.Target, r.Round}
		at, ok := rounds[k]
		if !ok {
			at = &round{}
			rounds[k], order = at, append(order, k)
		}
		side := &at.one
		if r.FaceTwo {
			side = &at.two
		}
		if *side != nil {
			return nil, Faces{}, &Fault{r.Line, "round", r.Target, fmt.Sprintf("one reading of a target on each face: line %d is one already", (*side).Line), "number the rounds in a column round, or give the target a name of its own"}
		}
		*side = r
		if r.Slope > 0 {
			at.slope += (r.Slope + r.PrismConstant) * (1 + in.Met)
			at.distance++
		}
	}
	var f Faces
	ordered := make([]*round, len(order))
	for i, k := range order {
		ordered[i] = rounds[k]
	}
	f.learn(ordered)
	groups := map[[2]string][]*round{}
	var sights [][2]string
	for _, k := range order {
		name := [2]string{k.setup, k.target}
		if _, ok := groups[name]; !ok {
			sights = append(sights, name)
		}
		groups[name] = append(groups[name], rounds[k])
	}
	out := make([]Sight, 0, len(sights))
	spread := spread{}
	for _, name := range sights {
		s, err := f.mean(name, groups[name], in, &spread)
		if err != nil {
			return nil, f, err
		}
		out = append(out, s)
	}
	spread.into(&f)
	return out, f, nil
}

// learn finds collimation and index error from the pairs.
func (f *Faces) learn(rounds []*round) {
	var index, collimation []float64
	for _, r := range rounds {
		if r.one == nil || r.two == nil {
			f.Singles++
			continue
		}
		i := IndexError(r.one.Zenith, r.two.Zenith)
		index = append(index, i)
		collimation = append(collimation, Collimation(r.one.Horizontal, r.two.Horizontal, r.one.Zenith-i))
	}
	f.Pairs = len(index)
	f.Index, f.SIndex = meanOf(index)
	f.Collimation, f.SCollimation = meanOf(collimation)
}

// meanOf is mean and standard deviation.
func meanOf(x []float64) (mean, s float64) {
	if len(x) == 0 {
		return 0, 0
	}
	for _, v := range x {
		mean += v / float64(len(x))
	}
	if len(x) == 1 {
		return mean, 0
	}
	for _, v := range x {
		s += (v - mean) * (v - mean)
	}
	return mean, math.Sqrt(s / float64(len(x)-1))
}

// angles of one round, free of instrument errors as far as the faces tell.
func (f *Faces) angles(r *round) (hz, z float64) {
	if r.one != nil && r.two != nil {
		z = r.one.Zenith - IndexError(r.one.Zenith, r.two.Zenith)
		return r.one.Horizontal - turn(r.one.Horizontal-r.two.Horizontal-math.Pi)/2, z
	}
	if r.one != nil {
		z = r.one.Zenith - f.Index
		return r.one.Horizontal - f.Collimation/math.Sin(z), z
	}
	z = 2*math.Pi - r.two.Zenith + f.Index
	return r.two.Horizontal - math.Pi + f.Collimation/math.Sin(z), z
}

// spread pools the squares of several rounds about their means.
type spread struct {
	hz, z, s      float64
	angles, dists int
	repeated      int
}

func (p *spread) into(f *Faces) {
	f.Repeated = p.repeated
	if p.angles > 0 {
		f.SpreadHorizontal, f.SpreadZenith = math.Sqrt(p.hz/float64(p.angles)), math.Sqrt(p.z/float64(p.angles))
	}
	if p.dists > 0 {
		f.SpreadSlope = math.Sqrt(p.s / float64(p.dists))
	}
}

// mean averages the rounds of one sight.
func (f *Faces) mean(name [2]string, rounds []*round, in Instrument, pool *spread) (Sight, error) {
	first := cmp.Or(rounds[0].one, rounds[0].two)
	s := Sight{Setup: name[0], Target: name[1], TargetHeight: first.TargetHeight, InstrumentHigh: first.InstrumentHigh, Line: first.Line}
	var hz, z, d []float64
	start, weight := 0.0, 0.0
	for i, r := range rounds {
		h, v := f.angles(r)
		if i == 0 {
			start = h
		}
		share := 0.5 // a face alone has twice the variance of a pair
		if r.one != nil && r.two != nil {
			s.Pairs++
			share = 1
		} else {
			s.Singles++
		}
		for _, one := range []*Reading{r.one, r.two} {
			if one != nil && one.TargetHeight != s.TargetHeight {
				return s, &Fault{one.Line, "target_height", fmt.Sprint(one.TargetHeight), fmt.Sprintf("the target height of line %d, %g m, for the same target", s.Line, s.TargetHeight), "give the target another name if it was moved"}
			}
		}
		h = turn(h - start)
		s.Horizontal, s.Zenith, weight = s.Horizontal+share*h, s.Zenith+share*v, weight+share
		hz, z = append(hz, h), append(z, v)
		if r.distance > 0 {
			d = append(d, r.slope/float64(r.distance))
		}
	}
	s.Horizontal, s.Zenith = math.Mod(start+s.Horizontal/weight+4*math.Pi, 2*math.Pi), s.Zenith/weight
	s.SigmaHorizontal = in.Angle / math.Sqrt(weight)
	s.SigmaZenith = s.SigmaHorizontal
	if len(d) > 0 {
		s.Slope, _ = meanOf(d)
		s.SigmaSlope = in.distanceSigma(s.Slope) // repeated distances share their constant and scale error: no gain is claimed
	}
	pool.add(hz, z, d)
	return s, nil
}

// add takes in the rounds of one sight.
func (p *spread) add(hz, z, d []float64) {
	squares := func(x []float64) float64 {
		_, s := meanOf(x)
		return s * s * float64(max(len(x)-1, 0))
	}
	if len(hz) > 1 {
		p.repeated++
		p.hz, p.z, p.angles = p.hz+squares(hz), p.z+squares(z), p.angles+len(hz)-1
	}
	if len(d) > 1 {
		p.s, p.dists = p.s+squares(d), p.dists+len(d)-1
	}
}

// Setups are the names of the set-ups in order of appearance.
func Setups(sights []Sight) (out []string) {
	for _, s := range sights {
		if !slices.Contains(out, s.Setup) {
			out = append(out, s.Setup)
		}
	}
	return out
}

// Fault is a reading that must be mended.
type Fault struct {
	Line                          int
	Column, Found, Expected, Mend string
}

// Error says what was expected.
func (f *Fault) Error() string { return f.Expected }
