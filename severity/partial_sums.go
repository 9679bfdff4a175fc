package severity

import (
	"math"
	"slices"

	"spillway/severity/special"
)

// partialSums is a summary in the making, of one run of observations.
type partialSums struct {
	counts      Summary // the plain counts, weights and extremes
	excess      compensated
	log         compensated
	deviance    compensated
	bad         *BadObservation
	thresholds  tally
	limits      tally
	tight       bool // all exact losses lie close to the pivot
	pivot       float64
	anyUncensor bool
}

func newPartialSums(pivot float64) *partialSums {
	return &partialSums{pivot: pivot, tight: true}
}

// logsPerProduct ratios are multiplied before one logarithm is taken; each
// multiplication costs the sum less than half a rounding of one logarithm.
const logsPerProduct = 16

func (p *partialSums) add(obs []Observation, offset int) {
	c := &p.counts
	c.Smallest, c.Largest = math.Inf(1), 0
	product, factors := 1.0, 0
	for i := range obs {
		o := &obs[i]
		if !(o.Loss > 0 && o.Loss <= math.MaxFloat64 && o.Threshold >= 0 && o.Threshold <= o.Loss &&
			o.Weight > 0 && o.Weight <= math.MaxFloat64) {
			p.bad = &BadObservation{offset + i, *o, problemOf(*o)}
			return
		}
		c.Weight += o.Weight
		if o.Threshold > 0 {
			c.Truncated++
			p.thresholds.add(o.Threshold, o.Weight)
		}
		if o.Censored {
			c.Censored++
			p.limits.add(o.Loss, o.Weight)
			continue
		}
		c.Uncensored++
		c.EventWeight += o.Weight
		if o.Loss < c.Smallest {
			c.Smallest = o.Loss
		}
		if o.Loss > c.Largest {
			c.Largest = o.Loss
		}
		p.excess.add(o.Weight * ((o.Loss - p.pivot) / p.pivot))
		ratio := o.Loss / p.pivot
		if o.Weight != 1 || ratio > 1e15 || ratio < 1e-15 {
			p.log.add(o.Weight * (math.Log(o.Loss) - math.Log(p.pivot)))
			continue
		}
		product *= ratio
		if factors++; factors == logsPerProduct {
			p.log.add(math.Log(product))
			product, factors = 1, 0
		}
	}
	p.log.add(math.Log(product))
	c.Claims = len(obs)
	p.anyUncensor = c.Uncensored > 0
	p.tight = !p.anyUncensor || c.Largest < 1.3*p.pivot && c.Smallest > 0.7*p.pivot
	if p.tight {
		for i := range obs {
			if o := &obs[i]; !o.Censored {
				p.deviance.add(o.Weight * special.LogDefect((o.Loss-p.pivot)/p.pivot))
			}
		}
	}
}

func (p *partialSums) merge(q *partialSums) {
	c, d := &p.counts, &q.counts
	c.Claims += d.Claims
	c.Uncensored += d.Uncensored
	c.Censored += d.Censored
	c.Truncated += d.Truncated
	c.Weight += d.Weight
	c.EventWeight += d.EventWeight
	c.Smallest = math.Min(c.Smallest, d.Smallest)
	c.Largest = math.Max(c.Largest, d.Largest)
	p.excess.merge(q.excess)
	p.log.merge(q.log)
	p.deviance.merge(q.deviance)
	p.tight = p.tight && q.tight
	p.thresholds.merge(&q.thresholds)
	p.limits.merge(&q.limits)
}

func (p *partialSums) summary() Summary {
	s := p.counts
	s.Thresholds = p.thresholds.points()
	s.Limits = p.limits.points()
	if s.Uncensored == 0 {
		s.Smallest, s.Largest = 0, 0
		return s
	}
	s.Pivot = p.pivot
	s.SumExcess = p.excess.value()
	if p.tight {
		s.SumDeviance = p.deviance.value()
	} else {
		p.log.sum, p.log.rest = -p.log.sum, -p.log.rest
		p.log.merge(p.excess)
		s.SumDeviance = p.log.value()
	}
	return s
}

func problemOf(o Observation) string {
	switch {
	case !(o.Loss > 0) || math.IsInf(o.Loss, 1):
		return "the loss must be above zero and finite"
	case !(o.Threshold >= 0):
		return "the threshold must be zero or more"
	case o.Threshold > o.Loss:
		return "the loss lies below its threshold"
	}
	return "the weight must be above zero and finite"
}

// compensated is a sum that carries its rounding errors (Neumaier 1974).
type compensated struct{ sum, rest float64 }

func (c *compensated) add(x float64) {
	t := c.sum + x
	if math.Abs(c.sum) >= math.Abs(x) {
		c.rest += (c.sum - t) + x
	} else {
		c.rest += (x - t) + c.sum
	}
	c.sum = t
}

func (c *compensated) merge(o compensated) {
	c.add(o.sum)
	c.rest += o.rest
}

func (c *compensated) value() float64 { return c.sum + c.rest }

// tally counts the weight of each distinct value, by open addressing.
type tally struct {
	slots []Point // Value 0 marks an empty slot: values are above zero
	used  int
	last  int // slot of the latest value: runs are common
}

func (t *tally) add(value, weight float64) {
	if len(t.slots) > 0 && t.slots[t.last].Value == value {
		t.slots[t.last].Weight += weight
		return
	}
	if 2*(t.used+1) > len(t.slots) {
		t.grow()
	}
	mask := len(t.slots) - 1
	i := int((math.Float64bits(value)*0x9e3779b97f4a7c15)>>33) & mask
	for t.slots[i].Value != value {
		if t.slots[i].Value == 0 {
			t.slots[i].Value = value
			t.used++
			break
		}
		i = (i + 1) & mask
	}
	t.slots[i].Weight += weight
	t.last = i
}

func (t *tally) grow() {
	old := t.slots
	t.slots, t.used, t.last = make([]Point, max(4*len(old), 64)), 0, 0
	for _, p := range old {
		if p.Value != 0 {
			t.add(p.Value, p.Weight)
		}
	}
}

func (t *tally) merge(o *tally) {
	for _, p := range o.points() {
		t.add(p.Value, p.Weight)
	}
}

// points lists the distinct values in ascending order.
func (t *tally) points() []Point {
	points := make([]Point, 0, t.used)
	for _, p := range t.slots {
		if p.Value != 0 {
			points = append(points, p)
		}
	}
	slices.SortFunc(points, func(a, b Point) int {
		if a.Value < b.Value {
			return -1
		}
		return 1
	})
	return points
}
