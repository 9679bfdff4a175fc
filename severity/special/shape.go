package special

import "math"

// Shape holds what the incomplete gamma functions need of the shape alone, so
// that many arguments of one shape share the cost of ln Γ, ψ and ψ'. Make it
// with NewShape; the zero value answers NaN. It is read-only and may be shared
// between goroutines.
type Shape struct {
	a         float64
	logGamma1 float64 // ln Γ(1+a), below asymptoticFrom
	stirling  float64 // Stirling's correction, from asymptoticFrom on
	unit      float64 // 1/√(2πa) from asymptoticFrom on, 1 below
	psi1      float64 // ψ(1+a)
	gap       float64 // ln a - ψ(a), from asymptoticFrom on
	tri       float64 // ψ'(a)
	tri1      float64 // ψ'(1+a)
}

// NewShape prepares the shape a, 0 < a < +Inf. Another a is kept as NaN and
// every function of the result is NaN.
func NewShape(a float64) Shape {
	s := valueShape(a)
	s.differentiate()
	return s
}

// valueShape prepares the values only.
func valueShape(a float64) Shape {
	s := Shape{a: a, unit: 1}
	switch {
	case !(a > 0) || math.IsInf(a, 1):
		s.a = math.NaN()
	case a >= asymptoticFrom:
		s.stirling = stirlingSeries(a)
		s.unit = 1 / (sqrtTwoPi * math.Sqrt(a))
	default:
		s.logGamma1 = logGamma1p(a)
	}
	return s
}

// differentiate prepares the derivatives too.
func (s *Shape) differentiate() {
	a := s.a
	r := 1 / a
	if a >= asymptoticFrom {
		s.gap = digammaGap(a)
		s.psi1 = math.Log(a) - s.gap + r
		s.tri = trigammaSeries(a)
		s.tri1 = s.tri - r*r
		return
	}
	s.psi1, s.tri1 = polygamma1p(a)
	s.tri = s.tri1 + r*r
}

// logRatio is ln(z/a), to relative precision near z = a.
func (s *Shape) logRatio(z float64) float64 {
	a := s.a
	if d := z - a; math.Abs(d) <= 0.5*a {
		return math.Log1p(d / a)
	}
	r := z / a
	if r < 1e-290 || r > 1e290 {
		return math.Log(z) - math.Log(a)
	}
	return math.Log(r)
}

// logFront is ln[z^a e^-z / Γ(1+a)] - ln unit. For large shapes the terms are
// centred at a, where they would otherwise cancel. The part that rounding takes away is
// kept: a probability of e^-700 would lose two digits with it.
func (s *Shape) logFront(z float64) double {
	a := s.a
	if a < asymptoticFrom {
		return s.logPower(z).plus(-z)
	}
	d := z - a
	if d < -0.5*a || d > a {
		r := z / a
		var l double
		if r < 1e-290 || r > 1e290 {
			l = double{hi: math.Log(z) - math.Log(a)}
		} else {
			l = logDouble(r).plus(math.FMA(-r, a, z) / z)
		}
		return l.times(a).plus(-z).plus(a).plus(-s.stirling)
	}
	// With y = (z-a)/(z+a), z - a - a ln(z/a) = (z-a)y - 2a(y³/3 + y⁵/5 + ...).
	sum := twoSum(z, a)
	y := d / sum.hi
	yLow := (math.FMA(-y, sum.hi, d) - y*sum.lo) / sum.hi
	return twoProduct(-d, y).plus(-d * yLow).plus(2 * a * y * atanhExcess(y*y)).plus(-s.stirling)
}

// logPower is ln[z^a / Γ(1+a)], for shapes below asymptoticFrom.
func (s *Shape) logPower(z float64) double {
	return logDouble(z).times(s.a).plus(-s.logGamma1)
}

// logOverPsi is ln z - ψ(a).
func (s *Shape) logOverPsi(z, logZ float64) float64 {
	if s.a < asymptoticFrom {
		return logZ - s.psi1 + 1/s.a
	}
	return s.logRatio(z) + s.gap
}

// logOverPsi1 is ln z - ψ(1+a).
func (s *Shape) logOverPsi1(z, logZ float64) float64 {
	if s.a < asymptoticFrom {
		return logZ - s.psi1
	}
	return s.logRatio(z) + (s.gap - 1/s.a)
}
