package tension

import (
	"math"
	"testing"

	"tautbook/survey"
)

// Every rule of the verdict, one row each. NaN stands for a probability that could not be worked out and is never sure.
func TestDecide(t *testing.T) {
	nan := math.NaN()
	base := evidence{compared: true, pSlack: 0.01, pInside: 0.98, pOver: 0.01, record: survey.LoadsAsFiled, pLoadOver: 0, rivalKnown: true,
		rivalRefuted: true, pRivalLess: 0, pRivalMore: 0, pStrength: 0, pRivalUseOver: 0,
		pReadSlack: nan, pReadInside: nan, pReadOver: nan, pReadLoad: nan, pReadUse: nan}
	with := func(change func(e *evidence)) evidence { e := base; change(&e); return e }
	open := func(e *evidence) { e.record, e.rivalRefuted = survey.LoadsNotChecked, false }
	slack := func(e *evidence) { e.pSlack, e.pInside, e.pOver = 0.96, 0.04, 0 }
	over := func(e *evidence) { e.pSlack, e.pInside, e.pOver = 0, 0.04, 0.96 }
	for _, c := range []struct {
		name string
		e    evidence
		want Verdict
		why  ground
	}{
		{"inside, looked at", base, AsDesigned, groundInside},
		{"inside, not checked", with(open), AsDesigned, groundInside},
		{"slack, as filed", with(slack), Slack, groundTension},
		{"slack, listed", with(func(e *evidence) { slack(e); e.record = survey.LoadsListed }), Slack, groundTension},
		{"slack shape, not checked", with(func(e *evidence) { open(e); slack(e) }), OffDesign, groundTwoReadings},
		{"slack shape, not checked, rival refuted by length", with(func(e *evidence) { open(e); slack(e); e.rivalRefuted = true }), OffDesign, groundTwoReadings},
		{"slack shape, record not stated", with(func(e *evidence) { open(e); slack(e); e.record = "" }), OffDesign, groundTwoReadings},
		{"over, as filed", with(over), Overload, groundTension},
		{"over, not checked", with(func(e *evidence) { open(e); over(e) }), OffDesign, groundTwoReadings},
		{"over, not checked, rival refuted by length", with(func(e *evidence) { open(e); over(e); e.rivalRefuted = true }), Overload, groundTension},
		{"listed load above the design load", with(func(e *evidence) { e.record, e.pLoadOver = survey.LoadsListed, 0.97 }), Overload, groundLoad},
		{"inside, but the length implies load", with(func(e *evidence) { open(e); e.pRivalMore = 0.99 }), OffDesign, groundImplied},
		{"the same with loads looked at", with(func(e *evidence) { e.pRivalMore = 0.99 }), AsDesigned, groundInside},
		{"strength", with(func(e *evidence) { slack(e); e.pStrength = 0.95 }), Overload, groundStrength},
		{"strength under the worse reading", with(func(e *evidence) { open(e); slack(e); e.pRivalUseOver = 0.99 }), Overload, groundRivalStrength},
		{"that reading excluded", with(func(e *evidence) { slack(e); e.pRivalUseOver = 0.99 }), Slack, groundTension},
		{"strength without design state", evidence{pStrength: 0.99, pSlack: nan, pInside: nan, pOver: nan, pReadSlack: nan, pReadInside: nan, pReadOver: nan, pReadLoad: nan, pReadUse: nan}, Overload, groundStrength},
		{"nothing to compare", evidence{pStrength: nan, pSlack: nan, pInside: nan, pOver: nan, pReadSlack: nan, pReadInside: nan, pReadOver: nan, pReadLoad: nan, pReadUse: nan}, NoDesign, groundNone},
		{"reading slack, not checked", with(func(e *evidence) { open(e); slack(e); e.pReadSlack, e.pReadInside, e.pReadOver = 0.99, 0.01, 0 }), Slack, groundReading},
		{"reading high, not checked", with(func(e *evidence) { open(e); slack(e); e.pReadSlack, e.pReadInside, e.pReadOver = 0, 0.01, 0.99 }), Overload, groundReading},
		{"reading inside, load above", with(func(e *evidence) { open(e); e.pReadInside, e.pReadLoad = 0.99, 0.99 }), Overload, groundReadLoad},
		{"reading inside", with(func(e *evidence) { open(e); e.pReadInside, e.pReadLoad = 0.99, 0 }), AsDesigned, groundReading},
		{"reading inside, sharper survey slack, as filed", with(func(e *evidence) { slack(e); e.pReadInside, e.readAgrees = 0.96, true }), Slack, groundTension},
		{"reading above strength", with(func(e *evidence) { open(e); e.pReadUse = 0.99 }), Overload, groundReading},
		{"reading against the record", with(func(e *evidence) { e.readDenies, e.pReadSlack = true, 0.99 }), OffDesign, groundConflict},
		{"coarse reading that excludes the rival", with(func(e *evidence) { open(e); slack(e); e.readAgrees, e.rivalRefuted = true, true }), Slack, groundTension},
		{"coarse", with(func(e *evidence) { e.pSlack, e.pInside, e.pOver = 0.3, 0.6, 0.1 }), Undecided, groundCoarse},
		{"just not sure", with(func(e *evidence) { e.pSlack, e.pInside, e.pOver = 0.949, 0.051, 0 }), Undecided, groundCoarse},
		{"just sure", with(func(e *evidence) { e.pSlack, e.pInside, e.pOver = 0.95, 0.05, 0 }), Slack, groundTension},
		{"supports that cannot be right", with(func(e *evidence) { slack(e); e.implausible = true }), Undecided, groundImplausible},
		{"the same, a reading of a low tension", with(func(e *evidence) { e.implausible, e.pReadSlack = true, 0.99 }), Undecided, groundImplausible},
		{"the same, over strength all the same", with(func(e *evidence) { e.implausible, e.pStrength = true, 0.99 }), Overload, groundStrength},
		{"the same, load on record above the design load", with(func(e *evidence) { e.implausible, e.pLoadOver = true, 0.99 }), Overload, groundLoad},
		{"rival unknown", with(func(e *evidence) { open(e); e.rivalKnown, e.pRivalMore, e.pRivalLess = false, nan, nan }), AsDesigned, groundInside},
	} {
		if got, why := decide(c.e); got != c.want || why != c.why {
			t.Errorf("%s: %s (%s), want %s (%s)", c.name, got, why, c.want, c.why)
		}
	}
}
