package severity

import "math"

// ascent is where a maximisation ended.
type ascent struct {
	x0, x1     float64 // where, in the coordinates of the function
	point      point2
	iterations int
	decrement  float64 // Newton decrement sqrt(g' (-H)^-1 g) at x0, x1
	converged  bool
}

const maxIterations = 200

// maximise climbs from a starting point by Newton's method: full steps where
// the Hessian is negative definite, steps along a shifted Hessian where it is
// not, halved until the function rises. It stops where the Newton step is lost
// in the rounding of the coordinates.
func maximise(f func(x0, x1 float64) point2, x0, x1 float64) ascent {
	a := ascent{x0: x0, x1: x1, point: f(x0, x1)}
	previous := math.Inf(1)
	for a.iterations = 0; a.iterations < maxIterations; a.iterations++ {
		p := a.point
		if !finite(p.value) || !finite(p.g0) || !finite(p.g1) {
			return a
		}
		s0, s1, concave := newtonStep(p)
		a.decrement = math.Sqrt(math.Max(0, s0*p.g0+s1*p.g1))
		length := math.Max(math.Abs(s0), math.Abs(s1))
		if concave && (length < 1e-15 || length < 1e-7 && length > 0.25*previous) {
			a.converged = true
			return a
		}
		if limit := 2.0; length > limit {
			s0, s1, length = s0*limit/length, s1*limit/length, limit
		}
		previous = length
		rise := s0*p.g0 + s1*p.g1
		step, moved := 1.0, false
		for range 60 {
			q := f(a.x0+step*s0, a.x1+step*s1)
			// Close to the maximum the rise is lost in the value's rounding;
			// the step itself is then the better judge.
			if q.value >= p.value+1e-4*step*rise || concave && length < 1e-4 && finite(q.value) {
				a.x0, a.x1, a.point = a.x0+step*s0, a.x1+step*s1, q
				moved = true
				break
			}
			step /= 2
		}
		if !moved || math.Abs(a.x0) > 300 || math.Abs(a.x1) > 700 {
			return a
		}
	}
	return a
}

// newtonStep solves -H s = g. Where -H is not positive definite its negative
// part is turned round, which still climbs.
func newtonStep(p point2) (s0, s1 float64, concave bool) {
	a, b, c := -p.h00, -p.h01, -p.h11
	if det := a*c - b*b; a > 0 && c > 0 && det > 1e-14*a*c {
		return (c*p.g0 - b*p.g1) / det, (a*p.g1 - b*p.g0) / det, true
	}
	half, mid := math.Hypot((a-c)/2, b), (a+c)/2
	angle := 0.5 * math.Atan2(2*b, a-c)
	cos, sin := math.Cos(angle), math.Sin(angle)
	floor := 1e-8 * math.Max(math.Abs(mid)+half, 1e-300)
	e1, e2 := math.Max(math.Abs(mid+half), floor), math.Max(math.Abs(mid-half), floor)
	u, v := (cos*p.g0+sin*p.g1)/e1, (cos*p.g1-sin*p.g0)/e2
	return cos*u - sin*v, sin*u + cos*v, false
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// maximise1 climbs in the second coordinate of a function of one variable:
// value, first and second derivative. It is maximise for a profile.
func maximise1(f func(x float64) (value, d1, d2 float64), x, lower, upper float64) (at, value float64, ok bool) {
	value, d1, d2 := f(x)
	previous := math.Inf(1)
	for range maxIterations {
		if !finite(value) {
			return x, value, false
		}
		step := 2 * math.Copysign(1, d1)
		concave := d2 < 0
		if concave {
			step = math.Max(-2, math.Min(2, -d1/d2))
		}
		if concave && (math.Abs(step) < 1e-14*(1+math.Abs(x)) || math.Abs(step) < 1e-7 && math.Abs(step) > 0.25*previous) {
			return x, value, true
		}
		previous = math.Abs(step)
		moved := false
		for range 60 {
			y := math.Max(lower, math.Min(upper, x+step))
			v, e1, e2 := f(y)
			if v >= value+1e-4*(y-x)*d1 || concave && math.Abs(step) < 1e-4 && finite(v) {
				moved = y != x
				x, value, d1, d2 = y, v, e1, e2
				break
			}
			step /= 2
		}
		if !moved {
			return x, value, true
		}
	}
	return x, value, false
}
