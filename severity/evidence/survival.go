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
// leaves Fitted NaN. Points are thinned as by Thin, here with the estimate
// falling; the 50 largest losses are always shown. None after a Collapse but
// the one at which it happens.
func (s *Sample) Survival(curve Curve, level float64) []SurvivalPoint {
	base := 0.0
	if curve != nil {
		base = curve.LogSurvival(s.lowest)
	}
	z := math.Sqrt2 * math.Erfinv(level)
	var points []SurvivalPoint
	bandTop := 1.0
	for _, m := range s.exactMarks {
		if m.before == 0 {
			break
		}
		p := SurvivalPoint{Loss: m.loss, Empirical: m.survival, Upper: bandTop, Fitted: math.NaN()}
		if m.survival > 0 {
			p.Lower, p.Upper = band(m.survival, math.Sqrt(m.variance), z)
			bandTop = p.Upper
		}
		if curve != nil {
			p.Fitted = math.Exp(curve.LogSurvival(m.loss) - base)
		}
		points = append(points, p)
	}
	// The axes are those of the sketch without its finer steps near 1.
	if len(points) <= alwaysKept {
		return points
	}
	xs, ys := s.lossRuler(), s.survivalRuler()
	return thin(points, xs, ys, func(p SurvivalPoint) (float64, float64) { return p.Loss, -p.Empirical })
}

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
