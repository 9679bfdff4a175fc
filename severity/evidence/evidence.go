// Package evidence sets a fitted curve against the data it was fitted to,
// with truncation and censoring respected.
package evidence

// ProductLimitPoint is one step of the product-limit (Kaplan-Meier) estimate
// with delayed entry: of the survival beyond Loss of losses above the lowest
// threshold.
type ProductLimitPoint struct {
	Loss     float64 `json:"loss"`
	AtRisk   float64 `json:"at_risk"` // weight with threshold < Loss <= exit
	Events   float64 `json:"events"`  // weight of uncensored losses equal to Loss
	Survival float64 `json:"survival"`
	// LogStandardError is Greenwood's standard error of ln Survival, NaN once
	// Survival is zero.
	LogStandardError float64 `json:"log_standard_error"`
}

// QQPoint sets one observed loss against the fitted quantile at its
// product-limit plotting position.
type QQPoint struct {
	Observed float64 `json:"observed"`
	Fitted   float64 `json:"fitted"`
	Survival float64 `json:"survival"` // plotting position: midpoint of the step of the product-limit curve
	Censored bool    `json:"censored"`
}

// SurvivalPoint sets the fitted survival beside the product-limit estimate,
// both given that the loss exceeds the lowest threshold.
type SurvivalPoint struct {
	Loss      float64 `json:"loss"`
	Empirical float64 `json:"empirical"`
	Lower     float64 `json:"lower"` // band from Greenwood on the log(-log) scale
	Upper     float64 `json:"upper"`
	Fitted    float64 `json:"fitted"`
}

// BurningFigure is what the claims themselves say about a layer.
type BurningFigure struct {
	AtRisk       int     `json:"at_risk"`        // claims whose own limit lies above the attachment, or that reached it
	Reaching     int     `json:"reaching"`       // claims with a loss above the attachment
	Exhausting   int     `json:"exhausting"`     // claims with a loss at or above the top of the layer
	LayerLoss    float64 `json:"layer_loss"`     // weighted sum of the parts of the losses in the layer, as recorded
	PerClaim     float64 `json:"per_claim"`      // LayerLoss over the weight of all claims used
	StandardErr  float64 `json:"standard_error"` // of PerClaim
	ProductLimit float64 `json:"product_limit"`  // integral of the product-limit survival over the layer; NaN where the curve ends before
	Fitted       float64 `json:"fitted"`         // the curve's expected layer loss given a loss above the lowest threshold: the figure to set beside ProductLimit
}
