package view

import (
	"fmt"
	"strings"

	"spillway/severity"
	"spillway/severity/claims"
)

// verdict is a fit's status in words.
func verdict(status string) string {
	switch severity.Status(status) {
	case severity.Converged:
		return "maximum found"
	case severity.NoInteriorMaximum:
		return "no gamma curve: shape drifts to zero"
	case severity.Unbounded:
		return "likelihood without limit"
	case severity.AllCensored:
		return "every loss only a lower bound"
	case severity.NoClaims:
		return "no claims used"
	}
	return none
}

// BasisLine is the basis of a batch in one line.
func BasisLine(b claims.Basis) string {
	parts := []string{"amounts " + b.Amounts.String()}
	if b.MissingTerm.Deductible {
		parts = append(parts, "no deductible column")
	} else {
		parts = append(parts, b.Deductible.String()+" deductible", "a blank deductible "+blank(b.NoDeduct))
	}
	if b.MissingTerm.Limit {
		parts = append(parts, "no limit column")
	} else {
		parts = append(parts, "limit as "+b.Limit.String(), "a blank limit "+blank(b.NoLimit))
	}
	parts = append(parts, b.Currency)
	if b.Valuation != 0 {
		parts = append(parts, "as of "+b.Valuation.String())
	}
	return strings.Join(parts, "; ")
}

// BasisLines are the bases of batches, those of one basis in one line.
func BasisLines(batches []claims.BookBatch) []string {
	var lines []string
	done := make([]bool, len(batches))
	for i := range batches {
		if done[i] {
			continue
		}
		basis := batches[i].Basis
		basis.Valuation = 0
		var names []string
		for k := i; k < len(batches); k++ {
			other := batches[k].Basis
			other.Valuation = 0
			if other == basis {
				done[k] = true
				names = append(names, fmt.Sprintf("%s (as of %s)", batches[k].Name, batches[k].Basis.Valuation))
			}
		}
		lines = append(lines, strings.Join(names, ", ")+": "+BasisLine(basis)+".")
	}
	return lines
}

func blank(b claims.BlankTerm) string {
	if b == claims.BlankMeansNone {
		return "means none"
	}
	return "is refused"
}

// amountName is the amount field in words.
func amountName(f claims.AmountField) string {
	if f == claims.PaidAmount {
		return "paid to date"
	}
	return "incurred (paid + outstanding)"
}

// listed joins names, or says all.
func listed(names []string, all string) string {
	if len(names) == 0 {
		return all
	}
	return strings.Join(names, ", ")
}

func statusNames(s []claims.Status) []string {
	names := make([]string, len(s))
	for i, v := range s {
		names[i] = v.String()
	}
	return names
}

// plural writes a count with its noun.
func plural(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%s %s", Count(n), many)
}
