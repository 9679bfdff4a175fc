package chart

import (
	"math"
	"strconv"
	"strings"
)

// axis maps values to coordinates, linearly or by logarithm.
type axis struct {
	from, to float64 // values at the ends
	at, end  float64 // coordinates of the ends
	log      bool
}

func (a axis) place(v float64) float64 {
	from, to := a.from, a.to
	if a.log {
		from, to, v = math.Log(from), math.Log(to), math.Log(v)
	}
	return a.at + (v-from)/(to-from)*(a.end-a.at)
}

type tick struct {
	value float64
	label string
}

// ticks are about n round values within the axis.
func (a axis) ticks(n int) []tick {
	if a.log {
		return logTicks(a.from, a.to, n)
	}
	return linearTicks(a.from, a.to, n)
}

// linearTicks are multiples of 1, 2 or 5 times a power of ten.
func linearTicks(from, to float64, n int) []tick {
	if !(to > from) || n < 1 {
		return nil
	}
	raw := (to - from) / float64(n)
	unit := math.Pow(10, math.Floor(math.Log10(raw)))
	step := 10 * unit
	for _, m := range []float64{1, 2, 5} {
		if m*unit >= raw*0.999 {
			step = m * unit
			break
		}
	}
	var ticks []tick
	for k := math.Ceil(from/step - 1e-9); k*step <= to*(1+1e-12)+1e-12*step; k++ {
		v := k*step + 0 // no minus zero
		ticks = append(ticks, tick{v, Short(v)})
	}
	return ticks
}

// logTicks are powers of ten, with 2 and 5 between them where there are few,
// thinned where there are many.
func logTicks(from, to float64, n int) []tick {
	if !(from > 0) || !(to > from) || n < 1 {
		return nil
	}
	lo, hi := math.Floor(math.Log10(from)), math.Ceil(math.Log10(to))
	multiples := []float64{1}
	stride := math.Max(1, math.Ceil((hi-lo)/float64(n)))
	if hi-lo <= float64(n)/2 {
		multiples = []float64{1, 2, 5}
	}
	var ticks []tick
	for e := lo; e <= hi; e += stride {
		for _, m := range multiples {
			if v := m * math.Pow(10, e); v >= from*(1-1e-9) && v <= to*(1+1e-9) {
				ticks = append(ticks, tick{v, Short(v)})
			}
		}
	}
	return ticks
}

// Short writes a value in few characters: 2.5k, 10m, 0.001.
func Short(v float64) string {
	size := math.Abs(v)
	for _, u := range []struct {
		unit  float64
		label string
	}{{1e12, "tn"}, {1e9, "bn"}, {1e6, "m"}, {1e3, "k"}} {
		if size >= u.unit*0.9995 {
			return trimmed(v/u.unit, 3) + u.label
		}
	}
	if size != 0 && size < 1e-4 {
		return strings.Replace(strconv.FormatFloat(v, 'g', 2, 64), "e-0", "e-", 1)
	}
	return trimmed(v, 3)
}

func trimmed(v float64, digits int) string {
	return strconv.FormatFloat(roundTo(v, digits), 'f', -1, 64)
}

func roundTo(v float64, digits int) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', digits, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}
