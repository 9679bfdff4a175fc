package special

import (
	"fmt"
	"math"
	"testing"
)

// TestQuantileTable compares ln z with testdata/special/quantile.csv.
func TestQuantileTable(t *testing.T) {
	tb := readTable(t, "quantile.csv", 180)
	e := newErrors()
	for i := range tb.rows {
		a, p := tb.number(t, i, "a"), tb.number(t, i, "prob")
		tail := tb.text(t, i, "tail")
		inverse := InverseLower
		if tail == "q" {
			inverse = InverseUpper
		}
		e.compare(t, "ln z from "+tail, fmt.Sprintf("a=%v %s=%v", a, tail, p),
			inverse(a, math.Log(p)), tb.number(t, i, "ln_z"), 1e-13)
	}
	e.report(t)
}

// TestInverseOfTables recovers ln z from the references ln P and ln Q of
// random.csv, whichever is smaller. A unit in the last place of the given
// logarithm moves ln z by ε |ln P| / (z ∂ln P/∂z), and one of z itself, through
// the reference, by ε: two of the first and one of the second are added to the
// relative tolerance of 1e-13.
func TestInverseOfTables(t *testing.T) {
	tb := readTable(t, "random.csv", 2000)
	e := newErrors()
	compared := 0
	for i := range tb.rows {
		a, z := tb.number(t, i, "a"), tb.number(t, i, "z")
		lnP, lnQ := tb.number(t, i, "lnP"), tb.number(t, i, "lnQ")
		log, slope, inverse := lnP, tb.number(t, i, "dlnP_dz"), InverseLower
		if lnQ < lnP {
			log, slope, inverse = lnQ, tb.number(t, i, "dlnQ_dz"), InverseUpper
		}
		compared++
		want := math.Log(z)
		const ulp = 2.3e-16
		tolerance := 1e-13 + ulp*(1+2*math.Abs(log/(z*slope)))/math.Abs(want)
		e.compare(t, "ln z", fmt.Sprintf("a=%v z=%v", a, z), inverse(a, log), want, tolerance)
	}
	if compared < 2000 {
		t.Fatalf("compared %d rows", compared)
	}
	e.report(t)
}

// TestInverseFarOut inverts its own tails, to the conditioning, where no table
// reaches: the identity is the check.
func TestInverseFarOut(t *testing.T) {
	for _, a := range []float64{1e-300, 1e-20, 1e-8, 1e-3, 0.3, 1, 1.5, 9.9, 10, 77, 1e3, 1e6, 1e9, 1e15, 1e100} {
		for _, log := range []float64{-1e-300, -1e-30, -1e-9, -0.01, -0.5, -0.69, -0.7, -2, -20, -700, -1e4, -1e6} {
			x := InverseLower(a, log)
			// above 1e9 a unit in the last place of ln z is more than a deviation
			if z := math.Exp(x); a <= 1e9 && z > 1e-300 && z < 1e300 && log < -1e-9 {
				slope := z * LogLowerJet(a, z).DZ
				if got := LogLower(a, z); !(math.Abs(got-log) <= 1e-12*math.Abs(log)+1e-15*slope*(1+math.Abs(x))) {
					t.Errorf("ln P(%g, z) = %g: ln z = %g gives %g", a, log, x, got)
				}
			}
			if math.IsNaN(x) {
				t.Errorf("InverseLower(%g, %g) is NaN", a, log)
			}
			x = InverseUpper(a, log)
			if z := math.Exp(x); a <= 1e9 && z > 1e-300 && z < 1e300 {
				slope := -z * LogUpperJet(a, z).DZ
				if got := LogUpper(a, z); !(math.Abs(got-log) <= 1e-12*math.Abs(log)+1e-15*slope*(1+math.Abs(x))) {
					t.Errorf("ln Q(%g, z) = %g: ln z = %g gives %g", a, log, x, got)
				}
			}
			if math.IsNaN(x) {
				t.Errorf("InverseUpper(%g, %g) is NaN", a, log)
			}
		}
	}
}

func TestInverseEnds(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"P = 0", InverseLower(2, -inf), -inf},
		{"P = 1", InverseLower(2, 0), inf},
		{"Q = 0", InverseUpper(2, -inf), inf},
		{"Q = 1", InverseUpper(2, 0), -inf},
	} {
		if c.got != c.want {
			t.Errorf("%s: ln z = %g, expected %g", c.name, c.got, c.want)
		}
	}
	for _, x := range []float64{InverseLower(2, 0.1), InverseUpper(2, 0.1), InverseLower(0, -1), InverseUpper(-1, -1),
		InverseLower(inf, -1), InverseUpper(math.NaN(), -1), InverseLower(1, math.NaN())} {
		if !math.IsNaN(x) {
			t.Errorf("outside the domain: %g, expected NaN", x)
		}
	}
}
