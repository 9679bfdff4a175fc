package severity

import (
	"fmt"
	"math"
	"sync"

	"spillway/severity/special"
)

// Summary is all that a gamma likelihood needs to know of a set of
// observations: sums over the exact losses, and how often each distinct
// threshold and censoring point occurs. Two summaries add up.
type Summary struct {
	Claims     int // observations
	Uncensored int
	Censored   int
	Truncated  int // with a threshold above zero

	Weight      float64 // of all observations
	EventWeight float64 // of the exact losses

	// The sums of the exact losses x are taken about Pivot, so that losses
	// close to one another keep all their digits.
	Pivot       float64 // money; 0 without an exact loss
	SumExcess   float64 // Σ w (x/Pivot - 1)
	SumDeviance float64 // Σ w (x/Pivot - 1 - ln(x/Pivot)) >= 0

	Smallest, Largest float64 // exact losses; 0 without one

	Thresholds []Point // thresholds above zero, ascending, with the weight of all their observations
	Limits     []Point // censoring points, ascending
}

// Point is a distinct value with its total weight.
type Point struct{ Value, Weight float64 }

// BadObservation says which observation cannot enter a likelihood, and why.
type BadObservation struct {
	Index       int
	Observation Observation
	Problem     string
}

func (e *BadObservation) Error() string {
	return fmt.Sprintf("observation %d (loss %g, threshold %g, weight %g): %s",
		e.Index, e.Observation.Loss, e.Observation.Threshold, e.Observation.Weight, e.Problem)
}

// Summarize reads every observation once, on all processors. The result does
// not depend on their number. A *BadObservation names the first observation
// that is not as Observation demands.
func Summarize(obs []Observation) (Summary, error) {
	pivot := pivotOf(obs)
	parts := min(max(len(obs)/8192, 1), 8)
	sums := make([]*partialSums, parts)
	var wait sync.WaitGroup
	for p := range parts {
		from, to := len(obs)*p/parts, len(obs)*(p+1)/parts
		sums[p] = newPartialSums(pivot)
		wait.Go(func() { sums[p].add(obs[from:to], from) })
	}
	wait.Wait()
	for _, s := range sums {
		if s.bad != nil {
			return Summary{}, s.bad
		}
	}
	total := sums[0]
	for _, s := range sums[1:] {
		total.merge(s)
	}
	return total.summary(), nil
}

// pivotOf is the mean of at most 256 exact losses spread over the sample: near
// enough to all of them when they are near one another.
func pivotOf(obs []Observation) float64 {
	sum, n := 0.0, 0
	for i, stride := 0, max(len(obs)/256, 1); i < len(obs); i += stride {
		if x := obs[i].Loss; !obs[i].Censored && x > 0 && !math.IsInf(x, 1) {
			n++
			sum += (x - sum) / float64(n) // a running mean cannot overflow
		}
	}
	if sum > 0 {
		return sum
	}
	for _, o := range obs {
		if !o.Censored && o.Loss > 0 && !math.IsInf(o.Loss, 1) {
			return o.Loss
		}
	}
	return 0
}

// Add is the summary of both sets of observations together.
func (s Summary) Add(t Summary) Summary {
	if s.Uncensored == 0 {
		s, t = t, s
	}
	sum := s
	sum.Claims += t.Claims
	sum.Uncensored += t.Uncensored
	sum.Censored += t.Censored
	sum.Truncated += t.Truncated
	sum.Weight += t.Weight
	sum.EventWeight += t.EventWeight
	if t.Uncensored > 0 {
		// About the mean of both: about a loss far below the others the sums
		// would grow beyond the digits of the logarithms in them.
		sum.Pivot = s.Mean()*(s.EventWeight/sum.EventWeight) + t.Mean()*(t.EventWeight/sum.EventWeight)
		e1, d1 := s.about(sum.Pivot)
		e2, d2 := t.about(sum.Pivot)
		sum.SumExcess, sum.SumDeviance = e1+e2, d1+d2
		sum.Smallest = math.Min(s.Smallest, t.Smallest)
		sum.Largest = math.Max(s.Largest, t.Largest)
	}
	sum.Thresholds = mergePoints(s.Thresholds, t.Thresholds)
	sum.Limits = mergePoints(s.Limits, t.Limits)
	return sum
}

// Scale is the summary with every amount multiplied by c > 0.
func (s Summary) Scale(c float64) Summary {
	s.Pivot *= c
	s.Smallest *= c
	s.Largest *= c
	s.Thresholds = scalePoints(s.Thresholds, c)
	s.Limits = scalePoints(s.Limits, c)
	return s
}

// about moves the sums of excess and deviance to another pivot r:
// Σ w φ(x/r) = Σ w φ(x/p) + (p/r - 1) Σ w (x/p - 1) + W φ(p/r).
func (s Summary) about(r float64) (excess, deviance float64) {
	if s.Pivot == r {
		return s.SumExcess, s.SumDeviance
	}
	ratio, shift := s.Pivot/r, (s.Pivot-r)/r
	defect := special.LogDefect(shift)
	if ratio < 0.5 { // 1 + shift has lost the digits of a small ratio
		defect = shift - math.Log(ratio)
	}
	excess = s.SumExcess*ratio + s.EventWeight*shift
	deviance = s.SumDeviance + s.SumExcess*shift + s.EventWeight*defect
	return excess, deviance
}

// Mean is the weighted mean of the exact losses, in money; NaN without one.
func (s Summary) Mean() float64 {
	return s.Pivot + s.Pivot*(s.SumExcess/s.EventWeight)
}

// SumLog is Σ w ln x over the exact losses.
func (s Summary) SumLog() float64 {
	if s.Uncensored == 0 {
		return 0
	}
	return s.EventWeight*math.Log(s.Pivot) + (s.SumExcess - s.SumDeviance)
}

func (s Summary) sample() SampleSize {
	return SampleSize{Claims: s.Claims, Uncensored: s.Uncensored, Censored: s.Censored, Truncated: s.Truncated, Weight: s.Weight}
}

func scalePoints(points []Point, c float64) []Point {
	scaled := make([]Point, len(points))
	for i, p := range points {
		scaled[i] = Point{p.Value * c, p.Weight}
	}
	return scaled
}

func mergePoints(a, b []Point) []Point {
	merged := make([]Point, 0, len(a)+len(b))
	for len(a) > 0 && len(b) > 0 {
		switch {
		case a[0].Value < b[0].Value:
			merged, a = append(merged, a[0]), a[1:]
		case a[0].Value > b[0].Value:
			merged, b = append(merged, b[0]), b[1:]
		default:
			merged = append(merged, Point{a[0].Value, a[0].Weight + b[0].Weight})
			a, b = a[1:], b[1:]
		}
	}
	return append(append(merged, a...), b...)
}
