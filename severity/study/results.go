package study

import (
	"spillway/severity"
	"spillway/severity/claims"
	"spillway/severity/evidence"
	"spillway/severity/layer"
)

// Results are everything a study says. Exactly one of Fit and NoFit is set.
type Results struct {
	Assumptions    Assumptions
	Basis          []claims.BookBatch // of the batches used
	Currency       string
	Decimals       int8
	Reconciliation claims.Reconciliation
	Sample         SampleFigures
	Fit            *severity.Fit
	NoFit          *severity.FitError
	Survival       []evidence.SurvivalPoint // thinned
	QQ             []evidence.QQPoint       // thinned, the 50 largest kept
	SmallestRisk   evidence.ProductLimitPoint
	Layers         []LayerResult
	Quantiles      []layer.QuantileFigures
}

// LayerResult is a layer's modelled figures beside the data's own.
type LayerResult struct {
	Model   *layer.Figures // nil without a fit
	Burning evidence.BurningFigure
	Layer   layer.Layer
}

// SampleFigures describe the losses used before any curve is fitted.
type SampleFigures struct {
	LowestThreshold  float64
	Thresholds       int // distinct values above zero
	Limits           int // distinct censoring points
	SmallestLoss     float64
	LargestLoss      float64 // of the uncensored
	MeanLoss         float64 // weighted, as recorded, nothing corrected for
	LargestClaimPart float64 // share of the largest claim in the total, in [0, 1]
}
