// Package layer prices layers of a severity curve: limited expected values,
// expected layer losses, quantiles and tail values at risk.
package layer

import "spillway/severity"

// Layer is the part of a loss between Attachment and Attachment + Limit.
type Layer struct {
	Attachment float64 // >= 0, money
	Limit      float64 // > 0, money; +Inf for unlimited
}

// Figures are what a curve says about one layer, per ground-up claim unless
// the name says otherwise.
type Figures struct {
	Layer                          Layer
	LimitedExpectedValueAttachment severity.Estimate // E[min(X, A)]
	LimitedExpectedValueExhaustion severity.Estimate // E[min(X, A+L)]
	ExpectedLoss                   severity.Estimate // E[min((X-A)+, L)]
	StandardDeviation              severity.Estimate // of min((X-A)+, L)
	ProbabilityAttach              severity.Estimate // S(A)
	ProbabilityExhaust             severity.Estimate // S(A+L)
	MeanIfAttached                 severity.Estimate // E[min(X-A, L) | X > A]
	StandardDeviationIfAttached    severity.Estimate // of min(X-A, L) given X > A
	MeanExcess                     severity.Estimate // E[X-A | X > A]
	LossEliminationRatio           severity.Estimate // E[min(X, A)] / E[X]
}

// QuantileFigures are what a curve says about one probability.
type QuantileFigures struct {
	Probability     float64 // in (0, 1)
	Value           severity.Estimate
	TailValueAtRisk severity.Estimate // E[X | X > Value]
}
