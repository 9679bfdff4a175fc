package extract

import (
	"bytes"
	"errors"
	"unicode/utf8"

	"spillway/severity/claims"
)

// amountReader reads amounts in one style of marks.
type amountReader struct {
	decimal   byte
	thousands byte // 0 for none
	scratch   []byte
}

func newAmountReader(f Format) amountReader {
	r := amountReader{decimal: f.Decimal[0]}
	if f.Thousands != "" {
		r.thousands = f.Thousands[0]
	}
	return r
}

var (
	errNoNumber  = errors.New("not a number in this file's style")
	errThousands = errors.New("the marks of thousands stand out of place for this file's style")
)

// read turns a trimmed, non-empty cell into an amount: signs before or after,
// accountants' brackets, a currency sign or code at either end. scientific
// tells that the cell was in scientific notation.
func (r *amountReader) read(cell []byte) (a claims.Amount, scientific bool, err error) {
	if a, ok := plain(cell, r.decimal); ok {
		return a, false, nil
	}
	body, negative := unsigned(cell)
	r.scratch = r.scratch[:0]
	if negative {
		r.scratch = append(r.scratch, '-')
	}
	digits, group, groups := 0, 0, false // group: digits since the last mark of thousands
	for i := 0; i < len(body); {
		c, width := utf8.DecodeRune(body[i:])
		b := byte(0)
		switch {
		case c < utf8.RuneSelf:
			b = byte(c)
		case c == '\u00a0' || c == '\u202f' || c == '\u2009':
			b = ' '
		case c == '\u2019':
			b = '\''
		}
		i += width
		switch {
		case b >= '0' && b <= '9':
			r.scratch = append(r.scratch, b)
			digits++
			group++
		case b == r.decimal && b != 0:
			if groups && group != 3 {
				return a, false, errThousands
			}
			r.scratch = append(r.scratch, '.')
			groups = false
			for j, d := range body[i:] {
				if d < '0' || d > '9' {
					if (d == 'e' || d == 'E') && digits > 0 {
						return r.scientific(append(r.scratch, body[i+j:]...))
					}
					return a, false, errNoNumber
				}
				r.scratch = append(r.scratch, d)
				digits++
			}
			i = len(body)
		case r.thousands != 0 && b == r.thousands:
			if digits == 0 || group > 3 || groups && group != 3 {
				return a, false, errThousands
			}
			groups, group = true, 0
		case (b == 'e' || b == 'E') && digits > 0:
			return r.scientific(append(r.scratch, body[i-1:]...))
		default:
			return a, false, errNoNumber
		}
	}
	if groups && group != 3 {
		return a, false, errThousands
	}
	if digits == 0 {
		return a, false, errNoNumber
	}
	a, err = claims.ParseAmount(string(r.scratch))
	return a, false, err
}

func (r *amountReader) scientific(text []byte) (claims.Amount, bool, error) {
	a, err := claims.ParseAmount(string(text))
	return a, true, err
}

// plain is the quick way for digits with at most one decimal mark.
func plain(cell []byte, decimal byte) (claims.Amount, bool) {
	if len(cell) > 18 {
		return claims.Amount{}, false
	}
	var units int64
	decimals, point := 0, false
	for _, c := range cell {
		switch {
		case c >= '0' && c <= '9':
			units = units*10 + int64(c-'0')
			if point {
				decimals++
			}
		case c == decimal && !point:
			point = true
		default:
			return claims.Amount{}, false
		}
	}
	if len(cell) == 0 || point && len(cell) == 1 {
		return claims.Amount{}, false
	}
	for decimals > 2 && units%10 == 0 {
		units /= 10
		decimals--
	}
	return claims.Amount{Units: units, Decimals: int16(decimals)}, true
}

// unsigned strips signs, brackets and currency signs.
func unsigned(cell []byte) (body []byte, negative bool) {
	body = trim(cell)
	if n := len(body); n > 2 && body[0] == '(' && body[n-1] == ')' {
		return stripCurrency(trim(body[1 : n-1])), true
	}
	body = stripCurrency(body)
	for _, minus := range [][]byte{[]byte("-"), []byte("\u2212"), []byte("\u2013")} {
		if rest, ok := bytes.CutPrefix(body, minus); ok {
			return stripCurrency(trim(rest)), true
		}
		if rest, ok := bytes.CutSuffix(body, minus); ok {
			return stripCurrency(trim(rest)), true
		}
	}
	return bytes.TrimPrefix(body, []byte("+")), false
}

// stripCurrency takes a currency sign or a three-letter code off either end.
func stripCurrency(body []byte) []byte {
	for _, sign := range []string{"€", "$", "£", "¥", "₣"} {
		body = bytes.TrimPrefix(body, []byte(sign))
		body = bytes.TrimSuffix(body, []byte(sign))
	}
	isCode := func(b []byte) bool {
		for _, c := range b {
			if c < 'A' || c > 'Z' {
				return false
			}
		}
		return true
	}
	if n := len(body); n > 3 && isCode(body[:3]) {
		body = body[3:]
	} else if n > 3 && isCode(body[n-3:]) {
		body = body[:n-3]
	}
	return trim(body)
}

// trim takes white space off both ends, no-break spaces included.
func trim(cell []byte) []byte {
	for len(cell) > 0 && (cell[0] == ' ' || cell[0] == '\t' || cell[0] == '\r' || cell[0] == '\n') {
		cell = cell[1:]
	}
	for n := len(cell); n > 0 && (cell[n-1] == ' ' || cell[n-1] == '\t' || cell[n-1] == '\r' || cell[n-1] == '\n'); n = len(cell) {
		cell = cell[:n-1]
	}
	if len(cell) > 0 && (cell[0] >= utf8.RuneSelf || cell[len(cell)-1] >= utf8.RuneSelf) {
		return bytes.TrimSpace(cell) // knows the spaces of Unicode
	}
	return cell
}

// minorDigits are the decimals of currencies that do not have two (ISO 4217).
var minorDigits = map[string]int8{
	"BIF": 0, "CLP": 0, "DJF": 0, "GNF": 0, "ISK": 0, "JPY": 0, "KMF": 0, "KRW": 0, "PYG": 0, "RWF": 0, "UGX": 0,
	"VND": 0, "VUV": 0, "XAF": 0, "XOF": 0, "XPF": 0, "BHD": 3, "IQD": 3, "JOD": 3, "KWD": 3, "LYD": 3, "OMR": 3, "TND": 3,
}

// MinorDigits is the number of decimals of a currency's minor unit.
func MinorDigits(currency string) int8 {
	if d, ok := minorDigits[currency]; ok {
		return d
	}
	return 2
}
