package tension

import "math"

// probe is the length of the step, in standard deviations, of the differences that propagate uncertainty: so small that the
// curvature of the chain over it does not matter (a thousandth of the nonlinearity over one standard deviation), so large
// that the rounding of the state solver, 1e-12 of a figure, does not either.
const probe = 1.0 / 256

// propagated are the outputs with the effect of every source on each of them (JCGM 100:2008, 5.1.3 and 5.2, with the
// correlated survey block split into independent directions).
type propagated struct {
	y      outputs
	lacks  []lack
	effect [][]outputs // per source, per direction: change of each output for one standard deviation
	in     *inputs
}

func (in *inputs) propagate() propagated {
	p := propagated{in: in, effect: make([][]outputs, len(in.sources))}
	p.y, p.lacks = in.evaluate(in.x)
	in.near = p.y
	if in.have[inSpan] && in.have[inRise] && !math.IsNaN(p.y[outS0Design]) {
		var y outputs
		in.filed, _ = in.design(&y, in.x)
	}
	x := make([]float64, len(in.x))
	for i, s := range in.sources {
		p.effect[i] = make([]outputs, len(s.directions))
		for j, d := range s.directions {
			moved := in.moved(x, d)
			for k := range moved {
				p.effect[i][j][k] = (moved[k] - p.y[k]) / probe
			}
		}
	}
	return p
}

// moved is the chain with the inputs of one direction moved by the probe; x is work space.
func (in *inputs) moved(x []float64, d []step) outputs {
	copy(x, in.x)
	for _, s := range d {
		x[s.at] += probe * s.by
	}
	y, _ := in.evaluate(x)
	return y
}

// known reports whether an output and its uncertainty could be worked out.
func (p *propagated) known(out int) bool {
	return !math.IsNaN(p.y[out]) && !math.IsInf(p.y[out], 0) && !math.IsNaN(p.u(out))
}

// u is the combined standard uncertainty of an output.
func (p *propagated) u(out int) float64 {
	sum := 0.0
	for i := range p.effect {
		sum += p.variance(i, out)
	}
	return math.Sqrt(sum)
}

// variance is what one source contributes to the variance of an output.
func (p *propagated) variance(source, out int) float64 {
	sum := 0.0
	for _, d := range p.effect[source] {
		sum += d[out] * d[out]
	}
	return sum
}

// quantity is an output with its uncertainty; nil when it is not known.
func (p *propagated) quantity(out int) *Quantity {
	if !p.known(out) {
		return nil
	}
	return &Quantity{Value: p.y[out], U: p.u(out)}
}

// must is quantity for outputs that always exist.
func (p *propagated) must(out int) Quantity { return Quantity{Value: p.y[out], U: p.u(out)} }

// uDifference is the standard uncertainty of output a minus output b, with their correlation.
func (p *propagated) uDifference(a, b int) float64 {
	sum := 0.0
	for i := range p.effect {
		for _, d := range p.effect[i] {
			e := d[a] - d[b]
			sum += e * e
		}
	}
	return math.Sqrt(sum)
}
