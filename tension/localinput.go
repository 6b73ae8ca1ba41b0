package tension

import (
	"math"

	"tautbook/fit"
	"tautbook/survey"
)

// mostFitted is the greatest number of local loads of a span whose size is taken from the shape.
const mostFitted = 4

// localInput is one local load among the inputs.
type localInput struct {
	at      int     // place of its size: in N when told, else its kink
	place   int     // place of its station, 0 = told
	station float64 // as told, or at the estimate, m from A
	told    *survey.LocalLoad
	fitted  bool
	result  fit.LoadResult
}

// layLocal gives local loads their places behind the first n of the vector; shape are the places of all that the survey determines, in
// the order of the covariance of the fit.
func layLocal(r *fit.Result, told []survey.LocalLoad, n int) (local []localInput, size int, shape []int) {
	shape = []int{inZA, inZB, inCurvature}
	for _, l := range r.Loads {
		in := localInput{at: n, station: l.Station, fitted: l.Fitted, result: l}
		n++
		if l.Fitted {
			shape = append(shape, in.at)
		}
		if l.Found {
			in.place = n
			shape = append(shape, in.place)
			n++
		}
		for i := range told {
			if !l.Found && told[i].Station == l.Station {
				in.told = &told[i]
			}
		}
		local = append(local, in)
	}
	return local, n, shape
}

// setLocal fills the estimates. A load of told size went into the fit as a ratio to the even load, so its uncertainty and that of
// the even load move the fitted curve too.
func (in *inputs) setLocal(r *fit.Result) {
	if len(in.local) == 0 {
		return
	}
	w := in.load(in.x)
	even := w.self + w.deck
	for i := range in.local {
		l := &in.local[i]
		in.have[l.at] = true
		if l.place > 0 {
			in.x[l.place], in.have[l.place] = l.station, true
		}
		if l.fitted {
			in.x[l.at] = l.result.Kink
			continue
		}
		in.set(l.at, l.told.P, "local load: "+orUnnamed(l.told.What), ForceScale(l.told.P.Value))
		for s := range in.sources {
			in.carry(&in.sources[s], *l, even)
		}
	}
}

// carry adds to the moves of one source what they change in the fitted curve through the ratio of a load of told size.
func (in *inputs) carry(s *source, l localInput, even float64) {
	if s.survey {
		return
	}
	for d, moves := range s.directions {
		ratio := 0.0 // change of P / even load
		for _, m := range moves {
			switch {
			case m.at == l.at:
				ratio += m.by / even
			case m.at == inSelfWeight, m.at == inDeckLoad, m.at >= inFixed && m.at < inFixed+len(in.listed):
				ratio -= in.x[l.at] / (even * even) * m.by
			}
		}
		if ratio == 0 {
			continue
		}
		for k, at := range [3]int{inZA, inZB, inCurvature} {
			s.directions[d] = append(s.directions[d], step{at, ratio * l.result.ByRatio[k]})
		}
	}
}

// cusps are the kinks of the local loads for one value of the vector.
func (in *inputs) cusps(x []float64, l carried) []fit.Cusp {
	if len(in.local) == 0 {
		return nil
	}
	out := make([]fit.Cusp, len(in.local))
	for i, e := range in.local {
		out[i] = fit.Cusp{Station: e.stationOf(x), Kink: x[e.at]}
		if !e.fitted {
			out[i].Kink = x[e.at] * x[inCurvature] / (l.self + l.deck)
		}
	}
	return out
}

func (e localInput) stationOf(x []float64) float64 {
	if e.place > 0 {
		return x[e.place]
	}
	return e.station
}

// hung are the local loads in N under horizontal tension h: those of unknown size follow from their kinks.
func (in *inputs) hung(x []float64, h float64) []StationLoad {
	out := make([]StationLoad, len(in.local))
	for i, e := range in.local {
		out[i] = StationLoad{e.stationOf(x) - in.x[inStationA], x[e.at]}
		if e.fitted {
			out[i].P = x[e.at] * h
		}
	}
	return out
}

// dayState is what the comparison needs of a state, with or without local loads.
type dayState struct{ h, sag, greatest float64 }

// under is the state of a cable of given unstressed length under even load and the local loads of the day.
func (in *inputs) under(c Cable, near, s0 float64, ch Chord, dt float64, points []PointLoad) (dayState, error) {
	if len(points) == 0 {
		st, err := c.atLengthFrom(near, s0, ch, dt)
		if err != nil {
			return dayState{}, err
		}
		return dayState{st.H, st.SagMid(), st.GreatestTension()}, nil
	}
	st, err := c.AtLengthLoaded(s0, ch, dt, points)
	if err != nil {
		return dayState{}, err
	}
	return dayState{st.H, st.SagMid(), st.GreatestTension()}, nil
}

// measured is the unstressed length of today's cable, its greatest tension, and where on it the local loads hang.
func (in *inputs) measured(c Cable, x []float64, h float64, ch Chord, dt float64) (s0, greatest float64, points []PointLoad, err error) {
	if len(in.local) == 0 {
		st, err := c.AtTension(h, ch, dt)
		if err != nil {
			return 0, 0, nil, err
		}
		return st.Unstressed, st.GreatestTension(), nil, nil
	}
	st, err := c.AtTensionLoaded(h, ch, dt, in.hung(x, h))
	if err != nil {
		return 0, 0, nil, err
	}
	return st.Unstressed, st.GreatestTension(), st.Loads, nil
}

// whole is all the load on a span, N, even and local.
func (in *inputs) whole(l carried, length float64, points []PointLoad) float64 {
	sum := (l.self + l.deck) * length
	for _, p := range points {
		sum += p.P
	}
	return sum
}

// localSummary are the local loads as they entered the assessment.
func (j *judgement) localSummary() (out []LocalLoad) {
	fitted := 0
	for _, e := range j.in.local {
		l := LocalLoad{Station: Quantity{Value: e.station - j.in.x[inStationA], U: j.in.few * e.result.UStation}, From: OnRecord}
		if e.told != nil {
			l.What = e.told.What
		}
		switch {
		case e.result.Found:
			l.From, l.Chance = FoundInShape, &e.result.Chance
		case e.fitted && e.told.P != nil:
			l.Told, l.OffTold = e.told.P, &e.result.OffTold
		case e.fitted:
			l.From = FittedToShape
		}
		if !e.fitted {
			l.Load = e.told.P
		} else {
			if q := j.p.quantity(outLocal + fitted); q != nil && j.a.HorizontalTension != nil {
				l.Load = q
			}
			fitted++
		}
		kink := Quantity{Value: e.result.Kink, U: j.in.few * e.result.UKink}
		l.Kink = kink
		out = append(out, l)
	}
	return out
}

// unlistedLocal reports whether the shape shows a local load that the record of loads does not name.
func unlistedLocal(r *fit.Result) bool {
	for _, l := range r.Loads {
		if l.Found && l.Kink > 0 {
			return true
		}
	}
	return false
}

// localOptions turns the told loads into those of the fit; even is the load per metre on record, N/m. Without it sizes are fitted; a size
// with an uncertainty is adjusted to record and shape together.
func localOptions(told []survey.LocalLoad, even Quantity) (out []fit.LocalLoad) {
	for _, l := range told {
		f := fit.LocalLoad{Station: l.Station, SizeFree: l.P == nil || !(even.Value > 0)}
		if !f.SizeFree {
			f.Ratio = l.P.Value / even.Value
			if l.P.U > 0 {
				f.URatio = math.Hypot(l.P.U, f.Ratio*even.U) / even.Value
			}
		}
		out = append(out, f)
	}
	return out
}
