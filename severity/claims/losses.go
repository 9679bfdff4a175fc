package claims

import (
	"math"
	"slices"
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
	inParallel(n, func(from, to int) {
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
	for i, problem := range l.problem {
		if problem == NoProblem {
			l.order = append(l.order, int32(i))
		}
	}
	sortByLoss(l.order, observations)
	l.observations = make([]severity.Observation, len(l.order))
	for k, i := range l.order {
		l.observations[k] = observations[i]
	}
	return l
}

// sortByLoss orders claim indices by ascending loss, then by index, so that
// the order is the same every time.
func sortByLoss(order []int32, observations []severity.Observation) {
	compare := func(a, b int32) int {
		switch x, y := observations[a].Loss, observations[b].Loss; {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return int(a - b)
	}
	half := len(order) / 2
	inParallel(2, func(from, to int) {
		for part := from; part < to; part++ {
			slices.SortFunc(order[part*half:half+part*(len(order)-half)], compare)
		}
	})
	merged := make([]int32, 0, len(order))
	a, b := order[:half], order[half:]
	for len(a) > 0 && len(b) > 0 {
		if compare(a[0], b[0]) < 0 {
			merged, a = append(merged, a[0]), a[1:]
		} else {
			merged, b = append(merged, b[0]), b[1:]
		}
	}
	copy(order, append(append(merged, a...), b...))
}

// inParallel splits [0, n) in two.
func inParallel(n int, work func(from, to int)) {
	var wait sync.WaitGroup
	wait.Go(func() { work(0, n/2) })
	work(n/2, n)
	wait.Wait()
}
