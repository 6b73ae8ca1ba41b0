package tension

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// Explanation ranks single causes that would bring shape, load on record, designed length, designed supports and readings together. Each
// cause frees one figure of the adjustment of all evidence; how much the chi-square falls says how well it fits.
type Explanation struct {
	ChiSquare        float64 `json:"chi_square"` // of all evidence when nothing has changed
	DegreesOfFreedom int     `json:"degrees_of_freedom"`
	Chance           float64 `json:"p_chance"` // probability of such a chi-square when nothing has changed
	Needed           bool    `json:"needed"`   // the evidence is not as designed: something has to explain it

	// SpanMoved and RiseMoved, m, are how much farther apart and how much higher at B the surveyed supports stand than designed; nil when
	// that is not known or no more than chance. The other causes are then held against the supports as they stand.
	SpanMoved *Quantity `json:"span_moved_m,omitempty"`
	RiseMoved *Quantity `json:"rise_moved_m,omitempty"`

	Causes []Cause   `json:"causes"`          // best first; those that fit equally well by the tension they mean, the higher first
	Named  CauseKind `json:"named,omitempty"` // the one cause that goes with every record; "" when there is none or more than one. A wrong record may still hide another
	Both   *Both     `json:"load_and_length,omitempty"`
	Says   string    `json:"says"`
	Tells  string    `json:"tells,omitempty"` // the look or the measurement that would tell causes apart

	DetectableLength *float64  `json:"detectable_length_m,omitempty"`      // change of unstressed length found four times out of five
	DetectableLoad   *float64  `json:"detectable_load_N_per_m,omitempty"`  // the same for an even load
	LengthDiffers    Quantity  `json:"length_less_designed_m"`             // unstressed, if the load is as recorded
	LoadDiffers      *Quantity `json:"load_less_record_N_per_m,omitempty"` // if the length is as designed
	loadOnRecord     float64   // as it hangs, N/m
}

// Both are load and length changed together, when a reading tells them apart and no single cause fits.
type Both struct {
	Load   Quantity `json:"extra_load_N_per_m"`
	Length Quantity `json:"length_gained_m"`
}

// CauseKind is a kind of single cause.
type CauseKind string

// The single causes.
const (
	ExtraLoad        CauseKind = "extra even load"       // or less than on record
	LengthChanged    CauseKind = "length gained or lost" // slip, creep, take-up
	SupportMoved     CauseKind = "support moved"
	TemperatureWrong CauseKind = "cable temperature wrong"
	WeightWrong      CauseKind = "weight on file wrong"
	LoadAtOnePlace   CauseKind = "local load"
	SurveyWrong      CauseKind = "survey wrong"
)

// Standing says whether a cause may be the one.
type Standing string

// A cause fits, fits but would have a record of the visit or of the file be wrong, does not fit, or cannot be.
const (
	Fits          Standing = "fits"
	AgainstRecord Standing = "against the record"
	DoesNotFit    Standing = "does not fit"
	Impossible    Standing = "impossible"
)

// Cause is one cause by itself.
type Cause struct {
	Kind             CauseKind `json:"cause"`
	Standing         Standing  `json:"standing"`
	Why              string    `json:"why,omitempty"` // of a standing other than "fits"
	Size             *Quantity `json:"size"`          // nil when the evidence does not give it
	Unit             string    `json:"unit"`          // of Size: N/m, m, degC, N, or 1 for a factor
	At               *Quantity `json:"station_m,omitempty"`
	ChiSquare        float64   `json:"chi_square"`
	DegreesOfFreedom int       `json:"degrees_of_freedom"`
	Chance           float64   `json:"p_chance"`             // of such a chi-square if this is the cause
	Tension          *Quantity `json:"horizontal_tension_N"` // what H then is
	OffRecord        float64   `json:"off_record"`           // how far the record would be wrong at least, in its standard uncertainties; 0 when none speaks against it
	Text             string    `json:"text"`
	Check            string    `json:"check"` // what to look at or to measure on site
}

// explain fills Assessment.Explanation where there is a tension, a designed length and a survey that can be one.
func (j *judgement) explain() {
	switch j.ground {
	case groundUnfit, groundImplausible, groundNone:
		return
	}
	if j.a.HorizontalTension == nil || !j.p.known(outS0Difference) || !(j.p.y[outHanging] > 0) {
		return
	}
	t, err := j.newTrials()
	if err != nil {
		return
	}
	e := &Explanation{Causes: []Cause{}, LengthDiffers: j.p.must(outS0Difference), LoadDiffers: j.p.quantity(outRivalExtra), loadOnRecord: j.p.y[outHanging]}
	e.ChiSquare, e.DegreesOfFreedom = t.null.chi, len(t.rows)-1
	e.Chance = survival(e.ChiSquare, e.DegreesOfFreedom)
	e.Needed = e.Chance < falseAlarm
	if e.Needed {
		e.supports(t)
	}
	rest := t.base()
	e.detectable(t, rest)
	if e.Needed {
		e.causes(j, t, survival(rest.chi, rest.dof) < falseAlarm)
		e.name(t)
	}
	e.words(j)
	j.a.Explanation = e
}

// survival is the probability of a chi-square at least as large; 1 without a degree of freedom.
func survival(chi float64, dof int) float64 {
	if dof < 1 {
		return 1
	}
	return distuv.ChiSquared{K: float64(dof)}.Survival(chi)
}

// supports notes how far the supports stand from where they were designed, when that is more than chance.
func (e *Explanation) supports(t *trials) {
	for i, r := range t.rows {
		if r.chord == 0 {
			continue
		}
		// The row is a measured difference: what it rests on is the survey of the supports and the design alone.
		direct := t.direct(i)
		if !(math.Abs(direct.Value) > offRecordLimit*direct.U) {
			continue
		}
		size := Quantity{Value: direct.Value * t.unit(i), U: direct.U * t.unit(i)}
		if r.chord == inSpan {
			e.SpanMoved = &size
		} else {
			e.RiseMoved = &size
		}
		t.off[i] = true
	}
}

// detectable sets the changes of length and of load that the evidence would show four times out of five.
func (e *Explanation) detectable(t *trials, s *trial) {
	kept := t.kept(trialOptions{})
	for k, i := range kept {
		if i > 1 {
			break
		}
		g := mat.NewVecDense(len(kept), nil)
		g.SetVec(k, 1/t.scale[i])
		if _, _, u := s.test(g); !math.IsInf(u, 1) {
			size := detectable(len(kept)-1) * u * t.unit(i)
			if i == 0 {
				e.DetectableLoad = &size
			} else {
				e.DetectableLength = &size
			}
		}
	}
}

// causes tries every single cause. When supports that moved leave nothing to explain, they are the only one.
func (e *Explanation) causes(j *judgement, t *trials, more bool) {
	if c := t.supportCause(e); c != nil {
		e.Causes = append(e.Causes, *c)
	}
	if more {
		for _, c := range []*Cause{t.loadCause(), t.lengthCause(), t.temperatureCause(), t.weightCause(), t.unseenSupportCause(), j.localCause(), t.surveyCause()} {
			if c != nil {
				e.Causes = append(e.Causes, *c)
			}
		}
	}
	for i := range e.Causes {
		c := &e.Causes[i]
		c.Chance = survival(c.ChiSquare, c.DegreesOfFreedom)
		if c.Standing == "" {
			c.Standing = Fits
		}
		if c.Standing != Impossible && c.Chance < falseAlarm {
			c.Standing, c.Why = DoesNotFit, ""
		}
	}
	order := map[Standing]int{Fits: 0, AgainstRecord: 1, DoesNotFit: 2, Impossible: 3}
	slices.SortStableFunc(e.Causes, func(a, b Cause) int {
		if c := cmp.Compare(order[a.Standing], order[b.Standing]); c != 0 {
			return c
		}
		if a.Standing == AgainstRecord {
			return cmp.Compare(a.OffRecord, b.OffRecord)
		}
		if math.Abs(a.ChiSquare-b.ChiSquare) > 0.5 {
			return cmp.Compare(a.ChiSquare, b.ChiSquare)
		}
		return cmp.Compare(b.tension(), a.tension())
	})
}

func (c Cause) tension() float64 {
	if c.Tension == nil {
		return 0
	}
	return c.Tension.Value
}

// fitting are the causes that fit and go with every record.
func (e *Explanation) fitting() (out []Cause) {
	for _, c := range e.Causes {
		if c.Standing == Fits {
			out = append(out, c)
		}
	}
	return out
}

// name sets the one cause that fits, or load and length together when none does and a reading tells them apart.
func (e *Explanation) name(t *trials) {
	switch list := e.fitting(); {
	case len(list) == 1:
		e.Named = list[0].Kind
	case len(list) == 0 && t.j.record == survey.LoadsNotChecked:
		e.Both = t.both()
	}
}
