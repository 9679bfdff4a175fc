package evidence

import (
	"math/bits"
	"sync"
	"sync/atomic"
)

// sortKeys sorts the keys ascending and the weights, unless nil, along with
// them. The order of equal keys is that of the input, so the result does not
// depend on how the work is shared out.
func sortKeys(keys []uint64, weights []float64) {
	spare := make([]uint64, len(keys))
	var spareWeights []float64
	if weights != nil {
		spareWeights = make([]float64, len(keys))
	}
	a, b := column{keys, weights}, column{spare, spareWeights}
	if len(keys) < 1<<14 {
		sortColumn(a, b, false)
		return
	}
	bounds := scatter(a, b)
	var next atomic.Int64
	var wait sync.WaitGroup
	for range workers {
		wait.Go(func() {
			for {
				i := int(next.Add(1)) - 1
				if i+1 >= len(bounds) {
					return
				}
				lo, hi := bounds[i], bounds[i+1]
				sortColumn(b.slice(lo, hi), a.slice(lo, hi), true)
			}
		})
	}
	wait.Wait()
}

type column struct {
	keys    []uint64
	weights []float64
}

func (c column) slice(lo, hi int) column {
	s := column{keys: c.keys[lo:hi]}
	if c.weights != nil {
		s.weights = c.weights[lo:hi]
	}
	return s
}

// digit is the lowest bit of the radix bits that hold the highest difference
// between the keys; all is false when the keys are equal.
func digit(keys []uint64, radix int) (low int, all bool) {
	or, and := uint64(0), ^uint64(0)
	for _, k := range keys {
		or |= k
		and &= k
	}
	high := bits.Len64(or ^ and)
	return max(high-radix, 0), high > 0
}

const (
	wide   = 12 // bits of the first, shared pass
	narrow = 8  // bits of the passes within
)

// scatter moves the rows of a into b, in the order of the leading bits, and
// gives the bounds of the buckets.
func scatter(a, b column) []int {
	low, _ := digit(a.keys, wide)
	size := (len(a.keys) + workers - 1) / workers
	part := func(w int) (int, int) {
		return min(w*size, len(a.keys)), min((w+1)*size, len(a.keys))
	}
	var counts [workers][1 << wide]int
	var wait sync.WaitGroup
	for w := range workers {
		wait.Go(func() {
			lo, hi := part(w)
			for _, k := range a.keys[lo:hi] {
				counts[w][k>>low&(1<<wide-1)]++
			}
		})
	}
	wait.Wait()
	bounds := make([]int, 0, 1<<wide+1)
	at := 0
	for d := range 1 << wide {
		start := at
		for w := range workers {
			at, counts[w][d] = at+counts[w][d], at
		}
		if at > start {
			bounds = append(bounds, start)
		}
	}
	bounds = append(bounds, at)
	for w := range workers {
		wait.Go(func() {
			lo, hi := part(w)
			for i := lo; i < hi; i++ {
				k := a.keys[i]
				d := k >> low & (1<<wide - 1)
				to := counts[w][d]
				counts[w][d] = to + 1
				b.keys[to] = k
				if a.weights != nil {
					b.weights[to] = a.weights[i]
				}
			}
		})
	}
	wait.Wait()
	return bounds
}

// sortColumn sorts a, using b of the same length; the result is left in b when
// inB, otherwise in a.
func sortColumn(a, b column, inB bool) {
	if len(a.keys) <= 40 {
		insertion(a)
		if inB {
			copy(b.keys, a.keys)
			copy(b.weights, a.weights)
		}
		return
	}
	low, differ := digit(a.keys, narrow)
	if !differ {
		if inB {
			copy(b.keys, a.keys)
			copy(b.weights, a.weights)
		}
		return
	}
	var ends [1<<narrow + 1]int32
	for _, k := range a.keys {
		ends[k>>low&(1<<narrow-1)+1]++
	}
	for d := range 1 << narrow {
		ends[d+1] += ends[d]
	}
	starts := ends
	for i, k := range a.keys {
		d := k >> low & (1<<narrow - 1)
		b.keys[ends[d]] = k
		if a.weights != nil {
			b.weights[ends[d]] = a.weights[i]
		}
		ends[d]++
	}
	for d := range 1 << narrow {
		if lo, hi := int(starts[d]), int(starts[d+1]); lo < hi {
			sortColumn(b.slice(lo, hi), a.slice(lo, hi), !inB)
		}
	}
}

func insertion(c column) {
	for i := 1; i < len(c.keys); i++ {
		k := c.keys[i]
		j := i
		if c.weights == nil {
			for ; j > 0 && c.keys[j-1] > k; j-- {
				c.keys[j] = c.keys[j-1]
			}
			c.keys[j] = k
			continue
		}
		w := c.weights[i]
		for ; j > 0 && c.keys[j-1] > k; j-- {
			c.keys[j], c.weights[j] = c.keys[j-1], c.weights[j-1]
		}
		c.keys[j], c.weights[j] = k, w
	}
}
