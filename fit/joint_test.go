package fit

import (
	"math"
	"testing"
)

// jointSurveys are the invented surveys of testdata/joint: every point has its own covariance, in one survey with
// correlation between station and height.
func jointSurveys(t testing.TB) map[string][]Observation {
	out := map[string][]Observation{}
	for i, r := range referenceTable(t, "joint/surveys.csv") {
		out[r["survey"]] = append(out[r["survey"]], Observation{Line: i + 2, S: number(t, r, "s"), Z: number(t, r, "z"),
			VarS: number(t, r, "var_s"), CovSZ: number(t, r, "cov_sz"), VarZ: number(t, r, "var_z")})
	}
	return out
}

// Reference: testdata/joint/values.csv, made by agree.py there with scipy.optimize.curve_fit (heights alone), scipy.odr
// (errors in both coordinates) and a joint least squares over curve and foot points with the full covariance of every
// point, which scipy.odr cannot take. The constant to 1e-8, its standard uncertainty and the sum of squares to 1e-8.
func TestFullCovarianceAgreesWithScipy(t *testing.T) {
	surveys := jointSurveys(t)
	methods, worst := map[string]int{}, 0.0
	for _, ref := range referenceTable(t, "joint/values.csv") {
		obs := append([]Observation(nil), surveys[ref["survey"]]...)
		if ref["method"] == "vertical" {
			for i := range obs {
				obs[i].VarS, obs[i].CovSZ = 0, 0
			}
		}
		_, lo, hi := stations(obs)
		r, err := InPlane(obs, Frame{}, End{Station: lo}, End{Station: hi}, Options{Shape: Shape(ref["shape"])})
		if err != nil {
			t.Fatalf("%s %s: %v", ref["survey"], ref["method"], err)
		}
		methods[ref["method"]]++
		k := r.Curve.Curvature
		u := math.Sqrt(r.Cov[2][2]/(r.ScaledBy*r.Widening*r.Widening)) / (k * k)
		for _, q := range []struct {
			key string
			got float64
		}{
			{"constant", 1 / k}, {"u_constant", u}, {"sum", r.VarianceFactor * float64(r.DegreesOfFreedom)},
		} {
			want := number(t, ref, q.key)
			d := math.Abs(q.got/want - 1)
			worst = math.Max(worst, d)
			if !(d <= 1e-8) {
				t.Errorf("%s %s: %s = %.12g, %s: %.12g (relative %.1e)", ref["survey"], ref["method"], q.key, q.got, ref["made_by"], want, d)
			}
		}
	}
	if methods["vertical"] != 6 || methods["joint"] != 6 || methods["odr"] != 5 {
		t.Fatalf("compared %v, want 6 vertical, 6 joint and 5 odr", methods)
	}
	t.Logf("worst relative difference %.1e", worst)
}

// A positive covariance of station and height speaks for a point that is off along its own error ellipse: the sign of
// CovSZ must reach residual and Jacobian. Taken with the wrong sign the constant of this survey moves by several u.
func TestSignOfCovarianceMatters(t *testing.T) {
	obs := jointSurveys(t)["correlated"]
	_, lo, hi := stations(obs)
	right, err := InPlane(obs, Frame{}, End{Station: lo}, End{Station: hi}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i := range obs {
		obs[i].CovSZ = -obs[i].CovSZ
	}
	wrong, err := InPlane(obs, Frame{}, End{Station: lo}, End{Station: hi}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if right.VarianceFactor > right.ChiSquareHigh {
		t.Errorf("variance factor %.2f with the covariance as stated", right.VarianceFactor)
	}
	if math.Abs(wrong.VarianceFactor/right.VarianceFactor-1) < 0.1 {
		t.Errorf("variance factor %.3f and %.3f: the sign of the covariance has no effect", right.VarianceFactor, wrong.VarianceFactor)
	}
}
