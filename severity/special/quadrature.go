package special

import "math"

// moments are those of v >= 0 under the weight of an integral over [0, ∞),
// itself 1 at v = 0.
type moments struct {
	mass     float64 // the integral
	mean     float64 // E[v]
	variance float64 // Var[v]
	gap      float64 // E[1 - e^-v]
}

// tailDrop is the exponent at which the integrals are cut: e^-41 = 1.6e-18.
const tailDrop = 41

// For large shapes near the transition, with T = z e^v above z and T = z e^-v
// below it,
//
//	Γ(a,z) = z^a e^-z ∫₀^∞ exp(-(z-a)v - z(e^v - 1 - v)) dv,
//	γ(a,z) = z^a e^-z ∫₀^∞ exp(-(a-z)v - z(e^-v - 1 + v)) dv,
//
// whose integrands are between a half normal and an exponential curve; one
// Gauss–Legendre rule serves them all.

// upperEnd is where the upper weight has fallen by tailDrop, or a little more.
func upperWeightEnd(slope, z float64) float64 {
	return 2 * tailDrop / (slope + math.Hypot(slope, math.Sqrt(2*tailDrop)*math.Sqrt(z)))
}

// lowerWeightEnd is the same of the lower weight: one step of Newton's method
// from the left of a convex function ends on its right.
func lowerWeightEnd(slope, z float64) float64 {
	v := upperWeightEnd(slope, z)
	f := slope*v + z*expExcess(-v) - tailDrop
	return v - f/(slope-z*math.Expm1(-v))
}

func upperMass(a, z float64) float64 {
	slope := z - a
	end := upperWeightEnd(slope, z)
	var mass float64
	for i := range legendre {
		v := end * legendre[i].node
		mass += legendre[i].weight * math.Exp(-slope*v-z*expExcess(v))
	}
	return end * mass
}

func lowerMass(a, z float64) float64 {
	slope := a - z
	end := lowerWeightEnd(slope, z)
	var mass float64
	for i := range legendre {
		v := end * legendre[i].node
		mass += legendre[i].weight * math.Exp(-slope*v-z*expExcess(-v))
	}
	return end * mass
}

func upperMoments(a, z float64) moments {
	slope := z - a
	end := upperWeightEnd(slope, z)
	var m0, m1, m2, gap float64
	for i := range legendre {
		x := legendre[i].node
		v := end * x
		e := expExcess(v)
		w := legendre[i].weight * math.Exp(-slope*v-z*e)
		m0 += w
		w *= x
		m1 += w
		m2 += w * x
		e += v // e^v - 1
		gap += w / x * (e / (1 + e))
	}
	return newMoments(end, m0, m1, m2, gap)
}

func lowerMoments(a, z float64) moments {
	slope := a - z
	end := lowerWeightEnd(slope, z)
	var m0, m1, m2, gap float64
	for i := range legendre {
		x := legendre[i].node
		v := end * x
		e := expExcess(-v)
		w := legendre[i].weight * math.Exp(-slope*v-z*e)
		m0 += w
		gap += w * (v - e)
		w *= x
		m1 += w
		m2 += w * x
	}
	return newMoments(end, m0, m1, m2, gap)
}

// newMoments scales sums over [0, 1] to [0, end].
func newMoments(end, m0, m1, m2, gap float64) moments {
	r := 1 / m0
	mean := m1 * r
	return moments{
		mass:     end * m0,
		mean:     end * mean,
		variance: end * end * (m2*r - mean*mean),
		gap:      gap * r,
	}
}
