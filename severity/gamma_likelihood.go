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

func (l GammaLikelihood) at(lnShape, lnScale float64) point2 {
	shape, scale := math.Exp(lnShape), math.Exp(lnScale)
	p := l.exact(shape, scale)
	p.add(survivals(l.Summary.Limits, shape, scale), 1)
	p.add(survivals(l.Summary.Thresholds, shape, scale), -1)
	return p
}

// exact is Σ w ln f(x). With the mean μ = shape scale and φ(t) = t - 1 - ln t,
//
//	ln f(x) = -ln x + c(a) - a φ(x/μ),   c(a) = a ln a - a - ln Γ(a),
//
// in which nothing cancels however large the shape.
func (l GammaLikelihood) exact(a, scale float64) point2 {
	s := &l.Summary
	if s.Uncensored == 0 {
		return point2{}
	}
	excess, deviance := s.about(a * scale)
	w := s.EventWeight
	c := 0.5*math.Log(a/(2*math.Pi)) - special.StirlingCorrection(a)
	// In (ln shape, ln mean), where the information of exact losses is diagonal.
	gShape := a * (w*special.LogMinusDigamma(a) - deviance)
	gMean := a * excess
	hShape := gShape + a*a*w*(1/a-special.Trigamma(a))
	hMean := -a * (excess + w)
	// ln mean = ln shape + ln scale.
	return point2{
		value: -s.SumLog() + w*c - a*deviance,
		g0:    gShape + gMean,
		g1:    gMean,
		h00:   hShape + 2*gMean + hMean,
		h01:   gMean + hMean,
		h11:   hMean,
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
