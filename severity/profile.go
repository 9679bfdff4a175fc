package severity

import (
	"math"
	"strings"

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
	i := Interval{Level: p.level, Method: "profile likelihood"}
	// As the shape goes to zero so does the mean: where even that edge is not
	// unlikely enough, shape and mean have no lower end to look for.
	lower, below := 0.0, nowhereLow
	if !edge || p.boundary == nil || p.top.point.value-p.boundary.LogLikelihood > p.drop {
		lower, below = c.end(t, s, -se)
	}
	upper, above := c.end(t, s, se)
	var notes []string
	if i.Lower = math.Exp(lower); below != reached {
		i.Lower = 0
		notes = append(notes, "below the estimate "+below.note()+", so the data do not exclude values down to zero")
	}
	if i.Upper = math.Exp(upper); above != reached {
		i.Upper = math.Inf(1)
		notes = append(notes, "above the estimate "+above.note()+", so the data set no upper end")
	}
	i.Note = strings.Join(notes, "; ")
	return i
}

// outcome says how the search for an end of an interval ended.
type outcome int

const (
	reached    outcome = iota
	nowhereLow         // the profile never falls far enough
	lost               // the other parameter leaves the range of the doubles first
)

func (o outcome) note() string {
	if o == lost {
		return "the profile cannot be followed far enough in the range of numbers"
	}
	return "the profile never falls far enough"
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
	// The scale stays in the range of the doubles, with room for the losses.
	lower, upper := -690-t*c.along[1], 690-t*c.along[1]
	if c.other[1] < 0 {
		lower, upper = t*c.along[1]-690, t*c.along[1]+690
	}
	if c.other[1] == 0 {
		lower, upper = math.Inf(-1), math.Inf(1)
	}
	if c.other[0] > 0 {
		// The nuisance moves the shape: below e^-30 it is at its edge, where
		// the likelihood no longer changes.
		lower = math.Max(lower, math.Min(-30-t*c.along[0], s))
	}
	best, value, _ = maximise1(f, math.Max(lower, math.Min(upper, s)), lower, upper)
	f(best)
	if c.other[1] != 0 && (best <= lower && c.other[0] == 0 || best >= upper) {
		return math.NaN(), math.NaN(), best
	}
	return value, last.g0*c.along[0] + last.g1*c.along[1], best
}

// end walks from the estimate in the direction of step, first by standard
// errors to bracket the end, then by safeguarded Newton on the signed root
// r(t) = sqrt(2 (top - profile)), which is close to a straight line.
func (c profileCurve) end(t0, s0, step float64) (float64, outcome) {
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
		if !finite(r) || !finite(slope) {
			return 0, lost
		}
		s = best
		if r < target {
			inside = t
		} else {
			outside = t
		}
		next := t + math.Copysign(1, step)*(target-r)/slope
		if math.Abs(r-target) < 1e-12*target || math.Abs(next-t) < 1e-14*(1+math.Abs(t)) {
			return next, reached
		}
		if math.IsNaN(outside) {
			// Ever longer strides in the logarithm, up to where a shape, scale
			// or mean of e^±200 times the estimate says nothing any more.
			if !(math.Abs(next-t) < stride) {
				next = t + math.Copysign(stride, step)
			}
			stride *= 1.5
			if math.Abs(next-t0) > 200 {
				return 0, nowhereLow
			}
		} else if lo, hi := math.Min(inside, outside), math.Max(inside, outside); !(next > lo && next < hi) {
			next = (lo + hi) / 2
			if hi-lo < 1e-14*(1+math.Abs(hi)) {
				return next, reached
			}
		}
		t = next
	}
	return t, reached
}
