package special

import (
	"fmt"
	"math"
	"testing"
)

// columnsOf names every column of the tables of special functions with the
// value of this package.
func columnsOf(a, z float64) map[string]float64 {
	u, l := LogUpperJet(a, z), LogLowerJet(a, z)
	return map[string]float64{
		"ln_gamma_a": LogGamma(a), "digamma_a": Digamma(a), "trigamma_a": Trigamma(a),
		"lnQ": u.Log, "dlnQ_da": u.DA, "dlnQ_dz": u.DZ,
		"d2lnQ_da2": u.DAA, "d2lnQ_dadz": u.DAZ, "d2lnQ_dz2": u.DZZ,
		"lnP": l.Log, "dlnP_da": l.DA, "dlnP_dz": l.DZ,
		"d2lnP_da2": l.DAA, "d2lnP_dadz": l.DAZ, "d2lnP_dz2": l.DZZ,
	}
}

// TestTables compares with testdata/special: special.csv and random.csv and
// switches.csv, the last on both sides of every change of algorithm. The
// contract is 1e-12; the tolerances are what is reached, with some room for
// processors that fuse multiplications otherwise. They hold strictly, rows
// included where one unit in the last place of a or z moves the answer by more
// (the references belong to the float64 arguments exactly): no row is excused
// for its conditioning, none of the derivatives for a zero nearby.
func TestTables(t *testing.T) {
	for _, c := range []struct {
		file      string
		rows      int
		tolerance float64
	}{
		{"special.csv", 321, 3e-14},
		{"random.csv", 2000, 6e-14},
		{"switches.csv", 700, 6e-14},
	} {
		t.Run(c.file, func(t *testing.T) {
			tb := readTable(t, c.file, c.rows)
			e := newErrors()
			for i := range tb.rows {
				a, z := tb.number(t, i, "a"), tb.number(t, i, "z")
				where := fmt.Sprintf("a=%v z=%v (%s)", a, z, tb.text(t, i, "tag"))
				for column, got := range columnsOf(a, z) {
					if tb.has(column) {
						e.compare(t, column, where, got, tb.number(t, i, column), c.tolerance)
					}
				}
				// the value alone takes shorter paths
				e.compare(t, "lnQ alone", where, LogUpper(a, z), tb.number(t, i, "lnQ"), c.tolerance)
				e.compare(t, "lnP alone", where, LogLower(a, z), tb.number(t, i, "lnP"), c.tolerance)
			}
			if len(e.worst) < 12 {
				t.Fatalf("only %d columns were compared", len(e.worst))
			}
			e.report(t)
		})
	}
}

// TestRegions reports and bounds the error by region of the shape, all
// functions and both random tables together.
func TestRegions(t *testing.T) {
	e := newErrors()
	for _, file := range []string{"random.csv", "switches.csv"} {
		tb := readTable(t, file, 700)
		for i := range tb.rows {
			a, z := tb.number(t, i, "a"), tb.number(t, i, "z")
			region := "a in [1e7, 1e9]"
			for _, r := range []struct {
				below float64
				name  string
			}{{1e-4, "a in [1e-30, 1e-4)"}, {0.25, "a in [1e-4, 0.25)"}, {1, "a in [0.25, 1)"}, {10, "a in [1, 10)"}, {150, "a in [10, 150)"}, {1e7, "a in [150, 1e7)"}} {
				if a < r.below {
					region = r.name
					break
				}
			}
			where := fmt.Sprintf("a=%v z=%v", a, z)
			for column, got := range columnsOf(a, z) {
				switch column {
				case "ln_gamma_a", "digamma_a", "trigamma_a":
					continue
				}
				want := tb.number(t, i, column)
				ordinary := math.Abs(want) > 1e-100
				name := region
				if !ordinary {
					name += ", results below 1e-100"
				}
				e.compare(t, name, column+" at "+where, got, want, 6e-14)
			}
		}
	}
	e.report(t)
}

// TestGammaTable compares ln Γ, its derivatives and the two differences that
// cancel at large a with testdata/special/gamma.csv.
func TestGammaTable(t *testing.T) {
	tb := readTable(t, "gamma.csv", 460)
	e := newErrors()
	for i := range tb.rows {
		a := tb.number(t, i, "a")
		where := fmt.Sprintf("a=%v", a)
		for column, got := range map[string]float64{
			"ln_gamma_a": LogGamma(a), "digamma_a": Digamma(a), "trigamma_a": Trigamma(a),
			"stirling_correction": StirlingCorrection(a), "log_minus_digamma": LogMinusDigamma(a),
		} {
			e.compare(t, column, where, got, tb.number(t, i, column), 1e-14)
		}
	}
	e.report(t)
}

// TestDefectTable compares x - ln(1+x) with testdata/special/defect.csv.
func TestDefectTable(t *testing.T) {
	tb := readTable(t, "defect.csv", 160)
	e := newErrors()
	for i := range tb.rows {
		x := tb.number(t, i, "x")
		e.compare(t, "defect", fmt.Sprintf("x=%v", x), LogDefect(x), tb.number(t, i, "defect"), 2e-15)
	}
	e.report(t)
}

// TestUnnormalisedTable compares ln Γ(a,z) for a of either sign with
// testdata/special/negative.csv. Its values and first derivative in a pass
// through zero, and there one unit in the last place of z moves them by
// h·z·ε; that is added to the tolerance. The largest errors are those of the
// variance at -10 < a < 0 just above z = 1.
func TestUnnormalisedTable(t *testing.T) {
	tb := readTable(t, "negative.csv", 490)
	e := newErrors()
	for i := range tb.rows {
		a, z := tb.number(t, i, "a"), tb.number(t, i, "z")
		where := fmt.Sprintf("a=%v z=%v", a, z)
		j := LogUpperUnnormalisedJet(a, z)
		h := -tb.number(t, i, "dz")
		for column, got := range map[string]float64{
			"ln_upper": j.Log, "da": j.DA, "dz": j.DZ, "daa": j.DAA, "daz": j.DAZ, "dzz": j.DZZ,
		} {
			want := tb.number(t, i, column)
			tolerance := 1e-12
			switch column {
			case "ln_upper":
				tolerance += 2.3e-16 * h * z / math.Abs(want)
			case "da":
				tolerance += 2.3e-16 * tb.number(t, i, "daz") * z / math.Abs(want)
			}
			e.compare(t, column, where, got, want, tolerance)
		}
		if a == 0 {
			e.compare(t, "ln E1", where, LogExponentialIntegral(z), tb.number(t, i, "ln_upper"), 1e-13)
		}
		if got := LogUpperUnnormalised(a, z); got != j.Log {
			t.Errorf("ln Γ(%g,%g): %g alone, %g with derivatives", a, z, got, j.Log)
		}
	}
	e.report(t)
}
