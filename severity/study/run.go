package study

import (
	"fmt"
	"math"
	"sync"

	"spillway/severity"
	"spillway/severity/claims"
	"spillway/severity/evidence"
	"spillway/severity/layer"
)

// Run is the whole of a study: the same book and assumptions always give the
// same results, to the last bit. The error is that of assumptions which make
// no sense; claims that admit no curve are a result, not an error.
func Run(book *claims.Book, a Assumptions) (*Results, error) {
	if err := a.Validate(); err != nil {
		return nil, err
	}
	used := claims.Select(book, a.Selection)
	r := &Results{
		Assumptions:    a,
		Basis:          book.Batches,
		Currency:       book.Currency,
		Decimals:       book.Decimals,
		Reconciliation: used.Reconciliation,
	}

	var summary severity.Summary
	var sample *evidence.Sample
	var summaryErr, sampleErr error
	var wait sync.WaitGroup
	wait.Go(func() { sample, sampleErr = evidence.Build(used.Observations) })
	summary, summaryErr = severity.Summarize(used.Observations)
	wait.Wait()
	for _, err := range []error{summaryErr, sampleErr} {
		if err != nil {
			return nil, fmt.Errorf("claims used in the study: %w", err)
		}
	}
	r.Sample = describe(summary, sample, used.Observations)

	r.Fit, r.NoFit = severity.FitGamma(summary, a.Level)
	// A nil curve must be a nil interface.
	var against evidence.Curve
	curve, fitted := r.Fit.Gamma()
	if fitted {
		against = curve
		r.QQ = sample.QQ(against)
	}
	r.Survival = sample.Survival(against, a.Level)
	for _, term := range a.Layers {
		l := layer.Layer{Attachment: term.Attachment, Limit: term.Limit}
		if l.Limit == 0 {
			l.Limit = math.Inf(1)
		}
		row := LayerResult{Layer: l, Burning: sample.Burning(l, against)}
		if fitted {
			figures := layer.Price(curve, r.Fit.Covariance, l, a.Level)
			row.Model = &figures
		}
		r.Layers = append(r.Layers, row)
	}
	if fitted {
		for _, p := range a.Quantiles {
			r.Quantiles = append(r.Quantiles, layer.Quantiles(curve, r.Fit.Covariance, p, a.Level))
		}
	}
	return r, nil
}

func describe(s severity.Summary, sample *evidence.Sample, observations []severity.Observation) SampleFigures {
	f := SampleFigures{
		Claims:       s.Claims,
		Uncensored:   s.Uncensored,
		Censored:     s.Censored,
		Truncated:    s.Truncated,
		Thresholds:   len(s.Thresholds),
		Limits:       len(s.Limits),
		SmallestLoss: s.Smallest,
		LargestLoss:  s.Largest,
	}
	if s.Claims == 0 {
		return f
	}
	f.LowestThreshold = sample.LowestThreshold()
	f.SmallestRisk = sample.SmallestRisk()
	f.CollapseAt, f.Collapsed = sample.Collapse()
	var total, largest float64
	for i := range observations {
		part := observations[i].Weight * observations[i].Loss
		total += part
		if part > largest {
			largest = part
		}
	}
	f.MeanLoss = total / s.Weight
	f.LargestShare = largest / total
	return f
}

// Default is where a new study starts: all claims by their incurred amount, a
// tower of layers suited to the losses of the book, quantiles from the middle
// to one claim in a thousand, 95% intervals.
func Default(batches []BatchRef, largest float64) Assumptions {
	a := Assumptions{
		Batches:   batches,
		Selection: claims.Selection{Amount: claims.IncurredAmount},
		Model:     "gamma",
		Quantiles: []float64{0.5, 0.75, 0.9, 0.95, 0.99, 0.995, 0.999},
		Level:     0.95,
	}
	// Doubling layers up to about the largest loss, on round money.
	unit := math.Pow(10, math.Floor(math.Log10(math.Max(largest, 1)/16)))
	if unit < 1 || math.IsNaN(unit) || math.IsInf(unit, 0) {
		unit = 1
	}
	for _, m := range []float64{2.5, 5, 10} {
		if unit*m*16 <= largest {
			unit *= m
			break
		}
	}
	attachment := 0.0
	for _, multiple := range []float64{1, 1, 2, 4, 8} {
		a.Layers = append(a.Layers, LayerTerm{Limit: multiple * unit, Attachment: attachment})
		attachment += multiple * unit
	}
	a.Layers = append(a.Layers, LayerTerm{Attachment: attachment})
	return a
}

// Validate says which assumption makes no sense, what was found and what is
// accepted.
func (a Assumptions) Validate() error {
	if a.Model != "gamma" {
		return fmt.Errorf("model %q: the model is gamma", a.Model)
	}
	if a.Amount != claims.PaidAmount && a.Amount != claims.IncurredAmount {
		return fmt.Errorf("amount %q: the amount is paid or incurred", a.Amount)
	}
	if !(a.Level > 0 && a.Level < 1) {
		return fmt.Errorf("level %v: the level of intervals lies between 0 and 1, both excluded", a.Level)
	}
	if a.LossFrom != 0 && a.LossTo != 0 && a.LossFrom > a.LossTo {
		return fmt.Errorf("loss dates from %s to %s: the first lies after the last", a.LossFrom, a.LossTo)
	}
	for _, p := range a.Quantiles {
		if !(p > 0 && p < 1) {
			return fmt.Errorf("quantile %v: a probability lies between 0 and 1, both excluded", p)
		}
	}
	if len(a.Layers) > MaxLayers || len(a.Quantiles) > MaxLayers {
		return fmt.Errorf("%d layers and %d quantiles: at most %d of each", len(a.Layers), len(a.Quantiles), MaxLayers)
	}
	for i, l := range a.Layers {
		if !(l.Attachment >= 0) || math.IsInf(l.Attachment, 1) || !(l.Limit >= 0) || math.IsInf(l.Limit, 1) {
			return fmt.Errorf("layer %d, %v xs %v: limit and attachment are amounts of zero or more (a limit of zero or none is unlimited)", i+1, l.Limit, l.Attachment)
		}
	}
	return nil
}

// MaxLayers bounds the layers and the quantiles of one study.
const MaxLayers = 40
