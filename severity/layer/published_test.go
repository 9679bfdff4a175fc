package layer

import (
	"math"
	"testing"
)

// within holds a computed figure against a printed one: equal when rounded to
// the last printed digit.
func within(t *testing.T, what string, got, printed, lastDigit float64) {
	t.Helper()
	if !(math.Abs(got-printed) <= lastDigit/2*(1+1e-9)) {
		t.Errorf("%s is %v, printed as %v", what, got, printed)
	}
}

// Loss Data Analytics (open textbook, 2023), example 3.4.1: exponential with
// mean 1,000 and an ordinary deductible of 100; the variance of the payment per
// loss is 990,944.
func TestVarianceAboveADeductible(t *testing.T) {
	f := Price(gamma(t, 1, 1000), nil, Layer{100, math.Inf(1)}, 0.95)
	within(t, "variance per loss", f.StandardDeviation.Value*f.StandardDeviation.Value, 990944, 1)
}

// Loss Data Analytics, example 3.4.3: exponential, a deductible whose loss
// elimination ratio is 0.70 is raised to 4/3 of itself; the ratio becomes 0.80.
func TestLossEliminationOfARaisedDeductible(t *testing.T) {
	curve := gamma(t, 1, 1000)
	d := curve.Quantile(0.7) // of the exponential, F(d) = E[min(X, d)]/E[X]
	within(t, "loss elimination ratio", curve.LossEliminationRatioFigure(d).Value, 0.70, 1e-12)
	f := Price(curve, nil, Layer{4 * d / 3, 1}, 0.95)
	within(t, "loss elimination ratio of the raised deductible", f.LossEliminationRatio.Value, 0.80, 0.01)
}

// Loss Data Analytics, example 3.4.5: exponential with mean 1,000, deductible
// 100, maximum payment 500, then 5% inflation. The book prints 361.659 where
// the exact value is 361.6602.
func TestPaymentsUnderInflation(t *testing.T) {
	l := Layer{100, 500}
	before := Price(gamma(t, 1, 1000), nil, l, 0.95)
	after := Price(gamma(t, 1, 1050), nil, l, 0.95)
	within(t, "per loss", before.ExpectedLoss.Value, 356.026, 0.001)
	within(t, "per loss after inflation", after.ExpectedLoss.Value, 361.66, 0.01)
	within(t, "per payment", before.MeanIfAttached.Value, 393.469, 0.001)
	within(t, "per payment after inflation", after.MeanIfAttached.Value, 397.797, 0.002)
	within(t, "change per payment in percent", 100*(after.MeanIfAttached.Value/before.MeanIfAttached.Value-1), 1.1, 0.1)
}

// Loss Data Analytics, example 10.3.5: exponential with scale 31.71; the 95%
// quantile is 95.
func TestPublishedQuantile(t *testing.T) {
	within(t, "95% quantile", Quantiles(gamma(t, 1, 31.71), nil, 0.95, 0.95).Value.Value, 95, 1)
}

// Three layers of the gamma with shape 1.5 and scale 40,000 and what a trend of
// 5% does to each; computed with scipy and mpmath outside this project.
func TestTrendLeverage(t *testing.T) {
	before, after := gamma(t, 1.5, 40000), gamma(t, 1.5, 42000)
	sum := 0.0
	for _, c := range []struct {
		text           string
		cost, leverage float64
	}{
		{"50,000 xs 50,000", 15052.053310191, 7.0692},
		{"100,000 xs 100,000", 6972.209113875, 14.9905},
		{"250,000 xs 250,000", 248.781972913, 38.6669},
	} {
		l, err := ParseLayer(c.text)
		if err != nil {
			t.Fatal(err)
		}
		cost := Price(before, nil, l, 0.95).ExpectedLoss.Value
		within(t, c.text, cost, c.cost, 1e-9)
		within(t, "trend of "+c.text, 100*(Price(after, nil, l, 0.95).ExpectedLoss.Value/cost-1), c.leverage, 1e-4)
		sum += cost
	}
	rest := Price(before, nil, Layer{0, 50000}, 0.95).ExpectedLoss.Value +
		Price(before, nil, Layer{200000, 50000}, 0.95).ExpectedLoss.Value +
		Price(before, nil, Layer{500000, math.Inf(1)}, 0.95).ExpectedLoss.Value
	if !near(sum+rest, before.Mean(), 1e-12) {
		t.Errorf("adjoining layers come to %v, the mean is %v", sum+rest, before.Mean())
	}
}
