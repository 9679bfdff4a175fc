package special

import "math"

const (
	halfLogTwoPi = 0.918938533204672741780329736406 // ln(2π)/2
	sqrtTwoPi    = 2.506628274631000502415765284811
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

// atanhExcess is atanh(y)/y - 1 = y²/3 + y⁴/5 + ... for y2 = y² <= 1/9.
func atanhExcess(y2 float64) float64 {
	if y2 < 1.0/256 {
		return y2 * (1.0/3 + y2*(1.0/5+y2*(1.0/7+y2*(1.0/9+y2*(1.0/11+y2*(1.0/13+y2*(1.0/15)))))))
	}
	var sum float64
	for k := 33; k >= 3; k -= 2 {
		sum = (sum + inverse[k]) * y2
	}
	return sum
}

// logComplement is ln(1 - p) for p = e^log, 0 <= p <= 1.
func logComplement(log, p float64) float64 {
	if log > -math.Ln2 {
		return math.Log(-math.Expm1(log))
	}
	return math.Log1p(-p)
}

// inverse[n] is 1/n, n >= 1.
var inverse = func() (r [64]float64) {
	for n := 1; n < len(r); n++ {
		r[n] = 1 / float64(n)
	}
	return r
}()
