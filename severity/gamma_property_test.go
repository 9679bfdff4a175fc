package severity

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

func drawGamma(t *rapid.T) Gamma {
	shape := math.Exp(rapid.Float64Range(math.Log(0.01), math.Log(1e4)).Draw(t, "ln shape"))
	scale := math.Exp(rapid.Float64Range(math.Log(1e-3), math.Log(1e9)).Draw(t, "ln scale"))
	return Gamma{shape, scale}
}

// drawLoss is a loss somewhere from deep in the lower to deep in the upper tail.
func drawLoss(t *rapid.T, g Gamma, name string) float64 {
	logS := -math.Exp(rapid.Float64Range(-20, 5).Draw(t, name))
	x := g.InverseLogSurvival(logS)
	if x < 1e-250 {
		x = 1e-250
	}
	return x
}

func TestLayersAddUpToTheWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGamma(t)
		a := drawLoss(t, g, "attachment")
		width := g.Mean() * math.Exp(rapid.Float64Range(-12, 2).Draw(t, "ln width"))
		inner := width * rapid.Float64Range(0.01, 0.99).Draw(t, "share")
		whole := g.LayerMean(a, a+width-a)
		lower, upper := g.LayerMean(a, a+inner-a), g.LayerMean(a+inner, (a+width)-(a+inner))
		if e := relative(lower+upper, whole); e > 1e-12 && a+inner < a+width {
			t.Errorf("gamma %v: %v xs %v is %v and splits into %v and %v: relative error %.2g", g, width, a, whole, lower, upper, e)
		}
		all := g.LayerMean(0, a) + g.LayerMean(a, math.Inf(1))
		if e := relative(all, g.Mean()); e > 1e-12 {
			t.Errorf("gamma %v: below and above %v come to %v, the mean is %v: relative error %.2g", g, a, all, g.Mean(), e)
		}
		squares := g.LayerSecondMoment(0, math.Inf(1))
		if want := g.Variance() + g.Mean()*g.Mean(); relative(squares, want) > 1e-12 {
			t.Errorf("gamma %v: E[X²] is %v, want %v", g, squares, want)
		}
	})
}

func TestQuantileInvertsSurvival(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGamma(t)
		logS := -math.Exp(rapid.Float64Range(-25, 6).Draw(t, "ln -ln S"))
		x := g.InverseLogSurvival(logS)
		if x < 1e-300 {
			return // the loss itself has lost its digits
		}
		// The condition of ln S in ln x is x f(x)/S(x).
		condition := math.Exp(g.LogDensity(x) + math.Log(x) - g.LogSurvival(x))
		if back := g.LogSurvival(x); math.Abs(back-logS) > 1e-12*(math.Abs(logS)+condition) {
			t.Errorf("gamma %v: ln S(%v) is %v, want %v", g, x, back, logS)
		}
		if logS > -700 && logS < -0.01 { // nearer to 0 the exponential has lost the digits
			if q := g.UpperQuantile(math.Exp(logS)); relative(q, x) > 1e-9 {
				t.Errorf("gamma %v: upper quantile %v, by logarithm %v", g, q, x)
			}
		}
		if sum := math.Exp(g.LogSurvival(x)) + math.Exp(g.LogCDF(x)); relative(sum, 1) > 1e-12 {
			t.Errorf("gamma %v: S + F at %v is %v", g, x, sum)
		}
	})
}

// figuresOf are all figures of the curve at a layer and a probability.
func figuresOf(g Gamma, attachment, limit, p float64) map[string]Figure {
	f := g.LayerFigures(attachment, limit)
	return map[string]Figure{
		"mean":                           g.MeanFigure(),
		"survival":                       g.SurvivalFigure(attachment),
		"limited expected value":         g.LimitedExpectedValueFigure(attachment),
		"layer mean":                     f.Mean,
		"standard deviation":             f.StandardDeviation,
		"mean if attached":               f.MeanIfAttached,
		"standard deviation if attached": f.StandardDeviationIfAttached,
		"mean excess":                    g.MeanExcessFigure(attachment),
		"loss elimination ratio":         g.LossEliminationRatioFigure(attachment),
		"quantile":                       g.QuantileFigure(p),
		"tail value at risk":             g.TailValueAtRiskFigure(p),
	}
}

func TestGradientsAreCentralDifferences(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := Gamma{
			math.Exp(rapid.Float64Range(math.Log(0.05), math.Log(200)).Draw(t, "ln shape")),
			math.Exp(rapid.Float64Range(-5, 15).Draw(t, "ln scale")),
		}
		attachment := g.UpperQuantile(rapid.Float64Range(1e-6, 0.999).Draw(t, "survival at the attachment"))
		limit := g.Mean() * math.Exp(rapid.Float64Range(-5, 1).Draw(t, "ln limit"))
		if rapid.Bool().Draw(t, "unlimited") {
			limit = math.Inf(1)
		}
		p := rapid.Float64Range(0.05, 0.9999).Draw(t, "p")
		const h = 1e-4
		at := func(da, dt float64) map[string]Figure {
			return figuresOf(Gamma{g.Shape * math.Exp(da), g.Scale * math.Exp(dt)}, attachment, limit, p)
		}
		here := at(0, 0)
		steps := [2][4]map[string]Figure{
			{at(-2*h, 0), at(-h, 0), at(h, 0), at(2*h, 0)},
			{at(0, -2*h), at(0, -h), at(0, h), at(0, 2*h)},
		}
		for what, f := range here {
			size := math.Abs(f.Gradient[0]) + math.Abs(f.Gradient[1])
			for i := range steps {
				s := steps[i]
				want := (s[0][what].Value - 8*s[1][what].Value + 8*s[2][what].Value - s[3][what].Value) / (12 * h)
				if math.Abs(f.Gradient[i]-want) > 1e-7*size+1e-9*f.Value {
					t.Errorf("gamma %v, %v xs %v, p %v: %s changes by %v in coordinate %d, differences give %v", g, limit, attachment, p, what, f.Gradient[i], i, want)
				}
			}
			if f.Bound < math.Inf(1) && math.Abs(f.Value+f.Complement-f.Bound) > 1e-12*f.Bound {
				t.Errorf("gamma %v, %v xs %v: %s %v and its complement %v do not make %v", g, limit, attachment, what, f.Value, f.Complement, f.Bound)
			}
		}
	})
}

func TestFiguresFollowTheCurrency(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGamma(t)
		attachment := drawLoss(t, g, "attachment")
		limit := g.Mean() * math.Exp(rapid.Float64Range(-9, 2).Draw(t, "ln limit"))
		factor := math.Exp(rapid.Float64Range(-15, 20).Draw(t, "ln factor"))
		in := figuresOf(g, attachment, limit, 0.99)
		out := figuresOf(Gamma{g.Shape, g.Scale * factor}, attachment*factor, limit*factor, 0.99)
		for what, f := range in {
			want := f.Value
			if what != "survival" && what != "loss elimination ratio" {
				want *= factor
			}
			// One rounding of the attachment moves a deep tail by its hazard.
			tolerance := 1e-12 + 1e-15*math.Abs(g.LogSurvival(attachment)) + 1e-14*math.Sqrt(g.Shape)
			if relative(out[what].Value, want) > tolerance && want > 1e-280 {
				t.Errorf("gamma %v times %v: %s is %v, want %v: relative error %.2g", g, factor, what, out[what].Value, want, relative(out[what].Value, want))
			}
		}
	})
}

// TestLimitedExpectedValueGrowsBySurvival: d/du E[min(X, u)] = S(u), so a layer
// costs between its width times the survival at its top and at its foot.
func TestLimitedExpectedValueGrowsBySurvival(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGamma(t)
		u := drawLoss(t, g, "u")
		h := u * math.Exp(rapid.Float64Range(-20, 1).Draw(t, "ln step"))
		top := u + h
		h = top - u
		mean := g.LayerMean(u, h)
		lowest, highest := h*g.Survival(top), h*g.Survival(u)
		if mean < lowest*(1-1e-12) || mean > highest*(1+1e-12) {
			t.Errorf("gamma %v: %v xs %v costs %v, outside %v to %v", g, h, u, mean, lowest, highest)
		}
		if difference := g.LimitedExpectedValue(top) - g.LimitedExpectedValue(u); math.Abs(difference-mean) > 1e-12*g.LimitedExpectedValue(top) {
			t.Errorf("gamma %v: limited expected values differ by %v, the layer costs %v", g, difference, mean)
		}
	})
}

// TestFiguresAtTheEndsOfTheDoubles: whatever the shape, the scale and the layer,
// figures come out in bounded time, are numbers and keep within their bounds.
func TestFiguresAtTheEndsOfTheDoubles(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		power := func(lo, hi float64, name string) float64 {
			return math.Pow(10, rapid.Float64Range(lo, hi).Draw(t, name))
		}
		g := Gamma{power(-8, 8, "shape"), power(-9, 12, "scale")}
		attachment, limit := g.Scale*power(-300, 12, "attachment"), g.Scale*power(-280, 15, "limit")
		switch rapid.IntRange(0, 3).Draw(t, "kind") {
		case 0:
			attachment = 0
		case 1:
			attachment = drawLoss(t, g, "ln -ln S")
		case 2:
			limit = math.Inf(1)
		}
		p := 1 - power(-15, -0.01, "exceedance")
		for what, f := range figuresOf(g, attachment, limit, p) {
			ok := f.Value >= 0 && f.Value <= f.Bound*(1+1e-12) && f.Complement >= 0
			for _, d := range f.Gradient {
				ok = ok && !math.IsNaN(d) && !math.IsInf(d, 0)
			}
			if !ok {
				t.Errorf("gamma %v, %v xs %v, p %v: %s is %+v", g, limit, attachment, p, what, f)
			}
		}
		quantile, tail := g.Quantile(p), g.TailValueAtRisk(p)
		if tail < quantile*(1-1e-13) || tail < g.Mean()*(1-1e-12) {
			t.Errorf("gamma %v: the tail value at risk %v lies below the quantile %v at %v or the mean %v", g, tail, quantile, p, g.Mean())
		}
	})
}

// TestBodyAgreesWithGonum: a general-purpose library, where it is good.
func TestBodyAgreesWithGonum(t *testing.T) {
	for _, shape := range []float64{0.4, 1, 2.5, 30, 200} {
		g := Gamma{shape, 1234.5}
		other := distuv.Gamma{Alpha: shape, Beta: 1 / 1234.5}
		for _, p := range []float64{0.05, 0.3, 0.5, 0.9, 0.99} {
			x := other.Quantile(p)
			if got := g.Quantile(p); relative(got, x) > 1e-9 {
				t.Errorf("shape %v: quantile %v is %v, gonum has %v", shape, p, got, x)
			}
			if got := g.Survival(x); relative(got, other.Survival(x)) > 1e-10 {
				t.Errorf("shape %v: survival at %v is %v, gonum has %v", shape, x, got, other.Survival(x))
			}
			if got := g.LogDensity(x); math.Abs(got-other.LogProb(x)) > 1e-10*math.Abs(got) {
				t.Errorf("shape %v: log density at %v is %v, gonum has %v", shape, x, got, other.LogProb(x))
			}
		}
	}
}
