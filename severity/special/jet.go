package special

import "math"

// Jet is the logarithm of a tail probability, ln Q(a,z) or ln P(a,z), with its
// derivatives in the shape a and the argument z.
type Jet struct {
	Log float64 // the value
	DA  float64 // ∂/∂a
	DZ  float64 // ∂/∂z
	DAA float64 // ∂²/∂a²
	DAZ float64 // ∂²/∂a∂z
	DZZ float64 // ∂²/∂z²
}

func nanJet() Jet {
	nan := math.NaN()
	return Jet{nan, nan, nan, nan, nan, nan}
}

// Each tail has one region in which it is computed from its own sum; there the
// derivatives are moments of T given its side of z. In the other region the
// jet of the other tail is turned over by P + Q = 1.

// lowerTail describes P(a,z) in the lower region.
type lowerTail struct {
	log    float64 // ln P
	p      float64 // P, rounded once: e^log would lose digits when P is small
	da     float64 // ∂ ln P/∂a = ln z - ψ(a) - E[ln(z/T) | T < z]
	daa    float64 // Var[ln T | T < z] - ψ'(a)
	hazard float64 // z ∂ ln P/∂z
	back   float64 // E[ln(z/T) | T < z]
	excess float64 // E[z - T | T < z]
}

// upperTail describes Q(a,z) in the upper region.
type upperTail struct {
	log      float64 // ln Q
	overA    float64 // Q/a, as P above
	hazard   float64 // -z ∂ ln Q/∂z
	mean     float64 // E[ln(T/z) | T > z]
	variance float64 // Var[ln T | T > z]
	excess   float64 // E[T - z | T > z] - 1 = (a - 1) E[1 - z/T | T > z]
}

// lowerRegion tells whether P is the tail that is computed.
func lowerRegion(a, z float64) bool { return z <= a || z < smallArgument }

// smallArgument is the argument below which the lower series serve any shape:
// there ln P still carries ln Q, which loses at most a factor 10 of precision.
const smallArgument = 1.5

// LogUpper is ln Q(a,z), 0 < a < +Inf, z >= 0: 0 at z = 0, -Inf at z = +Inf;
// NaN outside that domain. Relative error: see the package.
func LogUpper(a, z float64) float64 {
	s := valueShape(a)
	return s.LogUpper(z)
}

// LogLower is ln P(a,z), 0 < a < +Inf, z >= 0: -Inf at z = 0, 0 at z = +Inf;
// NaN outside that domain. Relative error: see the package.
func LogLower(a, z float64) float64 {
	s := valueShape(a)
	return s.LogLower(z)
}

// LogUpperJet is ln Q(a,z) with its derivatives, on the domain of LogUpper.
// With T of the gamma law and h = -∂ ln Q/∂z,
//
//	DA  = ln z - ψ(a) + E[ln(T/z) | T > z]  > 0
//	DAA = Var[ln T | T > z] - ψ'(a)         < 0
//	DZ  = -h,  DAZ = h E[ln(T/z) | T > z],  DZZ = -(h/z)(a-1) E[1 - z/T | T > z].
//
// At z = 0 and z = +Inf it is the limit. A derivative above the range of a
// float64, as DAA of a = 1e-200, is an infinity. Relative error, of every
// component: see the package.
func LogUpperJet(a, z float64) Jet {
	s := NewShape(a)
	return s.LogUpperJet(z)
}

// LogLowerJet is ln P(a,z) with its derivatives, on the domain of LogLower.
// With g = ∂ ln P/∂z,
//
//	DA  = ln z - ψ(a) - E[ln(z/T) | T < z]  < 0
//	DAA = Var[ln T | T < z] - ψ'(a)         < 0
//	DZ  = g,  DAZ = g E[ln(z/T) | T < z],  DZZ = -(g/z)(1 + E[z - T | T < z]).
//
// At z = 0 and z = +Inf it is the limit.
func LogLowerJet(a, z float64) Jet {
	s := NewShape(a)
	return s.LogLowerJet(z)
}

// LogUpper is ln Q(a,z) of this shape; see the function LogUpper.
func (s *Shape) LogUpper(z float64) float64 {
	if log, _, done := s.ends(z); done {
		return log
	}
	if lowerRegion(s.a, z) {
		return logComplement(s.lowerValue(z))
	}
	log, _ := s.upperValue(z)
	return log
}

// LogLower is ln P(a,z) of this shape; see the function LogLower.
func (s *Shape) LogLower(z float64) float64 {
	if _, log, done := s.ends(z); done {
		return log
	}
	if lowerRegion(s.a, z) {
		log, _ := s.lowerValue(z)
		return log
	}
	return logComplement(s.upperValue(z))
}

// ends answers at the ends of the domain and outside it.
func (s *Shape) ends(z float64) (upper, lower float64, done bool) {
	switch {
	case !(s.a > 0) || !(z >= 0):
		return math.NaN(), math.NaN(), true
	case z == 0:
		return 0, math.Inf(-1), true
	case math.IsInf(z, 1):
		return math.Inf(-1), 0, true
	}
	return 0, 0, false
}

// LogUpperJet is ln Q(a,z) of this shape with its derivatives; see the function
// LogUpperJet.
func (s *Shape) LogUpperJet(z float64) Jet {
	if _, _, done := s.ends(z); done {
		return s.upperEnd(z)
	}
	logZ := math.Log(z)
	if !lowerRegion(s.a, z) {
		return s.upperJet(z, logZ, s.upperTail(z))
	}
	if u, ok := s.smallShapeTail(z, logZ); ok {
		return s.upperJet(z, logZ, u)
	}
	return s.complementLower(z, logZ, s.lowerTail(z, logZ))
}

// LogLowerJet is ln P(a,z) of this shape with its derivatives; see the function
// LogLowerJet.
func (s *Shape) LogLowerJet(z float64) Jet {
	if _, _, done := s.ends(z); done {
		return s.lowerEnd(z)
	}
	logZ := math.Log(z)
	if lowerRegion(s.a, z) {
		return lowerJet(z, s.lowerTail(z, logZ))
	}
	return s.complementUpper(z, logZ, s.upperTail(z))
}

func (s *Shape) upperJet(z, logZ float64, u upperTail) Jet {
	h := u.hazard / z
	return Jet{
		Log: u.log,
		DA:  u.mean + s.logOverPsi(z, logZ),
		DZ:  -h,
		DAA: u.variance - s.tri,
		DAZ: h * u.mean,
		DZZ: -h / z * u.excess,
	}
}

func lowerJet(z float64, l lowerTail) Jet {
	g := l.hazard / z
	return Jet{
		Log: l.log,
		DA:  l.da,
		DZ:  g,
		DAA: l.daa,
		DAZ: g * l.back,
		DZZ: -g / z * (1 + l.excess),
	}
}

// complementLower is the jet of ln Q from the lower tail.
func (s *Shape) complementLower(z, logZ float64, l lowerTail) Jet {
	p, q := l.p, -math.Expm1(l.log)
	ratio := p / q
	da := -ratio * l.da
	mean := da - s.logOverPsi(z, logZ)
	hazard := l.hazard * ratio
	excess := s.upperExcess(z, logZ, hazard)
	h := hazard / z
	hz := h / z
	if p < 1e-290 {
		// the density may be in range where P is not
		over := logDouble(z)
		density := s.logFront(z).plus(-over.hi).plus(-over.lo)
		h = s.unit * s.a * density.exp()
		hz = s.unit * s.a * density.plus(-over.hi).plus(-over.lo).exp()
	}
	return Jet{
		Log: logComplement(l.log, p),
		DA:  da,
		DZ:  -h,
		DAA: -ratio * (l.daa + l.da*l.da/q),
		DAZ: h * mean,
		DZZ: -hz * excess,
	}
}

// upperExcess is E[T - z | T > z] - 1 = a - 1 - z + hazard, in the form for
// a near 1, where those terms cancel, when needed.
func (s *Shape) upperExcess(z, logZ, hazard float64) float64 {
	b := s.a - 1
	if z < smallArgument && math.Abs(b) < 0.25 {
		if b == 0 {
			return 0
		}
		return b * (1 - hazard*math.Exp(z)*upperIntegral(b, LogGamma(s.a)/b, z, logZ))
	}
	return b - z + hazard
}

// complementUpper is the jet of ln P from the upper tail. The powers of 1/a in
// the derivatives of ln Q, which would cancel at small shapes, are taken out:
// with R = Q/a, P = 1 - aR.
func (s *Shape) complementUpper(z, logZ float64, u upperTail) Jet {
	a := s.a
	q, p := a*u.overA, -math.Expm1(u.log)
	r := u.overA / p
	dr := u.mean + s.logOverPsi1(z, logZ)
	drr := u.variance - s.tri1
	hazard := u.hazard * (q / p)
	g := hazard / z
	da := -r * (1 + a*dr)
	j := Jet{
		Log: logComplement(u.log, q),
		DA:  da,
		DZ:  g,
		DAZ: g * (s.logOverPsi(z, logZ) - da),
		DZZ: -g / z * (1 + (z - a) + hazard),
	}
	if a < 1 {
		j.DAA = -r*(2*dr+a*(drr+dr*dr)) - da*da
	} else {
		// the same in ∂ ln Q/∂a, whose square may overflow before Q vanishes
		d := u.mean + s.logOverPsi(z, logZ)
		j.DAA = -(q / p) * (u.variance - s.tri + d*d/p)
	}
	return j
}

// upperEnd and lowerEnd are the limits at z = 0 and z = +Inf.
func (s *Shape) upperEnd(z float64) Jet {
	a := s.a
	inf := math.Inf(1)
	switch {
	case !(a > 0) || !(z >= 0):
		return nanJet()
	case z > 0:
		return Jet{Log: -inf, DA: inf, DZ: -1, DAA: -s.tri}
	case a < 1:
		return Jet{DZ: -inf, DAZ: inf, DZZ: inf}
	case a == 1:
		return Jet{DZ: -1, DAZ: inf}
	case a < 2:
		return Jet{DZZ: -inf}
	case a == 2:
		return Jet{DZZ: -1}
	}
	return Jet{}
}

func (s *Shape) lowerEnd(z float64) Jet {
	inf := math.Inf(1)
	switch {
	case !(s.a > 0) || !(z >= 0):
		return nanJet()
	case z > 0:
		return Jet{}
	}
	return Jet{Log: -inf, DA: -inf, DZ: inf, DAA: -s.tri1, DAZ: inf, DZZ: -inf}
}
