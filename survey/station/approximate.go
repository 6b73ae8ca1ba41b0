package station

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// start gives the unknowns values near the truth: set-ups are placed one after the other on two known points each, or on one and a
// known orientation; points seen from placed set-ups become known.
func (a *adjustment) start() error {
	known := map[string][3]float64{}
	for name, m := range a.marks {
		known[name] = [3]float64{m.E, m.N, m.Z}
	}
	placed := map[string]bool{}
	if a.local {
		first := a.names[0]
		o := a.origin(first)
		copy(a.x[a.setups[first]:], append(o[:], a.orient[first]))
		placed[first] = true
		known[first] = [3]float64{}
		a.spread(first, known)
	}
	for len(placed) < len(a.names) {
		before := len(placed)
		for _, name := range a.names {
			if !placed[name] && a.place(name, known) {
				placed[name] = true
				a.spread(name, known)
			}
		}
		if len(placed) == before {
			i := slices.IndexFunc(a.names, func(s string) bool { return !placed[s] })
			return a.loose(a.names[i], known)
		}
	}
	for _, name := range a.points {
		if _, ok := known[name]; !ok {
			p, err := a.intersect(name)
			if err != nil {
				return err
			}
			known[name] = p
		}
		p := known[name]
		copy(a.x[a.ties[name]:], p[:])
	}
	return nil
}

// loose names the set-up that cannot be placed and why.
func (a *adjustment) loose(name string, known map[string][3]float64) error {
	shared, line := 0, 0
	for _, s := range a.sights {
		if s.Setup == name {
			if line == 0 {
				line = s.Line
			}
			if _, ok := known[s.Target]; ok && s.Slope > 0 {
				shared++
			}
		}
	}
	if _, over := known[name]; over {
		return &Fault{line, "", name, "a backsight to a known point or a known orientation for this set-up", fmt.Sprintf("add its backsight, or a line \"# orientation: %s; 123 45 06\" at the top", name)}
	}
	return &Fault{line, "", name, fmt.Sprintf("two points of this set-up that are known or seen from a set-up that is connected: it has %d", shared),
		"give more targets the same names as from the other set-ups, or add \"# mark: NAME; E; N; Z\" lines"}
}

// polar is the vector of a sight with a distance from the axis to the point, with the circle as azimuth.
func (a *adjustment) polar(s *Sight) [3]float64 {
	hd, dh := Reduce(s.Slope, s.Zenith, a.in.K)
	hd *= a.in.scale()
	return [3]float64{hd * math.Sin(s.Horizontal), hd * math.Cos(s.Horizontal), dh - s.TargetHeight}
}

// place puts a set-up on the known points that it shares: rotation and shift by least squares in plan, mean in height.
func (a *adjustment) place(name string, known map[string][3]float64) bool {
	var local, world [][3]float64
	if k, over := known[name]; over {
		local, world = append(local, [3]float64{0, 0, -a.heights[name]}), append(world, k)
	}
	for i := range a.sights {
		s := &a.sights[i]
		if k, ok := known[s.Target]; ok && s.Setup == name && s.Slope > 0 {
			local, world = append(local, a.polar(s)), append(world, k)
		} else if at, over := known[name]; ok && over && s.Setup == name { // a direction alone to a known point
			d := math.Hypot(k[0]-at[0], k[1]-at[1])
			local = append(local, [3]float64{d * math.Sin(s.Horizontal), d * math.Cos(s.Horizontal), k[2] - at[2] - a.heights[name]})
			world = append(world, k)
		}
	}
	turnBy, turned := a.orient[name]
	if len(world) == 0 || len(world) == 1 && !turned {
		return false
	}
	var cl, cw [3]float64
	for i := range world {
		for k := range 3 {
			cl[k] += local[i][k] / float64(len(world))
			cw[k] += world[i][k] / float64(len(world))
		}
	}
	if !turned {
		cross, dot := 0.0, 0.0
		for i := range world {
			le, ln, we, wn := local[i][0]-cl[0], local[i][1]-cl[1], world[i][0]-cw[0], world[i][1]-cw[1]
			cross, dot = cross+we*ln-wn*le, dot+we*le+wn*ln
		}
		turnBy = math.Atan2(cross, dot)
	}
	sin, cos := math.Sincos(turnBy)
	copy(a.x[a.setups[name]:], []float64{cw[0] - (cl[0]*cos + cl[1]*sin), cw[1] - (cl[1]*cos - cl[0]*sin), cw[2] - cl[2], turnBy})
	return true
}

// spread makes the targets of a placed set-up known.
func (a *adjustment) spread(name string, known map[string][3]float64) {
	at := a.x[a.setups[name]:]
	for i := range a.sights {
		s := &a.sights[i]
		if _, ok := known[s.Target]; ok || s.Setup != name || s.Slope == 0 {
			continue
		}
		l := a.polar(s)
		sin, cos := math.Sincos(at[3])
		known[s.Target] = [3]float64{at[0] + l[0]*cos + l[1]*sin, at[1] + l[1]*cos - l[0]*sin, at[2] + l[2]}
	}
}

// intersect is a point seen from two set-ups without a distance: forward intersection in plan, height from the first.
func (a *adjustment) intersect(name string) ([3]float64, error) {
	var rays []*Sight
	for i := range a.sights {
		if a.sights[i].Target == name {
			rays = append(rays, &a.sights[i])
		}
	}
	p, q := a.x[a.setups[rays[0].Setup]:], a.x[a.setups[rays[len(rays)-1].Setup]:]
	az, bz := rays[0].Horizontal+p[3], rays[len(rays)-1].Horizontal+q[3]
	sine := math.Sin(bz - az)
	d := ((q[0]-p[0])*math.Cos(bz) - (q[1]-p[1])*math.Sin(bz)) / math.Sin(az-bz)
	if math.Abs(sine) < 0.02 || d <= 0 {
		return [3]float64{}, &Fault{rays[0].Line, "", name, "rays that cross in front of both set-ups at more than 1 degree", "read a distance to it, or see it from a better place"}
	}
	return [3]float64{p[0] + d*math.Sin(az), p[1] + d*math.Cos(az), p[2] + d/math.Tan(rays[0].Zenith) - rays[0].TargetHeight}, nil
}

// reduce gives every target coordinates and the covariance of the sights to it.
func (a *adjustment) reduce(n *Network) error {
	n.Points, n.Cov, n.Home = map[string][3]float64{}, map[string][3][3]float64{}, map[string]string{}
	info := map[string]*mat.SymDense{}
	for i := range a.sights {
		s := &a.sights[i]
		at := a.x[a.setups[s.Setup] : a.setups[s.Setup]+4]
		p, tie := a.ties[s.Target]
		var point [3]float64
		switch {
		case tie:
			point = [3]float64(a.x[p : p+3])
		case s.Slope == 0:
			return &Fault{s.Line, "slope", "", "a distance, or a sight to the same target from another set-up", "fill the cell, or take the row out"}
		default:
			l := a.polar(s)
			sin, cos := math.Sincos(at[3])
			point = [3]float64{at[0] + l[0]*cos + l[1]*sin, at[1] + l[1]*cos - l[0]*sin, at[2] + l[2]}
		}
		n.Points[s.Target] = point
		if _, ok := n.Home[s.Target]; !ok {
			n.Home[s.Target] = s.Setup
		}
		if info[s.Target] == nil {
			info[s.Target] = mat.NewSymDense(3, nil)
		}
		g := a.geometry(s, at, point)
		for k, sigma := range [3]float64{s.SigmaHorizontal, s.SigmaZenith, s.SigmaSlope} {
			if k == 2 && s.Slope == 0 {
				continue
			}
			row := mat.NewVecDense(3, g.j[k][:])
			info[s.Target].SymRankOne(info[s.Target], 1/(sigma*sigma), row)
		}
	}
	for name, m := range info {
		var chol mat.Cholesky
		var inverse mat.SymDense
		if !chol.Factorize(m) {
			return fmt.Errorf("point %q is not fixed by the sights to it", name)
		}
		if err := chol.InverseTo(&inverse); err != nil {
			return fmt.Errorf("point %q is hardly fixed by the sights to it: %w", name, err)
		}
		var c [3][3]float64
		for i := range 3 {
			for j := range 3 {
				c[i][j] = inverse.At(i, j)
			}
		}
		n.Cov[name] = c
	}
	return nil
}
