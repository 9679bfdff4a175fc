package evidence

// Curve is what a fitted severity curve must answer to be set against the
// claims. severity.Gamma is one.
type Curve interface {
	// LogSurvival is ln S(x), x >= 0.
	LogSurvival(x float64) float64
	// InverseLogSurvival is the loss x with ln S(x) = logS <= 0.
	InverseLogSurvival(logS float64) float64
	// LayerMean is E[min((X-A)+, L)], A >= 0, L > 0 or +Inf.
	LayerMean(attachment, limit float64) float64
}
