package severity

import (
	"fmt"
	"math"
	"slices"
)

// FitGamma finds the maximum of the gamma likelihood of the observations
// behind a summary, with profile-likelihood intervals at the given level in
// (0, 1). Exactly one result is not nil: a proven maximum, or the reason why
// there is none.
//
// Without censoring the log-likelihood is jointly concave in (shape, 1/scale),
// so that a stationary point is the global maximum; with censoring several
// starts are tried and the distinct maxima counted.
func FitGamma(s Summary, level float64) (*Fit, *FitError) {
	best, boundary, failure := maximiseGamma(s)
	if failure != nil {
		return nil, failure
	}
	fit := best.fit(s, boundary)
	profileIntervals(fit, s, best.inScale(), boundary, level)
	return fit, nil
}

type gammaMaximum struct {
	ascent  // in (ln shape, ln mean)
	starts  int
	maxima  int
	concave bool // the global certificate applies
}

// maximiseGamma finds the maximum alone, without intervals.
func maximiseGamma(s Summary) (*gammaMaximum, *Boundary, *FitError) {
	if failure := nothingToFit(s); failure != nil {
		return nil, nil, failure
	}
	boundary := boundaryTest(s)
	concave := len(s.Limits) == 0
	if concave && boundary != nil && boundary.Score <= 0 {
		return nil, nil, drifting(s, boundary, 0)
	}
	likelihood := GammaLikelihood{s}
	var found []ascent
	iterations, tried := 0, 0
	for _, start := range gammaStarts(s) {
		a := maximise(likelihood.atMean, start[0], start[1])
		iterations += a.iterations
		tried++
		if a.converged {
			found = append(found, a)
			if concave {
				break // one stationary point is the global maximum
			}
		}
	}
	if len(found) == 0 {
		if boundary != nil && boundary.Score <= 0 {
			return nil, nil, drifting(s, boundary, iterations)
		}
		if s.Largest-s.Smallest < 1e-6*s.Largest {
			return nil, nil, &FitError{
				Status: Unbounded, Sample: s.sample(), Iterations: iterations,
				Reason: "the exact losses are equal to within the digits that numbers hold, so the likelihood keeps growing as the curve narrows about their common value",
			}
		}
		return nil, nil, &FitError{
			Status: NoInteriorMaximum, Sample: s.sample(), Iterations: iterations,
			Reason: "the likelihood rises towards the edge of the gamma family from every starting point, so no gamma curve is its maximum",
		}
	}
	best := slices.MaxFunc(found, func(a, b ascent) int {
		switch {
		case a.point.value < b.point.value:
			return -1
		case a.point.value > b.point.value:
			return 1
		}
		return 0
	})
	if boundary != nil && !concave && best.point.value < boundary.LogLikelihood && boundary.Score <= 0 {
		return nil, nil, drifting(s, boundary, iterations)
	}
	return &gammaMaximum{ascent: best, starts: tried, maxima: distinct(found), concave: concave}, boundary, nil
}

// gammaStarts lists starting points (ln shape, ln mean), the likeliest first.
func gammaStarts(s Summary) [][2]float64 {
	exposure := s.excessOverThresholds() / s.EventWeight // mean of an exponential curve
	if !(exposure > 0) {
		exposure = s.Mean()
	}
	starts := [][2]float64{{0, math.Log(exposure)}}
	if s.Smallest < s.Largest {
		shape := completeShape(s)
		starts = append(starts, [2]float64{math.Log(shape), math.Log(s.Mean())})
	}
	for _, shape := range []float64{0.15, 8} {
		starts = append(starts, [2]float64{math.Log(shape), math.Log(exposure)})
	}
	likelihood := GammaLikelihood{s}
	values := make(map[[2]float64]float64, len(starts))
	for _, start := range starts {
		v := likelihood.atMean(start[0], start[1]).value
		if math.IsNaN(v) {
			v = math.Inf(-1)
		}
		values[start] = v
	}
	slices.SortStableFunc(starts, func(a, b [2]float64) int {
		switch {
		case values[a] > values[b]:
			return -1
		case values[a] < values[b]:
			return 1
		}
		return 0
	})
	return starts
}

// completeShape is the shape that exact losses alone would give, within 2%:
// with s the log of the ratio of arithmetic to geometric mean, the first terms
// of the inverse of ln a - ψ(a) = s.
func completeShape(s Summary) float64 {
	_, deviance := s.about(s.Mean())
	d := deviance / s.EventWeight
	return (3 - d + math.Sqrt((d-3)*(d-3)+24*d)) / (12 * d)
}

// distinct counts maxima more than a rounding apart.
func distinct(found []ascent) int {
	var kept []ascent
	for _, a := range found {
		if !slices.ContainsFunc(kept, func(b ascent) bool {
			return math.Abs(a.x0-b.x0) < 1e-5 && math.Abs(a.x1-b.x1) < 1e-5
		}) {
			kept = append(kept, a)
		}
	}
	return len(kept)
}

func drifting(s Summary, b *Boundary, iterations int) *FitError {
	return &FitError{
		Status: NoInteriorMaximum, Sample: s.sample(), Boundary: b, Iterations: iterations,
		Reason: "above the deductible the claims are more spread than any gamma tail allows: " +
			"the likelihood keeps rising as the shape drifts to zero, so no gamma curve fits best. " +
			"Try a family with a heavier tail",
	}
}

// fit turns a maximum into figures.
func (m *gammaMaximum) fit(s Summary, boundary *Boundary) *Fit {
	p := m.point
	shape, mean := math.Exp(m.x0), math.Exp(m.x1)
	scale := mean / shape
	// The inverse information in (ln shape, ln mean), where nothing cancels,
	// then in (ln shape, ln scale): the change has determinant one.
	det := p.h00*p.h11 - p.h01*p.h01
	varShape, covMean, varMean := -p.h11/det, p.h01/det, -p.h00/det
	cross, varScale := covMean-varShape, varMean-2*covMean+varShape
	cov := [][]float64{{varShape, cross}, {cross, varScale}}
	largest := (varShape+varScale)/2 + math.Hypot((varShape-varScale)/2, cross)
	seShape, seScale, seMean := math.Sqrt(varShape), math.Sqrt(varScale), math.Sqrt(varMean)
	cv := 1 / math.Sqrt(shape)
	return &Fit{
		Model: "gamma",
		Parameters: []Parameter{
			{Name: "shape", Estimate: Estimate{Value: shape, StandardError: shape * seShape}, LogStandardError: seShape},
			{Name: "scale", Unit: "money", Estimate: Estimate{Value: scale, StandardError: scale * seScale}, LogStandardError: seScale},
		},
		LogLikelihood: p.value,
		AIC:           4 - 2*p.value,
		BIC:           2*math.Log(s.Weight) - 2*p.value,
		Covariance:    cov,
		Mean:          Estimate{Value: mean, StandardError: mean * seMean},
		CV:            Estimate{Value: cv, StandardError: cv * seShape / 2},
		Convergence: Convergence{
			Iterations:       m.iterations,
			ScoreNorm:        math.Max(math.Abs(p.g0), math.Abs(p.g1)) / s.Weight,
			NewtonDecrement:  m.decrement,
			Condition:        largest * largest * det, // larger over smaller eigenvalue
			Starts:           m.starts,
			StationaryPoints: m.maxima,
			Certificate:      m.certificate(boundary),
		},
		Sample: s.sample(),
	}
}

// inScale is the maximum in (ln shape, ln scale).
func (m *gammaMaximum) inScale() ascent {
	a := m.ascent
	a.x1 -= a.x0
	a.point = a.point.fromMean()
	return a
}

func (m *gammaMaximum) certificate(boundary *Boundary) string {
	switch {
	case !m.concave:
		return fmt.Sprintf("A maximum: the score is zero and the observed information positive definite. With claims above their limit the likelihood "+
			"may have several maxima; %d starting points reached %d.", m.starts, m.maxima)
	case boundary != nil:
		return fmt.Sprintf("The global maximum: without censoring the log-likelihood is jointly concave in shape and 1/scale, "+
			"and the score at the edge of shape zero is above zero (%.4g a claim).", boundary.Score)
	}
	return "The global maximum: without censoring the log-likelihood is jointly concave in shape and 1/scale, and it falls without limit as the shape goes to zero."
}

// Gamma is the fitted curve, when the model is the gamma.
func (f *Fit) Gamma() (Gamma, bool) {
	if f == nil || f.Model != "gamma" || len(f.Parameters) != 2 {
		return Gamma{}, false
	}
	return Gamma{Shape: f.Parameters[0].Value, Scale: f.Parameters[1].Value}, true
}
