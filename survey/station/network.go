package station

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// Mark is a point with known coordinates.
type Mark struct {
	Name    string
	E, N, Z float64 // m
	U       float64 // standard deviation of each coordinate, m; 0 = held fixed
}

// held is the standard deviation of what is held fixed, m and rad: small beside every reading, large enough to invert.
const held = 1e-6

// mostUnknowns is the limit on the adjustment, which keeps a full matrix.
const mostUnknowns = 1500

// Residual is what the adjustment left of one observation.
type Residual struct {
	Setup, Target string
	What          string  // direction, zenith angle, distance, easting, northing, height
	Value         float64 // observed minus adjusted, rad or m
	Normalised    float64 // by its own standard deviation (Baarda 1968); 0 when nothing checks it
	Line          int     // 0 for a known coordinate
}

// Network is an adjusted group of set-ups.
type Network struct {
	Setups           []string
	Points           map[string][3]float64 // every target, E N Z in m
	Cov              map[string][3][3]float64
	Home             map[string]string // the set-up that each point was reduced from
	Residuals        []Residual        // of the adjustment, in order
	DegreesOfFreedom int
	VarianceFactor   float64
	Local            bool // no mark was known: the first set-up is (0, 0, 0) and its circle points north
	Iterations       int

	at  map[string]int // first unknown of a set-up
	x   []float64
	cov *mat.SymDense
}

// adjustment is the working state: unknowns are E, N, Z and orientation of each set-up, then E, N, Z of each tie point.
type adjustment struct {
	in      Instrument
	sights  []Sight
	marks   map[string]Mark
	orient  map[string]float64
	setups  map[string]int
	ties    map[string]int
	names   []string // set-ups
	points  []string // tie points in order
	x       []float64
	rows    [][]term
	misfit  []float64
	kind    []Residual
	local   bool
	heights map[string]float64
}

type term struct {
	at    int
	value float64
}

// Adjust connects set-ups through marks and common targets by weighted least squares and gives every target's coordinates. Unknown are the
// position and orientation of each set-up and the coordinates of every target that is a mark or is seen from several set-ups; observations
// are directions, zenith angles and slope distances with their standard deviations, known coordinates, known orientations, and the
// centring of a set-up over a mark. Without marks the first set-up is the origin. Cov of a point is that of the sights to it alone: what its set-up
// shares with all points seen from it moves and turns them together and leaves their shape alone; Between gives what two
// set-ups differ by. Gauss-Newton; Mikhail and Gracie (1981), Analysis and Adjustment of Survey Measurements.
func Adjust(sights []Sight, marks []Mark, orientations map[string]float64, in Instrument) (*Network, error) {
	a := &adjustment{in: in, sights: sights, marks: map[string]Mark{}, orient: orientations, setups: map[string]int{}, ties: map[string]int{}, heights: map[string]float64{}}
	for _, m := range marks {
		a.marks[m.Name] = m
	}
	if err := a.layOut(); err != nil {
		return nil, err
	}
	if err := a.start(); err != nil {
		return nil, err
	}
	n := &Network{Setups: a.names, Local: a.local, at: a.setups}
	var err error
	for n.Iterations = 1; ; n.Iterations++ {
		a.build()
		var step []float64
		if step, n.cov, err = a.solve(); err != nil {
			return nil, err
		}
		largest := 0.0
		for i, d := range step {
			a.x[i] += d
			largest = max(largest, math.Abs(d))
		}
		if largest < 1e-9 {
			break
		}
		if n.Iterations == 50 {
			return nil, errors.New("the adjustment of the set-ups does not settle: a reading towards a mark is far off, or two points have changed names")
		}
	}
	a.build()
	n.x = a.x
	a.judge(n)
	return n, a.reduce(n)
}

// layOut numbers the unknowns.
func (a *adjustment) layOut() error {
	a.names = Setups(a.sights)
	for i, s := range a.names {
		a.setups[s] = 4 * i
	}
	seen := map[string]string{}
	tie := func(name string) {
		if _, ok := a.ties[name]; !ok {
			a.ties[name] = 4*len(a.names) + 3*len(a.points)
			a.points = append(a.points, name)
		}
	}
	for _, s := range a.sights {
		a.heights[s.Setup] = s.InstrumentHigh
		_, known := a.marks[s.Target]
		_, station := a.setups[s.Target]
		if other, again := seen[s.Target]; known || station || again && other != s.Setup {
			tie(s.Target)
		}
		seen[s.Target] = s.Setup
	}
	a.local = true
	for _, s := range a.names {
		if _, known := a.marks[s]; known {
			tie(s)
		}
	}
	for _, p := range a.points {
		if _, known := a.marks[p]; known {
			a.local = false
		}
	}
	n := 4*len(a.names) + 3*len(a.points)
	if n > mostUnknowns {
		return fmt.Errorf("%d set-ups and %d common points are %d unknowns, more than %d: adjust them in parts", len(a.names), len(a.points), n, mostUnknowns)
	}
	a.x = make([]float64, n)
	return nil
}

// row adds one observation: misfit is observed minus computed, sigma its standard deviation.
func (a *adjustment) row(r Residual, misfit, sigma float64, terms ...term) {
	for i := range terms {
		terms[i].value /= sigma
	}
	r.Value = misfit
	a.rows, a.misfit, a.kind = append(a.rows, terms), append(a.misfit, misfit/sigma), append(a.kind, r)
}

// build linearises every observation at the present unknowns.
func (a *adjustment) build() {
	a.rows, a.misfit, a.kind = nil, nil, nil
	for i := range a.sights {
		s := &a.sights[i]
		if p, ok := a.ties[s.Target]; ok {
			a.sight(s, p)
		}
	}
	what := [3]string{"easting", "northing", "height"}
	for _, name := range a.points {
		m, ok := a.marks[name]
		for k, v := range [3]float64{m.E, m.N, m.Z} {
			if p := a.ties[name]; ok {
				a.row(Residual{Target: name, What: what[k]}, v-a.x[p+k], max(m.U, held), term{p + k, 1})
			}
		}
	}
	for i, name := range a.names {
		at := a.setups[name]
		if p, over := a.ties[name]; over {
			for k, up := range [3]float64{0, 0, a.heights[name]} {
				a.row(Residual{Setup: name, What: what[k]}, up+a.x[p+k]-a.x[at+k], max(a.in.Centring, held), term{at + k, 1}, term{p + k, -1})
			}
		} else if a.local && i == 0 {
			for k := range 3 {
				a.row(Residual{Setup: name, What: what[k]}, a.origin(name)[k]-a.x[at+k], held, term{at + k, 1})
			}
		}
		o, known := a.orient[name]
		if a.local && i == 0 || known {
			a.row(Residual{Setup: name, What: "orientation"}, turn(o-a.x[at+3]), held, term{at + 3, 1})
		}
	}
	if _, over := a.ties[a.names[0]]; a.local && over {
		for k := range 3 {
			p := a.ties[a.names[0]]
			a.row(Residual{Target: a.names[0], What: what[k]}, -a.x[p+k], held, term{p + k, 1})
		}
	}
}

// origin is where the axis of the first set-up of a local frame stands: over (0, 0, 0).
func (a *adjustment) origin(name string) [3]float64 { return [3]float64{0, 0, a.heights[name]} }

// sight adds the two or three observations of a sight to the point whose unknowns start at p.
func (a *adjustment) sight(s *Sight, p int) {
	at := a.setups[s.Setup]
	g := a.geometry(s, a.x[at:at+4], [3]float64(a.x[p:p+3]))
	centring := 0.0
	if _, mark := a.marks[s.Target]; mark {
		centring = a.in.Centring
	}
	for k, what := range [3]string{"direction", "zenith angle", "distance"} {
		if k == 2 && s.Slope == 0 {
			continue
		}
		sigma := [3]float64{s.SigmaHorizontal, s.SigmaZenith, s.SigmaSlope}[k]
		sigma = math.Hypot(sigma, centring/[3]float64{g.hd, g.slope, 1}[k])
		terms := make([]term, 0, 7)
		for c := range 3 {
			terms = append(terms, term{p + c, g.j[k][c]}, term{at + c, -g.j[k][c]})
		}
		if k == 0 {
			terms = append(terms, term{at + 3, -1})
		}
		a.row(Residual{Setup: s.Setup, Target: s.Target, What: what, Line: s.Line}, g.misfit[k], sigma, terms...)
	}
}

// seen is the geometry of a sight: misfits (observed minus computed) of direction, zenith angle and slope distance, and their
// derivatives by E, N, Z of the point.
type seen struct {
	hd, slope float64
	misfit    [3]float64
	j         [3][3]float64
}

// geometry works with the point's target, TargetHeight above it, and undoes scale, curvature and refraction of the reading.
func (a *adjustment) geometry(s *Sight, setup []float64, point [3]float64) seen {
	de, dn := point[0]-setup[0], point[1]-setup[1]
	grid := math.Hypot(de, dn)
	c := a.in.scale()
	hd := grid / c
	bend := (1 - a.in.K) / (2 * EarthRadius)
	dz := point[2] + s.TargetHeight - setup[2] - bend*hd*hd
	g := seen{hd: grid, slope: math.Hypot(hd, dz)}
	g.misfit = [3]float64{turn(s.Horizontal - (math.Atan2(de, dn) - setup[3])), s.Zenith - math.Atan2(hd, dz), s.Slope - g.slope}
	g.j[0] = [3]float64{dn / (grid * grid), -de / (grid * grid), 0}
	// by horizontal distance as read and by height: zenith angle and slope, then the chain to E, N, Z
	q := g.slope * g.slope
	down := -2 * bend * hd
	zh, sh := (dz-hd*down)/q, (hd+dz*down)/g.slope
	for k, along := range [2]float64{de / (grid * c), dn / (grid * c)} {
		g.j[1][k], g.j[2][k] = zh*along, sh*along
	}
	g.j[1][2], g.j[2][2] = -hd/q, dz/g.slope
	return g
}

// solve is one step of the weighted least squares and the covariance of the unknowns.
func (a *adjustment) solve() ([]float64, *mat.SymDense, error) {
	n := len(a.x)
	normal, right := mat.NewSymDense(n, nil), mat.NewVecDense(n, nil)
	for i, row := range a.rows {
		for _, t := range row {
			right.SetVec(t.at, right.AtVec(t.at)+t.value*a.misfit[i])
			for _, u := range row {
				if u.at >= t.at {
					normal.SetSym(t.at, u.at, normal.At(t.at, u.at)+t.value*u.value)
				}
			}
		}
	}
	// unit diagonal: metres and radians differ by orders of magnitude
	scale := make([]float64, n)
	for i := range scale {
		if d := normal.At(i, i); d > 0 {
			scale[i] = 1 / math.Sqrt(d)
		}
	}
	for i := range n {
		for j := i; j < n; j++ {
			normal.SetSym(i, j, normal.At(i, j)*scale[i]*scale[j])
		}
		right.SetVec(i, right.AtVec(i)*scale[i])
	}
	var chol mat.Cholesky
	if !chol.Factorize(normal) || chol.Cond() > 1e14 {
		return nil, nil, errors.New("the readings do not fix every set-up: more sights to marks or common points are needed")
	}
	step, inverse := mat.NewVecDense(n, nil), mat.NewSymDense(n, nil)
	if err := chol.SolveVecTo(step, right); err != nil {
		return nil, nil, fmt.Errorf("the adjustment of the set-ups: %w", err)
	}
	if err := chol.InverseTo(inverse); err != nil {
		return nil, nil, fmt.Errorf("the adjustment of the set-ups: %w", err)
	}
	out := make([]float64, n)
	for i := range n {
		out[i] = step.AtVec(i) * scale[i]
		for j := i; j < n; j++ {
			inverse.SetSym(i, j, inverse.At(i, j)*scale[i]*scale[j])
		}
	}
	return out, inverse, nil
}

// judge fills in residuals and the variance factor.
func (a *adjustment) judge(n *Network) {
	n.DegreesOfFreedom = len(a.rows) - len(a.x)
	sum := 0.0
	for i, row := range a.rows {
		v := a.misfit[i]
		sum += v * v
		leverage := 0.0
		for _, t := range row {
			for _, u := range row {
				leverage += t.value * n.cov.At(t.at, u.at) * u.value
			}
		}
		r := a.kind[i]
		if free := 1 - leverage; free > 1e-6 {
			r.Normalised = v / math.Sqrt(free)
		}
		n.Residuals = append(n.Residuals, r)
	}
	if n.DegreesOfFreedom > 0 {
		n.VarianceFactor = sum / float64(n.DegreesOfFreedom)
	}
}

// Worst is the residual with the largest normalised value, nil when nothing is checked.
func (n *Network) Worst() *Residual {
	if n.DegreesOfFreedom == 0 {
		return nil
	}
	i := 0
	for k, r := range n.Residuals {
		if math.Abs(r.Normalised) > math.Abs(n.Residuals[i].Normalised) {
			i = k
		}
	}
	return &n.Residuals[i]
}

// SetupPosition is the adjusted tilting axis of a set-up, E N Z in m, and its orientation, rad.
func (n *Network) SetupPosition(name string) [4]float64 {
	i := n.at[name]
	return [4]float64(n.x[i : i+4])
}

// Between is the covariance, m2, of what two set-ups differ by at a point: shift and turn of one against the other.
func (n *Network) Between(one, two string, point [3]float64) (out [3][3]float64) {
	if one == two {
		return out
	}
	j := func(name string) [3][]term {
		i := n.at[name]
		e, north := point[0]-n.x[i], point[1]-n.x[i+1]
		return [3][]term{{{i, 1}, {i + 3, north}}, {{i + 1, 1}, {i + 3, -e}}, {{i + 2, 1}}}
	}
	a, b := j(one), j(two)
	var d [3][]term
	for k := range 3 {
		d[k] = slices.Clone(a[k])
		for _, t := range b[k] {
			d[k] = append(d[k], term{t.at, -t.value})
		}
	}
	for r := range 3 {
		for c := range 3 {
			for _, t := range d[r] {
				for _, u := range d[c] {
					out[r][c] += t.value * n.cov.At(t.at, u.at) * u.value
				}
			}
		}
	}
	return out
}
