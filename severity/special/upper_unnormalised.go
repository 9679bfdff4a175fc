package special

import "math"

// LogUpperUnnormalised is ln Γ(a,z), the incomplete gamma function itself, for
// any finite a, negative and zero included, and 0 < z <= +Inf (-Inf at +Inf);
// NaN elsewhere. For a > 0 it is ln Q(a,z) + ln Γ(a). DLMF 8.2.2. Measured
// relative error 2.7e-14, near its zeros that of one unit in the last place of z
// (TestUnnormalisedTable, testdata/special/negative.csv).
func LogUpperUnnormalised(a, z float64) float64 {
	return LogUpperUnnormalisedJet(a, z).Log
}

// LogUpperUnnormalisedJet is ln Γ(a,z) with its derivatives, on the domain of
// LogUpperUnnormalised. With T of the density proportional to t^(a-1) e^-t
// beyond z,
//
//	DA = E[ln T],  DAA = Var[ln T],  DZ = -h = -z^(a-1) e^-z/Γ(a,z),
//	DAZ = h E[ln(T/z)],  DZZ = -(h/z)(a-1) E[1 - z/T].
//
// At a = 0 it belongs to the density t^-1 e^-t beyond z: the boundary of the
// gamma family as the shape falls to zero above a deductible. Measured relative
// error: 3e-14, and 1.8e-13 of DAA at -10 < a < 0 about z = 1.
func LogUpperUnnormalisedJet(a, z float64) Jet {
	switch {
	case math.IsNaN(a) || math.IsInf(a, 0) || !(z > 0):
		return nanJet()
	case math.IsInf(z, 1):
		return Jet{Log: math.Inf(-1), DA: math.Inf(1), DZ: -1}
	}
	logZ := math.Log(z)
	var u upperTail
	switch {
	case a > 1 && !lowerRegion(a, z):
		s := NewShape(a)
		u = s.upperTail(z)
		u.log += LogGamma(a)
	case a > nearZeroReach && (a > 1 || z < 1):
		s := NewShape(a)
		j := s.LogUpperJet(z)
		j.Log += LogGamma(a)
		j.DA += Digamma(a)
		j.DAA += s.tri
		return j
	case a > -fractionReach && z < 1:
		u = stepDownTail(a, z, logZ)
	default:
		u = fractionTail(a, z, 10+int(800/(8*z+math.Max(0, -a))))
		u.log = a*logZ - z - math.Log(u.hazard)
	}
	h := u.hazard / z
	return Jet{
		Log: u.log,
		DA:  u.mean + logZ,
		DZ:  -h,
		DAA: u.variance,
		DAZ: h * u.mean,
		DZZ: -h / z * u.excess,
	}
}

// LogExponentialIntegral is ln E1(z) = ln Γ(0,z) for 0 < z <= +Inf, NaN
// elsewhere. DLMF 6.2.1, 8.4.4. Measured relative error 2.2e-15
// (TestUnnormalisedTable).
func LogExponentialIntegral(z float64) float64 { return LogUpperUnnormalised(0, z) }

// nearZeroReach bounds |a| for nearZeroTail.
const nearZeroReach = 0.5

// fractionReach: for a below its negative the fraction is short at any z.
const fractionReach = 20

// stepDownTail is the upper tail for -20 < a <= 1/2 and small z: the recurrence
// a Γ(a,z) = Γ(a+1,z) - z^a e^-z (DLMF 8.8.2) downwards from |a| <= 1/2, on
// F(a) = z^-a Γ(a,z) and its derivatives.
func stepDownTail(a, z, logZ float64) upperTail {
	steps := math.Max(0, math.Ceil(-0.5-a))
	b := a + steps
	t := nearZeroTail(b, z, logZ)
	f := t.log
	f1 := f * t.mean
	f2 := f * (t.variance + t.mean*t.mean)
	e := math.Exp(-z)
	for ; steps > 0; steps-- {
		b--
		r := -1 / b
		f, f1, f2 = (e-z*f)*r, z*f1, z*f2
		f1 = (f - f1) * r
		f2 = (2*f1 - f2) * r
	}
	r := 1 / f
	hazard := e * r
	mean := f1 * r
	return upperTail{
		log:      a*logZ + math.Log(f),
		hazard:   hazard,
		mean:     mean,
		variance: f2*r - mean*mean,
		excess:   a - 1 - z + hazard,
	}
}
