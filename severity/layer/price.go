package layer

import (
	"math"

	"spillway/severity"
)

// Price is what the curve says about the layer, each figure with its standard
// error and interval by the delta method: severity.Figure.Estimate says on
// which scale. The covariance is that of the curve's log parameters, as a Fit
// holds it; nil leaves errors and intervals NaN. level lies in (0, 1). A layer
// that Validate refuses has NaN figures.
func Price(c Curve, covariance [][]float64, l Layer, level float64) Figures {
	if l.Validate() != nil {
		l.Attachment = math.NaN()
	}
	estimate := func(f severity.Figure) severity.Estimate { return f.Estimate(covariance, level) }
	of := c.LayerFigures(l.Attachment, l.Limit)
	return Figures{
		Layer:                          l,
		LimitedExpectedValueAttachment: estimate(c.LimitedExpectedValueFigure(l.Attachment)),
		LimitedExpectedValueExhaustion: estimate(c.LimitedExpectedValueFigure(l.Top())),
		ExpectedLoss:                   estimate(of.Mean),
		StandardDeviation:              estimate(of.StandardDeviation),
		ProbabilityAttach:              estimate(c.SurvivalFigure(l.Attachment)),
		ProbabilityExhaust:             estimate(c.SurvivalFigure(l.Top())),
		MeanIfAttached:                 estimate(of.MeanIfAttached),
		StandardDeviationIfAttached:    estimate(of.StandardDeviationIfAttached),
		MeanExcess:                     estimate(c.MeanExcessFigure(l.Attachment)),
		LossEliminationRatio:           estimate(c.LossEliminationRatioFigure(l.Attachment)),
	}
}

// Quantiles are the quantile of the curve at p in (0, 1) and the tail value at
// risk beyond it, with their uncertainty as in Price; NaN at other p.
func Quantiles(c Curve, covariance [][]float64, p, level float64) QuantileFigures {
	return QuantileFigures{
		Probability:     p,
		Value:           c.QuantileFigure(p).Estimate(covariance, level),
		TailValueAtRisk: c.TailValueAtRiskFigure(p).Estimate(covariance, level),
	}
}
