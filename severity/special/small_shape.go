package special

import "math"

// About a = 0 the upper tail is E1 and its neighbours. For z < 3/2, with
// g = ln Γ(1+a)/a, w = g - ln z and E(s) = (e^s - 1)/s,
//
//	z^-a Γ(a,z) = ∫₀^∞ exp(av - z e^v) dv = w E(aw) - G,
//	G = Σ (-z)^n / (n! (a+n)), n >= 1,
//
// which is regular in a; at a = 0 it is DLMF 6.6.2.

// smallShape is the shape below which the derivatives of ln Q come from that
// integral when z < 3/2: near a = 0 they have powers of 1/a that P would lose.
const smallShape = 0.25

// smallShapeTail is Q in the lower region for small shapes, as long as Q is
// not near 1; false where the lower tail is to be used.
func (s *Shape) smallShapeTail(z, logZ float64) (upperTail, bool) {
	a := s.a
	if !(a < smallShape) || a*logZ < -1 {
		return upperTail{}, false
	}
	u := nearZeroTail(a, z, logZ)
	u.log = s.logPower(z).add(math.Log(a * u.log))
	return u, true
}

// nearZeroTail is the upper tail for |a| <= 1/2, z < 3/2; its log holds the
// integral itself.
func nearZeroTail(a, z, logZ float64) upperTail {
	g, g1, g2 := logGammaSlope(a)
	w := g - logZ
	s := a * w
	s1 := w + a*g1
	s2 := 2*g1 + a*g2
	e, e1, e2 := exponentialMeans(s)
	f := w * e
	f1 := g1*e + w*e1*s1
	f2 := g2*e + 2*g1*e1*s1 + w*(e2*s1*s1+e1*s2)
	power := 1.0
	for n := 1; n < len(inverse); n++ {
		power *= -z * inverse[n]
		r := 1 / (a + float64(n))
		t := power * r
		f -= t
		t *= r
		f1 += t
		f2 -= 2 * t * r
		if math.Abs(power) < 1e-18*z {
			break
		}
	}
	r := 1 / f
	mean := f1 * r
	hazard := math.Exp(-z) * r
	return upperTail{
		log:      f,
		hazard:   hazard,
		mean:     mean,
		variance: f2*r - mean*mean,
		excess:   a - 1 - z + hazard,
	}
}

// upperIntegral is z^-a Γ(a,z) for |a| <= 1/2, z < 3/2; slope is ln Γ(1+a)/a.
func upperIntegral(a, slope, z, logZ float64) float64 {
	w := slope - logZ
	f := w * exponentialMean(a*w)
	power := 1.0
	for n := 1; n < len(inverse); n++ {
		power *= -z * inverse[n]
		f -= power / (a + float64(n))
		if math.Abs(power) < 1e-18*z {
			break
		}
	}
	return f
}

// logGammaSlope is g = ln Γ(1+a)/a and its first two derivatives, |a| <= 1/2:
// DLMF 5.7.3 divided by a, g = -γ + Σ (-1)^k ζ(k) a^(k-1)/k, k >= 2.
func logGammaSlope(a float64) (g, g1, g2 float64) {
	n := len(zetaMinusOne) - 1
	switch x := math.Abs(a); {
	case x < 0.01:
		n = 11
	case x < 0.1:
		n = 21
	case x < 0.25:
		n = 35
	}
	for k := n; k >= 2; k-- {
		g2 = g2*a + g1
		g1 = g1*a + g
		g = g*a + logGammaSlopeTaylor[k]
	}
	g2 = g2*a + g1
	g1 = g1*a + g
	g = g*a - eulerGamma
	return g, g1, 2 * g2
}

var logGammaSlopeTaylor = func() (c [len(zetaMinusOne)]float64) {
	sign := 1.0
	for k := 2; k < len(c); k++ {
		c[k] = sign * (1 + zetaMinusOne[k]) / float64(k)
		sign = -sign
	}
	return c
}()

// exponentialMean is E(s) = (e^s - 1)/s.
func exponentialMean(s float64) float64 {
	if s == 0 {
		return 1
	}
	return math.Expm1(s) / s
}

// exponentialMeans is E, E' and E”: ∫₀¹ t^m e^(st) dt for m = 0, 1, 2.
func exponentialMeans(s float64) (e, e1, e2 float64) {
	if s > 1 || s < -1 {
		x := math.Exp(s)
		e = math.Expm1(s) / s
		e1 = (x - e) / s
		e2 = (x - 2*e1) / s
		return e, e1, e2
	}
	power := 1.0
	for k := 0; k < 20; k++ {
		e += power * inverse[k+1]
		e1 += power * inverse[k+2]
		e2 += power * inverse[k+3]
		power *= s * inverse[k+1]
		if math.Abs(power) < 1e-18 {
			break
		}
	}
	return e, e1, e2
}
