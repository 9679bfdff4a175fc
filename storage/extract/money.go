package extract

import (
	"bytes"
	"errors"
	"unicode"
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

// amountNotes are what an amount's cell says beside the amount.
type amountNotes struct {
	scientific bool   // written in scientific notation
	rounded    bool   // of more digits than an amount holds
	currency   string // a currency's code or sign in the cell
}

// read turns a trimmed, non-empty cell into an amount: signs before or after,
// accountants' brackets, a currency sign or code at either end. After an
// ErrTooManyDigits scratch holds the number in plain form.
func (r *amountReader) read(cell []byte) (a claims.Amount, notes amountNotes, err error) {
	body, negative, code := unsigned(cell)
	notes.currency = code
	r.scratch = r.scratch[:0]
	if negative {
		r.scratch = append(r.scratch, '-')
	}
	if notes.scientific, err = r.plainForm(body); err != nil {
		return a, notes, err
	}
	a, err = claims.ParseAmount(string(r.scratch))
	return a, notes, err
}

// plainForm appends the number to scratch without marks of thousands and with
// a decimal point.
func (r *amountReader) plainForm(body []byte) (scientific bool, err error) {
	digits, group, groups := 0, 0, false // group: digits since the last mark of thousands
	for i := 0; i < len(body); {
		b, width := mark(body[i:])
		switch {
		case b >= '0' && b <= '9':
			r.scratch = append(r.scratch, b)
			digits++
			group++
		case b == r.decimal:
			if groups && group != 3 {
				return false, errThousands
			}
			r.scratch = append(r.scratch, '.')
			return r.behindPoint(body[i+width:], digits)
		case r.thousands != 0 && b == r.thousands:
			if group == 0 || group > 3 || groups && group != 3 {
				return false, errThousands
			}
			groups, group = true, 0
		case (b == 'e' || b == 'E') && digits > 0 && !groups:
			return true, r.exponent(body[i:])
		default:
			return false, errNoNumber
		}
		i += width
	}
	if groups && group != 3 {
		return false, errThousands
	}
	if digits == 0 {
		return false, errNoNumber
	}
	return false, nil
}

// mark is the first byte of a text, with the spaces and apostrophes of
// typography as the plain ones.
func mark(text []byte) (b byte, width int) {
	if text[0] < utf8.RuneSelf {
		return text[0], 1
	}
	c, width := utf8.DecodeRune(text)
	switch c {
	case '\u00a0', '\u202f', '\u2009':
		return ' ', width
	case '\u2019':
		return '\'', width
	}
	return 0xFF, width // none of the marks
}

func (r *amountReader) behindPoint(body []byte, digits int) (scientific bool, err error) {
	for i, d := range body {
		switch {
		case d >= '0' && d <= '9':
			r.scratch = append(r.scratch, d)
			digits++
		case (d == 'e' || d == 'E') && digits > 0:
			return true, r.exponent(body[i:])
		default:
			return false, errNoNumber
		}
	}
	if digits == 0 {
		return false, errNoNumber
	}
	return false, nil
}

// exponent appends e, a sign and digits.
func (r *amountReader) exponent(body []byte) error {
	digits := bytes.TrimLeft(body[1:], "+-")
	if len(body)-1-len(digits) > 1 || !digitsOnly(digits) {
		return errNoNumber
	}
	r.scratch = append(r.scratch, body...)
	return nil
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

// trim takes white space off both ends, no-break spaces included.
func trim(cell []byte) []byte {
	for len(cell) > 0 && (cell[0] == ' ' || cell[0] == '\t' || cell[0] == '\r' || cell[0] == '\n') {
		cell = cell[1:]
	}
	for n := len(cell); n > 0 && (cell[n-1] == ' ' || cell[n-1] == '\t' || cell[n-1] == '\r' || cell[n-1] == '\n'); n = len(cell) {
		cell = cell[:n-1]
	}
	if len(cell) > 0 && (cell[0] >= utf8.RuneSelf || cell[len(cell)-1] >= utf8.RuneSelf) {
		return bytes.TrimFunc(cell, func(r rune) bool {
			return unicode.IsSpace(r) || r == '\ufeff' || r == '\u200b' // a byte order mark, a space of no width
		})
	}
	return cell
}
