package special

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestAlgorithmsAgree: the series, the fraction and the quadrature are
// independent, and each is valid some way into the region of its neighbours.
// There they are compared densely, at random points of a fixed seed; so is the
// fraction with itself at three times its levels.
func TestAlgorithmsAgree(t *testing.T) {
	r := rand.New(rand.NewPCG(20260121, 1))
	e := newErrors()
	compare := func(name string, got, want, tolerance float64) {
		t.Helper()
		e.compare(t, name, "a random point", got, want, tolerance)
	}
	between := func(low, high float64) float64 { return low * math.Pow(high/low, r.Float64()) }
	for range 30000 {
		// upper quadrature and fraction
		a := between(100, 2e4)
		z := a + 5*r.Float64()*math.Sqrt(a)
		m, u := upperMoments(a, z), fractionTail(a, z, 600)
		compare("quadrature mass", m.mass, 1/u.hazard, 1e-14)
		compare("quadrature mean", m.mean, u.mean, 2e-14)
		compare("quadrature variance", m.variance, u.variance, 1e-13)
		compare("quadrature gap", (a-1)*m.gap, u.excess, 1e-14)

		// lower quadrature and series
		z = a * (0.3 + 0.7*r.Float64())
		m, s := lowerMoments(a, z), positiveSums(a, z)
		compare("lower quadrature mass", a*m.mass, s.sum, 2e-14)
		compare("lower quadrature mean", m.mean, 1/a+s.mean, 3e-14)
		compare("lower quadrature variance", m.variance, 1/(a*a)+s.curvature, 1e-13)
		compare("lower quadrature excess", z*m.gap, s.degree, 3e-14)

		// the number of levels
		a = between(1e-4, 1e6)
		z = math.Max(smallArgument, a) + 10*r.Float64()*math.Sqrt(a+1)
		d := z - a
		spread := d * (d / z)
		if a <= quadratureFrom || spread >= fractionSpread {
			levels := fractionLevels(a, z, spread)
			u, v := fractionTail(a, z, levels), fractionTail(a, z, 3*levels+40)
			compare("fraction hazard", u.hazard, v.hazard, 1e-15)
			compare("fraction mean", u.mean, v.mean, 1e-14)
			compare("fraction variance", u.variance, v.variance, 1e-13)
			compare("fraction excess", u.excess, v.excess, 1e-14)
		}

		// the two series of the lower tail, on the values of P they give
		a = between(1e-3, 3)
		z = between(1e-6, 1.5)
		b, b1, b2 := alternatingSums(a, z)
		s = positiveSums(a, z)
		compare("series", math.Exp(-z)*s.sum, 1+b, 1e-14)
		compare("series mean", 1/a+s.mean, 1/a-b1/(1+b), 1e-14)
		compare("series variance", 1/(a*a)+s.curvature, 1/(a*a)+b2/(1+b)-b1*b1/((1+b)*(1+b)), 3e-14)
	}
	e.report(t)
}
