package chart

import (
	"fmt"
	"math"

	"spillway/severity/evidence"
)

const (
	width, height                                      = 560.0, 400.0
	leftMargin, rightMargin, topMargin, bottomMargin   = 62.0, 14.0, 12.0, 46.0
	plotLeft, plotRight                                = leftMargin, width - rightMargin
	plotTop, plotBottom                                = topMargin, height - bottomMargin
	markRadius, tickLength, labelGap, nameGap, halfCap = 2.6, 4.0, 18.0, 40.0, 3.5
)

// frame draws grid, ticks, labels and names of both axes.
func (s *svg) frame(x, y axis, xName, yName string) {
	for _, t := range x.ticks(6) {
		at := x.place(t.value)
		s.line("grid", at, plotTop, at, plotBottom)
		s.text("tick middle", at, plotBottom+labelGap, t.label)
	}
	for _, t := range y.ticks(6) {
		at := y.place(t.value)
		s.line("grid", plotLeft, at, plotRight, at)
		s.text("tick end", plotLeft-tickLength-3, at+halfCap, t.label)
	}
	s.line("axis", plotLeft, plotTop, plotLeft, plotBottom, plotRight, plotBottom)
	s.text("name middle", (plotLeft+plotRight)/2, plotBottom+nameGap, xName)
	s.upright("name middle", 14, (plotTop+plotBottom)/2, yName)
}

// QQ draws observed losses over fitted quantiles, both in money: exact losses
// as discs, losses known only to be at least so much as rings.
func QQ(points []evidence.QQPoint, currency string) string {
	s := begin("qq", "QQ plot", fmt.Sprintf("%d observed losses against the quantiles of the fitted curve, with the line of equality. "+
		"The table below the picture holds the same points.", len(points)), width, height)
	most := 0.0
	for _, p := range points {
		if finite(p.Fitted) {
			most = math.Max(most, math.Max(p.Observed, p.Fitted))
		}
	}
	if most == 0 {
		most = 1
	}
	x := newAxis(0, most*1.03, plotLeft, plotRight, false)
	y := newAxis(0, most*1.03, plotBottom, plotTop, false)
	s.frame(x, y, "fitted quantile, "+currency, "observed loss, "+currency)
	s.line("equality", x.place(0), y.place(0), x.place(most*1.03), y.place(most*1.03))
	for _, p := range points {
		if !finite(p.Fitted) {
			continue
		}
		class, kind := "exact", "observed"
		if p.Censored {
			class, kind = "limited", "at least"
		}
		s.markPair(class, x.place(p.Fitted), y.place(p.Observed), markRadius, kind, p.Observed, "fitted", p.Fitted)
	}
	return s.end()
}

// Survival draws the product-limit estimate as steps with its band, and the
// fitted survival as a curve, both on logarithmic axes.
func Survival(points []evidence.SurvivalPoint, currency string) string {
	s := begin("survival", "Survival, empirical and fitted", fmt.Sprintf("The product-limit estimate at %d losses with its band, and the fitted survival, "+
		"given a loss above the lowest threshold; both axes logarithmic. The table below the picture holds the same points.", len(points)), width, height)
	least, most, low := math.Inf(1), 0.0, 1.0
	for _, p := range points {
		least, most = math.Min(least, p.Loss), math.Max(most, p.Loss)
		for _, v := range []float64{p.Empirical, p.Fitted} {
			if v > 0 && v < low {
				low = v
			}
		}
	}
	if !(most > least) {
		least, most = most/2, most*2
	}
	if !(most > 0) {
		least, most = 1, 10
	}
	low = math.Max(low*0.7, 1e-9)
	if low > 0.5 {
		low = 0.5
	}
	x := newAxis(least, most*1.05, plotLeft, plotRight, true)
	y := newAxis(low, 1.05, plotBottom, plotTop, true)
	s.frame(x, y, "loss, "+currency, "probability of a larger loss")
	s.clip("survival-clip", plotLeft, plotTop, plotRight-plotLeft, plotBottom-plotTop)
	inside := func(v float64) float64 { return y.place(math.Max(v, low*0.5)) }

	n := 4 * len(points)
	steps, upper, lower, fitted := make([]float64, 0, n+2), make([]float64, 0, n), make([]float64, 0, n/2), make([]float64, 0, n/2)
	before := 1.0
	for i, p := range points {
		at := x.place(p.Loss)
		steps = append(steps, at, inside(before), at, inside(p.Empirical))
		upper = append(upper, at, inside(p.Upper))
		lower = append(lower, at, inside(p.Lower))
		if p.Fitted > 0 {
			fitted = append(fitted, at, inside(p.Fitted))
		}
		before = p.Empirical
		if i == len(points)-1 {
			steps = append(steps, x.place(most*1.05), inside(p.Empirical))
		}
	}
	band := upper
	for i := len(lower) - 2; i >= 0; i -= 2 {
		band = append(band, lower[i], lower[i+1])
	}
	if len(points) > 1 {
		s.polygon("band", band...)
	}
	s.line("steps", steps...)
	if len(fitted) > 2 {
		s.line("curve", fitted...)
	}
	s.endGroup()
	return s.end()
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
