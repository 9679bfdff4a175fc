package severity

import (
	"math"

	"spillway/severity/special"
)

// boundaryTest is the exact test of needing a shape of zero. When every
// observation is truncated away from zero the gamma's likelihood has a finite
// limit as the shape goes to zero, that of the density
//
//	f(x) ∝ x^-1 e^(-x/θ) on (d, ∞),   S(x)/S(d) = E1(x/θ)/E1(d/θ).
//
// The test maximises this limit in θ and takes the score in the shape there.
// Without censoring the log-likelihood is jointly concave in (shape, 1/scale),
// so an interior maximum exists if and only if that score is above zero.
// (Regular exponential family: Barndorff-Nielsen, Information and Exponential
// Families, 1978, chapter 9, recalled from memory.)
//
// It returns nil where the limit is minus infinity: some observation has no
// threshold.
func boundaryTest(s Summary) *Boundary {
	if s.Truncated < s.Claims || s.EventWeight == 0 {
		return nil
	}
	// Start where the losses above their thresholds have mean θ.
	scale := s.excessOverThresholds() / s.EventWeight
	lnScale, value, ok := maximise1(func(v float64) (float64, float64, float64) {
		return s.boundaryLikelihood(math.Exp(v))
	}, math.Log(scale), math.Inf(-1), math.Inf(1))
	if !ok || !finite(value) {
		return nil
	}
	b := &Boundary{Scale: math.Exp(lnScale), LogLikelihood: value}
	b.Score = s.boundaryScore(b.Scale) / s.EventWeight
	return b
}

// boundaryLikelihood is the limit of the log-likelihood as the shape goes to
// zero, with its first two derivatives in ln θ.
func (s Summary) boundaryLikelihood(scale float64) (value, d1, d2 float64) {
	excess, _ := s.about(scale)
	sum := excess + s.EventWeight // Σ w x/θ
	value, d1, d2 = -s.SumLog()-sum, sum, -sum
	add := func(points []Point, sign float64) {
		for _, p := range points {
			z := p.Value / scale
			j := special.LogUpperUnnormalisedJet(0, z)
			w := sign * p.Weight
			value += w * j.Log
			d1 -= w * z * j.DZ
			d2 += w * z * (j.DZ + z*j.DZZ)
		}
	}
	add(s.Limits, 1)
	add(s.Thresholds, -1)
	return value, d1, d2
}

// boundaryScore is the derivative of the log-likelihood in the shape as the
// shape goes to zero: Σ w (ln x - E[ln X | X > d]) over the exact losses, and
// Σ w (E[ln X | X > c] - E[ln X | X > d]) over the censored ones.
func (s Summary) boundaryScore(scale float64) float64 {
	score := s.SumLog()
	add := func(points []Point, sign float64) {
		for _, p := range points {
			j := special.LogUpperUnnormalisedJet(0, p.Value/scale)
			score += sign * p.Weight * (math.Log(scale) + j.DA)
		}
	}
	add(s.Limits, 1)
	add(s.Thresholds, -1)
	return score
}

// excessOverThresholds is Σ w (x - d) over all observations, exact or not:
// the total exposure of an exponential curve.
func (s Summary) excessOverThresholds() float64 {
	var sum compensated
	sum.add(s.EventWeight * s.Pivot)
	sum.add(s.Pivot * s.SumExcess)
	for _, p := range s.Limits {
		sum.add(p.Weight * p.Value)
	}
	for _, p := range s.Thresholds {
		sum.add(-p.Weight * p.Value)
	}
	return sum.value()
}

// total is Σ w x over all observations, exact or not.
func (s Summary) total() float64 {
	sum := s.EventWeight*s.Pivot + s.Pivot*s.SumExcess
	for _, p := range s.Limits {
		sum += p.Weight * p.Value
	}
	return sum
}

// nothingToFit names the cases without a maximum that show before any
// iteration; nil where there may be one.
func nothingToFit(s Summary) *FitError {
	e := &FitError{Sample: s.sample()}
	switch {
	case s.Claims == 0:
		e.Status, e.Reason = NoClaims, "no claims are left to fit"
	case s.Uncensored == 0:
		e.Status = AllCensored
		e.Reason = "no loss is known exactly: every claim reached its limit or is open, so the likelihood rises without end as the mean grows"
	case s.Smallest == s.Largest && (len(s.Limits) == 0 || s.Limits[len(s.Limits)-1].Value <= s.Largest):
		e.Status = Unbounded
		e.Reason = "all exact losses are equal and no claim is known to exceed them, so the likelihood grows without limit as the curve narrows about that value"
	case s.Truncated == s.Claims && s.excessOverThresholds() <= 1e-13*s.total():
		e.Status = Unbounded
		e.Reason = "every loss equals its own deductible, so the likelihood grows without limit as the curve falls ever faster above it"
	default:
		return nil
	}
	return e
}
