package tension

// Reconciled is the adjustment of all evidence on one span: shape, load on record (when somebody looked), unstressed length with stiffness and
// temperature, and readings. The three figures are nil when the evidence contradicts itself and does not tell which piece is wrong; when
// one piece is, they are those of the rest.
type Reconciled struct {
	HorizontalTension *Quantity   `json:"horizontal_tension_N"`
	Load              *Quantity   `json:"load_N_per_m"`         // as it hangs
	UnstressedLength  *Quantity   `json:"unstressed_length_m"`  // at the design temperature; nil without stiffness and design temperature
	Covariance        [][]float64 `json:"covariance,omitempty"` // of those that are given, in this order, SI
	Pieces            []Piece     `json:"pieces"`               // what was adjusted
	ChiSquare         float64     `json:"chi_square"`           // of all pieces together
	DegreesOfFreedom  int         `json:"degrees_of_freedom"`
	Chance            float64     `json:"p_chance"` // probability of such a chi-square when nothing is wrong
	Outcome           Outcome     `json:"outcome"`
	Without           string      `json:"without,omitempty"`           // the piece that was left out of the figures
	Suspected         []string    `json:"suspected,omitempty"`         // pieces any of which, if wrong, would explain the contradiction
	LoadOnRecord      *Quantity   `json:"load_on_record_N_per_m"`      // as it hangs, for comparison
	Looked            bool        `json:"load_on_record_was_evidence"` // somebody looked at the loads
	Says              string      `json:"says"`                        // one sentence
}

// Outcome says whether the evidence holds together.
type Outcome string

// The outcomes of the reconciliation.
const (
	Agrees       Outcome = "nothing disagrees"
	OneDisagrees Outcome = "one disagrees"
	CannotTell   Outcome = "cannot tell which" // one wrong piece would explain it, but which one is open
	SeveralWrong Outcome = "several disagree"  // no single wrong piece would explain it
)

// Piece is one piece of evidence in the adjustment, in the SI unit that it names.
type Piece struct {
	Name     string   `json:"name"`
	Unit     string   `json:"unit"`
	Given    Quantity `json:"given"`
	Needed   *float64 `json:"needed"`              // what it would have to be by all the rest; nil when nothing checks it
	UApart   *float64 `json:"u_apart"`             // standard uncertainty of needed minus given
	Residual *float64 `json:"normalised_residual"` // (needed - given) / u_apart
	Detects  *float64 `json:"detectable"`          // error that the global test finds four times out of five
}

// main reports whether the piece is evidence of its own; stiffness and temperature only carry the unstressed length, the shape has
// been tested by its own points.
func (p Piece) main() bool {
	return p.Name != pieceShape && p.Name != pieceAxial && p.Name != pieceWarmth
}

// Scale is the unit in which the piece is printed.
func (p Piece) Scale() Scale {
	switch p.Unit {
	case "N":
		return ForceScale(p.Given.Value)
	case "1/m":
		return Scale{"1/km", 1e-3}
	case "degC":
		return DegreeCelsius
	}
	return Scale{p.Unit, 1}
}
