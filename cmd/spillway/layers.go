package main

import (
	"fmt"
	"text/tabwriter"

	"spillway/severity"
	"spillway/severity/layer"
)

type layersCommand struct {
	Model    string    `enum:"gamma" default:"gamma" help:"Family of the curve: gamma."`
	Shape    float64   `required:"" help:"Shape of the curve, above 0."`
	Scale    float64   `required:"" help:"Scale of the curve, above 0, in money."`
	Layer    []string  `sep:"none" placeholder:"\"L xs A\"" help:"Limit L (a number or unlimited) in excess of attachment A. May be repeated."`
	Quantile []float64 `placeholder:"P" help:"Probability between 0 and 1 whose quantile is asked. May be repeated."`
	JSON     bool      `name:"json" help:"Print one JSON object."`
}

func (c *layersCommand) Run(io *streams) error {
	curve, err := severity.NewGamma(c.Shape, c.Scale)
	if err != nil {
		return usage{err}
	}
	if len(c.Layer)+len(c.Quantile) == 0 {
		return usagef(`layers: nothing is asked; give --layer "L xs A" or --quantile p`)
	}
	report := layersReport{Model: c.Model, Parameters: &parameters{number(c.Shape), number(c.Scale)}, Mean: number(curve.Mean())}
	report.Layers, report.Quantiles = []layerReport{}, []quantileReport{}
	for _, text := range c.Layer {
		asked, err := layer.ParseLayer(text)
		if err != nil {
			return usage{err}
		}
		report.Layers = append(report.Layers, newLayerReport(layer.Price(curve, nil, asked, 0.95)))
	}
	for _, p := range c.Quantile {
		if !(p > 0 && p < 1) {
			return usagef("--quantile %v: want a probability between 0 and 1, both ends left out", p)
		}
		q := layer.Quantiles(curve, nil, p, 0.95)
		report.Quantiles = append(report.Quantiles, quantileReport{number(p), number(q.Value.Value), number(q.TailValueAtRisk.Value)})
	}
	if c.JSON {
		return writeJSON(io, report)
	}
	return report.print(io)
}

// layersReport is the object of layers --json. Figures are per ground-up loss
// unless their names say otherwise; money is in the unit of the scale.
type layersReport struct {
	Model      string           `json:"model"`
	Parameters *parameters      `json:"parameters"`
	Mean       number           `json:"mean"`
	Layers     []layerReport    `json:"layers"`
	Quantiles  []quantileReport `json:"quantiles"`
}

type layerReport struct {
	Attachment                     number `json:"attachment"`
	Limit                          number `json:"limit"` // null when unlimited
	LimitedExpectedValueAttachment number `json:"limited_expected_value_attachment"`
	LimitedExpectedValueExhaustion number `json:"limited_expected_value_exhaustion"`
	ExpectedLoss                   number `json:"expected_loss"`
	StandardDeviation              number `json:"standard_deviation"`
	ProbabilityAttach              number `json:"probability_attach"`
	ProbabilityExhaust             number `json:"probability_exhaust"`
	MeanIfAttached                 number `json:"mean_if_attached"`
	StandardDeviationIfAttached    number `json:"standard_deviation_if_attached"`
	MeanExcess                     number `json:"mean_excess"`
	LossEliminationRatio           number `json:"loss_elimination_ratio"`
}

type quantileReport struct {
	P               number `json:"p"`
	Value           number `json:"value"`
	TailValueAtRisk number `json:"tail_value_at_risk"`
}

func newLayerReport(f layer.Figures) layerReport {
	return layerReport{
		Attachment:                     number(f.Layer.Attachment),
		Limit:                          number(f.Layer.Limit),
		LimitedExpectedValueAttachment: number(f.LimitedExpectedValueAttachment.Value),
		LimitedExpectedValueExhaustion: number(f.LimitedExpectedValueExhaustion.Value),
		ExpectedLoss:                   number(f.ExpectedLoss.Value),
		StandardDeviation:              number(f.StandardDeviation.Value),
		ProbabilityAttach:              number(f.ProbabilityAttach.Value),
		ProbabilityExhaust:             number(f.ProbabilityExhaust.Value),
		MeanIfAttached:                 number(f.MeanIfAttached.Value),
		StandardDeviationIfAttached:    number(f.StandardDeviationIfAttached.Value),
		MeanExcess:                     number(f.MeanExcess.Value),
		LossEliminationRatio:           number(f.LossEliminationRatio.Value),
	}
}

func (r *layersReport) print(io *streams) error {
	fmt.Fprintf(io.out, "Gamma severity: shape %s, scale %s, mean %s\n",
		figure(float64(r.Parameters.Shape)), figure(float64(r.Parameters.Scale)), figure(float64(r.Mean)))
	table := tabwriter.NewWriter(io.out, 0, 0, 2, ' ', tabwriter.AlignRight)
	if len(r.Layers) > 0 {
		fmt.Fprintf(table, "\nlimit\txs attachment\texpected loss\tstandard deviation\tprobability attach\tprobability exhaust\tmean if attached\t\n")
		for _, l := range r.Layers {
			limit := float64(l.Limit)
			fmt.Fprintf(table, "%s\t%s\t%s\t%s\t%s\t%s\t%s\t\n", figure(limit), figure(float64(l.Attachment)), figure(float64(l.ExpectedLoss)),
				figure(float64(l.StandardDeviation)), figure(float64(l.ProbabilityAttach)), figure(float64(l.ProbabilityExhaust)), figure(float64(l.MeanIfAttached)))
		}
		if err := table.Flush(); err != nil {
			return err
		}
		fmt.Fprintf(table, "\nxs attachment\tE[min(X, attachment)]\tE[min(X, exhaustion)]\tmean excess\tloss elimination ratio\t\n")
		for _, l := range r.Layers {
			fmt.Fprintf(table, "%s\t%s\t%s\t%s\t%s\t\n", figure(float64(l.Attachment)), figure(float64(l.LimitedExpectedValueAttachment)),
				figure(float64(l.LimitedExpectedValueExhaustion)), figure(float64(l.MeanExcess)), figure(float64(l.LossEliminationRatio)))
		}
		if err := table.Flush(); err != nil {
			return err
		}
	}
	if len(r.Quantiles) > 0 {
		fmt.Fprintf(table, "\nprobability\tquantile\ttail value at risk\t\n")
		for _, q := range r.Quantiles {
			fmt.Fprintf(table, "%v\t%s\t%s\t\n", float64(q.P), figure(float64(q.Value)), figure(float64(q.TailValueAtRisk)))
		}
		if err := table.Flush(); err != nil {
			return err
		}
	}
	_, err := fmt.Fprintf(io.out, "\nFigures are per ground-up loss unless their names say otherwise.\n%s\n", caution)
	return err
}

// parameters are the gamma's own.
type parameters struct {
	Shape number `json:"shape"`
	Scale number `json:"scale"`
}

const caution = "These figures support and do not replace qualified judgement."
