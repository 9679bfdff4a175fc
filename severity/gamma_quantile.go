package severity

import (
	"math"

	"spillway/severity/special"
)

// Quantile is the loss x with F(x) = p: 0 at p = 0, +Inf at 1, NaN outside
// [0, 1]. For small shapes x may lie below the smallest number held; it is 0
// then, which is the nearest double.
func (g Gamma) Quantile(p float64) float64 {
	if !(p >= 0 && p <= 1) {
		return math.NaN()
	}
	return g.quantile(math.Log(p), math.Log1p(-p))
}

// UpperQuantile is the loss x with S(x) = q: +Inf at q = 0, 0 at 1, NaN outside
// [0, 1]. For a small q it is the accurate way: 1 - q would lose its digits.
func (g Gamma) UpperQuantile(q float64) float64 {
	if !(q >= 0 && q <= 1) {
		return math.NaN()
	}
	return g.quantile(math.Log1p(-q), math.Log(q))
}

// InverseLogSurvival is the loss x with ln S(x) = logS <= 0, also where S
// itself is too small to be held; NaN above zero.
func (g Gamma) InverseLogSurvival(logS float64) float64 {
	if !(logS <= 0) {
		return math.NaN()
	}
	logP := math.Log(-math.Expm1(logS))
	if logS < -math.Ln2 {
		logP = math.Log1p(-math.Exp(logS))
	}
	return g.quantile(logP, logS)
}

// quantile inverts the smaller of the two probabilities, whose logarithms are
// given.
func (g Gamma) quantile(logP, logS float64) float64 {
	lnZ := g.logQuantile(logP, logS)
	if lnZ < -700 { // z alone would lose digits, or all of them
		return math.Exp(lnZ + math.Log(g.Scale))
	}
	return g.Scale * math.Exp(lnZ)
}

func (g Gamma) logQuantile(logP, logS float64) float64 {
	switch {
	case math.IsInf(logP, -1):
		return math.Inf(-1)
	case math.IsInf(logS, -1):
		return math.Inf(1)
	case logP < logS:
		return special.InverseLower(g.Shape, logP)
	}
	return special.InverseUpper(g.Shape, logS)
}

// QuantileFigure is Quantile(p) with its gradient: the quantile is
// proportional to the scale, and at a fixed probability
//
//	∂ ln x/∂ ln a = -a (∂ ln S/∂a) / (z ∂ ln S/∂z),   z = x/θ.
func (g Gamma) QuantileFigure(p float64) Figure {
	if !(p > 0 && p < 1) {
		return unbounded(math.NaN(), math.NaN(), math.NaN())
	}
	z := math.Exp(g.logQuantile(math.Log(p), math.Log1p(-p)))
	x := g.Scale * z
	if z == 0 {
		return constant(0, 2)
	}
	jet := special.LogUpperJet(g.Shape, z)
	if p < 0.5 {
		jet = special.LogLowerJet(g.Shape, z)
	}
	return unbounded(x, -g.Shape*g.Scale*jet.DA/jet.DZ, x)
}
