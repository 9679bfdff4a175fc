package claims

import (
	"math/big"
	"strconv"
	"testing"
)

// TestAmountIsTheNearestDouble holds Float against strconv, which rounds
// correctly, and String against exact rational arithmetic.
func TestAmountIsTheNearestDouble(t *testing.T) {
	for _, text := range []string{
		"0", "0.00", "1234.50", "-1234.5", "395.23", "1591.6403915565222", "3.183e-05", "7.234972695232002e-05",
		"4.70926862209876e-39", "6.5232839643662816e-55", "2.5e-310", "4542235859047.668", "123456789012345678",
		"0.1", "0.30000000000000004", "9007199254740993", "1e12", "1.5E+3", "999999999999999999", "-0.000000000000000001",
		"1234.5600000000000000000000000", "0.0000000000000000000000000000", "1e-22", "1e-23", "123456789012345678e-40",
	} {
		a, err := ParseAmount(text)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatal(err)
		}
		if got := a.Float(); got != want {
			t.Errorf("%s is %v, want the nearest double %v", text, got, want)
		}
		exact, ok := new(big.Rat).SetString(text)
		if !ok {
			t.Fatal(text)
		}
		if back, ok := new(big.Rat).SetString(a.String()); !ok || back.Cmp(exact) != 0 {
			t.Errorf("%s is written %s", text, a)
		}
	}
	for _, text := range []string{"", ".", "1,5", "1e", "1e400", "1e-400", "0x10", "NaN", "1234567890123456789", "12345678901234567.891",
		"1e18", "--1", "1.2.3", "1.2e1.5", "e5", "+", "1 2", "1_000", "Inf", "\u0661"} {
		if a, err := ParseAmount(text); err == nil {
			t.Errorf("%q is read as %v", text, a)
		}
	}
}

func TestTotalIsExact(t *testing.T) {
	var total Total
	exact := new(big.Rat)
	for _, text := range []string{"0.1", "0.2", "-0.3", "9223372036854775.80", "9223372036854775.80", "1e-39", "123456789.125", "4e17", "4e17", "4e17"} {
		a, err := ParseAmount(text)
		if err != nil {
			t.Fatal(err)
		}
		total.Add(a)
		r, _ := new(big.Rat).SetString(text)
		exact.Add(exact, r)
	}
	if got, ok := new(big.Rat).SetString(total.String()); !ok || got.Cmp(exact) != 0 {
		t.Errorf("total %s, want %s", total.String(), exact.FloatString(45))
	}
}

// TestSumsOfAmounts holds Plus, Minus and MinorUnits against exact rational
// arithmetic, and checks that they own up where 18 digits do not suffice.
func TestSumsOfAmounts(t *testing.T) {
	rational := func(text string) *big.Rat {
		r, ok := new(big.Rat).SetString(text)
		if !ok {
			t.Fatal(text)
		}
		return r
	}
	for _, c := range []struct {
		a, b  string
		exact bool // of the sum
	}{
		{"1234.50", "0.005", true}, {"-3", "2.999", true}, {"0", "0", true}, {"999999999999999998", "1", true},
		{"999999999999999999", "1", false}, {"-999999999999999999", "-1", false}, {"1234.5678901234567", "1000000", false},
		{"1e17", "0.01", false}, {"1e-340", "1", false},
	} {
		a, err := ParseAmount(c.a)
		if err != nil {
			t.Fatal(err)
		}
		b, err := ParseAmount(c.b)
		if err != nil {
			t.Fatal(err)
		}
		sum, exact := a.Plus(b)
		if exact != c.exact || exact && rational(sum.String()).Cmp(new(big.Rat).Add(rational(c.a), rational(c.b))) != 0 {
			t.Errorf("%s + %s = %s, exact %v", c.a, c.b, sum, exact)
		}
		rest, exact := a.Minus(b)
		if exact && rational(rest.String()).Cmp(new(big.Rat).Sub(rational(c.a), rational(c.b))) != 0 {
			t.Errorf("%s - %s = %s", c.a, c.b, rest)
		}
		var total Total
		total.Add(a)
		if !total.Equals(a) || total.Equals(Amount{a.Units + 1, a.Decimals}) {
			t.Errorf("a total of %s alone is told apart wrongly", c.a)
		}
	}
	for _, c := range []struct {
		text     string
		decimals int
		units    int64
		whole    bool
	}{
		{"12.30", 2, 1230, true}, {"12.3", 0, 0, false}, {"12.300", 1, 123, true}, {"12", 3, 12000, true}, {"-0.01", 2, -1, true},
		{"999999999999999999", 2, 0, false}, {"0.001", 2, 0, false}, {"0", 3, 0, true},
	} {
		a, err := ParseAmount(c.text)
		if err != nil {
			t.Fatal(err)
		}
		if units, whole := a.MinorUnits(c.decimals); whole != c.whole || whole && units != c.units {
			t.Errorf("%s in units of 1e-%d: %d, %v", c.text, c.decimals, units, whole)
		}
	}
}
