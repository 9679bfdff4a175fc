package evidence

import "math"

// QQ sets the losses against the fitted quantiles, both given that the loss
// exceeds the lowest threshold d. The plotting position of an exact loss t is
// the midpoint of the step of the product-limit estimate,
//
//	s(t) = (Ŝ(t-) + Ŝ(t))/2,
//
// for complete data (i - 1/2)/n from above; a loss known only to be at least t
// is an open mark at s(t) = Ŝ(t), the share of losses beyond it. Fitted is the x
// with S(x)/S(d) = s(t). One point for each distinct loss of either kind; none
// where the position is zero, that is after a Collapse.
//
// Points are in the order of the losses, exact before censored ones, and each
// kind is thinned as by Thin: a point left out lies within two of its steps of
// one shown, and the 50 largest of either kind are always shown.
func (s *Sample) QQ(curve Curve) []QQPoint {
	base := curve.LogSurvival(s.lowest)
	place := func(marks []mark, censored bool) []QQPoint {
		points := make([]QQPoint, 0, len(marks))
		for _, m := range marks {
			position := m.survival
			if !censored {
				position = 0.5 * (m.before + m.survival)
			}
			if position > 0 {
				fitted := curve.InverseLogSurvival(base + math.Log(position))
				points = append(points, QQPoint{m.loss, fitted, position, censored})
			}
		}
		return Thin(points, func(p QQPoint) (float64, float64) { return p.Observed, p.Fitted })
	}
	return byLoss(place(s.exactMarks, false), place(s.censoredMarks, true))
}

// byLoss merges two ascending lists; exact losses come before censored ones.
func byLoss(exact, censored []QQPoint) []QQPoint {
	merged := make([]QQPoint, 0, len(exact)+len(censored))
	for _, p := range exact {
		for len(censored) > 0 && censored[0].Observed < p.Observed {
			merged, censored = append(merged, censored[0]), censored[1:]
		}
		merged = append(merged, p)
	}
	return append(merged, censored...)
}
