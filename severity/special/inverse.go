package special

import "math"

// InverseLower is ln z with ln P(a,z) = logP, for 0 < a < +Inf and
// logP <= 0: -Inf at logP = -Inf, +Inf at 0; NaN elsewhere. The logarithm is
// returned because z itself leaves the range of a float64 for small shapes.
// For P above 1/2 a rounded logP says little; use InverseUpper there. Measured
// relative error of ln z: 4.2e-15 on testdata/special/quantile.csv
// (TestQuantileTable); elsewhere that of one unit in the last place of logP,
// ε |logP|/(z ∂ln P/∂z), where it is more (TestInverseOfTables).
func InverseLower(a, logP float64) (lnZ float64) {
	if !(logP <= 0) {
		return math.NaN()
	}
	return invert(a, logP, logComplement(logP, math.Exp(logP)))
}

// InverseUpper is ln z with ln Q(a,z) = logQ, for 0 < a < +Inf and logQ <= 0:
// +Inf at logQ = -Inf, -Inf at 0; NaN elsewhere. Accurate as InverseLower.
func InverseUpper(a, logQ float64) (lnZ float64) {
	if !(logQ <= 0) {
		return math.NaN()
	}
	return invert(a, logComplement(logQ, math.Exp(logQ)), logQ)
}

// maxSteps bounds the iterations of invert; ten are common.
const maxSteps = 100

// invert solves for x = ln z. The tail with the smaller probability is used:
// ln P increases and ln Q decreases with x, both concave because ln T has a
// log-concave density, so that Newton's iterates reach the root from one side.
func invert(a, logP, logQ float64) float64 {
	s := NewShape(a)
	switch {
	case !(s.a > 0):
		return math.NaN()
	case math.IsInf(logP, -1):
		return math.Inf(-1)
	case math.IsInf(logQ, -1):
		return math.Inf(1)
	}
	lower := logP < logQ
	// All of P down to z = 0: P = z^a/Γ(1+a) there, exact when z underflows.
	tiny := (logP + s.logGammaOnePlus()) / a
	if tiny < -700 {
		return tiny
	}
	x := s.start(logP, logQ, tiny)
	left, right := math.Inf(-1), math.Inf(1)
	for range maxSteps {
		z := math.Exp(x)
		var f, slope, bend float64 // f increases with x; bend is slope'/slope
		if lower {
			f = s.LogLower(z) - logP
			slope = a * s.unit * math.Exp(s.logFront(z).hi-logP-f)
			bend = a - z - slope
		} else {
			f = logQ - s.LogUpper(z)
			if logQ > -1e4 {
				slope = a * s.unit * math.Exp(s.logFront(z).hi-logQ+f)
			} else {
				// Far out the difference of the two logarithms has lost its digits.
				slope = -z * s.LogUpperJet(z).DZ
			}
			bend = a - z + slope
		}
		switch {
		case f == 0:
			return x
		case f < 0:
			left = math.Max(left, x)
		default:
			right = math.Min(right, x)
		}
		// Halley's step: cubic, so that a small one is the last.
		step := -f / slope
		if k := 1 + 0.5*step*bend; k > 0.5 && k < 2 {
			step /= k
		}
		next := x + step
		if math.Abs(step*bend) < 1e-6 && math.Abs(f) < 1e-6 && math.Abs(step) < 1e-6*(1+math.Abs(x)) || next == x {
			return next
		}
		if !(next > left && next < right) {
			switch {
			case math.IsInf(left, -1):
				next = x - 2 - math.Abs(x)
			case math.IsInf(right, 1):
				next = x + 2 + math.Abs(x)
			default:
				next = left + (right-left)/2
			}
		}
		x = next
	}
	return x
}

// logGammaOnePlus is ln Γ(1+a).
func (s *Shape) logGammaOnePlus() float64 {
	if s.a < asymptoticFrom {
		return s.logGamma1
	}
	return (s.a+0.5)*math.Log(s.a) - s.a + halfLogTwoPi + s.stirling
}

// start is a first x = ln z: the small-argument law where P is small for the
// shape, else the cube-root normal approximation of Wilson and Hilferty, or
// the exponential tail.
func (s *Shape) start(logP, logQ, tiny float64) float64 {
	a := s.a
	if tiny < math.Log(0.2*(1+a)) {
		return tiny
	}
	if a < 1 {
		// Q is below a·E1(z) or so, which falls like e^-z.
		y := -logQ - s.logGamma1 + math.Log(a)
		if y > 1 {
			return math.Log(math.Max(0.2, y-(1-a)*math.Log(y)))
		}
		return math.Log(0.5 * (1 + a))
	}
	t := math.Sqrt(-2 * math.Min(logP, logQ))
	n := t - (2.515517+t*(0.802853+t*0.010328))/(1+t*(1.432788+t*(0.189269+t*0.001308)))
	if logP < logQ {
		n = -n
	}
	c := 1 / (9 * a)
	root := 1 - c + n*math.Sqrt(c)
	if root > 0.1 {
		return math.Log(a) + 3*math.Log(root)
	}
	return math.Min(tiny, math.Log(a))
}
