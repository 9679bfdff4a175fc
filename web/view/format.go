// Package view renders pages from page structs. It is the only place where a
// number becomes text.
package view

import (
	"math"
	"strconv"
	"strings"

	"spillway/severity"
	"spillway/severity/claims"
)

// none stands where there is no figure.
const none = "–"

// Count writes a whole number with thin spaces between thousands.
func Count(n int) string { return grouped(strconv.Itoa(n)) }

// Money writes an amount: whole units from a thousand on, decimals below.
func Money(v float64) string {
	switch size := math.Abs(v); {
	case math.IsNaN(v):
		return none
	case math.IsInf(v, 1):
		return "unlimited"
	case math.IsInf(v, -1):
		return none
	case size >= 1e15:
		return strconv.FormatFloat(v, 'e', 5, 64)
	case size >= 1000:
		return grouped(strconv.FormatFloat(v, 'f', 0, 64))
	case size >= 0.01 || v == 0:
		return strconv.FormatFloat(v, 'f', 2, 64)
	}
	return strconv.FormatFloat(v, 'g', 3, 64)
}

// Units writes an exact amount of minor units.
func Units(units int64, decimals int8) string {
	text := claims.Amount{Units: units, Decimals: int16(decimals)}.String()
	whole, rest, _ := strings.Cut(text, ".")
	if rest != "" {
		return grouped(whole) + "." + rest
	}
	return grouped(whole)
}

// Exact writes decimal text with thin spaces between thousands.
func Exact(text string) string {
	whole, rest, found := strings.Cut(text, ".")
	if found {
		return grouped(whole) + "." + rest
	}
	return grouped(whole)
}

// Figure writes a dimensionless number to six significant digits.
func Figure(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return none
	}
	if size := math.Abs(v); size != 0 && (size < 1e-4 || size >= 1e7) {
		return strconv.FormatFloat(v, 'e', 3, 64)
	}
	return strconv.FormatFloat(v, 'g', 6, 64)
}

// Small writes a number near zero to two digits.
func Small(v float64) string {
	if math.IsNaN(v) {
		return none
	}
	return strconv.FormatFloat(v, 'g', 2, 64)
}

// Percent writes a probability or share in percent.
func Percent(p float64) string {
	if math.IsNaN(p) || math.IsInf(p, 0) {
		return none
	}
	switch v := 100 * p; {
	case v == 0 || v == 100:
		return strconv.FormatFloat(v, 'f', 0, 64) + "%"
	case v >= 99.995, v < 0.005:
		return strconv.FormatFloat(v, 'g', 3, 64) + "%"
	case v >= 10:
		return strconv.FormatFloat(v, 'f', 1, 64) + "%"
	default:
		return strconv.FormatFloat(v, 'f', 2, 64) + "%"
	}
}

// Level writes a probability in percent as short as it is exact: 99.5%.
func Level(p float64) string {
	return strconv.FormatFloat(math.Round(p*1e10)/1e8, 'f', -1, 64) + "%"
}

// Between writes an interval with one of the other formats.
func Between(i severity.Interval, write func(float64) string) string {
	if math.IsNaN(i.Lower) && math.IsNaN(i.Upper) || i.Method == "" {
		return ""
	}
	upper := none
	switch {
	case math.IsInf(i.Upper, 1):
		upper = "no end"
	case !math.IsNaN(i.Upper):
		upper = write(i.Upper)
	}
	return write(i.Lower) + " to " + upper
}

// Field writes a number into a form field, so that it reads back the same.
func Field(v float64) string {
	if v == 0 || math.IsInf(v, 0) || math.IsNaN(v) {
		return ""
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

// Bytes writes a file size.
func Bytes(n int64) string {
	switch {
	case n >= 1<<20:
		return strconv.FormatFloat(float64(n)/(1<<20), 'f', 1, 64) + " MiB"
	case n >= 1<<10:
		return strconv.FormatFloat(float64(n)/(1<<10), 'f', 1, 64) + " KiB"
	}
	return strconv.FormatInt(n, 10) + " bytes"
}

// Moment writes a recorded time to the minute, as it was recorded, in UTC.
func Moment(rfc3339 string) string {
	if len(rfc3339) < 16 {
		return rfc3339
	}
	return rfc3339[:10] + " " + rfc3339[11:16] + " UTC"
}

// Digest shortens a SHA-256 for tables; the full one stands in the title.
func Digest(sha256 string) string {
	if len(sha256) <= 12 {
		return sha256
	}
	return sha256[:12] + "…"
}

// grouped puts narrow no-break spaces between thousands.
func grouped(digits string) string {
	sign := ""
	if strings.HasPrefix(digits, "-") {
		sign, digits = "−", digits[1:]
	}
	if len(digits) <= 3 {
		return sign + digits
	}
	var b strings.Builder
	b.WriteString(sign)
	for i, c := range digits {
		if i > 0 && (len(digits)-i)%3 == 0 {
			b.WriteString("\u202f")
		}
		b.WriteRune(c)
	}
	return b.String()
}
