// Package special holds the logarithms of the regularised incomplete gamma
// functions with their first and second derivatives in the shape and in the
// argument, their inverses, and ln Γ with its derivatives.
//
// Throughout, for shape a > 0 and argument z >= 0 (DLMF 8.2.4),
//
//	P(a,z) = 1/Γ(a) ∫₀ᶻ t^(a-1) e^(-t) dt,   Q(a,z) = 1 - P(a,z),
//
// and T stands for a random variable with that gamma law, so that Q is the
// probability of T > z. All derivatives are written as moments of T given its
// side of z, because those are sums of positive terms: E[ln(T/z) | T > z] and so
// on. Nothing is ever formed as 1 - x of a rounded x.
//
// Arguments outside the stated domain give NaN; no function panics or iterates
// without a bound. The package does no input or output and keeps no state.
package special
