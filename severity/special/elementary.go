package special

import "math"

const (
	halfLogTwoPi = 0.918938533204672741780329736406 // ln(2π)/2
	eulerGamma   = 0.577215664901532860606512090082
)

// expExcess is e^x - 1 - x >= 0 for finite x, without cancellation at 0.
func expExcess(x float64) float64 {
	if x > 0.75 || x < -0.75 {
		return math.Expm1(x) - x
	}
	// Taylor series; the first term left out is below 1e-17 of the sum.
	const (
		c2  = 1.0 / 2
		c3  = 1.0 / 6
		c4  = 1.0 / 24
		c5  = 1.0 / 120
		c6  = 1.0 / 720
		c7  = 1.0 / 5040
		c8  = 1.0 / 40320
		c9  = 1.0 / 362880
		c10 = 1.0 / 3628800
		c11 = 1.0 / 39916800
		c12 = 1.0 / 479001600
		c13 = 1.0 / 6227020800
		c14 = 1.0 / 87178291200
		c15 = 1.0 / 1307674368000
		c16 = 1.0 / 20922789888000
	)
	x2 := x * x
	if x2 < 0.01 {
		return x2 * (c2 + x*(c3+x*(c4+x*(c5+x*(c6+x*(c7+x*(c8+x*(c9+x*(c10+x*c11)))))))))
	}
	even := c2 + x2*(c4+x2*(c6+x2*(c8+x2*(c10+x2*(c12+x2*(c14+x2*c16))))))
	odd := c3 + x2*(c5+x2*(c7+x2*(c9+x2*(c11+x2*(c13+x2*c15)))))
	return x2 * (even + x*odd)
}

// logDefect is x - ln(1+x) >= 0 for x > -1, without cancellation at 0: with
// y = x/(2+x), ln(1+x) = 2 atanh y and x - 2y = xy.
func logDefect(x float64) float64 {
	if x > 1 || x < -0.5 {
		return x - math.Log1p(x)
	}
	y := x / (2 + x)
	y2 := y * y
	var sum float64
	if y2 < 1.0/256 {
		sum = 1.0/3 + y2*(1.0/5+y2*(1.0/7+y2*(1.0/9+y2*(1.0/11+y2*(1.0/13+y2*(1.0/15))))))
	} else {
		for k := 33; k >= 3; k -= 2 {
			sum = sum*y2 + inverse[k]
		}
	}
	return y * (x - 2*y2*sum)
}

// logComplement is ln(1 - e^x) for x <= 0.
func logComplement(x float64) float64 {
	if x > -math.Ln2 {
		return math.Log(-math.Expm1(x))
	}
	return math.Log1p(-math.Exp(x))
}

// inverse[n] is 1/n, n >= 1.
var inverse = func() (r [64]float64) {
	for n := 1; n < len(r); n++ {
		r[n] = 1 / float64(n)
	}
	return r
}()
