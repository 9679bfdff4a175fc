package study

import (
	"bytes"
	"encoding/gob"
	"fmt"

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
	QQ             []evidence.QQPoint       // thinned, the 50 largest kept; none without a fit
	Layers         []LayerResult
	Quantiles      []layer.QuantileFigures // none without a fit
}

// LayerResult is a layer's modelled figures beside the data's own.
type LayerResult struct {
	Layer   layer.Layer
	Model   *layer.Figures // nil without a fit
	Burning evidence.BurningFigure
}

// SampleFigures describe the losses used before any curve is fitted.
type SampleFigures struct {
	Claims, Uncensored, Censored, Truncated int

	LowestThreshold float64
	Thresholds      int // distinct values above zero
	Limits          int // distinct censoring points
	SmallestLoss    float64
	LargestLoss     float64 // of the uncensored
	MeanLoss        float64 // weighted, as recorded, nothing corrected for
	LargestShare    float64 // of the largest claim in the total, in [0, 1]

	SmallestRisk evidence.ProductLimitPoint
	Collapsed    bool    // a lone claim at risk drives the product-limit estimate to zero
	CollapseAt   float64 // at this loss
}

// resultsForm names the form in which results are kept. Fields may be added
// and are then zero in older results; a change of meaning needs a new name.
const resultsForm = "spillway results 1\n"

// Encode is the stored form of results: every double to the last bit, those
// that are no number included.
func (r *Results) Encode() ([]byte, error) {
	var b bytes.Buffer
	b.WriteString(resultsForm)
	if err := gob.NewEncoder(&b).Encode(r); err != nil {
		return nil, fmt.Errorf("results: %w", err)
	}
	return b.Bytes(), nil
}

// DecodeResults reads the stored form.
func DecodeResults(stored []byte) (*Results, error) {
	rest, ok := bytes.CutPrefix(stored, []byte(resultsForm))
	if !ok {
		return nil, fmt.Errorf("results: not in the form %q", resultsForm[:len(resultsForm)-1])
	}
	r := new(Results)
	if err := gob.NewDecoder(bytes.NewReader(rest)).Decode(r); err != nil {
		return nil, fmt.Errorf("results: %w", err)
	}
	return r, nil
}
