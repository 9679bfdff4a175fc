package evidence

import (
	"math"
	"sort"
)

// state is where a walk through the rows stands: between two distinct losses.
type state struct {
	row      int     // rows before it have been passed
	entry    int     // entries before it have a threshold below the next loss to be taken
	rest     exact   // weight of the rows from row on
	loss     float64 // the last distinct loss passed; 0 before the first
	survival float64 // product-limit estimate beyond loss
	variance float64 // Greenwood's, of ln survival; NaN once survival is 0
}

// step is what one distinct loss adds.
type step struct {
	loss     float64
	atRisk   float64 // weight with threshold < loss <= exit
	events   float64 // weight of the uncensored losses at risk
	exact    int     // rows with an uncensored loss
	censored int     // rows with a censored one
	before   float64 // survival just below loss
}

func rowLoss(key uint64) float64 { return math.Float64frombits(key >> 1) }

func (s *Sample) start() state {
	return state{rest: s.total, survival: 1}
}

func (s *Sample) weight(row int) float64 {
	if s.weights == nil {
		return 1
	}
	return s.weights[row]
}

// next takes the rows of the next distinct loss; false when there are none.
//
//	Ŝ(t) = Π over losses t' <= t of (1 - events(t')/at risk(t')),
//	Greenwood: se² of ln Ŝ(t) = Σ events/(at risk (at risk - events)).
func (s *Sample) next(c *state, p *step) bool {
	i := c.row
	if i == len(s.keys) {
		return false
	}
	bits := s.keys[i] >> 1
	loss := math.Float64frombits(bits)
	for c.entry < len(s.entries) && s.entries[c.entry].threshold < loss {
		c.entry++
	}
	var atRisk, events float64
	censored := 0
	if s.weights == nil {
		atRisk = c.rest.hi
		if c.entry < len(s.entries) {
			atRisk -= s.entries[c.entry].rest.hi
		}
		for i < len(s.keys) && s.keys[i]>>1 == bits {
			censored += int(s.keys[i] & 1)
			i++
		}
		events = float64(i - c.row - censored)
		c.rest.hi -= float64(i - c.row)
	} else {
		risk, sum := c.rest, exact{}
		if c.entry < len(s.entries) {
			risk = risk.minus(s.entries[c.entry].rest)
		}
		for ; i < len(s.keys) && s.keys[i]>>1 == bits; i++ {
			w := s.weights[i]
			c.rest = c.rest.plus(-w)
			if s.keys[i]&1 == 1 {
				censored++
				continue
			}
			sum = sum.plus(w)
		}
		atRisk, events = risk.value(), sum.value()
	}
	if s.atThreshold != nil {
		if w, ok := s.atThreshold[loss]; ok {
			events -= w.value()
		}
	}
	*p = step{loss: loss, atRisk: atRisk, events: events, exact: i - c.row - censored, censored: censored, before: c.survival}
	c.row, c.loss = i, loss
	if events > 0 {
		if left := atRisk - events; left > 0 {
			c.survival *= left / atRisk
			c.variance += events / (atRisk * left)
		} else {
			c.survival, c.variance = 0, math.NaN()
		}
	}
	return true
}

func point(p step, after state) ProductLimitPoint {
	return ProductLimitPoint{p.loss, p.atRisk, p.events, after.survival, math.Sqrt(after.variance)}
}

// Claims are the rows, Uncensored those whose loss is known exactly.
func (s *Sample) Claims() int { return len(s.keys) }

// Uncensored counts the rows whose loss is known exactly.
func (s *Sample) Uncensored() int { return s.uncensored }

// Weight is the sum of the weights.
func (s *Sample) Weight() float64 { return s.total.value() }

// LowestThreshold is the smallest threshold of all rows: what the
// product-limit estimate is conditional on exceeding. 0 without rows.
func (s *Sample) LowestThreshold() float64 { return s.lowest }

// LargestLoss is the largest loss known exactly; 0 when there is none.
func (s *Sample) LargestLoss() float64 { return s.largest }

// Collapse is the loss at which every claim then at risk has its event, so
// that the estimate falls to zero although larger losses are in the sample:
// beyond it the estimate says nothing. False when that never happens.
func (s *Sample) Collapse() (loss float64, ok bool) { return s.collapse, s.hasCollapse }

// SmallestRisk is the step with the smallest weight at risk among those that
// take the estimate down to one half: the upper half of the curve, and with it
// everything below, rests on no more than that. The first of equals; the zero
// value when no loss is known exactly.
func (s *Sample) SmallestRisk() ProductLimitPoint { return s.smallestRisk }

// ProductLimit is the whole estimate, one point for each distinct exact loss.
// At risk at t is the weight with threshold < t <= loss, so a loss equal to its
// own threshold is not at risk of being seen there and is no event. After a
// Collapse the points go on with Survival 0.
//
// Against testdata/gof/km_*.csv, whose generator agrees with R's survfit, the
// largest relative difference in survival and standard error is 7e-15.
func (s *Sample) ProductLimit() []ProductLimitPoint {
	points := make([]ProductLimitPoint, 0, s.uncensored)
	c := s.start()
	for p := (step{}); s.next(&c, &p); {
		if p.events > 0 {
			points = append(points, point(p, c))
		}
	}
	return points
}

// stepAt is the step at a loss that has one.
func (s *Sample) stepAt(loss float64) ProductLimitPoint {
	c := s.at(math.Nextafter(loss, 0))
	var p step
	s.next(&c, &p)
	return point(p, c)
}

// SurvivalAt is the estimate of S(x)/S(lowest threshold), x >= 0: 1 below the
// first loss and, beyond the largest, the value there, which is an upper bound.
func (s *Sample) SurvivalAt(x float64) float64 {
	return s.at(x).survival
}

// at is the walk's state after all losses at or below x.
func (s *Sample) at(x float64) state {
	c := s.start()
	if i := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.loss > x }) - 1; i >= 0 {
		c = s.blocks[i].start
	}
	for p := (step{}); c.row < len(s.keys) && rowLoss(s.keys[c.row]) <= x; {
		s.next(&c, &p)
	}
	return c
}

// Integral is ∫ Ŝ(x) dx for 0 <= from <= to, Ŝ = 1 up to the lowest threshold;
// false where the estimate ends before: beyond the largest loss unless it has
// come down to zero there, and beyond a Collapse. to may be +Inf.
func (s *Sample) Integral(from, to float64) (float64, bool) {
	if !(from >= 0 && to >= from) || len(s.keys) == 0 {
		return math.NaN(), false
	}
	if to > s.largestLoss && s.end.survival > 0 || s.hasCollapse && to > s.collapse {
		return math.NaN(), false
	}
	if to > s.largestLoss {
		to = s.largestLoss
		from = min(from, to)
	}
	first := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.loss > from }) - 1
	last := sort.Search(len(s.blocks), func(i int) bool { return s.blocks[i].start.loss > to }) - 1
	first, last = max(first, 0), max(last, 0)
	if first == last {
		return s.integrate(first, from, to), true
	}
	sum := s.integrate(first, from, math.Inf(1)) + s.integrate(last, s.blocks[last].start.loss, to)
	for i := first + 1; i < last; i++ {
		sum += s.blocks[i].integral
	}
	return sum, true
}

// integrate is ∫ Ŝ from from to to within the block, which ends at its last loss.
func (s *Sample) integrate(i int, from, to float64) float64 {
	c := s.blocks[i].start
	end := len(s.keys)
	if i+1 < len(s.blocks) {
		end = s.blocks[i+1].start.row
	}
	sum := 0.0
	for p := (step{}); c.row < end && c.loss < to; {
		at := c.loss
		s.next(&c, &p)
		if lo, hi := max(at, from), min(c.loss, to); hi > lo {
			sum += p.before * (hi - lo)
		}
	}
	return sum
}
