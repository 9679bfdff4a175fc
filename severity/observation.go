// Package severity fits severity curves to losses seen through deductibles and
// limits. It is pure: no input or output, no clock, no unseeded randomness.
package severity

// Observation is what is known about one ground-up loss X, and nothing else.
// Its log-likelihood is
//
//	Weight * (ln f(Loss) or, when Censored, ln S(Loss), minus ln S(Threshold)).
type Observation struct {
	Loss      float64 // x > 0, finite
	Threshold float64 // d >= 0, d <= x: the loss is here only because X > d; 0 for none
	Weight    float64 // w > 0, finite; 1 for a claim
	Censored  bool    // X is only known to be at least Loss
}
