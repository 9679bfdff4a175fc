package severity

import (
	"math"
	"strings"
	"testing"
)

func TestNewGammaRefuses(t *testing.T) {
	for _, bad := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := NewGamma(bad, 1); err == nil || !strings.Contains(err.Error(), "shape") {
			t.Errorf("shape %v: error %v, want one that names the shape", bad, err)
		}
		if _, err := NewGamma(1, bad); err == nil || !strings.Contains(err.Error(), "scale") {
			t.Errorf("scale %v: error %v, want one that names the scale", bad, err)
		}
	}
}

// The exponential law is the gamma of shape 1; its figures are elementary.
func TestExponentialIsGammaOfShapeOne(t *testing.T) {
	const scale = 1000.0
	g := Gamma{1, scale}
	for _, x := range []float64{1e-6, 10, 1000, 31415, 600000} {
		z := x / scale
		for what, pair := range map[string][2]float64{
			"log density":            {g.LogDensity(x), -math.Log(scale) - z},
			"log survival":           {g.LogSurvival(x), -z},
			"log CDF":                {g.LogCDF(x), math.Log(-math.Expm1(-z))},
			"limited expected value": {g.LimitedExpectedValue(x), -scale * math.Expm1(-z)},
			"mean excess":            {g.MeanExcess(x), scale},
			"layer 500 xs x":         {g.LayerMean(x, 500), -scale * math.Exp(-z) * math.Expm1(-0.5)},
			"unlimited xs x":         {g.LayerMean(x, math.Inf(1)), scale * math.Exp(-z)},
			"inverse":                {g.InverseLogSurvival(-z), x},
			"tail value at risk":     {g.TailValueAtRisk(0.99), scale * (1 + math.Log(100))},
		} {
			if e := relative(pair[0], pair[1]); e > 2e-13 && math.Abs(pair[0]-pair[1]) > 1e-15 {
				t.Errorf("%s at %v is %.17g, want %.17g", what, x, pair[0], pair[1])
			}
		}
	}
}

func TestEnds(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	small, one, large := Gamma{0.5, 10}, Gamma{1, 10}, Gamma{3, 10}
	for what, pair := range map[string][2]float64{
		"density at 0, shape below 1": {small.LogDensity(0), inf},
		"density at 0, shape 1":       {one.LogDensity(0), -math.Log(10)},
		"density at 0, shape above 1": {large.LogDensity(0), -inf},
		"density below 0":             {large.LogDensity(-1), -inf},
		"density at infinity":         {large.LogDensity(inf), -inf},
		"log survival at 0":           {large.LogSurvival(0), 0},
		"log survival at infinity":    {large.LogSurvival(inf), -inf},
		"log CDF at 0":                {large.LogCDF(0), -inf},
		"log CDF at infinity":         {large.LogCDF(inf), 0},
		"quantile 0":                  {large.Quantile(0), 0},
		"quantile 1":                  {large.Quantile(1), inf},
		"upper quantile 0":            {large.UpperQuantile(0), inf},
		"upper quantile 1":            {large.UpperQuantile(1), 0},
		"quantile above 1":            {large.Quantile(1.5), nan},
		"upper quantile below 0":      {large.UpperQuantile(-0.1), nan},
		"inverse above 0":             {large.InverseLogSurvival(0.1), nan},
		"inverse at -Inf":             {large.InverseLogSurvival(-inf), inf},
		"quantile of a tiny shape":    {Gamma{1e-4, 1e6}.Quantile(0.5), 0},
		"tail value at risk at 0":     {large.TailValueAtRisk(0), 30},
		"tail value at risk at 1":     {large.TailValueAtRisk(1), nan},
		"limited at infinity":         {large.LimitedExpectedValue(inf), 30},
		"limited squares at infinity": {large.LimitedSecondMoment(inf), 1200},
		"limited below 0":             {large.LimitedExpectedValue(-1), nan},
		"whole":                       {large.LayerMean(0, inf), 30},
		"layer without width":         {large.LayerMean(10, 0), nan},
		"layer below 0":               {large.LayerMean(-1, 10), nan},
		"layer at infinity":           {large.LayerMean(inf, 10), nan},
		"mean excess at 0":            {large.MeanExcess(0), 30},
	} {
		if math.IsNaN(pair[1]) != math.IsNaN(pair[0]) || !math.IsNaN(pair[1]) && relative(pair[0], pair[1]) > 1e-14 {
			t.Errorf("%s is %v, want %v", what, pair[0], pair[1])
		}
	}
}

// A quantile whose standardised value lies below the smallest double, in a
// currency in which the loss does not: P(a,z) = z^a/Γ(a+1) there.
func TestQuantileOfTinyShapeInLargeUnits(t *testing.T) {
	g := Gamma{0.002, 1e200}
	lg, _ := math.Lgamma(1.002)
	want := math.Exp((math.Log(0.1)+lg)/0.002 + math.Log(1e200))
	if got := g.Quantile(0.1); relative(got, want) > 1e-11 || !(want > 0) {
		t.Errorf("quantile is %v, want %v", got, want)
	}
}

// A Figure must be good enough to be cheap: the page asks for about ten of
// them a layer.
func BenchmarkLayerFigures(b *testing.B) {
	g := Gamma{0.7, 3000}
	for b.Loop() {
		g.LayerFigures(10000, 15000)
	}
}

func BenchmarkLayerFiguresFromTheGround(b *testing.B) {
	g := Gamma{0.7, 3000}
	for b.Loop() {
		g.LayerFigures(0, 15000)
	}
}

func BenchmarkTailValueAtRiskFigure(b *testing.B) {
	g := Gamma{0.7, 3000}
	for b.Loop() {
		g.TailValueAtRiskFigure(0.99)
	}
}

func BenchmarkInverseLogSurvival(b *testing.B) {
	g := Gamma{0.7, 3000}
	for b.Loop() {
		g.InverseLogSurvival(-3)
	}
}
