package severity

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// profileIntervals sets the profile-likelihood intervals of shape, scale,
// mean and coefficient of variation: the values at which twice the fall of
// the log-likelihood, maximised over the other coordinate, reaches the
// quantile of chi-square with one degree of freedom.
func profileIntervals(fit *Fit, s Summary, top ascent, boundary *Boundary, level float64) {
	p := profiler{likelihood: GammaLikelihood{s}, top: top, boundary: boundary, level: level,
		drop: distuv.ChiSquared{K: 1}.Quantile(level) / 2}
	se := func(estimate Estimate) float64 { return estimate.StandardError / estimate.Value }
	shape, scale := &fit.Parameters[0].Estimate, &fit.Parameters[1].Estimate
	shape.Interval = p.interval([2]float64{1, 0}, [2]float64{0, 1}, se(*shape), true)
	scale.Interval = p.interval([2]float64{0, 1}, [2]float64{1, 0}, se(*scale), false)
	fit.Mean.Interval = p.interval([2]float64{0, 1}, [2]float64{1, -1}, se(fit.Mean), true)
	cv := shape.Interval
	cv.Lower, cv.Upper = 1/math.Sqrt(shape.Interval.Upper), 1/math.Sqrt(shape.Interval.Lower)
	fit.CV.Interval = cv
}

type profiler struct {
	likelihood GammaLikelihood
	top        ascent
	boundary   *Boundary
	level      float64
	drop       float64 // of the log-likelihood at the ends
}

// interval finds both ends for a coordinate t, where the coordinates are
// (ln shape, ln scale) = t·along + s·other, s being maximised over; edge tells
// that t goes to minus infinity as the shape goes to zero.
func (p profiler) interval(along, other [2]float64, se float64, edge bool) Interval {
	det := along[0]*other[1] - along[1]*other[0]
	t := (p.top.x0*other[1] - p.top.x1*other[0]) / det
	s := (along[0]*p.top.x1 - along[1]*p.top.x0) / det
	c := profileCurve{p, along, other}
	// As the shape goes to zero so does the mean: where even that edge is not
	// unlikely enough, shape and mean have no lower end to look for.
	var lower float64
	okLower := !edge || p.boundary == nil || p.top.point.value-p.boundary.LogLikelihood > p.drop
	if okLower {
		lower, okLower = c.end(t, s, -se)
	}
	upper, okUpper := c.end(t, s, se)
	i := Interval{Lower: math.Exp(lower), Upper: math.Exp(upper), Level: p.level, Method: "profile likelihood"}
	switch {
	case !okLower && !okUpper:
		i.Lower, i.Upper = 0, math.Inf(1)
		i.Note = "the profile never falls far enough on either side"
	case !okLower:
		i.Lower = 0
		i.Note = "the profile never falls far enough below the estimate: the data do not exclude values down to zero"
	case !okUpper:
		i.Upper = math.Inf(1)
		i.Note = "the profile never falls far enough above the estimate: the data set no upper end"
	}
	return i
}

type profileCurve struct {
	profiler
	along, other [2]float64
}

// at is the log-likelihood at t maximised over s, with its slope in t and the
// maximising s.
func (c profileCurve) at(t, s float64) (value, slope, best float64) {
	var last point2
	f := func(s float64) (v, d1, d2 float64) {
		last = c.likelihood.at(t*c.along[0]+s*c.other[0], t*c.along[1]+s*c.other[1])
		o := c.other
		return last.value, last.g0*o[0] + last.g1*o[1],
			last.h00*o[0]*o[0] + 2*last.h01*o[0]*o[1] + last.h11*o[1]*o[1]
	}
	lower, upper := math.Inf(-1), math.Inf(1)
	if c.other[0] > 0 {
		// The nuisance moves the shape: below e^-30 it is at its edge, where
		// the likelihood no longer changes.
		lower = math.Min(-30-t*c.along[0], s)
	}
	best, value, _ = maximise1(f, s, lower, upper)
	f(best)
	return value, last.g0*c.along[0] + last.g1*c.along[1], best
}

// end walks from the estimate in the direction of step, first by standard
// errors to bracket the end, then by safeguarded Newton on the signed root
// r(t) = sqrt(2 (top - profile)), which is close to a straight line.
func (c profileCurve) end(t0, s0, step float64) (float64, bool) {
	top := c.top.point.value
	target := math.Sqrt(2 * c.drop)
	root := func(t, s float64) (r, slope, best float64) {
		value, d, best := c.at(t, s)
		fall := math.Max(top-value, 0)
		r = math.Sqrt(2 * fall)
		return r, math.Abs(d) / math.Max(r, 1e-300), best
	}
	inside, outside, stride := t0, math.NaN(), 4.0
	t, s := t0+target*step, s0
	if math.Abs(target*step) > 3 {
		t = t0 + math.Copysign(3, step)
	}
	for range 400 {
		r, slope, best := root(t, s)
		if math.IsNaN(r) {
			return 0, false
		}
		s = best
		if r < target {
			inside = t
		} else {
			outside = t
		}
		next := t + math.Copysign(1, step)*(target-r)/slope
		if math.Abs(r-target) < 1e-12*target || math.Abs(next-t) < 1e-14*(1+math.Abs(t)) {
			return next, true
		}
		if math.IsNaN(outside) {
			// Ever longer strides in the logarithm, up to where a shape, scale
			// or mean of e^±200 times the estimate says nothing any more.
			if !(math.Abs(next-t) < stride) {
				next = t + math.Copysign(stride, step)
			}
			stride *= 1.5
			if math.Abs(next-t0) > 200 {
				return 0, false
			}
		} else if lo, hi := math.Min(inside, outside), math.Max(inside, outside); !(next > lo && next < hi) {
			next = (lo + hi) / 2
			if hi-lo < 1e-14*(1+math.Abs(hi)) {
				return next, true
			}
		}
		t = next
	}
	return t, true
}
