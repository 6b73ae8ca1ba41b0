package tension

import (
	"tautbook/survey"
)

// sure is the probability from which a statement counts as decided. The rule (decide only when the probability of
// conformity, or of non-conformity, is high enough) is that of JCGM 106:2012, 8.3; 95 % is DESIGN's choice.
const sure = 0.95

// ground says which rule of decide gave the verdict.
type ground string

const (
	groundStrength      ground = "strength"       // greatest tension above the permitted one
	groundRivalStrength ground = "rival strength" // the same, if the length is as designed
	groundLoad          ground = "load"           // load on record above the design load
	groundTension       ground = "tension"        // tension ratio beyond a limit, rival reading excluded
	groundTwoReadings   ground = "two readings"   // ratio beyond a limit, rival reading open
	groundImplied       ground = "implied load"   // ratio inside, but the load that the length implies is not
	groundInside        ground = "inside"
	groundCoarse        ground = "coarse"
	groundNone          ground = "none"
	groundUnfit         ground = "unfit"         // the points are no hanging cable
	groundImplausible   ground = "implausible"   // supports or design values cannot be right
	groundReading       ground = "reading"       // by a direct reading of the tension
	groundReadLoad      ground = "reading, load" // shape and direct reading give a load above the design load
	groundConflict      ground = "conflict"      // the direct reading contradicts the record of loads
)

// ByImplausible is Assessment.DecidedBy of a cable whose supports or design values cannot be right.
const ByImplausible = string(groundImplausible)

// evidence is what the verdict rests on. Probabilities are NaN when they could not be worked out; NaN is never sure.
type evidence struct {
	unfit                    bool // the points are no hanging cable, or too many contradict each other
	implausible              bool // the expected tension rests on supports or design values that cannot be right
	compared                 bool // there is an expected tension
	pSlack, pInside, pOver   float64
	record                   survey.LoadStatus
	pLoadOver                float64 // load on record above design load and limit
	rivalKnown               bool
	rivalRefuted             bool // the surveyed length itself rules the rival reading out
	pRivalLess, pRivalMore   float64
	pStrength, pRivalUseOver float64

	// A direct reading, NaN without one. With the shape it gives tension and load, whatever the record says.
	pReadSlack, pReadInside, pReadOver float64
	pReadLoad, pReadUse                float64 // load above limit, strength use above 1
	readAgrees, readDenies             bool    // with the tension if the load is as recorded
}

// decide is DESIGN's verdict rule. Two points go beyond its text, both to the safe side. While nobody looked at the loads no
// cable is called slack, even when the length rules out the simple rival reading: slip and an unlisted load can go
// together, and then the tension is not low. And a cable whose tension reads as designed but whose length implies a load
// beyond the limit is off design, not as designed.
func decide(e evidence) (Verdict, ground) {
	looked := e.record == survey.LoadsAsFiled || e.record == survey.LoadsListed
	if e.readAgrees && e.rivalRefuted {
		looked = true // the reading, too coarse to decide alone, says that the load is as recorded and not as the length would need
	}
	open := !looked && !e.rivalRefuted
	switch {
	case e.unfit:
		return Undecided, groundUnfit
	case e.pReadUse >= sure:
		return Overload, groundReading
	case e.implausible && !(e.pStrength >= sure) && !(e.pReadLoad >= sure) && !(looked && e.pLoadOver >= sure):
		return Undecided, groundImplausible // what is left rests on the expected tension
	case e.pReadOver >= sure:
		return Overload, groundReading
	case looked && e.readDenies:
		return OffDesign, groundConflict
	case e.pReadLoad >= sure:
		return Overload, groundReadLoad
	case e.pReadSlack >= sure:
		return Slack, groundReading
	case e.pReadInside >= sure && !(looked && (e.pSlack >= sure || e.pOver >= sure)):
		return AsDesigned, groundReading
	case e.pStrength >= sure:
		return Overload, groundStrength
	case looked && e.pLoadOver >= sure:
		return Overload, groundLoad
	case open && e.pRivalUseOver >= sure:
		return Overload, groundRivalStrength
	case !e.compared:
		return NoDesign, groundNone
	case looked && e.pSlack >= sure:
		return Slack, groundTension
	case !open && e.pOver >= sure:
		return Overload, groundTension
	case e.pSlack >= sure || e.pOver >= sure:
		return OffDesign, groundTwoReadings
	case open && e.rivalKnown && (e.pRivalLess >= sure || e.pRivalMore >= sure):
		return OffDesign, groundImplied
	case e.pInside >= sure:
		return AsDesigned, groundInside
	default:
		return Undecided, groundCoarse
	}
}
