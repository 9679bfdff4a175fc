package special

import "math"

// asymptoticFrom is the shape from which the series in 1/a of Stirling's type
// are used; ten terms are then exact to 1e-17.
const asymptoticFrom = 10

// LogGamma is ln Γ(a) for 0 < a < +Inf, NaN elsewhere. Its relative error stays
// small at the zeros a = 1 and a = 2. Formulas: DLMF 5.7.3 about 2, recurrence
// to it below 10, Stirling's series (DLMF 5.11.1) above. Measured relative
// error 7e-16, TestGammaTable and TestTables; the zeros included.
func LogGamma(a float64) float64 {
	switch {
	case !(a > 0) || math.IsInf(a, 1):
		return math.NaN()
	case a >= asymptoticFrom:
		return (a-0.5)*math.Log(a) - a + halfLogTwoPi + stirlingSeries(a)
	case a < 0.5:
		return logGamma1p(a) - math.Log(a)
	case a < 1.5:
		x := a - 1
		return x*logGammaTwo(x) - math.Log1p(x)
	}
	if a < 2.5 {
		return (a - 2) * logGammaTwo(a-2)
	}
	return logGammaDown(a - 1)
}

// StirlingCorrection is ln Γ(a) - [(a - 1/2) ln a - a + ln(2π)/2] for
// 0 < a < +Inf, without cancellation for large a; NaN elsewhere. It falls from
// +Inf to 0 like 1/(12a). Below 10 it is carried down by its recurrence, whose
// step (a + 1/2) ln(1 + 1/a) - 1 is a series of positive terms. Measured
// relative error 2.1e-15, TestGammaTable.
func StirlingCorrection(a float64) float64 {
	if !(a > 0) || math.IsInf(a, 1) {
		return math.NaN()
	}
	if a < 0.25 {
		return logGamma1p(a) - (a+0.5)*math.Log(a) + a - halfLogTwoPi
	}
	var sum float64
	for ; a < asymptoticFrom; a++ {
		sum += stirlingStep(a)
	}
	return sum + stirlingSeries(a)
}

// stirlingStep is (a + 1/2) ln(1 + 1/a) - 1 = Σ w^(2k)/(2k+1), w = 1/(2a+1).
func stirlingStep(a float64) float64 {
	w := 1 / (2*a + 1)
	w2 := w * w
	if w2 > 0.2 {
		return (a+0.5)*math.Log1p(1/a) - 1
	}
	power, sum := 1.0, 0.0
	for k := 3; k < len(inverse); k += 2 {
		power *= w2
		term := power * inverse[k]
		sum += term
		if term < 1e-17*sum {
			break
		}
	}
	return sum
}

// stirlingSeries is the correction for a >= 10: Σ B(2k)/(2k(2k-1) a^(2k-1)).
func stirlingSeries(a float64) float64 {
	r := 1 / a
	q := r * r
	return r * (1.0/12 + q*(-1.0/360+q*(1.0/1260+q*(-1.0/1680+q*(1.0/1188+q*(-691.0/360360+
		q*(1.0/156+q*(-3617.0/122400+q*(43867.0/244188+q*(-174611.0/125400))))))))))
}

// logGamma1p is ln Γ(1+a) for 0 <= a < 10, relative error small at 0 and 1.
func logGamma1p(a float64) float64 {
	switch {
	case a < 0.5:
		return a*logGammaTwo(a) - math.Log1p(a)
	case a < 1.5:
		return (a - 1) * logGammaTwo(a-1)
	}
	return logGammaDown(a)
}

// logGammaDown is ln Γ(1+a) for 1.5 <= a < 10 by recurrence to [1.5, 2.5):
// ln Γ(2+x) and the logarithm of a product.
func logGammaDown(a float64) float64 {
	n := math.Floor(a - 0.5)
	x := a - 1 - n
	product := 1.0
	for j := 2 + x; j < a+0.5; j++ {
		product *= j
	}
	return x*logGammaTwo(x) + math.Log(product)
}

// logGammaTwo is ln Γ(2+x)/x for |x| <= 1/2: DLMF 5.7.3.
func logGammaTwo(x float64) float64 {
	var even, odd float64
	x2 := x * x
	for k := len(logGammaTaylor) - 1; k > 0; k -= 2 {
		odd = odd*x2 + logGammaTaylor[k]
		even = even*x2 + logGammaTaylor[k-1]
	}
	return even + x*odd
}

// The Taylor series at 2: ln Γ(2+x) = x Σ logGammaTaylor[k] x^k,
// ψ(2+x) = Σ digammaTaylor[k] x^k, ψ'(2+x) = Σ trigammaTaylor[k] x^k.
var logGammaTaylor, digammaTaylor, trigammaTaylor = func() (l, d, t [28]float64) {
	l[0], d[0] = 1-eulerGamma, 1-eulerGamma
	sign := 1.0
	for k := 2; k <= 29; k++ {
		c := sign * zetaMinusOne[k]
		if k-1 < len(l) {
			l[k-1] = c / float64(k)
			d[k-1] = c
		}
		t[k-2] = c * float64(k-1)
		sign = -sign
	}
	return l, d, t
}()
