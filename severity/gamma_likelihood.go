package severity

import (
	"math"
	"sync"

	"spillway/severity/special"
)

// GammaLikelihood is the log-likelihood of a gamma curve in the coordinates
// (ln shape, ln scale), from a Summary.
type GammaLikelihood struct{ Summary Summary }

// point2 is a value with its gradient and Hessian in two coordinates.
type point2 struct {
	value         float64
	g0, g1        float64
	h00, h01, h11 float64
}

func (p *point2) add(q point2, w float64) {
	p.value += w * q.value
	p.g0 += w * q.g0
	p.g1 += w * q.g1
	p.h00 += w * q.h00
	p.h01 += w * q.h01
	p.h11 += w * q.h11
}

// At returns the log-likelihood with its gradient and Hessian in
// (ln shape, ln scale); shape and scale above zero.
func (l GammaLikelihood) At(shape, scale float64) (value float64, gradient [2]float64, hessian [2][2]float64) {
	p := l.at(math.Log(shape), math.Log(scale))
	return p.value, [2]float64{p.g0, p.g1}, [2][2]float64{{p.h00, p.h01}, {p.h01, p.h11}}
}

// at is the log-likelihood in (ln shape, ln scale).
func (l GammaLikelihood) at(lnShape, lnScale float64) point2 {
	shape, scale := math.Exp(lnShape), math.Exp(lnScale)
	p := l.exact(shape, shape*scale).fromMean()
	p.add(survivals(l.Summary.Limits, shape, scale), 1)
	p.add(survivals(l.Summary.Thresholds, shape, scale), -1)
	return p
}

// atMean is the log-likelihood in (ln shape, ln mean), where the information
// of exact losses is diagonal however large the shape: the coordinates in
// which the maximum is sought.
func (l GammaLikelihood) atMean(lnShape, lnMean float64) point2 {
	shape, mean := math.Exp(lnShape), math.Exp(lnMean)
	p := l.exact(shape, mean)
	p.add(survivals(l.Summary.Limits, shape, mean/shape).toMean(), 1)
	p.add(survivals(l.Summary.Thresholds, shape, mean/shape).toMean(), -1)
	return p
}

// toMean turns derivatives in (ln shape, ln scale) into those in
// (ln shape, ln mean); ln scale = ln mean - ln shape.
func (p point2) toMean() point2 {
	return point2{p.value, p.g0 - p.g1, p.g1, p.h00 - 2*p.h01 + p.h11, p.h01 - p.h11, p.h11}
}

// fromMean is the way back; ln mean = ln shape + ln scale.
func (p point2) fromMean() point2 {
	return point2{p.value, p.g0 + p.g1, p.g1, p.h00 + 2*p.h01 + p.h11, p.h01 + p.h11, p.h11}
}

// exact is Σ w ln f(x) in (ln shape, ln mean). With the mean μ = shape scale and φ(t) = t - 1 - ln t,
//
//	ln f(x) = -ln x + c(a) - a φ(x/μ),   c(a) = a ln a - a - ln Γ(a),
//
// in which nothing cancels however large the shape.
func (l GammaLikelihood) exact(a, mean float64) point2 {
	s := &l.Summary
	if s.Uncensored == 0 {
		return point2{}
	}
	excess, deviance := s.about(mean)
	w := s.EventWeight
	c := 0.5*math.Log(a/(2*math.Pi)) - special.StirlingCorrection(a)
	gShape := a * (w*special.LogMinusDigamma(a) - deviance)
	return point2{
		value: -s.SumLog() + w*c - a*deviance,
		g0:    gShape,
		g1:    a * excess,
		h00:   gShape + a*a*w*(1/a-special.Trigamma(a)),
		h01:   a * excess,
		h11:   -a * (excess + w),
	}
}

// survivals is Σ w ln S(x) over distinct points.
func survivals(points []Point, a, scale float64) point2 {
	const chunk = 256
	if len(points) <= chunk {
		return survivalsOf(points, a, scale)
	}
	parts := make([]point2, (len(points)+chunk-1)/chunk)
	var wait sync.WaitGroup
	for first := range 4 {
		wait.Go(func() {
			for i := first; i < len(parts); i += 4 {
				parts[i] = survivalsOf(points[i*chunk:min((i+1)*chunk, len(points))], a, scale)
			}
		})
	}
	wait.Wait()
	var sum point2
	for _, p := range parts {
		sum.add(p, 1)
	}
	return sum
}

func survivalsOf(points []Point, a, scale float64) point2 {
	law := special.NewShape(a)
	var sum point2
	for _, p := range points {
		z := p.Value / scale
		j := law.LogUpperJet(z)
		sum.add(point2{
			value: j.Log,
			g0:    a * j.DA,
			g1:    -z * j.DZ,
			h00:   a*j.DA + a*a*j.DAA,
			h01:   -a * z * j.DAZ,
			h11:   z*j.DZ + z*z*j.DZZ,
		}, p.Weight)
	}
	return sum
}
