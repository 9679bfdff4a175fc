// Package report renders one revision of a study as JSON, CSV and XLSX. Its
// figures are those of study.Results, at full precision.
package report

import (
	"math"

	"spillway/severity"
	"spillway/severity/claims"
	"spillway/severity/study"
)

// Caution stands in every report.
const Caution = "These figures support, and do not replace, a qualified actuary's judgement. Local law, regulation and standards of practice prevail."

// NotInIntervals is what the intervals do not carry.
const NotInIntervals = "The intervals carry the uncertainty of the parameters under this curve. They do not carry the choice of the curve, trend and price level, " +
	"the development of open claims, changes of law or of claims handling, or errors in the data."

// Document is one revision with what a reader must know of it.
type Document struct {
	Study, Purpose string
	Revision       int
	Author, Note   string
	Created        string // RFC 3339
	ProgramVersion string
	Results        *study.Results
}

// figure is a number with what it is called, in which unit, and how sure it is.
type figure struct {
	name     string
	unit     string
	value    float64
	se       float64 // NaN for none
	interval severity.Interval
}

func plain(name, unit string, value float64) figure {
	return figure{name: name, unit: unit, value: value, se: math.NaN(), interval: severity.Interval{Lower: math.NaN(), Upper: math.NaN()}}
}

func estimated(name, unit string, e severity.Estimate) figure {
	return figure{name: name, unit: unit, value: e.Value, se: e.StandardError, interval: e.Interval}
}

// curveFigures are those of the fit, parameters first.
func curveFigures(r *study.Results) []figure {
	var list []figure
	for _, p := range r.Fit.Parameters {
		list = append(list, estimated(p.Name, unitOf(p.Unit, r.Currency), p.Estimate))
	}
	return append(list,
		estimated("mean", r.Currency, r.Fit.Mean),
		estimated("coefficient_of_variation", "", r.Fit.CV),
		plain("log_likelihood", "", r.Fit.LogLikelihood),
		plain("aic", "", r.Fit.AIC),
		plain("bic", "", r.Fit.BIC))
}

// layerFigures are the modelled figures of a layer, per ground-up claim.
func layerFigures(l study.LayerResult, currency string) []figure {
	m := l.Model
	if m == nil {
		return nil
	}
	return []figure{
		estimated("expected_loss", currency, m.ExpectedLoss),
		estimated("standard_deviation", currency, m.StandardDeviation),
		estimated("probability_attach", "probability", m.ProbabilityAttach),
		estimated("probability_exhaust", "probability", m.ProbabilityExhaust),
		estimated("mean_if_attached", currency, m.MeanIfAttached),
		estimated("standard_deviation_if_attached", currency, m.StandardDeviationIfAttached),
		estimated("limited_expected_value_attachment", currency, m.LimitedExpectedValueAttachment),
		estimated("limited_expected_value_exhaustion", currency, m.LimitedExpectedValueExhaustion),
		estimated("mean_excess", currency, m.MeanExcess),
		estimated("loss_elimination_ratio", "ratio", m.LossEliminationRatio),
	}
}

// burningFigures are what the claims themselves say about a layer.
func burningFigures(l study.LayerResult, currency string) []figure {
	b := l.Burning
	perClaim := plain("burning_per_claim_used", currency, b.PerClaim)
	perClaim.se = b.StandardErr
	return []figure{
		plain("claims_at_risk", "claims", float64(b.AtRisk)),
		plain("claims_reaching", "claims", float64(b.Reaching)),
		plain("claims_exhausting", "claims", float64(b.Exhausting)),
		plain("recorded_layer_loss", currency, b.LayerLoss),
		perClaim,
		plain("product_limit_per_claim_above_lowest_threshold", currency, b.ProductLimit),
		plain("fitted_per_claim_above_lowest_threshold", currency, b.Fitted),
	}
}

func sampleFigures(r *study.Results) []figure {
	s := r.Sample
	return []figure{
		plain("claims", "claims", float64(s.Claims)),
		plain("uncensored", "claims", float64(s.Uncensored)),
		plain("censored", "claims", float64(s.Censored)),
		plain("truncated", "claims", float64(s.Truncated)),
		plain("lowest_threshold", r.Currency, s.LowestThreshold),
		plain("distinct_thresholds", "values", float64(s.Thresholds)),
		plain("distinct_censoring_points", "values", float64(s.Limits)),
		plain("smallest_exact_loss", r.Currency, s.SmallestLoss),
		plain("largest_exact_loss", r.Currency, s.LargestLoss),
		plain("mean_loss_as_recorded", r.Currency, s.MeanLoss),
		plain("largest_claim_share", "ratio", s.LargestShare),
	}
}

// money is an exact amount of minor units as decimal text.
func money(r *study.Results, units int64) string {
	return claims.Amount{Units: units, Decimals: int16(r.Decimals)}.String()
}

func unitOf(unit, currency string) string {
	if unit == "money" {
		return currency
	}
	return unit
}
