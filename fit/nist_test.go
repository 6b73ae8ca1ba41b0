package fit

import (
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// strd is one NIST StRD regression set (US government work, public domain).
type strd struct {
	head     map[string]string
	names    []string // of the columns after y
	y        []float64
	rows     [][]float64
	n        int
	t        testing.TB
	variable map[string]dual
}

func (s *strd) numbers(key string) (out []float64) {
	for _, w := range strings.Fields(s.head[key]) {
		v, err := strconv.ParseFloat(w, 64)
		if err != nil {
			s.t.Fatalf("%s: %s: %v", s.head["name"], key, err)
		}
		out = append(out, v)
	}
	return out
}

func readStRD(t testing.TB, path string) *strd {
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	s := &strd{head: map[string]string{}, t: t, variable: map[string]dual{}}
	body := false
	for _, line := range strings.Split(strings.TrimSpace(string(text)), "\n") {
		switch {
		case strings.HasPrefix(line, "#"):
		case strings.HasPrefix(line, "data:"):
			body = true
		case !body:
			k, v, _ := strings.Cut(line, ":")
			s.head[k] = strings.TrimSpace(v)
		default:
			var row []float64
			for _, w := range strings.Fields(line) {
				v, err := strconv.ParseFloat(w, 64)
				if err != nil {
					t.Fatal(err)
				}
				row = append(row, v)
			}
			y := row[0]
			if s.head["response"] == "log(y)" {
				y = math.Log(y)
			}
			s.y, s.rows = append(s.y, y), append(s.rows, row[1:])
		}
	}
	s.names = strings.Fields(s.head["columns"])[1:]
	s.n, _ = strconv.Atoi(s.head["params"])
	return s
}

func (s *strd) Size() (int, int) { return len(s.y), s.n }

func (s *strd) model(theta []float64, i int) dual {
	for j, b := range theta {
		v := dual{v: b}
		v.d[j] = 1
		s.variable["b"+strconv.Itoa(j+1)] = v
	}
	for k, name := range s.names {
		s.variable[name] = dual{v: s.rows[i][k]}
	}
	r, err := evaluate(s.head["model"], s.variable)
	if err != nil {
		s.t.Fatal(err)
	}
	return r
}

func (s *strd) Evaluate(theta, r, j []float64) {
	m := len(s.y)
	for i := range m {
		d := s.model(theta, i)
		r[i] = d.v - s.y[i]
		if j != nil {
			for k := range s.n {
				j[k*m+i] = d.d[k]
			}
		}
	}
}

// digits is the log relative error, capped at the 11 digits that are certified.
func digits(got, want float64) float64 {
	if got == want {
		return 11
	}
	return math.Min(11, -math.Log10(math.Abs(got-want)/math.Abs(want)))
}

// Reference: NIST StRD nonlinear regression, certified values. The solver that fits cables must reach 8 digits of every
// parameter and 6 of every standard deviation from both starts.
func TestNISTNonlinear(t *testing.T) {
	files, err := filepath.Glob("testdata/nist/*.txt")
	if err != nil || len(files) != 31 {
		t.Fatalf("%d files, %v, want 31", len(files), err)
	}
	sets := 0
	for _, path := range files {
		s := readStRD(t, path)
		starts := []string{"start1", "start2"}
		if s.head["kind"] == "linear" {
			starts = []string{""}
		}
		sets++
		for _, start := range starts {
			name := s.head["name"] + " " + start
			first := make([]float64, s.n)
			if start != "" {
				first = s.numbers(start)
			}
			var solver Solver
			solver.MaxIterations = 5000
			sol := solver.Solve(s, first)
			if err := sol.Status.Err(); err != nil {
				t.Errorf("%s: %v after %d", name, err, sol.Iterations)
			}
			theta := append([]float64(nil), sol.Theta...)
			cov := make([]float64, s.n*s.n)
			condition, covErr := solver.Covariance(cov)
			worst, worstU := 11.0, 11.0
			scale := sol.Sum / float64(len(s.y)-s.n)
			for j, want := range s.numbers("certified") {
				worst = math.Min(worst, digits(theta[j], want))
				if covErr == nil {
					worstU = math.Min(worstU, digits(math.Sqrt(cov[j*s.n+j]*scale), s.numbers("stddev")[j]))
				}
			}
			t.Logf("%-18s %4d iterations, %4.1f digits, u %4.1f digits, condition %.1e %v", name, sol.Iterations, worst, worstU, condition, covErr)
			fewest, fewestU := 8.0, 6.0
			switch s.head["name"] {
			case "Lanczos1":
				fewestU = 2.5 // its residuals are of order 1e-13 on data of order 1: rounding of float64 leaves three digits of their sum
			case "Wampler5", "Filip":
				fewest = 6 // terms of the polynomial cancel to a millionth and less of their size
			}
			if !(worst >= fewest) || !(worstU >= fewestU) {
				t.Errorf("%s: %.1f digits of parameters, %.1f of standard deviations", name, worst, worstU)
			}
		}
	}
	if sets != 31 {
		t.Fatalf("%d sets", sets)
	}
}
