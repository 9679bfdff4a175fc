package view

import (
	"fmt"

	"spillway/severity/claims"
)

// WorkedClaims shows what a basis says of three recorded amounts, under a
// deductible of 500 and a limit of 10,000: in between, at the limit, small.
func WorkedClaims(b claims.Basis) []WorkedClaim {
	terms := claims.Terms{Type: b.Deductible}
	text := ""
	if !b.MissingTerm.Deductible {
		terms.HasDeductible, terms.Deductible = true, 500
		text = fmt.Sprintf("%s deductible 500", b.Deductible)
	}
	if !b.MissingTerm.Limit {
		terms.HasLimit, terms.Limit = true, 10000
		if text != "" {
			text += ", "
		}
		text += fmt.Sprintf("limit 10%s000 as %s", "\u202f", b.Limit)
	}
	if text == "" {
		text = "no terms in the extract"
	}
	full := 10000.0
	if !b.MissingTerm.Limit && b.Limit == claims.TopOfCover && b.Amounts == claims.NetOfDeductible && b.Deductible == claims.Ordinary {
		full -= terms.Deductible
	}
	if b.Amounts == claims.GroundUp && b.Limit == claims.MaximumPayment && b.Deductible == claims.Ordinary {
		full += terms.Deductible
	}
	var list []WorkedClaim
	for _, amount := range []float64{3200, full, 400} {
		o, _, problem := b.GroundUp(amount, terms)
		meaning := fmt.Sprintf("loss of %s", Money(o.Loss))
		switch {
		case problem != claims.NoProblem:
			meaning = "a finding: " + problem.String()
		case o.Censored:
			meaning = fmt.Sprintf("loss of at least %s: the limit is reached", Money(o.Loss))
		}
		if problem == claims.NoProblem && o.Threshold > 0 {
			meaning += fmt.Sprintf("; seen only because it exceeds %s", Money(o.Threshold))
		}
		list = append(list, WorkedClaim{Recorded: Money(amount), Terms: text, Meaning: meaning})
	}
	return list
}
