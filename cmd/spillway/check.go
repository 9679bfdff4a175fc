package main

import (
	"fmt"
	"text/tabwriter"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

type checkCommand struct {
	reading
	JSON bool `name:"json" help:"Print one JSON object."`
}

func (c *checkCommand) Run(io *streams) error {
	in, err := c.open(io)
	if err != nil {
		return err
	}
	defer in.Close()
	_, read, err := observe(in)
	if err != nil {
		return fmt.Errorf("%s: %w", in.name, err)
	}
	report := newCheckReport(read)
	if c.JSON {
		return writeJSON(io, report)
	}
	printFindings(io, in.name, read)
	return report.print(io, in)
}

// checkReport is the object of check --json. Amounts are exact decimals, so
// that read = accepted + rejected to the last digit.
type checkReport struct {
	Rows      rowCounts         `json:"rows"`
	Amount    *amounts          `json:"amount"` // of the column that holds the loss, or what is paid of it
	Totals    []columnAmounts   `json:"totals"` // of every money column
	TotalRows int               `json:"totals_rows"`
	Observed  observed          `json:"claims"`
	FirstLoss claims.Date       `json:"first_loss"`
	LastLoss  claims.Date       `json:"last_loss"`
	Groups    []ruleCount       `json:"groups"`
	Findings  []extract.Finding `json:"findings"` // the first of every group
	Repairs   []extract.Repair  `json:"repairs"`
}

type rowCounts struct {
	Read     int `json:"read"`
	Accepted int `json:"accepted"`
	Rejected int `json:"rejected"`
}

type amounts struct {
	Read     string `json:"read"`
	Accepted string `json:"accepted"`
	Rejected string `json:"rejected"`
}

type columnAmounts struct {
	Field  extract.Field `json:"field"`
	Column string        `json:"column"`
	amounts
	Unreadable int `json:"unreadable"`
}

type observed struct {
	Uncensored int `json:"uncensored"`
	Censored   int `json:"censored"`
}

type ruleCount struct {
	Rule   extract.Rule   `json:"rule"`
	Column string         `json:"column"`
	Effect extract.Effect `json:"effect"`
	Count  int            `json:"count"`
}

func newCheckReport(read *extract.Report) checkReport {
	r := checkReport{
		Rows:      rowCounts{read.Read, read.Accepted, read.Rejected},
		Totals:    []columnAmounts{},
		TotalRows: read.TotalRows,
		Observed:  observed{read.Uncensored, read.Censored},
		FirstLoss: read.FirstLoss, LastLoss: read.LastLoss,
		Groups:   []ruleCount{},
		Findings: byLine(read, extract.FindingsKept),
		Repairs:  append([]extract.Repair{}, read.Repairs...),
	}
	for _, t := range read.Totals {
		r.Totals = append(r.Totals, columnAmounts{t.Field, t.Column, amounts{t.Read, t.Accepted, t.Rejected}, t.Unreadable})
	}
	for _, field := range []extract.Field{extract.Amount, extract.Incurred, extract.Paid} {
		for i := range r.Totals {
			if r.Amount == nil && r.Totals[i].Field == field {
				r.Amount = &r.Totals[i].amounts
			}
		}
	}
	for _, g := range read.Groups {
		r.Groups = append(r.Groups, ruleCount{g.Rule, g.Column, g.Effect, g.Count})
	}
	return r
}

func (r *checkReport) print(io *streams, in *input) error {
	fmt.Fprintf(io.out, "%s: %d rows read, %d accepted, %d rejected\n", in.name, r.Rows.Read, r.Rows.Accepted, r.Rows.Rejected)
	basis := in.plan.Basis
	fmt.Fprintf(io.out, "Amounts %s, %s deductible, limit as %s%s.\n", basis.Amounts, basis.Deductible, basis.Limit, inCurrency(basis.Currency))
	if r.FirstLoss != 0 {
		fmt.Fprintf(io.out, "Losses of %s to %s.\n", r.FirstLoss, r.LastLoss)
	}
	fmt.Fprintf(io.out, "Of the accepted, %d losses are exact and %d only known to be above the limit.\n\n", r.Observed.Uncensored, r.Observed.Censored)
	table := tabwriter.NewWriter(io.out, 0, 0, 3, ' ', tabwriter.AlignRight)
	fmt.Fprintf(table, "column\tread\taccepted\trejected\tunreadable\t\n")
	for _, t := range r.Totals {
		fmt.Fprintf(table, "%s\t%s\t%s\t%s\t%d\t\n", t.Column, t.Read, t.Accepted, t.Rejected, t.Unreadable)
	}
	if err := table.Flush(); err != nil {
		return err
	}
	if r.TotalRows > 0 {
		fmt.Fprintf(io.out, "%d rows of totals stand in no sum.\n", r.TotalRows)
	}
	for _, repair := range r.Repairs {
		fmt.Fprintf(io.out, "%d × %s\n", repair.Count, repair.What)
	}
	return nil
}
