package severity

import (
	"math"
	"slices"

	"spillway/severity/special"
)

// partialSums is a summary in the making, of one run of observations.
type partialSums struct {
	counts     Summary // the plain counts, weights and extremes
	pivot      float64
	ratio      compensated // Σ w x/pivot
	log        compensated // Σ w ln(x/pivot)
	tight      bool        // all exact losses lie close to the pivot: then also
	excess     compensated // Σ w (x/pivot - 1)
	deviance   compensated // Σ w (x/pivot - 1 - ln(x/pivot))
	thresholds tally
	limits     tally
	bad        *BadObservation
}

func newPartialSums(pivot float64) *partialSums {
	return &partialSums{pivot: pivot, tight: true}
}

// blockSize exact losses are taken together: their ratios to the pivot are
// multiplied before one logarithm is taken, and added before one compensated
// addition. Either costs less in rounding than a logarithm of each would.
const blockSize = 16

func (p *partialSums) add(obs []Observation, offset int) {
	var weight, eventWeight float64
	var uncensored, censored, truncated int
	smallest, largest := math.Inf(1), 0.0
	product, ratios, inBlock := 1.0, 0.0, 0
	// Everything that is written a claim is local: parts on two processors
	// must not share a line of the cache.
	pivot := p.pivot
	var ratioSum, logSum compensated
	thresholds, limits := newTally(), newTally()
	for i := range obs {
		o := &obs[i]
		if !(o.Loss > 0 && o.Loss <= math.MaxFloat64 && o.Threshold >= 0 && o.Threshold <= o.Loss &&
			o.Weight > 0 && o.Weight <= math.MaxFloat64) {
			p.bad = &BadObservation{offset + i, *o, problemOf(*o)}
			return
		}
		weight += o.Weight
		if o.Threshold > 0 {
			truncated++
			// Where the value sits in its first slot no call is made.
			if slot := &thresholds.slots[slotOf(o.Threshold)&(len(thresholds.slots)-1)]; slot.Value == o.Threshold {
				slot.Weight += o.Weight
			} else {
				thresholds.add(o.Threshold, o.Weight)
			}
		}
		if o.Censored {
			censored++
			limits.add(o.Loss, o.Weight)
			continue
		}
		uncensored++
		eventWeight += o.Weight
		if o.Loss < smallest {
			smallest = o.Loss
		}
		if o.Loss > largest {
			largest = o.Loss
		}
		ratio := o.Loss / pivot
		if o.Weight != 1 || ratio > 1e15 || ratio < 1e-15 {
			ratioSum.add(o.Weight * ratio)
			logSum.add(o.Weight * (math.Log(o.Loss) - math.Log(pivot)))
			continue
		}
		product *= ratio
		ratios += ratio
		if inBlock++; inBlock == blockSize {
			ratioSum.add(ratios)
			logSum.add(math.Log(product))
			product, ratios, inBlock = 1, 0, 0
		}
	}
	ratioSum.add(ratios)
	logSum.add(math.Log(product))
	p.ratio, p.log, p.thresholds, p.limits = ratioSum, logSum, thresholds, limits
	p.counts = Summary{Claims: len(obs), Uncensored: uncensored, Censored: censored, Truncated: truncated,
		Weight: weight, EventWeight: eventWeight, Smallest: smallest, Largest: largest}
	if p.tight = uncensored == 0 || largest < 1.3*p.pivot && smallest > 0.7*p.pivot; p.tight {
		p.addTight(obs)
	}
}

// addTight sums excess and deviance of losses close to the pivot one by one:
// as differences of sums they would lose the digits that such losses share.
func (p *partialSums) addTight(obs []Observation) {
	for i := range obs {
		if o := &obs[i]; !o.Censored {
			d := (o.Loss - p.pivot) / p.pivot
			p.excess.add(o.Weight * d)
			p.deviance.add(o.Weight * special.LogDefect(d))
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
	p.ratio.merge(q.ratio)
	p.log.merge(q.log)
	p.excess.merge(q.excess)
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
	if p.tight {
		s.SumExcess, s.SumDeviance = p.excess.value(), p.deviance.value()
		return s
	}
	// About the mean itself, where the excess vanishes and the deviance is all
	// that is left: nothing large stands beside the logarithms.
	mean := p.ratio.value() / s.EventWeight
	s.Pivot = p.pivot * mean
	s.SumDeviance = s.EventWeight*math.Log(mean) - p.log.value()
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

// compensated is a sum that carries its rounding errors, found without a
// branch by Knuth's two-sum.
type compensated struct{ sum, rest float64 }

func (c *compensated) add(x float64) {
	t := c.sum + x
	part := t - c.sum
	c.rest += (c.sum - (t - part)) + (x - part)
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
}

func (t *tally) add(value, weight float64) {
	mask := len(t.slots) - 1
	for i := slotOf(value); ; i++ {
		slot := &t.slots[i&mask]
		if slot.Value == value {
			slot.Weight += weight
			return
		}
		if slot.Value == 0 {
			t.insert(i&mask, value, weight)
			return
		}
	}
}

func newTally() tally { return tally{slots: make([]Point, fewSlots)} }

// fewSlots are enough for the few dozen deductibles of most books to sit
// without collisions.
const fewSlots = 1024

// slotOf spreads values over slots. Round amounts differ in their high bits
// only, which are folded down before they are multiplied up.
func slotOf(value float64) int {
	b := math.Float64bits(value)
	return int((b ^ b>>32) * 0x9e3779b97f4a7c15 >> 33)
}

func (t *tally) insert(slot int, value, weight float64) {
	t.slots[slot] = Point{value, weight}
	if t.used++; 2*t.used <= len(t.slots) {
		return
	}
	old := t.slots
	*t = tally{slots: make([]Point, 4*len(old))}
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
