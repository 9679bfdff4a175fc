package severity

// Status is the verdict on a likelihood.
type Status string

const (
	// Converged: a proven maximum.
	Converged Status = "converged"
	// NoInteriorMaximum: the supremum lies at the boundary of the parameters.
	NoInteriorMaximum Status = "no_interior_maximum"
	// Unbounded: the likelihood grows without limit.
	Unbounded Status = "unbounded"
	// AllCensored: no loss is known exactly.
	AllCensored Status = "all_censored"
	// NoClaims: there is nothing to fit.
	NoClaims Status = "no_claims"
)

// Fit is a proven maximum of the likelihood.
type Fit struct {
	Model         string      `json:"model"`
	Parameters    []Parameter `json:"parameters"`
	LogLikelihood float64     `json:"log_likelihood"`
	AIC           float64     `json:"aic"` // 2k - 2 log-likelihood
	BIC           float64     `json:"bic"` // k ln(sum of weights) - 2 log-likelihood

	// Covariance is the inverse observed information in the fit's coordinates,
	// the logarithms of Parameters in their order.
	Covariance [][]float64 `json:"covariance_ln"`

	Mean        Estimate    `json:"mean"` // interval by profile likelihood
	CV          Estimate    `json:"coefficient_of_variation"`
	Convergence Convergence `json:"convergence"`
	Sample      SampleSize  `json:"sample"`
}

// Parameter is one fitted parameter.
type Parameter struct {
	Name string `json:"name"` // "shape", "scale"
	Unit string `json:"unit"` // "money" or "" when dimensionless
	Estimate
	LogStandardError float64 `json:"log_standard_error"`
}

// Estimate is a figure with its uncertainty.
type Estimate struct {
	Value         float64  `json:"value"`
	StandardError float64  `json:"standard_error"`
	Interval      Interval `json:"interval"`
}

// Interval is a confidence interval. An end that the method never reaches is
// 0 or +Inf, and Note says so.
type Interval struct {
	Lower  float64 `json:"lower"`
	Upper  float64 `json:"upper"`
	Level  float64 `json:"level"`  // 0.95
	Method string  `json:"method"` // "profile likelihood", "delta method"
	Note   string  `json:"note,omitempty"`
}

// Convergence is the proof of the maximum.
type Convergence struct {
	Iterations       int     `json:"iterations"`        // Newton steps of the best start
	ScoreNorm        float64 `json:"score_norm"`        // largest score component in the log parameters, over the sum of weights
	NewtonDecrement  float64 `json:"newton_decrement"`  // sqrt(g' H^-1 g) at the estimate
	Condition        float64 `json:"condition"`         // condition number of the observed information in the log parameters
	Starts           int     `json:"starts"`            // starting points tried
	StationaryPoints int     `json:"stationary_points"` // distinct maxima found
	Certificate      string  `json:"certificate"`       // why this is the global maximum, or how far that is known
}

// SampleSize counts what the fit rests on.
type SampleSize struct {
	Claims     int     `json:"claims"`
	Uncensored int     `json:"uncensored"`
	Censored   int     `json:"censored"`
	Truncated  int     `json:"truncated"` // with a threshold above zero
	Weight     float64 `json:"weight"`
}

// FitError is the clear statement of why there is no maximum.
type FitError struct {
	Status     Status     `json:"status"`
	Reason     string     `json:"reason"` // a sentence in the trade's words
	Sample     SampleSize `json:"sample"`
	Boundary   *Boundary  `json:"boundary,omitempty"`
	Iterations int        `json:"iterations"`
}

func (e *FitError) Error() string { return string(e.Status) + ": " + e.Reason }

// Boundary is the exact test of existence of a truncated gamma's maximum: the
// score in the shape as the shape goes to zero, at the best scale there.
type Boundary struct {
	Scale         float64 `json:"scale"`
	Score         float64 `json:"score_per_claim"` // above zero: an interior maximum exists
	LogLikelihood float64 `json:"log_likelihood_supremum"`
}
