package view

import (
	"math"
	"testing"

	"spillway/severity"
)

func TestFigures(t *testing.T) {
	const thin = "\u202f"
	for _, c := range []struct{ got, want string }{
		{Count(0), "0"}, {Count(999), "999"}, {Count(1234567), "1" + thin + "234" + thin + "567"},
		{Money(0), "0.00"}, {Money(12.345), "12.35"}, {Money(999.994), "999.99"}, {Money(1000.4), "1" + thin + "000"},
		{Money(0.001234), "0.00123"}, {Money(1.5e16), "1.50000e+16"}, {Money(math.NaN()), "–"}, {Money(math.Inf(1)), "unlimited"},
		{Money(-1234.4), "−1" + thin + "234"},
		{Units(-120000, 2), "−1" + thin + "200.00"}, {Units(5, 0), "5"}, {Units(7, 3), "0.007"},
		{Exact("221498.69"), "221" + thin + "498.69"},
		{Percent(0), "0%"}, {Percent(1), "100%"}, {Percent(0.1234), "12.3%"}, {Percent(0.01234), "1.23%"}, {Percent(1e-7), "1e-05%"}, {Percent(math.NaN()), "–"},
		{Level(0.995), "99.5%"}, {Level(0.5), "50%"}, {Level(0.999), "99.9%"},
		{Figure(1.28313394518), "1.28313"}, {Figure(4.0e9), "4.000e+09"}, {Figure(math.Inf(1)), "–"},
		{Field(25000), "25000"}, {Field(0.5), "0.5"}, {Field(math.Inf(1)), ""},
		{Bytes(12), "12 bytes"}, {Bytes(134873998), "128.6 MiB"},
		{Moment("2026-01-31T09:30:11Z"), "2026-01-31 09:30 UTC"},
		{Between(severity.Interval{Lower: 1, Upper: 2.5, Method: "m"}, Figure), "1 to 2.5"},
		{Between(severity.Interval{Lower: 0, Upper: math.Inf(1), Method: "m"}, Money), "0.00 to no end"},
		{Between(severity.Interval{Lower: math.NaN(), Upper: math.NaN()}, Money), ""},
	} {
		if c.got != c.want {
			t.Errorf("%q, want %q", c.got, c.want)
		}
	}
}
