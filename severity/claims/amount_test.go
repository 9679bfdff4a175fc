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
		"0.1", "0.30000000000000004", "9007199254740993", "1e12", "1.5E+3",
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
	for _, text := range []string{"", ".", "1,5", "1e", "1e400", "1e-400", "0x10", "NaN", "1234567890123456789012", "--1", "1.2.3"} {
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
