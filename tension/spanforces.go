package tension

import (
	"fmt"
	"math"

	"tautbook/fit"
	"tautbook/survey"
)

// Forces of one span at its ends, as places in the vectors of spanForces.
const (
	forceH    = iota
	forceT    // tension at A; at B it follows: forceT + 1
	forceTB   //
	forceV    // vertical reaction at A, upward on the cable; at B it follows
	forceVB   //
	forceLeft // reaction across the span at A, to the left of A -> B; at B it follows
	forceLeftB
	forceSlope // tangent at A, rad, positive upward from A to B; at B it follows
	forceSlopeB
	forceCount
)

// forceOutputs are the places of those forces among the outputs of the chain.
var forceOutputs = [forceCount]int{outH, outTensionA, outTensionB, outVerticalA, outVerticalB, outLeftA, outLeftB, outSlopeA, outSlopeB}

// spanForces carries the end forces of one span with the effect of each independent input on them, so that spans of one cable can
// be put together with what they share: the same weight on file, the same temperature, the same support mark.
type spanForces struct {
	y       [forceCount]float64
	effects []sharedEffect
	azimuth float64 // of A -> B, rad clockwise from north
	a, b    *survey.Point
	ends    [2][2]float64 // easting and northing of the two ends, m
	overA   survey.SupportBetween
	overB   survey.SupportBetween
}

// sharedEffect is what one standard deviation of one independent input does to the forces. Inputs with one key are the same.
type sharedEffect struct {
	key string
	by  [forceCount]float64
}

// forces collects what the spans of one cable share; nil when the tension of this span is not known.
func (j *judgement) forces() *spanForces {
	if j.a.HorizontalTension == nil {
		return nil
	}
	f := &spanForces{azimuth: j.r.Frame.Azimuth, a: j.Points.A, b: j.Points.B}
	if j.d != nil {
		f.overA, f.overB = j.d.OverA, j.d.OverB
	}
	sin, cos := math.Sincos(f.azimuth)
	for i, e := range []fit.End{j.r.A, j.r.B} {
		f.ends[i] = [2]float64{j.r.Frame.E0 + e.Station*sin, j.r.Frame.N0 + e.Station*cos}
	}
	pick := func(y *outputs) (v [forceCount]float64) {
		for i, out := range forceOutputs {
			if v[i] = y[out]; math.IsNaN(v[i]) && (i == forceLeft || i == forceLeftB) {
				v[i] = 0 // a span that hangs in a vertical plane pulls nothing across
			}
			if i >= forceSlope {
				v[i] *= math.Pi / 180
			}
		}
		return v
	}
	f.y = pick(&j.p.y)
	for i, s := range j.in.sources {
		for n, d := range s.directions {
			f.add(j.shared(s, n, d), pick(&j.p.effect[i][n]))
		}
	}
	return f
}

func (f *spanForces) add(effects []sharedEffect, by [forceCount]float64) {
	if by == [forceCount]float64{} {
		return
	}
	for _, e := range effects {
		scale := e.by[0]
		for k := range by {
			e.by[k] = scale * by[k]
		}
		f.effects = append(f.effects, e)
	}
}

// shared names the independent inputs behind direction n of a source; the first place of by holds the share of each. What stands
// on file with the same value and the same uncertainty for two spans is one input. A support mark is one point for both spans that meet
// there: its station error is taken apart into east and north, with the same accuracy in both.
func (j *judgement) shared(s source, n int, d []step) []sharedEffect {
	own := []sharedEffect{{key: fmt.Sprintf("%s\x00%s\x00%s\x00%d", j.Points.Cable, j.Points.Span, s.name, n), by: [forceCount]float64{1}}}
	at := d[0].at
	mark := map[int]*survey.Point{inStationA: j.Points.A, inStationB: j.Points.B}[at]
	switch {
	case s.survey:
		return own
	case mark != nil:
		sin, cos := math.Sincos(j.r.Frame.Azimuth)
		key := fmt.Sprintf("mark\x00%x\x00%x\x00%x\x00", mark.E, mark.N, mark.Z)
		return []sharedEffect{{key: key + "east", by: [forceCount]float64{sin}}, {key: key + "north", by: [forceCount]float64{cos}}}
	case at == inTilt || at == inReading || at >= inFixed+len(j.in.listed):
		return own
	}
	return []sharedEffect{{key: fmt.Sprintf("%s\x00%x\x00%x", s.name, j.in.x[at], d[0].by), by: [forceCount]float64{1}}}
}
