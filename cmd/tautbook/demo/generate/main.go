// Command generate writes the demonstration site from known states of invented cables, so that every number in the demo
// has a truth behind it. Run it in cmd/tautbook: go run ./demo/generate demo
package main

import (
	"fmt"
	"log"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"

	"tautbook/tension"
)

// wire is one invented cable with what is true of it on the day.
type wire struct {
	name       string
	cable      tension.Cable
	chord      tension.Chord // as designed and as it stands
	h          float64       // design horizontal tension, N
	designT    float64       // degC
	slip       float64       // unstressed length gained since, m
	extra      float64       // load on the day beside the design, N per metre of cable
	dayT       float64
	e0, n0, z0 float64 // support A
	azimuth    float64 // degrees
}

// day is the state on the day of the survey.
func (w wire) day() tension.State {
	built, err := w.cable.AtTension(w.h, w.chord, 0)
	if err != nil {
		log.Fatal(w.name, ": ", err)
	}
	c := w.cable
	c.SelfWeight += w.extra
	st, err := c.AtLength(built.Unstressed+w.slip, w.chord, w.dayT-w.designT)
	if err != nil {
		log.Fatal(w.name, ": ", err)
	}
	return st
}

// point is a surveyed point.
type point struct {
	id, code string
	e, n, z  float64
}

// points surveys n points between 1 % and 99 % of the span and the two supports, with standard deviations in m.
func (w wire) points(rng *rand.Rand, first, n int, sigma, sigmaSupport float64) []point {
	st := w.day()
	az := w.azimuth * math.Pi / 180
	at := func(s, z, sd float64) (float64, float64, float64) {
		return w.e0 + s*math.Sin(az) + sd*rng.NormFloat64(), w.n0 + s*math.Cos(az) + sd*rng.NormFloat64(), w.z0 + z + sd*rng.NormFloat64()
	}
	var out []point
	add := func(code string, s, z, sd float64) {
		p := point{id: fmt.Sprint(first + len(out)), code: code}
		p.e, p.n, p.z = at(s, z, sd)
		out = append(out, p)
	}
	add(w.name+" A", 0, 0, sigmaSupport)
	for i := range n {
		s := w.chord.Length * (0.01 + 0.98*float64(i)/float64(n-1))
		add(w.name, s, st.Height(s), sigma)
	}
	add(w.name+" B", w.chord.Length, w.chord.Rise, sigmaSupport)
	log.Printf("%-11s truth: H %.0f N, expected %.0f N, sag %.4f m", w.name, st.H, w.expected().H, st.SagMid())
	return out
}

// expected is the state of the designed cable on the day under the design load.
func (w wire) expected() tension.State {
	w.slip, w.extra = 0, 0
	return w.day()
}

var (
	mainRope = tension.Cable{DeckLoad: 1450, AxialStiffness: 95e6, Expansion: 12e-6}
	handRope = tension.Cable{SelfWeight: 38, AxialStiffness: 14e6, Expansion: 12e-6}
	across   = tension.Chord{Length: 96, Rise: 1.8}
)

var (
	mainLeft  = wire{name: "main-left", cable: mainRope, chord: across, h: 208800, designT: 10, dayT: 17.5, e0: 2180.4, n0: 7412.9, z0: 486.2, azimuth: 62}
	mainRight = wire{name: "main-right", cable: mainRope, chord: across, h: 208800, designT: 10, dayT: 17.5, slip: 0.34, e0: 2181.5, n0: 7410.8, z0: 486.2, azimuth: 62}
	handLeft  = wire{name: "hand-left", cable: handRope, chord: across, h: 21900, designT: 10, dayT: 18, extra: 30, e0: 2180.4, n0: 7412.9, z0: 487.4, azimuth: 62}
	handRight = wire{name: "hand-right", cable: handRope, chord: across, h: 21900, designT: 10, dayT: 18, e0: 2181.5, n0: 7410.8, z0: 487.4, azimuth: 62}
	guy       = wire{name: "guy-east", cable: tension.Cable{SelfWeight: 37, AxialStiffness: 75e6, Expansion: 12e-6},
		chord: tension.Chord{Length: 38, Rise: 24}, h: 90000, designT: 10, dayT: 26, e0: 2320.7, n0: 7475.2, z0: 470.9, azimuth: 241}
	spanWire = wire{name: "span-wire", cable: tension.Cable{SelfWeight: 2.4, AxialStiffness: 4.6e6, Expansion: 12e-6},
		chord: tension.Chord{Length: 30, Rise: 0.4}, h: 4000, designT: 10, dayT: 14, z0: 478.5}
)

func main() {
	log.SetFlags(0)
	if len(os.Args) != 2 {
		log.Fatal("usage: go run ./demo/generate DIR")
	}
	rng := rand.New(rand.NewPCG(20260611, 7))
	write("main-left.csv", mainLeftFile(rng))
	write("main-right.txt", mainRightFile(rng))
	hand := handFiles(rng)
	write("hand-cables.csv", hand[0])
	write("hand-left-after-a-look.csv", hand[1])
	write("guy-east.csv", guyFile(rng))
	write("span-wire.txt", spanWireFile(rng))
}

func write(name, text string) {
	if err := os.WriteFile(filepath.Join(os.Args[1], name), []byte(text), 0o644); err != nil {
		log.Fatal(err)
	}
}

const invented = "# invented data: no such site exists\n# structure: Talvessa footbridge\n# date: 2026-06-11\n"

func mainLeftFile(rng *rand.Rand) string {
	var b strings.Builder
	b.WriteString(invented + "# temperature: 17.5 +- 1.5 degC\n# wind: light\n# instrument: total station, reflectorless\n# accuracy: 3 mm\n# loads: not checked\n")
	b.WriteString("Point,Northing,Easting,Elevation,Code\n")
	for _, p := range mainLeft.points(rng, 101, 25, 0.003, 0.003) {
		fmt.Fprintf(&b, "%s,%.4f,%.4f,%.4f,%s\n", p.id, p.n, p.e, p.z, p.code)
	}
	b.WriteString("CP1,7398.2120,2171.0350,484.1180,CP\n")
	return b.String()
}

func mainRightFile(rng *rand.Rand) string {
	const foot = 1200.0 / 3937
	var b strings.Builder
	b.WriteString(invented + "# temperature: 63.5 +- 2.7 degF\n# wind: light\n# instrument: total station, reflectorless\n# accuracy: 0.010 us-ft\n# loads: as filed\n")
	b.WriteString("Pt\tE [us-ft]\tN [us-ft]\tElev [us-ft]\tDescription\n")
	for i, p := range mainRight.points(rng, 201, 25, 0.003, 0.003) {
		if i == 9 {
			p.z -= 0.31 // the beam went past the rope and hit a hanger
		}
		fmt.Fprintf(&b, "%s\t%.4f\t%.4f\t%.4f\t%s\n", p.id, p.e/foot, p.n/foot, p.z/foot, p.code)
	}
	return b.String()
}

func handFiles(rng *rand.Rand) [2]string {
	const head = "# temperature: 18 +- 1,5 degC\n# wind: light\n# instrument: total station, reflectorless\n# accuracy: 3 mm\n"
	const columns = "Nr;Rechtswert [m];Hochwert [m];Höhe [m];Code\n"
	comma := func(ps []point) string {
		var b strings.Builder
		for _, p := range ps {
			line := fmt.Sprintf("%s;%.4f;%.4f;%.4f;", p.id, p.e, p.n, p.z)
			b.WriteString(strings.ReplaceAll(line, ".", ",") + p.code + "\n")
		}
		return b.String()
	}
	left, right := comma(handLeft.points(rng, 301, 21, 0.003, 0.002)), comma(handRight.points(rng, 331, 21, 0.003, 0.002))
	before := invented + head + "# loads: not checked\n" + columns + left + right
	after := invented + head + "# loads: listed\n# load: hand-left; 30 +- 2 N/m; along cable; service pipe clipped to the rope, not on file\n" + columns + left
	return [2]string{before, after}
}

func guyFile(rng *rand.Rand) string {
	var b strings.Builder
	b.WriteString(invented + "# temperature: 26 +- 1 degC\n# wind: calm\n# instrument: total station, prisms on the supports\n# loads: as filed\n")
	b.WriteString("id,x [m],y [m],z [m],sx [mm],sy [mm],sz [mm],code\n")
	for i, p := range guy.points(rng, 401, 19, 0.002, 0.0008) {
		sd := 2.0
		if i == 0 || i == 20 {
			sd = 0.8
		}
		fmt.Fprintf(&b, "%s,%.4f,%.4f,%.4f,%.1f,%.1f,%.1f,%s\n", p.id, p.e, p.n, p.z, sd, sd, sd, p.code)
	}
	return b.String()
}

func spanWireFile(rng *rand.Rand) string {
	var b strings.Builder
	b.WriteString(invented + "# wind: gusts\n# instrument: hand-held laser\n# accuracy: 8 mm\n# loads: as filed\n# cable: span-wire\n")
	b.WriteString("station elevation\n")
	st := spanWire.day()
	for _, s := range []float64{1, 6, 11, 15, 20, 25, 29} {
		fmt.Fprintf(&b, "%.3f %.3f\n", s, spanWire.z0+st.Height(s)+0.008*rng.NormFloat64())
	}
	return b.String()
}
