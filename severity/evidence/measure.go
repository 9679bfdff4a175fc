package evidence

import (
	"math"
	"sync"
)

// block is a stretch of rows between two distinct losses: where the walk stood
// before it, and what the rows and the curve add up to in it.
type block struct {
	start    state
	integral float64 // of the product-limit estimate from start.loss to the block's last loss
	spread   spread  // of the losses of its rows
	censored int     // rows before the block
}

const blockRows = 1024

// measure walks the rows once and keeps what later answers start from.
func (s *Sample) measure() {
	s.collapse = math.NaN()
	bounds := s.blockBounds()
	s.blocks = make([]block, len(bounds)-1)
	var wait sync.WaitGroup
	wait.Go(func() { s.addUp(bounds) })
	c, sketch, risk := s.start(), s.newSketch(), leastRisk{weight: math.Inf(1)}
	for i := range s.blocks {
		b := &s.blocks[i]
		b.start = c
		for c.row < bounds[i+1] {
			if s.weights == nil && s.atThreshold == nil {
				s.glide(&c, bounds[i+1], sketch.leash(&c, &risk), &risk, &b.integral)
				if c.row == bounds[i+1] {
					break
				}
			}
			var p step
			from := c.loss
			s.next(&c, &p)
			b.integral += p.before * (p.loss - from)
			sketch.take(&p, &c)
			if p.events > 0 {
				risk.see(p.atRisk, p.loss, c.survival)
				if c.survival == 0 && p.before > 0 && c.row < len(s.keys) {
					s.collapse, s.hasCollapse = p.loss, true
				}
			}
		}
	}
	wait.Wait()
	s.exactMarks, s.censoredMarks = sketch.marks[0], sketch.marks[1]
	s.end, s.largestLoss = c, c.loss
	if !math.IsInf(risk.weight, 1) {
		s.smallestRisk = s.stepAt(risk.loss)
	}
	for i := len(s.keys) - 1; i >= 0; i-- {
		if s.keys[i]&1 == 0 {
			s.largest = rowLoss(s.keys[i])
			break
		}
	}
}

// addUp gathers what the blocks hold apart from the estimate.
func (s *Sample) addUp(bounds []int) {
	censored := 0
	for i := range s.blocks {
		b := &s.blocks[i]
		b.spread, b.censored = s.spreadOf(bounds[i], bounds[i+1]), censored
		for _, k := range s.keys[bounds[i]:bounds[i+1]] {
			censored += int(k & 1)
		}
	}
	s.uncensored = len(s.keys) - censored
}

// leastRisk is the smallest weight at risk until the estimate has come down to
// one half.
type leastRisk struct {
	weight, loss float64
	half         bool
}

func (r *leastRisk) see(weight, loss, survival float64) {
	if !r.half && weight < r.weight {
		r.weight, r.loss = weight, loss
	}
	r.half = r.half || survival <= 0.5
}

// leash is how far a walk may go before something is to be noted: up to a loss,
// down to a survival, up to a loss limited there.
type leash struct {
	loss, survival float64
	censored       bool // censored losses may be passed
}

// glide is next, over and over, while nothing is to be noted: the same sums in
// the same order, kept in registers, for weights that are all 1. It stops
// before the step that the leash does not allow, and adds to the integral of the
// estimate.
func (s *Sample) glide(c *state, end int, l leash, least *leastRisk, sum *float64) {
	keys := s.keys[:end]
	row, rest, last := c.row, c.rest.hi, c.loss
	survival, variance, integral := c.survival, c.variance, *sum
	risk := leastRisk{weight: math.Inf(-1)}
	if !least.half {
		risk = *least
	}
	enters, outside := s.entering(c.entry)
	for row < len(keys) {
		bits := keys[row] >> 1
		loss := math.Float64frombits(bits)
		for enters < loss {
			c.entry++
			enters, outside = s.entering(c.entry)
		}
		censored, i := int(keys[row]&1), row+1
		for i < len(keys) && keys[i]>>1 == bits {
			censored += int(keys[i] & 1)
			i++
		}
		atRisk := rest - outside
		left := atRisk - float64(i-row-censored)
		after := survival * (left / atRisk)
		if loss >= l.loss || after <= l.survival || censored > 0 && !l.censored {
			break
		}
		integral += survival * (loss - last)
		if left < atRisk {
			if atRisk < risk.weight {
				risk.weight, risk.loss = atRisk, loss
			}
			variance += (atRisk - left) / (atRisk * left)
			survival = after
		}
		rest -= float64(i - row)
		row, last = i, loss
	}
	if !least.half {
		least.weight, least.loss = risk.weight, risk.loss
	}
	c.row, c.rest.hi, c.loss, c.survival, c.variance = row, rest, last, survival, variance
	*sum = integral
}

// entering is the threshold of the next entry and the weight of the rows not
// entered below it.
func (s *Sample) entering(entry int) (threshold, outside float64) {
	if entry == len(s.entries) {
		return math.Inf(1), 0
	}
	return s.entries[entry].threshold, s.entries[entry].rest.hi
}

// blockBounds are the first rows of the blocks, and the number of rows: no
// loss lies in two blocks.
func (s *Sample) blockBounds() []int {
	bounds := make([]int, 1, len(s.keys)/blockRows+2)
	for at := blockRows; at < len(s.keys); at += blockRows {
		last := s.keys[at-1] >> 1
		for at < len(s.keys) && s.keys[at]>>1 == last {
			at++
		}
		if at < len(s.keys) {
			bounds = append(bounds, at)
		}
	}
	if len(s.keys) > 0 {
		bounds = append(bounds, len(s.keys))
	}
	return bounds
}
