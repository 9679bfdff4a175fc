package severity

import (
	"math"

	"spillway/severity/special"
)

// probability is a share as a figure in [0, 1].
func probability(s, p share) Figure {
	q, r := s.value(), p.value()
	f := Figure{Value: q, Gradient: []float64{0, 0}, Bound: 1, Complement: r}
	switch {
	case q == 0 || r == 0:
	case r < q: // the smaller one holds the change of both
		f.Gradient = []float64{-r * p.da, -r * p.dt}
	default:
		f.Gradient = []float64{q * s.da, q * s.dt}
	}
	return f
}

// SurvivalFigure is S(x) for x >= 0, 0 at +Inf, with its gradient; NaN below zero.
func (g Gamma) SurvivalFigure(x float64) Figure {
	switch {
	case !(x >= 0):
		return Figure{math.NaN(), []float64{math.NaN(), math.NaN()}, 1, math.NaN()}
	case math.IsInf(x, 1):
		return Figure{0, []float64{0, 0}, 1, 1}
	}
	return probability(shares(g.Shape, x/g.Scale))
}

// MeanFigure is the mean with its gradient.
func (g Gamma) MeanFigure() Figure { return unbounded(g.Mean(), g.Mean(), g.Mean()) }

// LimitedExpectedValueFigure is E[min(X, u)] for u >= 0, bounded by u, with its
// gradient; the mean at +Inf.
func (g Gamma) LimitedExpectedValueFigure(u float64) Figure {
	switch {
	case !(u >= 0):
		return unbounded(math.NaN(), math.NaN(), math.NaN())
	case u == 0:
		return constant(0, 2)
	case math.IsInf(u, 1):
		return g.MeanFigure()
	}
	value := math.Min(g.LimitedExpectedValue(u), u)
	least := tiny * g.Scale
	f := g.LayerFigures(0, math.Max(u, least)).Mean
	if u < least { // as good as proportional to u
		return Figure{value, []float64{f.Gradient[0] / least * u, f.Gradient[1] / least * u}, u, f.Complement / least * u}
	}
	f.Value = value
	return f
}

// MeanExcessFigure is E[X - A | X > A] for A >= 0, with its gradient.
func (g Gamma) MeanExcessFigure(attachment float64) Figure {
	if attachment == 0 {
		return g.MeanFigure()
	}
	return g.LayerFigures(attachment, math.Inf(1)).MeanIfAttached
}

// LossEliminationRatioFigure is E[min(X, d)] / E[X] in [0, 1] for d >= 0, with
// its gradient: in its own right, since the errors of both parts cancel.
func (g Gamma) LossEliminationRatioFigure(d float64) Figure {
	nan := math.NaN()
	switch {
	case !(d >= 0):
		return Figure{nan, []float64{nan, nan}, 1, nan}
	case d == 0:
		return Figure{0, []float64{0, 0}, 1, 1}
	case math.IsInf(d, 1):
		return Figure{1, []float64{0, 0}, 1, 0}
	}
	// The part left is E[(X-d)+]/E[X]; whichever part is smaller has the digits.
	part := g.LimitedExpectedValueFigure(d)
	rest := g.LayerFigures(d, math.Inf(1)).Mean
	mean := g.Mean()
	f := Figure{math.Min(part.Value/mean, 1), make([]float64, 2), 1, math.Min(rest.Value/mean, 1)}
	for i := range f.Gradient {
		f.Gradient[i] = (part.Gradient[i] - part.Value) / mean
		if rest.Value < part.Value {
			f.Gradient[i] = (rest.Value - rest.Gradient[i]) / mean
		}
	}
	return f
}

// TailValueAtRiskFigure is E[X | X > x] at the quantile x with F(x) = p, for p
// in (0, 1), with its gradient. It is proportional to the scale; at a fixed p
// the quantile's own change drops out (the boundary has no excess), so
//
//	∂ TVaR/∂ ln a = (∂/∂ ln a E[(X-x)+] at fixed x) / (1-p).
func (g Gamma) TailValueAtRiskFigure(p float64) Figure {
	if !(p > 0 && p < 1) {
		return unbounded(math.NaN(), math.NaN(), math.NaN())
	}
	x := g.Quantile(p)
	z := x / g.Scale
	a := g.Shape
	if z < 1e-9*a {
		// E[(X-x)+] = aθ Q(a+1,z) - x S(x), whose second term is as good as nothing
		// beside the first but not in its change with a: S depends on a through
		// z^a, x on nothing.
		t := g.Mean() * math.Exp(special.LogUpper(a+1, z)) / (1 - p)
		change := t
		if z > 0 {
			change += t*a*special.LogUpperJet(a+1, z).DA - a*x*special.LogUpperJet(a, z).DA
		}
		return unbounded(t, change, t)
	}
	f := g.LayerFigures(x, math.Inf(1))
	t := x + f.MeanIfAttached.Value
	return unbounded(t, f.Mean.Gradient[0]/(1-p), t)
}
