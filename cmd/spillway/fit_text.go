package main

import (
	"fmt"
	"strings"
	"text/tabwriter"

	"spillway/severity"
	"spillway/storage/extract"
)

// print writes the report for people: what was read, which curve, how sure.
func (r *fitReport) print(io *streams, name string) error {
	out := io.out
	fmt.Fprintf(out, "%s: %d rows read, %d rejected\n", name, r.Claims.Read, r.Claims.Rejected)
	fmt.Fprintf(out, "Amounts %s, %s deductible, limit as %s%s.\n", r.Basis.Amounts, r.Basis.Deductible, r.Basis.Limit, inCurrency(r.Basis.Currency))
	fmt.Fprintf(out, "Losses read from %s.\n", lossColumns(r.Columns))
	fmt.Fprintf(out, "%d claims used (weight %s): %d exact, %d only known to be above the limit; %d above a deductible.\n\n",
		r.Claims.Used, figure(float64(r.Claims.Weight)), r.Claims.Uncensored, r.Claims.Censored, r.Claims.Truncated)
	if r.Status != severity.Converged {
		fmt.Fprintf(out, "No gamma curve: %s\n%s\n", r.Status, r.Reason)
		if b := r.Boundary; b != nil {
			fmt.Fprintf(out, "As the shape goes to zero the score per claim is %s at scale %s; it would have to be above zero.\n",
				figure(float64(b.Score)), figure(float64(b.Scale)))
		}
		_, err := fmt.Fprintf(out, "\n%s\n", caution)
		return err
	}
	fmt.Fprintf(out, "Gamma severity\n")
	table := tabwriter.NewWriter(out, 0, 0, 3, ' ', tabwriter.AlignRight)
	fmt.Fprintf(table, "\testimate\tstandard error\t%.4g%% interval\t\t\n", 100*float64(r.Intervals.Level))
	row := func(name string, value, se number, i interval) {
		fmt.Fprintf(table, "%s\t%s\t%s\t%s\tto %s\t\n", name, figure(float64(value)), figure(float64(se)), figure(float64(i.Lower)), figure(float64(i.Upper)))
	}
	row("shape", r.Parameters.Shape, r.StandardErrors.Shape, r.Intervals.Shape)
	row("scale", r.Parameters.Scale, r.StandardErrors.Scale, r.Intervals.Scale)
	row("mean", r.Mean, r.StandardErrors.Mean, r.Intervals.Mean)
	if err := table.Flush(); err != nil {
		return err
	}
	for _, i := range []struct {
		name string
		note string
	}{{"shape", r.Intervals.Shape.Note}, {"scale", r.Intervals.Scale.Note}, {"mean", r.Intervals.Mean.Note}} {
		if i.note != "" {
			fmt.Fprintf(out, "Interval of the %s: %s\n", i.name, i.note)
		}
	}
	fmt.Fprintf(out, "Intervals by %s. Coefficient of variation %s.\n\n", r.Intervals.Method, figure(float64(r.CV)))
	fmt.Fprintf(out, "Log-likelihood %.10g, AIC %.10g, BIC %.10g (n = sum of weights)\n", float64(r.LogLikelihood), float64(r.AIC), float64(r.BIC))
	fmt.Fprintf(out, "Maximum: %d Newton steps, score norm %.2g, Newton decrement %.2g, condition number %.4g\n%s\n",
		r.Convergence.Iterations, float64(r.Convergence.ScoreNorm), float64(r.Convergence.NewtonDecrement), float64(r.Convergence.Condition), r.Reason)
	_, err := fmt.Fprintf(out, "\n%s\n", caution)
	return err
}

// lossColumns names the columns that make the loss.
func lossColumns(columns extract.ColumnMap) string {
	var names []string
	for _, field := range []extract.Field{extract.Amount, extract.Paid, extract.Outstanding, extract.Incurred} {
		if name, ok := columns[field]; ok {
			if name != string(field) {
				name = fmt.Sprintf("%q (%s)", name, field)
			}
			names = append(names, name)
		}
	}
	return strings.Join(names, " and ")
}

func inCurrency(currency string) string {
	if currency == "" {
		return ""
	}
	return ", in " + currency
}
