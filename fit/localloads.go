package fit

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// LocalLoad is a force that hangs at one place of the span, as told before the fit.
type LocalLoad struct {
	Station  float64 // m from A
	Ratio    float64 // P / (w + q), m: the kink is Ratio times Curvature; not used when SizeFree
	URatio   float64 // its standard uncertainty, m: above 0 the size is adjusted, shape and record together; 0 = exact
	SizeFree bool    // nothing is known of the size: it comes from the shape alone
}

// LoadResult is a local load as it went into the fit.
type LoadResult struct {
	Station  float64 `json:"station_m"` // from A
	UStation float64 `json:"u_station_m"`
	Kink     float64 `json:"kink"` // P/H: jump of the slope, positive for a load that hangs
	UKink    float64 `json:"u_kink"`
	Fitted   bool    `json:"fitted"` // the size comes from the shape, with that of the record if it has an uncertainty
	OffTold  float64 `json:"off"`    // size by the shape alone less that of the record, in standard uncertainties; 0 when there is only one
	Found    bool    `json:"found"`  // the place too, by a search
	Chance   float64 `json:"chance"` // probability of so strong a kink anywhere on the span without a load, when found

	// ByRatio is the derivative of (Z1, Z2, Curvature) by the ratio P / (w + q) of a load of told size: m/m, m/m, 1/m2.
	ByRatio [3]float64 `json:"-"`
}

// local is one load of a fit in the making.
type local struct {
	station, kink, ratio float64 // kink is the last estimate, also when it is ratio times curvature
	sizeFree, placeFree  bool
	uRatio               float64 // of a size that is adjusted with the record, else 0
	off                  float64 // of the shape alone from the record
	chance               float64
}

// locals lays out the told loads by station.
func (o Options) locals(a, b End) ([]local, error) {
	var out []local
	for _, l := range o.Loads {
		if !(l.Station > a.Station && l.Station < b.Station) {
			return nil, fmt.Errorf("fit: local load at station %.3f m: expected between the ends of the span, %.3f and %.3f m", l.Station, a.Station, b.Station)
		}
		if !l.SizeFree && !(math.Abs(l.Ratio) < math.Inf(1) && l.URatio >= 0 && l.URatio < math.Inf(1)) {
			return nil, fmt.Errorf("fit: local load at station %.3f m: the ratio to the even load is %g m, u %g m, expected finite lengths", l.Station, l.Ratio, l.URatio)
		}
		told := local{station: l.Station, ratio: l.Ratio, sizeFree: l.SizeFree || l.URatio > 0}
		if !l.SizeFree {
			told.uRatio = l.URatio
		}
		out = append(out, told)
	}
	slices.SortStableFunc(out, func(a, b local) int { return cmp.Compare(a.station, b.station) })
	return out, nil
}

// layout gives the columns of the free sizes and places, and the number of parameters.
func layout(loads []local) (columns []column, n int, err error) {
	n = 3
	for _, l := range loads {
		c := column{ratio: l.ratio, byRatio: !l.sizeFree}
		if l.sizeFree {
			c.kink = n
			n++
		}
		if l.placeFree {
			c.place = n
			n++
		}
		columns = append(columns, c)
	}
	if n > len(gradient{}) {
		return nil, 0, fmt.Errorf("fit: %d sizes and places of local loads to be fitted, at most %d at a time", n-3, maxFree)
	}
	return columns, n, nil
}

// cuspsOf are the local loads of one parameter vector; theta may be nil for the last estimates.
func cuspsOf(loads []local, columns []column, theta []float64, dst []Cusp) []Cusp {
	dst = dst[:0]
	for i, l := range loads {
		k := Cusp{Station: l.station, Kink: l.kink}
		if theta != nil {
			switch c := columns[i]; {
			case c.byRatio:
				k.Kink = l.ratio * theta[2]
			default:
				k.Kink = theta[c.kink]
			}
			if c := columns[i]; c.place > 0 {
				k.Station = theta[c.place]
			}
		}
		dst = append(dst, k)
	}
	return dst
}

// startLoaded fits the parabola with kinks by linear least squares: heights = c + d x + k (x^2/2 + sum ratio (x - s)+) + sum
// kink (x - s)+.
func (p *curveProblem) startLoaded(theta []float64) error {
	n := 3
	for _, l := range p.loads {
		if l.sizeFree {
			n++
		}
	}
	s1 := p.base.S1
	a, b := mat.NewDense(len(p.obs), n, nil), mat.NewVecDense(len(p.obs), nil)
	for i, o := range p.obs {
		x := o.S - s1
		b.SetVec(i, o.Z-p.z0)
		a.Set(i, 0, 1)
		a.Set(i, 1, x)
		bow, at := x*x/2, 3
		for _, l := range p.loads {
			part := math.Max(0, o.S-l.station)
			if l.sizeFree {
				a.Set(i, at, part)
				at++
			} else {
				bow += l.ratio * part
			}
		}
		a.Set(i, 2, bow)
	}
	var x mat.VecDense
	if err := x.SolveVec(a, b); err != nil {
		if _, shaky := err.(mat.Condition); !shaky {
			return fmt.Errorf("%w: %v", ErrRank, err)
		}
	}
	line := func(s float64) float64 { return x.AtVec(0) + x.AtVec(1)*(s-s1) }
	l := p.base.length()
	bow := l * l / 2 * x.AtVec(2)
	at := 3
	for i, load := range p.loads {
		kink := load.ratio * x.AtVec(2)
		if load.sizeFree {
			kink = x.AtVec(at)
			theta[p.columns[i].kink] = kink
			at++
		}
		bow += kink * math.Max(0, p.base.S2-load.station)
		if c := p.columns[i].place; c > 0 {
			theta[c] = load.station
		}
	}
	theta[0], theta[1] = line(s1), line(p.base.S2)+bow
	theta[2] = p.base.curvatureOf(x.AtVec(2), (theta[1]-theta[0])/l)
	return nil
}

// record is what the record says of the size of one load, as one more observation: kink - ratio times curvature is zero within its
// uncertainty.
type record struct {
	kink   int // column
	ratio  float64
	weight float64 // 1 / standard deviation of the kink, on the scale of the residuals
}

// records are the sizes that are adjusted with the record. The scale is the curvature and the scatter of the fit by the shape alone, in
// r; how far that is from the record is kept.
func (r *Result) records() (out []record) {
	scale := 1.0
	if !r.APriori {
		scale = math.Sqrt(r.VarianceFactor)
	}
	k := r.Curve.Curvature
	for i := range r.locals {
		l, c := &r.locals[i], r.columns[i]
		if !(l.uRatio > 0) || c.kink == 0 || k == 0 {
			continue
		}
		told := math.Abs(k) * l.uRatio
		own := r.Full[c.kink*r.n+c.kink] - 2*l.ratio*r.Full[c.kink*r.n+2] + l.ratio*l.ratio*r.Full[2*r.n+2]
		l.off = (l.kink - l.ratio*k) / math.Sqrt(told*told+own*scale*scale)
		out = append(out, record{kink: c.kink, ratio: l.ratio, weight: scale / told})
	}
	return out
}

// keep stores the estimates of the free sizes and places.
func (r *Result) keep(columns []column, theta []float64) {
	for i := range r.locals {
		l, c := &r.locals[i], columns[i]
		l.kink = l.ratio * theta[2]
		if c.kink > 0 {
			l.kink = theta[c.kink]
		}
		if c.place > 0 {
			l.station = theta[c.place]
		}
	}
}

// tellLoads fills Loads from the final fit; the covariance is scaled already.
func (r *Result) tellLoads(w *workspace) error {
	r.Loads = nil
	for i, l := range r.locals {
		c := r.columns[i]
		out := LoadResult{Station: l.station, Kink: l.kink, Fitted: l.sizeFree, OffTold: l.off, Found: l.placeFree, Chance: l.chance}
		if c.kink > 0 {
			out.UKink = math.Sqrt(r.Full[c.kink*r.n+c.kink])
		} else {
			out.UKink = math.Abs(l.ratio) * math.Sqrt(r.Cov[2][2])
			var err error
			if out.ByRatio, err = r.byRatio(w, i); err != nil {
				return err
			}
		}
		if c.place > 0 {
			out.UStation = math.Sqrt(r.Full[c.place*r.n+c.place])
		}
		r.Loads = append(r.Loads, out)
	}
	return nil
}

// byRatio is the derivative of (Z1, Z2, Curvature) by the ratio of load i of told size, by the implicit function theorem: minus
// the covariance of the unscaled fit times J^T dr/dratio.
func (r *Result) byRatio(w *workspace, i int) (out [3]float64, err error) {
	columns := slices.Clone(r.columns)
	columns[i].kink = r.n
	if r.n+1 > len(gradient{}) {
		return out, fmt.Errorf("fit: %d sizes and places of local loads to be fitted, at most %d at a time", r.n-2, maxFree)
	}
	c := r.Curve
	c.Z1, c.Z2 = c.Z1-w.problem.z0, c.Z2-w.problem.z0
	e := c.evaluatorBy(columns)
	var pull gradient // J^T dr/dratio
	var g gradient
	for j := range r.Observations {
		_, sigma := e.foot(&r.Observations[j], w.problem.z0, &g)
		move := g[r.n] * c.Curvature / sigma
		for k := range r.n {
			pull[k] += g[k] / sigma * move
		}
	}
	factor := r.ScaledBy * r.Widening * r.Widening
	for a := range 3 {
		for b := range r.n {
			out[a] -= r.Full[a*r.n+b] / factor * pull[b]
		}
	}
	return out, nil
}
