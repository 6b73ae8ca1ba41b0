package survey

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// MovedMark is a control mark that does not fit the others between two surveys.
type MovedMark struct {
	ID    string
	Shift [3]float64 // E, N, Z in the frame of the earlier survey, m
	U     [3]float64 // standard uncertainty of each from the two surveys of the mark, m
	P     float64    // probability of so large a misfit by chance when nothing moved, before it was taken out
}

// Congruence is what the control marks of two surveys say about each other.
type Congruence struct {
	Stable           []string    // marks that fit each other
	Moved            []MovedMark // in the order in which they were found
	Misfit           float64     // weighted sum of squares of the stable marks
	DegreesOfFreedom int
	P                float64    // probability of at least that misfit when nothing moved
	Shift            [3]float64 // of the later frame against the earlier one, at Centre, m
	Turn             float64    // of the later frame against the earlier one, rad clockwise
	Centre           [3]float64 // centroid of the shared marks in the earlier survey, m
	Undecided        bool       // the marks do not fit, and too few are left to say which moved
}

// pairOfMarks is one mark in both surveys.
type pairOfMarks struct {
	id                  string
	before, after       [3]float64
	covBefore, covAfter Cov3
	weight              *mat.SymDense // inverse of the sum of the two covariances in the later frame, 1/m2
}

// leastStable is the number of marks that must be left: with two, neither could be told from the other.
const leastStable = 3

// CompareMarks is the global congruence test of the control marks of two surveys with localisation: the later marks are laid on the earlier ones by
// a shift and a turn about the vertical (weighted least squares), and the misfit
//
//	sum v' (C_before + C_after)^-1 v,  chi-square with 3 m - 4 degrees of freedom
//
// is tested at the probability alpha (0.05 is usual). While it fails, the mark whose removal lowers the misfit most is taken as moved, as long
// as three are left. Marks are matched by id; all need a covariance (a survey with standard deviations, or raw readings), and three must be
// shared. Frames may differ: a datum shift is no movement. Source: Pelzer (1971), Zur Analyse geodätischer Deformationsmessungen; Caspary (1987),
// Concepts of Network and Deformation Analysis.
func CompareMarks(before, after []Point, alpha float64) (*Congruence, error) {
	pairs, err := pairMarks(before, after)
	if err != nil {
		return nil, err
	}
	c := &Congruence{}
	for _, p := range pairs {
		for k := range 3 {
			c.Centre[k] += p.before[k] / float64(len(pairs))
		}
	}
	for {
		x, misfit, err := overlay(pairs, c.Centre)
		if err != nil {
			return nil, err
		}
		c.Misfit, c.DegreesOfFreedom = misfit, 3*len(pairs)-4
		c.P = distuv.ChiSquared{K: float64(c.DegreesOfFreedom)}.Survival(misfit)
		c.Shift, c.Turn = [3]float64(x[:3]), x[3]
		if c.P >= alpha {
			break
		}
		if len(pairs) == leastStable {
			c.Undecided = true
			break
		}
		worst, left := -1, math.Inf(1)
		var frame []float64
		for i := range pairs {
			x, m, err := overlay(slices.Delete(slices.Clone(pairs), i, i+1), c.Centre)
			if err != nil {
				return nil, err
			}
			if m < left {
				worst, left, frame = i, m, x
			}
		}
		p := pairs[worst]
		cov := p.covAfter.turned(-frame[3]).plus(p.covBefore)
		c.Moved = append(c.Moved, MovedMark{ID: p.id, Shift: p.moved(frame, c.Centre), P: c.P, U: [3]float64{math.Sqrt(cov.EE), math.Sqrt(cov.NN), math.Sqrt(cov.ZZ)}})
		pairs = slices.Delete(pairs, worst, worst+1)
	}
	for _, p := range pairs {
		c.Stable = append(c.Stable, p.id)
	}
	return c, nil
}

// pairMarks matches marks by id.
func pairMarks(before, after []Point) (pairs []pairOfMarks, err error) {
	for _, b := range before {
		i := slices.IndexFunc(after, func(a Point) bool { return a.ID == b.ID })
		if i < 0 {
			continue
		}
		a := after[i]
		if !a.HasCov || !b.HasCov {
			return nil, fmt.Errorf("mark %s has no accuracy in one of the surveys: marks are compared only with it; add columns sx, sy, sz or the accuracy of the instrument", quote(b.ID))
		}
		p := pairOfMarks{id: b.ID, before: [3]float64{b.E, b.N, b.Z}, after: [3]float64{a.E, a.N, a.Z}, covBefore: b.Cov, covAfter: a.Cov}
		pairs = append(pairs, p)
	}
	if len(pairs) < leastStable {
		return nil, fmt.Errorf("%d control marks are in both surveys, expected at least %d: give them the same ids in both", len(pairs), leastStable)
	}
	turn := roughOverlay(pairs, [3]float64{})[3]
	for i := range pairs {
		if err := pairs[i].weigh(turn); err != nil {
			return nil, err
		}
	}
	return pairs, nil
}

// weigh adds the two covariances in the later frame, into which the earlier one is turned.
func (p *pairOfMarks) weigh(turn float64) error {
	c := p.covBefore.turned(turn).plus(p.covAfter)
	full := mat.NewSymDense(3, []float64{c.EE, c.EN, c.EZ, c.EN, c.NN, c.NZ, c.EZ, c.NZ, c.ZZ})
	p.weight = mat.NewSymDense(3, nil)
	var chol mat.Cholesky
	if !chol.Factorize(full) {
		return fmt.Errorf("mark %s has an impossible covariance", quote(p.id))
	}
	if err := chol.InverseTo(p.weight); err != nil {
		return fmt.Errorf("mark %s: %w", quote(p.id), err)
	}
	return nil
}

// turned is the covariance in a frame in which azimuths are larger by the turn, rad.
func (c Cov3) turned(turn float64) Cov3 {
	sin, cos := math.Sincos(turn)
	return Cov3{EE: c.EE*cos*cos + 2*c.EN*sin*cos + c.NN*sin*sin, NN: c.NN*cos*cos - 2*c.EN*sin*cos + c.EE*sin*sin, ZZ: c.ZZ,
		EN: (c.NN-c.EE)*sin*cos + c.EN*(cos*cos-sin*sin), EZ: c.EZ*cos + c.NZ*sin, NZ: c.NZ*cos - c.EZ*sin}
}

// laid is the earlier mark in the later frame x (shift E N Z and turn), seen from the centre.
func (p *pairOfMarks) laid(x []float64, centre [3]float64) [3]float64 {
	sin, cos := math.Sincos(x[3])
	e, n := p.before[0]-centre[0], p.before[1]-centre[1]
	return [3]float64{centre[0] + x[0] + e*cos + n*sin, centre[1] + x[1] + n*cos - e*sin, p.before[2] + x[2]}
}

// moved is by how much the mark is off the frame, turned back into the earlier one.
func (p *pairOfMarks) moved(x []float64, centre [3]float64) [3]float64 {
	to := p.laid(x, centre)
	sin, cos := math.Sincos(x[3])
	e, n := p.after[0]-to[0], p.after[1]-to[1]
	return [3]float64{e*cos - n*sin, n*cos + e*sin, p.after[2] - to[2]}
}

// overlay is shift and turn by weighted least squares, Gauss-Newton from the unweighted answer, with the weighted sum of squares.
func overlay(pairs []pairOfMarks, centre [3]float64) (x []float64, misfit float64, err error) {
	x = roughOverlay(pairs, centre)
	for range 20 {
		normal, right := mat.NewSymDense(4, nil), mat.NewVecDense(4, nil)
		misfit = 0
		for i := range pairs {
			p := &pairs[i]
			to := p.laid(x, centre)
			v := mat.NewVecDense(3, []float64{p.after[0] - to[0], p.after[1] - to[1], p.after[2] - to[2]})
			j := mat.NewDense(3, 4, []float64{1, 0, 0, to[1] - centre[1] - x[1], 0, 1, 0, -(to[0] - centre[0] - x[0]), 0, 0, 1, 0})
			var wj, jwj mat.Dense
			wj.Mul(p.weight, j)
			jwj.Mul(j.T(), &wj)
			var jwv mat.VecDense
			jwv.MulVec(wj.T(), v)
			right.AddVec(right, &jwv)
			for r := range 4 {
				for c := r; c < 4; c++ {
					normal.SetSym(r, c, normal.At(r, c)+jwj.At(r, c))
				}
			}
			misfit += mat.Inner(v, p.weight, v)
		}
		var chol mat.Cholesky
		step := mat.NewVecDense(4, nil)
		if !chol.Factorize(normal) || chol.SolveVecTo(step, right) != nil {
			return nil, 0, fmt.Errorf("the control marks lie on one spot: they fix no frame")
		}
		largest := 0.0
		for k := range 4 {
			x[k] += step.AtVec(k)
			largest = max(largest, math.Abs(step.AtVec(k)))
		}
		if largest < 1e-12*(1+math.Abs(x[0])+math.Abs(x[1])) {
			break
		}
	}
	return x, misfit, nil
}

// roughOverlay is shift and turn with equal weights, in closed form.
func roughOverlay(pairs []pairOfMarks, centre [3]float64) []float64 {
	var b, a [3]float64
	for _, p := range pairs {
		for k := range 3 {
			b[k], a[k] = b[k]+p.before[k]/float64(len(pairs)), a[k]+p.after[k]/float64(len(pairs))
		}
	}
	cross, dot := 0.0, 0.0
	for _, p := range pairs {
		be, bn, ae, an := p.before[0]-b[0], p.before[1]-b[1], p.after[0]-a[0], p.after[1]-a[1]
		cross, dot = cross+ae*bn-an*be, dot+ae*be+an*bn
	}
	turn := math.Atan2(cross, dot)
	sin, cos := math.Sincos(turn)
	e, n := b[0]-centre[0], b[1]-centre[1]
	return []float64{a[0] - centre[0] - (e*cos + n*sin), a[1] - centre[1] - (n*cos - e*sin), a[2] - b[2], turn}
}
