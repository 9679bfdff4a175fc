package evidence

import (
	"math"
	"sort"

	"spillway/severity/layer"
)

// spread is the weight, the mean and the sum of squares about the mean of some
// losses. Spreads merge without cancellation.
type spread struct{ weight, mean, squares float64 }

func (a spread) merge(b spread) spread {
	w := a.weight + b.weight
	if w == 0 {
		return a
	}
	d := b.mean - a.mean
	return spread{w, a.mean + d*(b.weight/w), a.squares + b.squares + d*d*(a.weight*b.weight/w)}
}

// spreadOf goes through the rows from lo to hi.
func (s *Sample) spreadOf(lo, hi int) spread {
	if lo >= hi {
		return spread{}
	}
	weight, sum := 0.0, 0.0
	origin := rowLoss(s.keys[lo])
	for i := lo; i < hi; i++ {
		w := s.weight(i)
		weight += w
		sum += w * (rowLoss(s.keys[i]) - origin)
	}
	m := spread{weight: weight, mean: origin + sum/weight}
	for i := lo; i < hi; i++ {
		d := rowLoss(s.keys[i]) - m.mean
		m.squares += s.weight(i) * d * d
	}
	return m
}

// spreadBetween merges whole blocks and goes through the rows at the ends.
func (s *Sample) spreadBetween(lo, hi int) spread {
	if lo >= hi {
		return spread{}
	}
	first := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.row >= lo })
	last := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.row > hi }) - 1
	if first >= last {
		return s.spreadOf(lo, hi)
	}
	m := s.spreadOf(lo, s.blocks[first].start.row)
	for i := first; i < last; i++ {
		m = m.merge(s.blocks[i].spread)
	}
	return m.merge(s.spreadOf(s.blocks[last].start.row, hi))
}

// rowsAbove is the first row whose loss is above x, or at x when atToo.
func (s *Sample) rowsAbove(x float64, atToo bool) int {
	return sort.Search(len(s.keys), func(i int) bool {
		loss := rowLoss(s.keys[i])
		return loss > x || atToo && loss == x
	})
}

// Burning is what the claims themselves say about the layer from A to A+L,
// beside what the curve says; a nil curve leaves Fitted NaN.
//
// PerClaim is Σ w y / Σ w over all claims used, with y = min((x-A)+, L) of the
// loss as recorded. It is the mean of what was recorded, and nothing more:
// claims cut off by their own limit inside the layer or below it count with
// what was recorded (too low), and claims with high deductibles are in the
// sample only because they are large (too high). Its standard error is
// sqrt(Σ w (y-ȳ)² / (W (W-1))), W = Σ w, weights standing for repeated claims;
// NaN unless W > 1.
//
// ProductLimit mends both: it is ∫ Ŝ(x) dx over the layer, Ŝ = 1 below the
// lowest threshold d, an estimate of E[min((X-A)+, L) | X > d] for whatever the
// curve. Fitted is the curve's value for the same:
//
//	∫ over the layer of S(max(x, d))/S(d) dx.
//
// These two are comparable with each other, and with PerClaim only when all
// thresholds are equal and no claim is limited below the top of the layer.
//
// AtRisk counts the claims that could have shown a loss in the layer: those not
// limited at or below the attachment. A claim settled below its limit is taken
// to have had room.
func (s *Sample) Burning(l layer.Layer, curve Curve) BurningFigure {
	nan := math.NaN()
	if l.Validate() != nil {
		return BurningFigure{LayerLoss: nan, PerClaim: nan, StandardErr: nan, ProductLimit: nan, Fitted: nan}
	}
	n, top := len(s.keys), l.Top()
	above, out := s.rowsAbove(l.Attachment, false), s.rowsAbove(top, true)
	f := BurningFigure{AtRisk: n - s.censoredBefore(above), Reaching: n - above, Exhausting: n - out}
	within := s.spreadBetween(above, out)
	beyond := s.spreadBetween(out, n).weight
	total := s.total.value()
	below := max(total-within.weight-beyond, 0)
	part := within.mean - l.Attachment // mean part of the losses ending within the layer
	if within.weight > 0 {
		f.LayerLoss = within.weight * part
	}
	if beyond > 0 {
		f.LayerLoss += beyond * l.Limit
	}
	f.PerClaim = f.LayerLoss / total
	squares := below * f.PerClaim * f.PerClaim
	if within.weight > 0 {
		squares += within.squares + within.weight*(part-f.PerClaim)*(part-f.PerClaim)
	}
	if beyond > 0 {
		squares += beyond * (l.Limit - f.PerClaim) * (l.Limit - f.PerClaim)
	}
	f.StandardErr = nan
	if total > 1 {
		f.StandardErr = math.Sqrt(squares / total / (total - 1))
	}
	f.ProductLimit, _ = s.Integral(l.Attachment, top)
	f.Fitted = nan
	if curve != nil {
		f.Fitted = s.fitted(l, curve)
	}
	return f
}

// fitted is ∫ over the layer of S(max(x, d))/S(d) dx, d the lowest threshold.
func (s *Sample) fitted(l layer.Layer, curve Curve) float64 {
	d := s.lowest
	flat := max(min(d, l.Top())-l.Attachment, 0) // of the layer, below d
	if l.Top() <= d {
		return l.Limit
	}
	rest := curve.LayerMean(max(l.Attachment, d), l.Limit-flat)
	return flat + math.Exp(math.Log(rest)-curve.LogSurvival(d))
}

// censoredBefore counts the censored among the first rows.
func (s *Sample) censoredBefore(row int) int {
	i := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.row > row }) - 1
	if i < 0 {
		return 0
	}
	count := s.blocks[i].censored
	for _, k := range s.keys[s.blocks[i].start.row:row] {
		count += int(k & 1)
	}
	return count
}
