package fit

import (
	"errors"
	"fmt"
	"math"

	"tautbook/survey"
)

// inPlane puts the points of a span into its vertical plane. The plane goes through the two surveyed supports; without them
// along the total-least-squares line through the points in plan (Pearson 1901), pointing away from A or towards B when one
// of them was surveyed, otherwise to the east (to the north when it runs due north), so that the order of the points does
// not matter. Station 0 is at A: the surveyed support, else the outermost point.
func inPlane(p survey.SpanPoints, o Options) (obs []Observation, f Frame, a, b End, err error) {
	if len(p.Points) == 0 {
		return nil, f, a, b, errors.New("fit: no points")
	}
	e0, n0 := p.Points[0].E, p.Points[0].N // differences from here: large coordinates lose nothing
	if p.A != nil && p.B != nil {
		e0, n0 = p.A.E, p.A.N
		de, dn := p.B.E-e0, p.B.N-n0
		if math.Hypot(de, dn) < 1e-6 {
			return nil, f, a, b, errors.New("fit: supports A and B stand at the same place in plan")
		}
		f = Frame{E0: e0, N0: n0, Azimuth: math.Atan2(de, dn), From: "supports"}
	} else {
		if f, err = lineThrough(p, e0, n0); err != nil {
			return nil, f, a, b, err
		}
	}
	sin, cos := math.Sincos(f.Azimuth)
	place := func(q survey.Point) Observation {
		de, dn := q.E-f.E0, q.N-f.N0
		v := Observation{ID: q.ID, Line: q.Line, S: de*sin + dn*cos, Z: q.Z, Across: dn*sin - de*cos}
		if q.HasCov {
			v.VarS = sin*sin*q.Cov.EE + 2*sin*cos*q.Cov.EN + cos*cos*q.Cov.NN
			v.CovSZ = sin*q.Cov.EZ + cos*q.Cov.NZ
			v.VarZ = q.Cov.ZZ
			v.varA = sin*sin*q.Cov.NN - 2*sin*cos*q.Cov.EN + cos*cos*q.Cov.EE
			v.covSA = sin*cos*(q.Cov.NN-q.Cov.EE) + (sin*sin-cos*cos)*q.Cov.EN
			v.covAZ = sin*q.Cov.NZ - cos*q.Cov.EZ
		} else {
			v.VarS, v.VarZ = o.SigmaAlong*o.SigmaAlong, o.SigmaUp*o.SigmaUp
			v.varA = v.VarS
		}
		return v
	}
	obs = make([]Observation, len(p.Points), len(p.Points)+2)
	lo, hi := math.Inf(1), math.Inf(-1)
	for i, q := range p.Points {
		obs[i] = place(q)
		lo, hi = math.Min(lo, obs[i].S), math.Max(hi, obs[i].S)
	}
	a, b = End{Station: lo}, End{Station: hi}
	if p.A != nil {
		a = supportEnd(place(*p.A))
	}
	if p.B != nil {
		b = supportEnd(place(*p.B))
	}
	if !(b.Station > a.Station) {
		return nil, f, a, b, fmt.Errorf("fit: support A (station %.3f m) does not lie before B (station %.3f m): are A and B interchanged?", a.Station, b.Station)
	}
	if o.ThroughSupports {
		obs = withSupports(obs, p, place)
	}
	f.shift(a.Station, sin, cos)
	for i := range obs {
		obs[i].S -= a.Station
	}
	a.Station, b.Station = 0, b.Station-a.Station
	f.UAzimuth = math.Hypot(a.UStation, b.UStation) / b.Station
	if f.From == "points" {
		f.UAzimuth = lineU(obs)
	}
	return obs, f, a, b, nil
}

// withSupports adds the surveyed supports to the points.
func withSupports(obs []Observation, p survey.SpanPoints, place func(survey.Point) Observation) []Observation {
	for _, e := range []struct {
		name string
		mark *survey.Point
	}{{"support A", p.A}, {"support B", p.B}} {
		if e.mark == nil {
			continue
		}
		v := place(*e.mark)
		v.Support = true
		if v.ID == "" {
			v.ID = e.name
		} else {
			v.ID = e.name + " (" + v.ID + ")"
		}
		obs = append(obs, v)
	}
	return obs
}

func supportEnd(o Observation) End {
	return End{Station: o.S, UStation: math.Sqrt(o.VarS), Surveyed: true, MarkZ: o.Z, UMarkZ: math.Sqrt(o.VarZ)}
}

// shift moves station 0 along the line.
func (f *Frame) shift(by, sin, cos float64) { f.E0, f.N0 = f.E0+by*sin, f.N0+by*cos }

// lineThrough is the total-least-squares line through the points in plan.
func lineThrough(p survey.SpanPoints, e0, n0 float64) (Frame, error) {
	var me, mn float64
	for _, q := range p.Points {
		me += q.E - e0
		mn += q.N - n0
	}
	me, mn = me/float64(len(p.Points)), mn/float64(len(p.Points))
	var ee, en, nn float64
	for _, q := range p.Points {
		de, dn := q.E-e0-me, q.N-n0-mn
		ee, en, nn = ee+de*de, en+de*dn, nn+dn*dn
	}
	if ee+nn < 1e-12 {
		return Frame{}, errors.New("fit: all points stand at the same place in plan")
	}
	az := math.Pi/2 - math.Atan2(2*en, ee-nn)/2 // from north, clockwise
	f := Frame{E0: e0 + me, N0: n0 + mn, Azimuth: az, From: "points"}
	sin, cos := math.Sincos(az)
	flip := sin < -1e-9 || (math.Abs(sin) <= 1e-9 && cos < 0)
	if p.A != nil {
		flip = (p.A.E-f.E0)*sin+(p.A.N-f.N0)*cos > 0
	} else if p.B != nil {
		flip = (p.B.E-f.E0)*sin+(p.B.N-f.N0)*cos < 0
	}
	if flip {
		f.Azimuth += math.Pi
	}
	f.Azimuth = math.Mod(f.Azimuth+2*math.Pi, 2*math.Pi)
	return f, nil
}

// lineU is the standard uncertainty of the direction of the line through the points, rad.
func lineU(obs []Observation) float64 {
	n := float64(len(obs))
	if n < 3 {
		return 0
	}
	var mean, spread, across float64
	for _, o := range obs {
		mean += o.S / n
	}
	for _, o := range obs {
		spread += (o.S - mean) * (o.S - mean)
		across += o.Across * o.Across
	}
	return math.Sqrt(across / (n - 2) / spread)
}

// acrossRMS is the scatter of the points across the plane, m.
func acrossRMS(obs []Observation) float64 {
	sum := 0.0
	for _, o := range obs {
		sum += o.Across * o.Across
	}
	return math.Sqrt(sum / float64(len(obs)))
}
