package severity

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

func TestDeltaInterval(t *testing.T) {
	covariance := [][]float64{{0.04, -0.01}, {-0.01, 0.09}}
	// Gradient (3, 2): se² = 9·0.04 + 2·3·2·(-0.01) + 4·0.09 = 0.6.
	se := math.Sqrt(0.6)
	z := distuv.UnitNormal.Quantile(0.95)

	money := Figure{Value: 5, Gradient: []float64{3, 2}, Bound: math.Inf(1), Complement: math.Inf(1)}.Estimate(covariance, 0.9)
	if relative(money.StandardError, se) > 1e-14 {
		t.Errorf("standard error %v, want %v", money.StandardError, se)
	}
	if relative(money.Interval.Lower, 5*math.Exp(-z*se/5)) > 1e-12 || relative(money.Interval.Upper, 5*math.Exp(z*se/5)) > 1e-12 {
		t.Errorf("interval of money: %+v", money.Interval)
	}
	if money.Interval.Method != DeltaLog || money.Interval.Level != 0.9 {
		t.Errorf("method %q, level %v", money.Interval.Method, money.Interval.Level)
	}

	// Logit of 0.8: ln 4, with standard error se/(0.8·0.2).
	share := Figure{Value: 0.8, Gradient: []float64{3, 2}, Bound: 1, Complement: 0.2}.Estimate(covariance, 0.9)
	lower := 1 / (1 + math.Exp(-(math.Log(4) - z*se/0.16)))
	upper := 1 / (1 + math.Exp(-(math.Log(4) + z*se/0.16)))
	if relative(share.Interval.Lower, lower) > 1e-12 || relative(share.Interval.Upper, upper) > 1e-12 || share.Interval.Method != DeltaLogit {
		t.Errorf("interval of a share: %+v, want %v to %v", share.Interval, lower, upper)
	}
}

func TestIntervalWithoutCovariance(t *testing.T) {
	for name, covariance := range map[string][][]float64{
		"nil":          nil,
		"one row":      {{1, 0}},
		"short row":    {{1}, {0}},
		"not positive": {{-1, 0}, {0, -1}},
	} {
		e := Figure{Value: 5, Gradient: []float64{3, 2}, Bound: 10, Complement: 5}.Estimate(covariance, 0.95)
		if e.Value != 5 || !math.IsNaN(e.StandardError) || !math.IsNaN(e.Interval.Lower) || !math.IsNaN(e.Interval.Upper) {
			t.Errorf("%s: %+v, want the value 5 and NaN for the rest", name, e)
		}
	}
	for _, level := range []float64{0, 1, -1, math.NaN()} {
		e := Figure{Value: 5, Gradient: []float64{3}, Bound: 10, Complement: 5}.Estimate([][]float64{{1}}, level)
		if !(e.StandardError == 3) || !math.IsNaN(e.Interval.Lower) {
			t.Errorf("level %v: %+v, want no interval", level, e)
		}
	}
}

func TestUnmovedFigures(t *testing.T) {
	g := Gamma{1.3, 3000}
	covariance := [][]float64{{0.04, -0.01}, {-0.01, 0.09}}
	for name, f := range map[string]Figure{
		"survival at 0":            g.SurvivalFigure(0),
		"survival at infinity":     g.SurvivalFigure(math.Inf(1)),
		"limited at 0":             g.LimitedExpectedValueFigure(0),
		"ratio at 0":               g.LossEliminationRatioFigure(0),
		"survival below e^-745":    g.SurvivalFigure(1e9),
		"layer below e^-745":       g.LayerFigures(1e9, 1e9).Mean,
		"layer deviation far away": g.LayerFigures(1e9, 1e9).StandardDeviation,
	} {
		e := f.Estimate(covariance, 0.95)
		if e.StandardError != 0 || e.Interval.Lower != f.Value || e.Interval.Upper != f.Value || f.Value != 0 && f.Value != 1 {
			t.Errorf("%s: %+v, want 0 or 1 for certain", name, e)
		}
	}
}

// TestIntervalsStayInRange: whatever the covariance, money is positive and
// below its bound, and a probability lies in [0, 1].
func TestIntervalsStayInRange(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGamma(t)
		attachment := drawLoss(t, g, "attachment")
		limit := g.Mean() * math.Exp(rapid.Float64Range(-9, 2).Draw(t, "ln limit"))
		sa, st := math.Exp(rapid.Float64Range(-6, 2).Draw(t, "ln se a")), math.Exp(rapid.Float64Range(-6, 2).Draw(t, "ln se θ"))
		r := rapid.Float64Range(-0.999, 0.999).Draw(t, "correlation")
		covariance := [][]float64{{sa * sa, r * sa * st}, {r * sa * st, st * st}}
		for what, f := range figuresOf(g, attachment, limit, 0.99) {
			e := f.Estimate(covariance, 0.95)
			within := e.Interval.Lower >= 0 && e.Interval.Lower <= e.Value && e.Value <= e.Interval.Upper && e.Interval.Upper <= f.Bound
			if !within {
				t.Errorf("gamma %v, %v xs %v: %s is %v with interval %+v, bound %v", g, limit, attachment, what, e.Value, e.Interval, f.Bound)
			}
		}
	})
}
