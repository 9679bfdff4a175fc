package evidence

import (
	"math"
	"sort"
)

// resolution is how many steps the eye tells apart along one axis of a chart.
const resolution = 320

// alwaysKept is how many of the last points no thinning touches.
const alwaysKept = 50

// ruler divides an axis into steps that the eye tells apart, at once on a
// linear and on a logarithmic scale. It is read in ascending order.
type ruler struct {
	bounds []float64
	at     int
}

// newRuler divides lo to hi, 0 <= lo <= hi.
func newRuler(lo, hi float64) *ruler {
	r := &ruler{}
	if !(hi > lo) || math.IsInf(hi, 1) {
		return r
	}
	for i := 1; i < resolution; i++ {
		share := float64(i) / resolution
		r.bounds = append(r.bounds, lo+(hi-lo)*share)
		if lo > 0 {
			r.bounds = append(r.bounds, lo*math.Exp(math.Log(hi/lo)*share))
		}
	}
	sort.Float64s(r.bounds)
	return r
}

// read is the step in which x lies; x must not fall from one call to the next.
func (r *ruler) read(x float64) int {
	for r.at < len(r.bounds) && r.bounds[r.at] <= x {
		r.at++
	}
	return r.at
}

// next is where the step last read ends; +Inf for the last one.
func (r *ruler) next() float64 {
	if r.at == len(r.bounds) {
		return math.Inf(1)
	}
	return r.bounds[r.at]
}

type cell struct{ x, y int }

// Thin drops points that the eye cannot tell from one before them: at gives
// the place of a point, both coordinates >= 0, neither ever falling from one
// point to the next. Each axis has 320 steps on a linear and 320 on a
// logarithmic scale. The first point and the last 50 are always kept. The same
// points always give the same result.
func Thin[P any](points []P, at func(P) (x, y float64)) []P {
	if len(points) <= alwaysKept {
		return points
	}
	x0, y0 := at(points[0])
	x1, y1 := at(points[len(points)-1])
	return thin(points, newRuler(x0, x1), newRuler(y0, y1), at)
}

// thin keeps the first point of each cell that the rulers make, and the last
// points whatever their cells.
func thin[P any](points []P, xs, ys *ruler, at func(P) (x, y float64)) []P {
	var kept []P
	last := cell{-1, -1}
	for i, p := range points {
		x, y := at(p)
		here := cell{xs.read(x), ys.read(y)}
		if here != last || i >= len(points)-alwaysKept {
			kept = append(kept, p)
		}
		last = here
	}
	return kept
}
