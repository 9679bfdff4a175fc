package chart

import (
	"math"
	"strconv"
	"strings"
)

// axis maps values to coordinates, linearly or by logarithm.
type axis struct {
	from, to float64 // values at the ends
	log      bool

	origin, start, perUnit float64
}

// newAxis maps the values from and to to the coordinates at and end.
func newAxis(from, to, at, end float64, log bool) axis {
	a := axis{from: from, to: to, log: log, origin: from, start: at, perUnit: (end - at) / (to - from)}
	if log {
		a.origin, a.perUnit = math.Log(from), (end-at)/math.Log(to/from)
	}
	return a
}

func (a axis) place(v float64) float64 {
	if a.log {
		v = math.Log(v)
	}
	return a.start + (v-a.origin)*a.perUnit
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

// Short writes a value to three digits in few characters: 2.5k, 10m, 0.001.
func Short(v float64) string { return string(appendShort(nil, v)) }

func appendShort(to []byte, v float64) []byte {
	if v < 0 {
		to, v = append(to, '-'), -v
	}
	for _, u := range [...]struct {
		unit  float64
		label string
	}{{1e12, "tn"}, {1e9, "bn"}, {1e6, "m"}, {1e3, "k"}, {1, ""}} {
		if v >= u.unit*0.9995 {
			return append(appendThree(to, v/u.unit), u.label...)
		}
	}
	if v != 0 && v < 1e-4 {
		short := strconv.FormatFloat(v, 'g', 2, 64)
		return append(to, strings.Replace(short, "e-0", "e-", 1)...)
	}
	// Below one the three digits stand behind zeros.
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 3, 64), 64)
	if err != nil {
		rounded = v
	}
	return strconv.AppendFloat(to, rounded, 'f', -1, 64)
}

// appendThree writes a value from one on to three digits.
func appendThree(to []byte, v float64) []byte {
	hundredths := int64(math.Round(v * 100))
	switch {
	case v >= 99.95:
		hundredths = 100 * int64(math.Round(v))
	case v >= 9.995:
		hundredths = 10 * int64(math.Round(v*10))
	}
	if v >= 1e6 {
		return strconv.AppendFloat(to, v, 'g', 3, 64) // beyond the largest unit
	}
	to = strconv.AppendInt(to, hundredths/100, 10)
	if rest := hundredths % 100; rest != 0 {
		to = append(to, '.', byte('0'+rest/10))
		if rest%10 != 0 {
			to = append(to, byte('0'+rest%10))
		}
	}
	return to
}
