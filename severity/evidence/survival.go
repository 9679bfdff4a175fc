package evidence

import "math"

// Survival sets the fitted survival S(x)/S(d), d the lowest threshold, beside
// the product-limit estimate after each distinct exact loss, with the band of
// the level in (0, 1) from Greenwood's standard error on the log(-log) scale,
//
//	Ŝ^exp(± z se/ln Ŝ),   z the normal quantile of (1+level)/2,
//
// which stays within [0, 1]. Where Ŝ is 0 Greenwood's formula has no value: the
// band then reaches from 0 to the upper end of the step before. A nil curve
// leaves Fitted NaN. Points are thinned as by Thin; none after a Collapse but
// the one at which it happens.
func (s *Sample) Survival(curve Curve, level float64) []SurvivalPoint {
	if len(s.keys) == 0 {
		return nil
	}
	xs := newRuler(rowLoss(s.keys[0]), s.largestLoss)
	ys := s.survivalRuler()
	var t thinner[survivalStep]
	at := survivalStep{bandFrom: 1}
	c := s.start()
	for p := (step{}); c.survival > 0 && s.next(&c, &p); {
		if p.events == 0 {
			continue
		}
		at.loss, at.survival = p.loss, c.survival
		if c.survival > 0 {
			at.bandFrom, at.variance = c.survival, c.variance
		}
		t.push(at, xs.read(p.loss), ys.read(-c.survival))
	}
	kept := t.points()
	points := make([]SurvivalPoint, len(kept))
	base := 0.0
	if curve != nil {
		base = curve.LogSurvival(s.lowest)
	}
	z := math.Sqrt2 * math.Erfinv(level)
	for i, k := range kept {
		p := SurvivalPoint{Loss: k.loss, Empirical: k.survival, Fitted: math.NaN()}
		p.Lower, p.Upper = band(k.bandFrom, math.Sqrt(k.variance), z)
		if k.survival == 0 {
			p.Lower = 0
		}
		if curve != nil {
			p.Fitted = math.Exp(curve.LogSurvival(k.loss) - base)
		}
		points[i] = p
	}
	return points
}

// survivalStep is a step of the estimate and what its band starts from: the
// step itself or, where the estimate is zero, the step before.
type survivalStep struct{ loss, survival, bandFrom, variance float64 }

// band is the interval of a survival in (0, 1] with standard error se of its
// logarithm. At 1 nothing is known of the error: 0 to 1 would say so, but no
// step ends there.
func band(survival, se, z float64) (lower, upper float64) {
	l := math.Log(survival)
	if l == 0 {
		return survival, survival
	}
	half := z * se / math.Abs(l)
	return math.Exp(l * math.Exp(half)), math.Exp(l * math.Exp(-half))
}

// survivalRuler divides the survival axis from 1 down to its smallest value
// above zero, in terms of minus the survival.
func (s *Sample) survivalRuler() *ruler {
	least := s.end.survival
	if least == 0 {
		least = 1 / (s.total.value() + 1)
	}
	r := newRuler(least, 1)
	for i, j := 0, len(r.bounds)-1; i <= j; i, j = i+1, j-1 {
		r.bounds[i], r.bounds[j] = -r.bounds[j], -r.bounds[i]
	}
	return r
}
