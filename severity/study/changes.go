package study

import (
	"fmt"
	"slices"
	"strings"

	"spillway/severity/claims"
)

// Change is one assumption that differs between two revisions.
type Change struct{ What, From, To string }

// Changes lists the assumptions in which b differs from a.
func Changes(a, b Assumptions) []Change {
	var list []Change
	compare := func(what, from, to string) {
		if from != to {
			list = append(list, Change{what, from, to})
		}
	}
	compare("batches", batchNames(a.Batches), batchNames(b.Batches))
	compare("lines", names(a.Businesses), names(b.Businesses))
	compare("segments", names(a.Segments), names(b.Segments))
	compare("losses from", dated(a.LossFrom), dated(b.LossFrom))
	compare("losses to", dated(a.LossTo), dated(b.LossTo))
	compare("status", statuses(a.Statuses), statuses(b.Statuses))
	compare("amount", string(a.Amount), string(b.Amount))
	compare("model", a.Model, b.Model)
	compare("layers", layers(a.Layers), layers(b.Layers))
	compare("quantiles", fmt.Sprint(a.Quantiles), fmt.Sprint(b.Quantiles))
	compare("level", fmt.Sprint(a.Level), fmt.Sprint(b.Level))
	return list
}

func names(list []string) string {
	if len(list) == 0 {
		return "all"
	}
	sorted := slices.Sorted(slices.Values(list))
	return strings.Join(sorted, ", ")
}

func batchNames(refs []BatchRef) string {
	var list []string
	for _, b := range refs {
		list = append(list, fmt.Sprintf("%s (%d)", b.Name, b.ID))
	}
	return names(list)
}

func dated(d claims.Date) string {
	if d == 0 {
		return "any date"
	}
	return d.String()
}

func statuses(list []claims.Status) string {
	var words []string
	for _, s := range list {
		words = append(words, s.String())
	}
	return names(words)
}

func layers(list []LayerTerm) string {
	var words []string
	for _, l := range list {
		limit := "unlimited"
		if l.Limit > 0 {
			limit = fmt.Sprintf("%.17g", l.Limit)
		}
		words = append(words, fmt.Sprintf("%s xs %.17g", limit, l.Attachment))
	}
	return strings.Join(words, ", ")
}
