package evidence

import (
	"math"
	"slices"
	"sort"
)

// mark is a distinct loss kept for pictures.
type mark struct {
	loss             float64
	before, survival float64 // of the product-limit estimate, below and beyond the loss
	variance         float64 // Greenwood's, of ln survival
}

// sketch picks the marks while the rows are walked, so that no picture has to
// walk them again: the first loss of each cell of a picture whose axes are the
// loss, linear and logarithmic, and the estimate, linear and by the logarithms
// of itself and of what it leaves of 1; and the last 50 of either kind.
type sketch struct {
	marks    [2][]mark // of exact and of censored losses
	last     [2]cell
	from     [2]float64 // losses from here on are all kept
	loss     ruler
	survival ruler
}

func (s *Sample) newSketch() *sketch {
	k := &sketch{last: [2]cell{{-1, -1}, {-1, -1}}}
	if len(s.keys) == 0 {
		return k
	}
	k.loss, k.survival = *s.lossRuler(), *s.survivalRuler()
	for _, x := range s.survivalRuler().bounds {
		if x > -0.25 { // the linear steps serve for the rest
			k.survival.bounds = append(k.survival.bounds, -x-1)
		}
	}
	sort.Float64s(k.survival.bounds)
	for kind := range k.from {
		k.from[kind] = s.lossFromEnd(uint64(kind), alwaysKept)
	}
	return k
}

// lossRuler divides the axis of the losses.
func (s *Sample) lossRuler() *ruler {
	return newRuler(rowLoss(s.keys[0]), rowLoss(s.keys[len(s.keys)-1]))
}

// survivalRuler divides the axis of the estimate, in terms of minus it, since a
// ruler is read in ascending order.
func (s *Sample) survivalRuler() *ruler {
	r := newRuler(1/(s.total.value()+1), 1)
	for i := range r.bounds {
		r.bounds[i] = -r.bounds[i]
	}
	slices.Reverse(r.bounds)
	return r
}

// lossFromEnd is the n-th largest distinct loss of a kind; 0 when there are
// fewer.
func (s *Sample) lossFromEnd(kind uint64, n int) float64 {
	last := ^uint64(0)
	for i := len(s.keys) - 1; i >= 0; i-- {
		if k := s.keys[i]; k&1 == kind && k != last {
			last = k
			if n--; n == 0 {
				return rowLoss(k)
			}
		}
	}
	return 0
}

// take looks at the next step of the walk and at where it leaves the estimate.
func (k *sketch) take(p *step, c *state) {
	here := cell{k.loss.read(p.loss), k.survival.read(-c.survival)}
	if p.events > 0 {
		k.keep(0, here, p, c)
	}
	if p.censored > 0 {
		k.keep(1, here, p, c)
	}
}

// leash is how far the walk may go before a mark is to be kept or the estimate
// comes down to one half.
func (k *sketch) leash(c *state, r *leastRisk) leash {
	here := cell{k.loss.at, k.survival.at}
	if here != k.last[0] || c.loss >= k.from[0] || c.survival == 0 {
		return leash{} // nothing may be passed
	}
	l := leash{loss: min(k.loss.next(), k.from[0]), survival: -k.survival.next(), censored: here == k.last[1]}
	if c.loss >= k.from[1] {
		l.censored = false
	} else {
		l.loss = min(l.loss, k.from[1])
	}
	if !r.half {
		l.survival = max(l.survival, 0.5)
	}
	l.survival = max(l.survival, 0)
	return l
}

func (k *sketch) keep(kind int, here cell, p *step, c *state) {
	if here == k.last[kind] && p.loss < k.from[kind] {
		return
	}
	k.last[kind] = here
	m := mark{p.loss, p.before, c.survival, c.variance}
	if m.survival == 0 {
		m.variance = math.NaN()
	}
	k.marks[kind] = append(k.marks[kind], m)
}
