package tension

import "errors"

// Errors of states that do not exist; test with errors.Is.
var (
	ErrNoLoad    = errors.New("tension: a cable without load has no hanging shape")
	ErrTooShort  = errors.New("tension: an inextensible cable shorter than the chord cannot reach both supports")
	ErrNoState   = errors.New("tension: no state found")
	errBadInputs = errors.New("tension: impossible input")
)

// Cable is one elastic cable under even load.
type Cable struct {
	SelfWeight     float64 // w, N per metre of unstressed cable at the reference temperature
	DeckLoad       float64 // q, N per metre of horizontal
	AxialStiffness float64 // EA, N; +Inf for an inextensible cable
	Expansion      float64 // alpha, 1/degC
}

// Chord is the straight line between the supports.
type Chord struct {
	Length float64 // horizontal, m, > 0
	Rise   float64 // z_B - z_A, m
}

// State is a cable in equilibrium between two supports.
type State struct {
	Cable      Cable
	Chord      Chord
	DT         float64 // temperature above the reference, degC
	H          float64 // horizontal tension, N
	Unstressed float64 // S0, m, at the reference temperature
	psiA, psiB float64 // tangent angle measure at the ends: slope = sinh(psi)
}
