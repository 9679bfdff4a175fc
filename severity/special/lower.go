package special

import "math"

// quadratureFrom is the shape from which the transition is integrated by
// quadrature; below it the series and the fraction are shorter.
const quadratureFrom = 150

// quadratureRatio: a lower series with z < quadratureRatio·a is short.
const quadratureRatio = 0.4

// lowerValue is ln P and P in the lower region.
func (s *Shape) lowerValue(z float64) (log, p float64) {
	if s.a <= 1 {
		front := s.logPower(z)
		b := alternatingSum(s.a, z)
		return front.add(math.Log1p(b)), front.exp() * (1 + b)
	}
	front := s.logFront(z)
	if s.a > quadratureFrom && z > quadratureRatio*s.a {
		sum := s.unit * s.a * lowerMass(s.a, z)
		return front.add(math.Log(sum)), front.exp() * sum
	}
	sum := s.unit * positiveSum(s.a, z)
	return front.add(math.Log(sum)), front.exp() * sum
}

// lowerTail is P with its derivatives in the lower region.
func (s *Shape) lowerTail(z, logZ float64) lowerTail {
	a := s.a
	if a <= 1 {
		front := s.logPower(z)
		b, b1, b2 := alternatingSums(a, z)
		r := 1 / (1 + b)
		l1 := b1 * r
		hazard := a * math.Exp(-z) * r
		return lowerTail{
			log:    front.add(math.Log1p(b)),
			p:      front.exp() * (1 + b),
			da:     s.logOverPsi1(z, logZ) + l1,
			daa:    (b2*r - l1*l1) - s.tri1,
			hazard: hazard,
			back:   1/a - l1,
			excess: z - a + hazard,
		}
	}
	front := s.logFront(z)
	if a > quadratureFrom && z > quadratureRatio*a {
		m := lowerMoments(a, z)
		sum := s.unit * a * m.mass
		return lowerTail{
			log:    front.add(math.Log(sum)),
			p:      front.exp() * sum,
			da:     s.logOverPsi(z, logZ) - m.mean,
			daa:    m.variance - s.tri,
			hazard: 1 / m.mass,
			back:   m.mean,
			excess: z * m.gap,
		}
	}
	m := positiveSums(a, z)
	sum := s.unit * m.sum
	return lowerTail{
		log:    front.add(math.Log(sum)),
		p:      front.exp() * sum,
		da:     s.logOverPsi1(z, logZ) - m.mean,
		daa:    m.curvature - s.tri1,
		hazard: a / m.sum,
		back:   1/a + m.mean,
		excess: m.degree,
	}
}

// maxTerms bounds every series; the regions need at most about 200.
const maxTerms = 2000

// positiveSum is M = Σ z^n/(a+1)_n, n >= 0, so that
// P(a,z) = z^a e^-z M/Γ(1+a) (DLMF 8.11.4): positive terms, for z up to about a.
func positiveSum(a, z float64) float64 {
	term, sum := 1.0, 1.0
	for n := 1; n <= maxTerms; n++ {
		x := z / (a + float64(n))
		term *= x
		sum += term
		if term*x < 1e-17*(1-x)*sum {
			break
		}
	}
	return sum
}

// positiveMoments are M and the moments of its terms.
type positiveMoments struct {
	sum       float64 // M
	mean      float64 // -∂ ln M/∂a = E[ln(z/T) | T < z] - 1/a
	curvature float64 // ∂² ln M/∂a² = Var[ln T | T < z] - 1/a²
	degree    float64 // Σ n t_n / M = E[z - T | T < z]
}

// positiveSums differentiates the terms t_n of M: with s = Σ 1/(a+k) and
// v = Σ 1/(a+k)², k = 1..n, dt_n/da = -s t_n and d²t_n/da² = (s² + v) t_n.
func positiveSums(a, z float64) positiveMoments {
	term, sum := 1.0, 1.0
	var s, v, m1, m2, degree float64
	for n := 1; n <= maxTerms; n++ {
		r := 1 / (a + float64(n))
		x := z * r
		term *= x
		s += r
		v += r * r
		sum += term
		ts := term * s
		m1 += ts
		m2 += ts*s + term*v
		degree += term * float64(n)
		if term*x*float64(n+1) < 1e-17*(1-x)*sum && n > 1 {
			break
		}
	}
	r := 1 / sum
	mean := m1 * r
	return positiveMoments{sum: sum, mean: mean, curvature: m2*r - mean*mean, degree: degree * r}
}

// alternatingSum is B = Σ (-z)^n/n! a/(a+n), n >= 1, so that
// P(a,z) = z^a (1 + B)/Γ(1+a) (DLMF 8.7.3), for z < 2 and a <= 1. It is of the
// order of a, which keeps ln P relatively exact for small shapes.
func alternatingSum(a, z float64) float64 {
	var sum float64
	power := 1.0
	for n := 1; n < len(inverse); n++ {
		power *= -z * inverse[n]
		sum += power / (a + float64(n))
		if math.Abs(power) < 1e-18*z {
			break
		}
	}
	return a * sum
}

// alternatingSums is B, ∂B/∂a and ∂²B/∂a².
func alternatingSums(a, z float64) (b, b1, b2 float64) {
	power := 1.0
	for n := 1; n < len(inverse); n++ {
		power *= -z * inverse[n]
		r := 1 / (a + float64(n))
		t := power * r
		b += t
		t *= r * float64(n)
		b1 += t
		b2 += t * r
		if math.Abs(power)*float64(n) < 1e-18*z {
			break
		}
	}
	return a * b, b1, -2 * b2
}
