package severity

import (
	"fmt"
	"math"

	"spillway/severity/special"
)

// Gamma is the gamma law of a ground-up loss X > 0 with density
//
//	f(x) = (x/θ)^(a-1) exp(-x/θ) / (θ Γ(a)),   shape a > 0, scale θ > 0 in money,
//
// whose mean is aθ and coefficient of variation 1/sqrt(a). Its coordinates, in
// which figures have their gradients, are (ln a, ln θ). Make one with NewGamma;
// the methods of a Gamma with another shape or scale return NaN.
type Gamma struct{ Shape, Scale float64 }

// NewGamma is the gamma of the shape and scale, or an error when one of them
// is not a finite number above zero.
func NewGamma(shape, scale float64) (Gamma, error) {
	if !(shape > 0) || math.IsInf(shape, 1) {
		return Gamma{}, fmt.Errorf("gamma: the shape is %v: want a finite number above 0", shape)
	}
	if !(scale > 0) || math.IsInf(scale, 1) {
		return Gamma{}, fmt.Errorf("gamma: the scale is %v: want a finite number above 0", scale)
	}
	return Gamma{shape, scale}, nil
}

// Mean is aθ.
func (g Gamma) Mean() float64 { return g.Shape * g.Scale }

// Variance is aθ².
func (g Gamma) Variance() float64 { return g.Shape * g.Scale * g.Scale }

// LogDensity is ln f(x): -Inf below zero, and at zero +Inf, -ln θ or -Inf for
// a shape below, at or above 1.
func (g Gamma) LogDensity(x float64) float64 {
	switch {
	case x < 0:
		return math.Inf(-1)
	case x == 0 && g.Shape == 1:
		return -math.Log(g.Scale)
	case x == 0:
		return math.Copysign(math.Inf(1), 1-g.Shape)
	case math.IsInf(x, 1):
		return math.Inf(-1)
	}
	return logMass(g.Shape, x/g.Scale) - math.Log(x)
}

// logMass is ln of z times the standard density, z^a e^(-z) / Γ(a). For large
// shapes the three factors are huge and nearly cancel, so there it is written
// around the mode: with μ = (z-a)/a and ln Γ(a) = (a-1/2) ln a - a + ln(2π)/2 + δ,
//
//	ln(a/2π)/2 - δ(a) - a(μ - ln(1+μ)).
func logMass(a, z float64) float64 {
	if a < 8 {
		return a*math.Log(z) - z - special.LogGamma(a)
	}
	return 0.5*math.Log(a/(2*math.Pi)) - special.StirlingCorrection(a) - a*special.LogDefect((z-a)/a)
}

// LogSurvival is ln S(x), the log probability of a loss above x; 0 for x <= 0
// and -Inf at +Inf. Its error is that of special.LogUpper.
func (g Gamma) LogSurvival(x float64) float64 {
	if x <= 0 {
		return 0
	}
	return special.LogUpper(g.Shape, x/g.Scale)
}

// LogCDF is ln F(x), the log probability of a loss at or below x; -Inf for
// x <= 0 and 0 at +Inf. Its error is that of special.LogLower.
func (g Gamma) LogCDF(x float64) float64 {
	if x <= 0 {
		return math.Inf(-1)
	}
	return special.LogLower(g.Shape, x/g.Scale)
}

// Survival is S(x) in [0, 1], the probability of a loss above x.
func (g Gamma) Survival(x float64) float64 { return math.Exp(g.LogSurvival(x)) }

// LimitedExpectedValue is E[min(X, u)] = aθ P(a+1, u/θ) + u S(u) for u >= 0: the
// mean at +Inf, NaN below zero. Both terms are positive, so nothing cancels.
func (g Gamma) LimitedExpectedValue(u float64) float64 {
	switch {
	case !(u >= 0):
		return math.NaN()
	case u == 0:
		return 0
	case math.IsInf(u, 1):
		return g.Mean()
	}
	z := u / g.Scale
	return g.Mean()*math.Exp(special.LogLower(g.Shape+1, z)) + u*math.Exp(special.LogUpper(g.Shape, z))
}

// LimitedSecondMoment is E[min(X, u)²] = a(a+1)θ² P(a+2, u/θ) + u² S(u) for
// u >= 0: E[X²] at +Inf, NaN below zero.
func (g Gamma) LimitedSecondMoment(u float64) float64 {
	full := g.Mean() * (g.Shape + 1) * g.Scale
	switch {
	case !(u >= 0):
		return math.NaN()
	case u == 0:
		return 0
	case math.IsInf(u, 1):
		return full
	}
	z := u / g.Scale
	return full*math.Exp(special.LogLower(g.Shape+2, z)) + u*u*math.Exp(special.LogUpper(g.Shape, z))
}
