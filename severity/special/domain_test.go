package special

import (
	"math"
	"testing"
)

// wellFormed complains of what no jet of a logarithm of a probability may be.
func wellFormed(t *testing.T, a, z float64) {
	t.Helper()
	for i, j := range []Jet{LogUpperJet(a, z), LogLowerJet(a, z)} {
		for _, v := range []float64{j.Log, j.DA, j.DZ, j.DAA, j.DAZ, j.DZZ} {
			if math.IsNaN(v) {
				t.Fatalf("NaN in tail %d at a=%v z=%v: %+v", i, a, z, j)
			}
		}
		if upper := i == 0; j.Log > 0 || j.DAA > 0 || j.DAZ < 0 ||
			upper && (j.DA < 0 || j.DZ > 0) || !upper && (j.DA > 0 || j.DZ < 0 || j.DZZ > 0) {
			t.Fatalf("a wrong sign in tail %d at a=%v z=%v: %+v", i, a, z, j)
		}
	}
	u, l := LogUpper(a, z), LogLower(a, z)
	if sum := math.Exp(u) + math.Exp(l); !(math.Abs(sum-1) < 2e-15) {
		t.Fatalf("P + Q = %v at a=%v z=%v", sum, a, z)
	}
}

// TestWholeRange: every pair of magnitudes in [1e-300, 1e300], and around the
// transition of each shape.
func TestWholeRange(t *testing.T) {
	var xs []float64
	for e := -300; e <= 300; e += 4 {
		for _, m := range []float64{1, 1.0000000001, 3.7} {
			if x := m * math.Pow(10, float64(e)); x <= 1e300 {
				xs = append(xs, x)
			}
		}
	}
	for _, a := range xs {
		for _, z := range xs {
			wellFormed(t, a, z)
		}
		for _, k := range []float64{-40, -12, -5, -1, -0.01, 0, 0.01, 1, 3.999, 4.001, 12, 40} {
			if z := a + k*math.Sqrt(a); z >= 1e-300 && z <= 1e300 {
				wellFormed(t, a, z)
			}
		}
		for _, z := range xs {
			for _, j := range []Jet{LogUpperUnnormalisedJet(a, z), LogUpperUnnormalisedJet(-a, z), LogUpperUnnormalisedJet(0, z)} {
				for _, v := range []float64{j.Log, j.DA, j.DZ, j.DAA, j.DAZ, j.DZZ} {
					if math.IsNaN(v) {
						t.Fatalf("NaN of ln Γ(±%v or 0, %v): %+v", a, z, j)
					}
				}
				if j.DZ > 0 || j.DAA < 0 || j.DAZ < 0 {
					t.Fatalf("a wrong sign of ln Γ(±%v or 0, %v): %+v", a, z, j)
				}
			}
		}
		if s := StirlingCorrection(a); !(s > 0) {
			t.Fatalf("StirlingCorrection(%g) = %g", a, s)
		}
	}
}

// FuzzJets: any a and z in [1e-300, 1e300].
func FuzzJets(f *testing.F) {
	for _, p := range points {
		f.Add(p.a, p.z)
	}
	f.Add(1e-300, 1e300)
	f.Add(1e300, 1e-300)
	f.Fuzz(func(t *testing.T, a, z float64) {
		a, z = math.Abs(a), math.Abs(z)
		if a >= 1e-300 && a <= 1e300 && z >= 1e-300 && z <= 1e300 {
			wellFormed(t, a, z)
			return
		}
		LogUpperJet(a, z) // outside: no panic
		LogLowerJet(a, z)
	})
}

// FuzzInverses: no panic and no NaN inside the domain, and a root on the right
// side of the median.
func FuzzInverses(f *testing.F) {
	f.Add(0.001, -0.7)
	f.Add(1e4, -690.0)
	f.Fuzz(func(t *testing.T, a, log float64) {
		a, log = math.Abs(a), -math.Abs(log)
		x, y := InverseLower(a, log), InverseUpper(a, log)
		if a >= 1e-300 && a <= 1e300 && log >= -1e300 && (math.IsNaN(x) || math.IsNaN(y)) {
			t.Fatalf("a=%v log=%v: ln z = %v from P, %v from Q", a, log, x, y)
		}
		if log < -0.7 && x > y {
			t.Fatalf("a=%v: the lower quantile %v is above the upper one %v", a, x, y)
		}
	})
}

func TestEnds(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"ln Q(2,0)", LogUpper(2, 0), 0},
		{"ln P(2,0)", LogLower(2, 0), -inf},
		{"ln Q(2,inf)", LogUpper(2, inf), -inf},
		{"ln P(2,inf)", LogLower(2, inf), 0},
		{"ln E1(inf)", LogExponentialIntegral(inf), -inf},
		{"hazard of a = 1/2 at 0", -LogUpperJet(0.5, 0).DZ, inf},
		{"hazard of a = 1 at 0", -LogUpperJet(1, 0).DZ, 1},
		{"hazard of a = 2 at 0", -LogUpperJet(2, 0).DZ, 0},
		{"hazard at inf", -LogUpperJet(3, inf).DZ, 1},
		{"slope of the hazard of a = 2 at 0", -LogUpperJet(2, 0).DZZ, 1},
		{"slope of the hazard of a = 3 at 0", -LogUpperJet(3, 0).DZZ, 0},
	} {
		if c.got != c.want {
			t.Errorf("%s = %g, expected %g", c.name, c.got, c.want)
		}
	}
	// ψ'(1+a), the limit of -∂² ln P/∂a² at z = 0, is π²/6 - 1 at a = 1.
	if got, want := -LogLowerJet(1, 0).DAA, math.Pi*math.Pi/6-1; math.Abs(got-want) > 1e-15 {
		t.Errorf("-∂² ln P(1,0)/∂a² = %v, expected %v", got, want)
	}
}

func TestOutsideTheDomain(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range [][2]float64{{0, 1}, {-1, 1}, {inf, 1}, {nan, 1}, {1, -1}, {1, nan}, {-inf, 1}} {
		for i, j := range []Jet{LogUpperJet(c[0], c[1]), LogLowerJet(c[0], c[1])} {
			for _, v := range []float64{j.Log, j.DA, j.DZ, j.DAA, j.DAZ, j.DZZ} {
				if !math.IsNaN(v) {
					t.Errorf("tail %d at %v: %+v, expected NaN", i, c, j)
					break
				}
			}
		}
		if u, l := LogUpper(c[0], c[1]), LogLower(c[0], c[1]); !math.IsNaN(u) || !math.IsNaN(l) {
			t.Errorf("at %v: %g and %g, expected NaN", c, u, l)
		}
	}
	for _, a := range []float64{0, -1, -0.5, nan, inf, -inf} {
		for i, v := range []float64{LogGamma(a), Digamma(a), Trigamma(a), StirlingCorrection(a), LogMinusDigamma(a)} {
			if !math.IsNaN(v) {
				t.Errorf("function %d at %g: %g, expected NaN", i, a, v)
			}
		}
	}
	for _, v := range []float64{LogUpperUnnormalised(nan, 1), LogUpperUnnormalised(1, -1), LogUpperUnnormalised(-1, 0),
		LogUpperUnnormalised(inf, 1), LogExponentialIntegral(0), LogExponentialIntegral(-1), LogDefect(-2)} {
		if !math.IsNaN(v) {
			t.Errorf("%g, expected NaN", v)
		}
	}
	if got := LogDefect(-1); got != inf {
		t.Errorf("LogDefect(-1) = %g, expected +Inf", got)
	}
	var zero Shape
	if got := zero.LogUpper(1); !math.IsNaN(got) {
		t.Errorf("the zero Shape gives %g, expected NaN", got)
	}
}
