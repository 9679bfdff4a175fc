package special

import "math"

// double is an unevaluated sum hi + lo with |lo| at most of the order of half a
// unit in the last place of hi.
type double struct{ hi, lo float64 }

// twoSum is a + b exactly (Knuth), barring overflow.
func twoSum(a, b float64) double {
	hi := a + b
	t := hi - a
	return double{hi, (a - (hi - t)) + (b - t)}
}

// twoProduct is a·b exactly, barring overflow and underflow.
func twoProduct(a, b float64) double {
	hi := a * b
	return double{hi, math.FMA(a, b, -hi)}
}

func (d double) plus(x float64) double {
	s := twoSum(d.hi, x)
	return double{s.hi, s.lo + d.lo}
}

func (d double) times(x float64) double {
	p := twoProduct(d.hi, x)
	return double{p.hi, p.lo + d.lo*x}
}

// exp is e^(hi+lo).
func (d double) exp() float64 {
	e := math.Exp(d.hi)
	return e + e*d.lo
}

// logDouble is ln x for finite x > 0, with an absolute error below 1e-16 of
// the rounding of ln 2 and of a logarithm between -0.35 and 0.35.
func logDouble(x float64) double {
	const (
		ln2Hi = 6.93147180369123816490e-01 // 33 bits, exact in products with exponents
		ln2Lo = 1.90821492927058770002e-10
	)
	m, e := math.Frexp(x)
	if m < math.Sqrt2/2 {
		m *= 2
		e--
	}
	k := float64(e)
	return twoSum(k*ln2Hi, math.Log(m)).plus(k * ln2Lo)
}

// add is hi + lo + x, rounded.
func (d double) add(x float64) float64 { return (d.hi + x) + d.lo }
