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
//
// # Which tail, by which algorithm
//
// The tail named is computed; the other follows from P + Q = 1.
//
//	z < 3/2,  a <= 1          P  alternating series      lower.go
//	  of these a < 1/4 and    Q  the same, regular at a = 0
//	  Q not near 1               (derivatives of ln Q)   small_shape.go
//	z < 3/2 or z <= a, a > 1  P  series of positive terms  lower.go
//	  of these a > 150 and    P  Gauss–Legendre rule     quadrature.go
//	  z > 0.4 a
//	otherwise                 Q  Legendre's fraction     upper.go
//	  of these a > 150 and    Q  Gauss–Legendre rule     quadrature.go
//	  (z-a)² < 16 z
//
// # Accuracy
//
// The largest relative error of ln P, ln Q and their ten derivatives, measured
// by TestRegions on testdata/special/random.csv and switches.csv (2,932 rows
// with tails down to the smallest float64), and by TestTables on special.csv:
//
//	special.csv (a 0.001..1e6)   5.9e-15
//	a in [1e-30, 1e-4)           3.5e-15
//	a in [1e-4, 0.25)            2.0e-14   ∂²ln Q/∂z² just below z = 3/2
//	a in [0.25, 1)               3.3e-14   ∂²ln Q/∂z² just below z = 3/2
//	a in [1, 10)                 6.0e-15
//	a in [10, 150)               4.2e-15
//	a in [150, 1e7)              6.5e-15   3.0e-14 for results below 1e-100
//	a in [1e7, 1e9]              1.3e-15
//
// These are errors for the float64 arguments taken exactly. They are often
// smaller than the effect of one unit in the last place of a or z, which moves
// ln P at a = 1e9, z = a - 30√a by a relative 2e-13; no row is excused for that.
//
// # Cost
//
// Nanoseconds a call on one core of a shared virtual machine (AMD EPYC), by the
// benchmarks of this package: a jet of ln Q 230 to 480 for shapes up to 150 and
// 770 to 810 in the quadrature, less 60 to 90 where a prepared Shape is shared;
// ln Q alone 100 to 370, and 570 to 610 in the quadrature. gonum's
// mathext.GammaIncRegComp, the value without derivatives and not in logarithms,
// takes 70 to 210 for the same arguments and 3,200 at a = 0.1, z = 0.05.
package special
