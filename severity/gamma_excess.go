package severity

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// excess is the law of a standard gamma loss Z of shape a beyond a cut c > 0,
// as seen by a layer of width l upon the cut: quadrature nodes and weights for
//
//	s = ln(Z/c) given Z > c,   density proportional to g(s) = exp(a s - c (e^s - 1)),
//
// s > 0. Far in a tail, for thin layers and for layers far below the body the
// closed forms in incomplete gammas subtract nearly equal numbers; here every
// moment is a sum of positive terms of elementary functions. g is the same
// smooth log-concave kernel for every shape and cut, the singularity of the
// density at zero included, because s is a logarithm.
type excess struct {
	nodes []node  // inside the layer: 0 < s < ln(1 + l/c); weights add up with above.mass to 1
	above moments // of the part beyond the layer
	meanS float64 // E[s]
	meanZ float64 // E[Z - c]
}

// node is one quadrature point within the layer.
type node struct {
	mass  float64 // weight × g
	s     float64
	loss  float64 // z - c: how far the loss reaches into the layer
	short float64 // l - (z - c): what it leaves of it
}

// moments are the integrals of g, g·s and g·(z-c).
type moments struct{ mass, s, z float64 }

// newExcess integrates for shape a, cut c and layer width l > 0 or +Inf.
func newExcess(a, c, l float64) *excess {
	sigma := math.Log1p(l / c)
	if math.IsInf(sigma, 1) && !math.IsInf(l, 1) { // the ratio is beyond the doubles
		sigma = math.Log(l) - math.Log(c)
	}
	peak := 0.0
	if a > c {
		peak = math.Log(a / c)
	}
	k := kernel{a: a, c: c, l: l, sigma: sigma}
	x := &excess{nodes: make([]node, 0, 16*len(gaussNodes))}
	topIn, topOut := math.Min(peak, sigma), math.Max(peak, sigma)
	x.nodes = k.inside(x.nodes, topIn)
	shift := 0.0 // ln of the largest g beyond the layer over the largest within
	if !math.IsInf(sigma, 1) {
		x.above = k.beyond(topOut)
		shift = k.change(topIn, topOut-topIn)
		if peak > sigma {
			shift = -k.change(topOut, topIn-topOut)
		}
	}
	in, out := math.Exp(-math.Max(shift, 0)), math.Exp(math.Min(shift, 0))
	total := out * x.above.mass
	for _, n := range x.nodes {
		total += in * n.mass
	}
	in, out = in/total, out/total
	x.above = moments{out * x.above.mass, out * x.above.s, out * x.above.z}
	x.meanS, x.meanZ = x.above.s, x.above.z
	for i := range x.nodes {
		n := &x.nodes[i]
		n.mass *= in
		x.meanS += n.mass * n.s
		x.meanZ += n.mass * n.loss
	}
	return x
}

// kernel walks along ln g.
type kernel struct{ a, c, l, sigma float64 }

// change is ln g(from+step) - ln g(from), well conditioned at any from because
// it is written around the slope there:
//
//	(a - c e^from) step - c e^from (e^step - 1 - step).
func (k kernel) change(from, step float64) float64 {
	if step == 0 {
		return 0
	}
	z := k.c * math.Exp(from)
	return (k.a-z)*step - z*expExcess(step)
}

// panel is the longest step from a point over which a Gauss rule sees a tame
// integrand: ln g + 2s, as in second moments, changes by about 8 at most.
func (k kernel) panel(from, longest float64) float64 {
	z := k.c * math.Exp(from)
	slope := math.Abs(k.a-z) + 2
	return math.Min(longest, 16/(slope+math.Sqrt(slope*slope+16*z)))
}

// negligible is how far below its largest value ln g may be left out.
const negligible = -52

// inside adds the nodes of 0 < s < sigma, g scaled to 1 at top, where it is
// largest there.
func (k kernel) inside(nodes []node, top float64) []node {
	// Distances are kept from both ends of the layer, whichever of them top is,
	// so that neither loss nor short loses digits at its own end.
	toEnd := top - k.sigma
	zEnd := k.c + k.l
	add := func(mass, offset float64) {
		n := node{mass: mass, s: top + offset}
		n.loss = k.c * math.Expm1(n.s)
		if !math.IsInf(k.sigma, 1) {
			n.short = -zEnd * math.Expm1(toEnd+offset)
		}
		nodes = append(nodes, n)
	}
	k.walk(top, -top, add)
	k.walk(top, -toEnd, add)
	return nodes
}

// beyond are the moments of s > sigma, g scaled to 1 at top, where it is
// largest there.
func (k kernel) beyond(top float64) (m moments) {
	add := func(mass, offset float64) {
		s := top + offset
		m.mass += mass
		m.s += mass * s
		m.z += mass * k.c * math.Expm1(s)
	}
	k.walk(top, k.sigma-top, add)
	k.walk(top, math.Inf(1), add)
	return m
}

// walk integrates from top over the length to the right, or to the left when
// it is negative, in panels until the length ends or g is negligible.
func (k kernel) walk(top, length float64, add func(mass, offset float64)) {
	direction, longest := 1.0, 1.0
	if length < 0 {
		direction, longest = -1, 4
		length = -length
	}
	at, height := 0.0, 0.0 // distance from top; ln g there over g(top)
	for at < length && height > negligible {
		from := top + direction*at
		h := math.Min(k.panel(from, longest), length-at)
		if !(at+h > at) {
			return // arguments at the end of the doubles
		}
		z := k.c * math.Exp(from)
		slope := k.a - z
		for i, x := range gaussNodes {
			step := direction * h * x
			mass := h * gaussWeights[i] * math.Exp(height+slope*step-z*expExcess(step))
			add(mass, direction*at+step)
		}
		height += k.change(from, direction*h)
		at += h
	}
}

// gaussNodes and gaussWeights are the Gauss-Legendre rule on (0, 1).
var gaussNodes, gaussWeights = func() (nodes, weights []float64) {
	nodes, weights = make([]float64, 20), make([]float64, 20)
	quad.Legendre{}.FixedLocations(nodes, weights, 0, 1)
	return nodes, weights
}()

// expExcess is e^x - 1 - x, without cancellation at 0.
func expExcess(x float64) float64 {
	if x > 0.5 || x < -0.5 {
		return math.Expm1(x) - x
	}
	sum := 0.0
	for _, c := range expCoefficients {
		sum = sum*x + c
	}
	return x * x * sum
}

// expCoefficients are 1/k! from k = 15 down to 2.
var expCoefficients = func() (c []float64) {
	f := 1.0
	for k := 2.0; k <= 15; k++ {
		f *= k
		c = append([]float64{1 / f}, c...)
	}
	return c
}()
