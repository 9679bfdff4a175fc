package special

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/diff/fd"
	"pgregory.net/rapid"
)

func logUniform(t *rapid.T, name string, low, high float64) float64 {
	return math.Exp(rapid.Float64Range(math.Log(low), math.Log(high)).Draw(t, name))
}

// argument draws z by ratio to a or by distance in standard deviations.
func argument(t *rapid.T, a float64) float64 {
	if rapid.Bool().Draw(t, "transition") {
		z := a + rapid.Float64Range(-15, 15).Draw(t, "k")*math.Sqrt(a)
		if z > 0 {
			return z
		}
	}
	return a * logUniform(t, "ratio", 1e-6, 30)
}

// TestTailsSumToOne: P + Q = 1, in whichever tail each was computed.
func TestTailsSumToOne(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := logUniform(t, "a", 1e-6, 1e9)
		z := argument(t, a)
		p, q := math.Exp(LogLower(a, z)), math.Exp(LogUpper(a, z))
		if math.Abs(p+q-1) > 2e-15 {
			t.Fatalf("P(%g,%g) + Q = 1 + %g", a, z, p+q-1)
		}
	})
}

// TestDerivativesAreThoseOfTheValue: central differences by gonum, of the value
// for the gradient and of the gradient for the second derivatives.
func TestDerivativesAreThoseOfTheValue(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := logUniform(t, "a", 1e-3, 1e5)
		z := a * logUniform(t, "ratio", 0.05, 10)
		if rapid.Bool().Draw(t, "transition") {
			if x := a + rapid.Float64Range(-6, 6).Draw(t, "k")*math.Sqrt(a); x > a/20 {
				z = x
			}
		}
		for _, tail := range []struct {
			name  string
			value func(a, z float64) float64
			jet   func(a, z float64) Jet
		}{{"upper", LogUpper, LogUpperJet}, {"lower", LogLower, LogLowerJet}} {
			j := tail.jet(a, z)
			// relative steps, by the scale on which ln P and ln Q bend
			width := 1 / (1 + math.Max(math.Abs(z-a), math.Sqrt(a)))
			fivePoints := fd.Formula{
				Stencil:    []fd.Point{{Loc: -2, Coeff: 1.0 / 12}, {Loc: -1, Coeff: -2.0 / 3}, {Loc: 1, Coeff: 2.0 / 3}, {Loc: 2, Coeff: -1.0 / 12}},
				Derivative: 1,
				Step:       2e-3 * width,
			}
			alongA := func(f func(s float64) float64) float64 {
				return fd.Derivative(f, 0, &fd.Settings{Formula: fivePoints}) / a
			}
			alongZ := func(f func(s float64) float64) float64 {
				return fd.Derivative(f, 0, &fd.Settings{Formula: fivePoints}) / z
			}
			at := func(pick func(Jet) float64) (byA, byZ func(s float64) float64) {
				return func(s float64) float64 { return pick(tail.jet(a*(1+s), z)) },
					func(s float64) float64 { return pick(tail.jet(a, z*(1+s))) }
			}
			check := func(name string, exact, difference, size float64) {
				if !(math.Abs(exact-difference) <= 1e-6*(math.Abs(exact)+size)) {
					t.Fatalf("%s tail, a=%g z=%g: %s = %g, by differences %g", tail.name, a, z, name, exact, difference)
				}
			}
			// a difference of values of size v, exact to 5e-15, over such a step
			noise := 1e-5 / width
			if math.Abs(j.Log) < 1e-200 || math.Abs(j.Log) > 1e3 {
				continue
			}
			check("DA", j.DA, alongA(func(s float64) float64 { return tail.value(a*(1+s), z) }), noise*math.Abs(j.Log)/a)
			check("DZ", j.DZ, alongZ(func(s float64) float64 { return tail.value(a, z*(1+s)) }), noise*math.Abs(j.Log)/z)
			da, daz := at(func(j Jet) float64 { return j.DA })
			check("DAA", j.DAA, alongA(da), noise*math.Abs(j.DA)/a)
			check("DAZ", j.DAZ, alongZ(daz), noise*math.Abs(j.DA)/z)
			_, dzz := at(func(j Jet) float64 { return j.DZ })
			check("DZZ", j.DZZ, alongZ(dzz), noise*math.Abs(j.DZ)/z)
		}
	})
}

// TestMonotone: ln P increases and ln Q decreases with z, the reverse with a,
// also across the changes of algorithm, up to a few units in the last place.
func TestMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := logUniform(t, "a", 1e-5, 1e7)
		z := argument(t, a)
		for _, step := range []float64{1e-13, 1e-9, 1e-3} {
			slack := func(x float64) float64 { return 1e-13 * math.Abs(x) }
			p, q := LogLower(a, z), LogUpper(a, z)
			if next := LogLower(a, z*(1+step)); next < p-slack(p) {
				t.Fatalf("ln P falls from %g to %g at a=%g z=%g", p, next, a, z)
			}
			if next := LogUpper(a, z*(1+step)); next > q+slack(q) {
				t.Fatalf("ln Q rises from %g to %g at a=%g z=%g", q, next, a, z)
			}
			if next := LogLower(a*(1+step), z); next > p+slack(p) {
				t.Fatalf("ln P rises from %g to %g at a=%g z=%g", p, next, a, z)
			}
			if next := LogUpper(a*(1+step), z); next < q-slack(q) {
				t.Fatalf("ln Q falls from %g to %g at a=%g z=%g", q, next, a, z)
			}
		}
	})
}

// TestInversesInvert: to a relative error of 1e-13 in the probability beyond
// that of the rounded ln z.
func TestInversesInvert(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := logUniform(t, "a", 1e-4, 1e7)
		log := -logUniform(t, "log", 1e-6, 600)
		x := InverseUpper(a, log)
		if z := math.Exp(x); z > 1e-300 {
			slope := -z * LogUpperJet(a, z).DZ
			if got := LogUpper(a, z); math.Abs(got-log) > 1e-13*math.Abs(log)+4e-16*slope*(1+math.Abs(x)) {
				t.Fatalf("ln Q(%g, e^%g) = %g, asked %g", a, x, got, log)
			}
		}
		x = InverseLower(a, log)
		if z := math.Exp(x); z > 1e-300 {
			slope := z * LogLowerJet(a, z).DZ
			if got := LogLower(a, z); math.Abs(got-log) > 1e-13*math.Abs(log)+4e-16*slope*(1+math.Abs(x)) {
				t.Fatalf("ln P(%g, e^%g) = %g, asked %g", a, x, got, log)
			}
		}
	})
}

// TestShapeAgrees: a prepared Shape gives what the functions give.
func TestShapeAgrees(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := logUniform(t, "a", 1e-5, 1e7)
		z := argument(t, a)
		s := NewShape(a)
		if s.LogUpperJet(z) != LogUpperJet(a, z) || s.LogLowerJet(z) != LogLowerJet(a, z) ||
			s.LogUpper(z) != LogUpper(a, z) || s.LogLower(z) != LogLower(a, z) {
			t.Fatalf("a=%g z=%g: the shape disagrees with the functions", a, z)
		}
	})
}
