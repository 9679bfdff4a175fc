package layer

import "spillway/severity"

// Curve is a severity curve that can say its figures with their gradients in
// its log parameters. severity.Gamma is one.
type Curve interface {
	// SurvivalFigure is S(x), x >= 0 or +Inf.
	SurvivalFigure(x float64) severity.Figure
	// LimitedExpectedValueFigure is E[min(X, u)], u >= 0 or +Inf.
	LimitedExpectedValueFigure(u float64) severity.Figure
	// LayerFigures are the figures of min((X-A)+, L), A >= 0, L > 0 or +Inf.
	LayerFigures(attachment, limit float64) severity.LayerFigures
	// MeanExcessFigure is E[X-A | X > A], A >= 0.
	MeanExcessFigure(attachment float64) severity.Figure
	// LossEliminationRatioFigure is E[min(X, d)] / E[X], d >= 0.
	LossEliminationRatioFigure(d float64) severity.Figure
	// QuantileFigure is the x with F(x) = p, p in (0, 1).
	QuantileFigure(p float64) severity.Figure
	// TailValueAtRiskFigure is E[X | X > x] at that x.
	TailValueAtRiskFigure(p float64) severity.Figure
}

var _ Curve = severity.Gamma{}
