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
// Points are in the order of the losses and thinned as by Thin: those that the
// eye cannot tell apart are dropped, the 50 largest of either kind always kept.
func (s *Sample) QQ(curve Curve) []QQPoint {
	points, base := s.positions(curve), curve.LogSurvival(s.lowest)
	for i := range points {
		points[i].Fitted = curve.InverseLogSurvival(base + math.Log(points[i].Survival))
	}
	return points
}

// positions are the thinned points without their fitted quantiles: the steps
// of the fitted axis are held against the positions, so that the curve is
// inverted for the points kept only.
func (s *Sample) positions(curve Curve) []QQPoint {
	if len(s.keys) == 0 {
		return nil
	}
	first := rowLoss(s.keys[0])
	fitted := s.fittedRuler(curve, first)
	marks := [2]struct {
		points         thinner[QQPoint]
		observed, axis *ruler
	}{}
	for i := range marks {
		axis := *fitted
		marks[i].observed, marks[i].axis = newRuler(first, s.largestLoss), &axis
	}
	c := s.start()
	push := func(kind int, p QQPoint) {
		if p.Survival > 0 {
			m := &marks[kind]
			m.points.push(p, m.observed.read(p.Observed), m.axis.read(-p.Survival))
		}
	}
	for p := (step{}); s.next(&c, &p); {
		if p.events > 0 {
			push(0, QQPoint{Observed: p.loss, Survival: 0.5 * (p.before + c.survival)})
		}
		if p.censored > 0 {
			push(1, QQPoint{Observed: p.loss, Survival: c.survival, Censored: true})
		}
	}
	return byLoss(marks[0].points.points(), marks[1].points.points())
}

// fittedRuler divides the fitted axis, from the smallest loss to four times the
// largest, in terms of minus the conditional survival there.
func (s *Sample) fittedRuler(curve Curve, first float64) *ruler {
	base := curve.LogSurvival(s.lowest)
	r := newRuler(first, s.largestLoss)
	for share := 1.0; share < 4; share += 1.0 / resolution {
		r.bounds = append(r.bounds, s.largestLoss*share)
	}
	for i, x := range r.bounds {
		r.bounds[i] = -math.Exp(curve.LogSurvival(x) - base)
	}
	return r
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
