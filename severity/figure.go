package severity

import "math"

// Figure is a figure of a curve with its gradient in the curve's log
// parameters, in the order in which a Fit holds its covariance.
type Figure struct {
	Value    float64   // >= 0
	Gradient []float64 // of Value in the logarithms of the parameters
	// Bound is the largest value that the figure can take at any parameters: 1
	// for a probability, the limit for an expected layer loss; +Inf for none.
	Bound float64
	// Complement is Bound - Value, computed as such so that nothing is lost
	// when the two are close; +Inf without a bound.
	Complement float64
}

// unbounded is a positive figure without an upper bound.
func unbounded(value float64, gradient ...float64) Figure {
	return Figure{value, gradient, math.Inf(1), math.Inf(1)}
}

// constant is a figure that no parameter moves.
func constant(value float64, parameters int) Figure {
	return unbounded(value, make([]float64, parameters)...)
}

// Names of the methods of an interval of a Figure.
const (
	DeltaLog   = "delta method on the logarithm"
	DeltaLogit = "delta method on the logit of the share of the upper bound"
)

// Estimate is the figure with its uncertainty by the delta method,
// se² = g' C g with g the gradient and C the covariance of the log parameters.
//
// The interval is symmetric on a scale on which the figure may take any value,
// so that it never leaves the figure's range: on ln v without a bound,
//
//	v exp(± z se/v),
//
// and otherwise on ln(v/(b-v)), whose standard error is se·b/(v(b-v)). z is the
// normal quantile of (1+level)/2. A figure that no parameter moves has the
// interval from itself to itself. With a nil covariance the standard error and
// both ends are NaN. level lies in (0, 1), both ends left out; NaN ends
// otherwise.
func (f Figure) Estimate(covariance [][]float64, level float64) Estimate {
	e := Estimate{Value: f.Value, Interval: Interval{Level: level, Method: DeltaLog}}
	if !math.IsInf(f.Bound, 1) {
		e.Interval.Method = DeltaLogit
	}
	e.StandardError = f.standardError(covariance)
	e.Interval.Lower, e.Interval.Upper = f.interval(e.StandardError, level)
	if f.Value == 0 && e.StandardError == 0 {
		e.Interval.Note = "the figure is zero, or below the smallest positive number held"
	}
	return e
}

func (f Figure) standardError(covariance [][]float64) float64 {
	if len(covariance) != len(f.Gradient) || len(f.Gradient) == 0 {
		return math.NaN()
	}
	variance := 0.0
	for i, row := range covariance {
		if len(row) != len(f.Gradient) {
			return math.NaN()
		}
		for j, c := range row {
			variance += f.Gradient[i] * c * f.Gradient[j]
		}
	}
	// A form that is zero in exact arithmetic may come out as a rounding below.
	if variance < 0 && variance > -1e-12*f.Value*f.Value {
		variance = 0
	}
	return math.Sqrt(variance)
}

func (f Figure) interval(se, level float64) (lower, upper float64) {
	if math.IsNaN(se) || !(level > 0 && level < 1) {
		return math.NaN(), math.NaN()
	}
	if se == 0 || f.Value == 0 || f.Complement == 0 {
		return f.Value, f.Value
	}
	z := math.Sqrt2 * math.Erfinv(level)
	if math.IsInf(f.Bound, 1) {
		return f.Value * math.Exp(-z*se/f.Value), f.Value * math.Exp(z*se/f.Value)
	}
	logit := math.Log(f.Value) - math.Log(f.Complement)
	half := z * (se / f.Value) * (f.Bound / f.Complement)
	return f.Bound / (1 + math.Exp(half-logit)), f.Bound / (1 + math.Exp(-half-logit))
}
