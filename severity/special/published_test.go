package special

import (
	"math"
	"testing"
)

// TestPublished: values and identities printed elsewhere.
func TestPublished(t *testing.T) {
	const euler = 0.57721566490153286061 // DLMF 5.2.3
	near := func(source string, got, want, tolerance float64) {
		t.Helper()
		if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
			t.Errorf("%s: %.17g, published %.17g", source, got, want)
		}
	}
	near("Γ(1/2) = √π, DLMF 5.4.6", LogGamma(0.5), 0.5*math.Log(math.Pi), 1e-15)
	near("ψ(1) = -γ, DLMF 5.4.12", Digamma(1), -euler, 1e-15)
	near("ψ(1/2) = -γ - 2 ln 2, DLMF 5.4.13", Digamma(0.5), -euler-2*math.Ln2, 1e-15)
	near("ψ'(1) = π²/6, DLMF 5.15.1", Trigamma(1), math.Pi*math.Pi/6, 1e-15)
	near("ψ'(1/2) = π²/2, DLMF 5.15.3", Trigamma(0.5), math.Pi*math.Pi/2, 1e-15)
	near("E1(1), Abramowitz & Stegun table 5.1", math.Exp(LogExponentialIntegral(1)), 0.219383934, 5e-9)
	near("E1(0.5), Abramowitz & Stegun table 5.1", math.Exp(LogExponentialIntegral(0.5)), 0.559773595, 5e-9)
	// Chi-square upper points, Abramowitz & Stegun table 26.8; these and the two
	// of table 5.1 are quoted from memory.
	for _, c := range []struct{ freedom, q, point, half float64 }{
		{1, 0.05, 3.84146, 5e-6}, {2, 0.1, 4.60517, 5e-6}, {10, 0.05, 18.3070, 5e-5}, {30, 0.01, 50.8922, 5e-5}, {100, 0.005, 140.169, 5e-4},
	} {
		near("chi-square point, Abramowitz & Stegun table 26.8",
			2*math.Exp(InverseUpper(c.freedom/2, math.Log(c.q))), c.point, c.half/c.point)
	}
	for _, z := range []float64{1e-9, 0.01, 0.3, 1, 1.49, 1.51, 2.5, 7, 30, 600} {
		// Q(1,z) = e^-z, DLMF 8.4.8; its jet is known to the second order in z.
		j := LogUpperJet(1, z)
		near("ln Q(1,z) = -z", j.Log, -z, 5e-15)
		near("∂ ln Q(1,z)/∂z = -1", j.DZ, -1, 5e-15)
		if j.DZZ != 0 {
			t.Errorf("∂² ln Q(1,%g)/∂z² = %g, is 0", z, j.DZZ)
		}
		// ∂Q(a,z)/∂a at a = 1 is E1(z) + e^-z (ln z + γ): integrate by parts.
		e1 := math.Exp(LogExponentialIntegral(z) + z)
		near("∂ ln Q/∂a at a = 1", j.DA, e1+math.Log(z)+euler, 1e-14/math.Min(1, j.DA))
		// Q(1/2,z) = erfc √z, DLMF 8.4.6.
		if z < 600 {
			near("Q(1/2,z) = erfc √z", math.Exp(LogUpper(0.5, z)), math.Erfc(math.Sqrt(z)), 2e-14)
		}
		// Q(n+1,z) = e^-z Σ z^k/k!, DLMF 8.4.10.
		for _, n := range []int{1, 2, 5, 12, 40} {
			sum, term := 1.0, 1.0
			for k := 1; k <= n; k++ {
				term *= z / float64(k)
				sum += term
			}
			if log := math.Log(sum) - z; log < -0.01 {
				near("Q(n+1,z), DLMF 8.4.10", LogUpper(float64(n+1), z), log, 1e-14*(1+z/math.Abs(log)))
			}
		}
	}
}
