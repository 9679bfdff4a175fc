package claims

import (
	"slices"

	"spillway/severity"
)

// Sample is what a selection of a book leaves for the fit.
type Sample struct {
	Observations   []severity.Observation // in ascending order of Loss; shared, not to be changed
	Reconciliation Reconciliation
}

// Select applies a selection to a book: the observations of the claims used,
// and the account of all that were not. A claim is left out for the first
// reason that applies, in the order in which the reconciliation lists them, so
// that the reasons add up.
func Select(book *Book, selection Selection) Sample {
	losses := book.losses(selection.Amount)
	verdicts, counts := judge(book, selection, losses)

	return Sample{
		Observations:   losses.chosen(verdicts, counts[inUse].Rows),
		Reconciliation: reconcile(book, selection, counts),
	}
}

// verdict says why a claim is not used, in the order in which the reasons
// apply.
type verdict uint8

const (
	inUse verdict = iota
	otherBusiness
	otherSegment
	noLossDate
	outsideDates
	otherStatus
	firstProblem // firstProblem + p: the amounts give no observation, for Problem p
)

const verdicts = int(firstProblem) + int(problems)

func (v verdict) reason() string {
	switch v {
	case otherBusiness:
		return "line of business not selected"
	case otherSegment:
		return "segment not selected"
	case noLossDate:
		return "loss date not stated"
	case outsideDates:
		return "loss date outside the range"
	case otherStatus:
		return "status not selected"
	}
	return Problem(v - firstProblem).String()
}

func judge(book *Book, s Selection, losses *losses) ([]verdict, []Line) {
	business := chosen(book.Businesses, s.Businesses)
	segment := chosen(book.Segments, s.Segments)
	var status [256]bool
	for code := range status {
		status[code] = len(s.Statuses) == 0 || slices.Contains(s.Statuses, Status(code))
	}
	byDate := s.LossFrom != 0 || s.LossTo != 0
	last := s.LossTo
	if last == 0 {
		last = 1<<31 - 1
	}

	out := make([]verdict, book.Len())
	halves := [2][]Line{make([]Line, verdicts), make([]Line, verdicts)}
	inParallel(len(out), func(half, from, to int) {
		counts := halves[half]
		for i := from; i < to; i++ {
			var v verdict
			switch date := book.LossDate[i]; {
			case !business[book.Business[i]]:
				v = otherBusiness
			case !segment[book.Segment[i]]:
				v = otherSegment
			case byDate && date == 0:
				v = noLossDate
			case byDate && (date < s.LossFrom || date > last):
				v = outsideDates
			case !status[book.Status[i]]:
				v = otherStatus
			case losses.problem[i] != NoProblem:
				v = firstProblem + verdict(losses.problem[i])
			}
			out[i] = v
			counts[v].Rows++
			counts[v].Amount += book.amount(s.Amount, i)
		}
	})
	for v := range verdicts {
		halves[0][v].Rows += halves[1][v].Rows
		halves[0][v].Amount += halves[1][v].Amount
	}
	return out, halves[0]
}

// chosen marks the codes of a dictionary that a selection names.
func chosen(names, selected []string) []bool {
	marks := make([]bool, max(len(names), 1))
	for code := range marks {
		marks[code] = len(selected) == 0 || code < len(names) && slices.Contains(selected, names[code])
	}
	return marks
}

func reconcile(book *Book, s Selection, counts []Line) Reconciliation {
	var r Reconciliation
	for _, batch := range book.Batches {
		line := Line{Rows: batch.Superseded.Rows, Amount: batch.Superseded.Paid}
		if s.Amount == IncurredAmount {
			line.Amount += batch.Superseded.Outstanding
		}
		r.exclude("valued again in a later batch: "+batch.Name, line)
	}
	for v := otherBusiness; int(v) < len(counts); v++ {
		r.exclude(v.reason(), counts[v])
	}
	r.Used = counts[inUse]
	r.Read = r.Used
	for _, e := range r.Excluded {
		r.Read.Rows += e.Rows
		r.Read.Amount += e.Amount
	}
	return r
}

func (r *Reconciliation) exclude(reason string, line Line) {
	if line.Rows > 0 {
		r.Excluded = append(r.Excluded, Exclusion{Reason: reason, Line: line})
	}
}

// amount is the claim's loss amount in minor units, as in the extract.
func (b *Book) amount(field AmountField, i int) int64 {
	if field == IncurredAmount {
		return b.Paid[i] + b.Outstanding[i]
	}
	return b.Paid[i]
}
