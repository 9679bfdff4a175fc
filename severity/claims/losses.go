package claims

import (
	"math"
	"sync"

	"spillway/severity"
)

// losses are the observations of all claims of a book by one amount field,
// in ascending order of loss. They depend on nothing that a selection
// changes, so a book makes them once.
type losses struct {
	order        []int32                // index of the claim; only claims that give an observation
	observations []severity.Observation // of order[k]
	problem      []Problem              // of every claim
}

type lossCache struct {
	once sync.Once
	made *losses
}

func (b *Book) losses(field AmountField) *losses {
	cache := &b.paidLosses
	if field == IncurredAmount {
		cache = &b.incurredLosses
	}
	cache.once.Do(func() { cache.made = b.makeLosses(field) })
	return cache.made
}

func (b *Book) makeLosses(field AmountField) *losses {
	n := b.Len()
	l := &losses{problem: make([]Problem, n)}
	observations := make([]severity.Observation, n)
	minor := math.Pow(10, float64(b.Decimals))
	money := func(units int64) float64 { return float64(units) / minor } // units below 2^53: one rounding
	inParallel(n, func(_, from, to int) {
		for i := from; i < to; i++ {
			terms := Terms{Type: b.Terms[i].DeductibleType(), Reached: b.Terms[i].Reached()}
			if d := b.Deductible[i]; d != NoTerm {
				terms.HasDeductible, terms.Deductible = true, money(d)
			}
			if u := b.Limit[i]; u != NoTerm {
				terms.HasLimit, terms.Limit = true, money(u)
			}
			basis := &b.Batches[b.Batch[i]].Basis
			o, _, problem := basis.GroundUp(money(b.amount(field, i)), terms)
			if b.Weight != nil {
				o.Weight = b.Weight[i]
			}
			observations[i], l.problem[i] = o, problem
		}
	})
	l.order = byLoss(observations, l.problem)
	l.observations = make([]severity.Observation, len(l.order))
	for k, i := range l.order {
		l.observations[k] = observations[i]
	}
	return l
}

// chosen are the observations of the claims in use, used in number.
func (l *losses) chosen(verdicts []verdict, used int) []severity.Observation {
	if used == len(l.observations) {
		return l.observations
	}
	list := make([]severity.Observation, used)
	// The first half's share tells where the second half begins.
	half := 0
	for _, i := range l.order[:len(l.order)/2] {
		if verdicts[i] == inUse {
			half++
		}
	}
	inParallel(len(l.order), func(part, from, to int) {
		at := part * half
		for k := from; k < to; k++ {
			if verdicts[l.order[k]] == inUse {
				list[at] = l.observations[k]
				at++
			}
		}
	})
	return list
}

// inParallel splits [0, n) into two halves, numbered 0 and 1.
func inParallel(n int, work func(half, from, to int)) {
	var wait sync.WaitGroup
	wait.Go(func() { work(0, 0, n/2) })
	work(1, n/2, n)
	wait.Wait()
}
