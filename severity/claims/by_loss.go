package claims

import (
	"math"

	"spillway/severity"
)

// byLoss lists the claims without a problem in ascending order of loss, then
// of index: a radix sort of the bits of the losses, whose order is that of the
// losses since these are above zero.
func byLoss(observations []severity.Observation, problem []Problem) []int32 {
	type entry struct {
		key   uint64
		index int32
	}
	var from []entry
	for i := range observations {
		if problem[i] == NoProblem {
			from = append(from, entry{math.Float64bits(observations[i].Loss), int32(i)})
		}
	}
	to := make([]entry, len(from))
	const digit = 11
	var start [1 << digit]int
	for shift := 0; shift < 64; shift += digit {
		clear(start[:])
		for i := range from {
			start[from[i].key>>shift&(1<<digit-1)]++
		}
		sum, one := 0, false
		for d, n := range start {
			one = one || n == len(from)
			start[d], sum = sum, sum+n
		}
		if one {
			continue // all alike in these bits
		}
		for i := range from {
			d := from[i].key >> shift & (1<<digit - 1)
			to[start[d]] = from[i]
			start[d]++
		}
		from, to = to, from
	}
	order := make([]int32, len(from))
	for i := range from {
		order[i] = from[i].index
	}
	return order
}
