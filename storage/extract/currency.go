package extract

import (
	"bytes"

	"golang.org/x/text/currency"
)

// minorDigits are the decimals of currencies that do not have two (ISO 4217,
// list one; recalled from memory and held against the tables of x/text).
var minorDigits = map[string]int8{
	"BIF": 0, "CLP": 0, "DJF": 0, "GNF": 0, "ISK": 0, "JPY": 0, "KMF": 0, "KRW": 0, "PYG": 0, "RWF": 0, "UGX": 0, "UYI": 0,
	"VND": 0, "VUV": 0, "XAF": 0, "XOF": 0, "XPF": 0, "BHD": 3, "IQD": 3, "JOD": 3, "KWD": 3, "LYD": 3, "OMR": 3, "TND": 3,
	"CLF": 4, "UYW": 4,
}

// MinorDigits is the number of decimals of a currency's minor unit.
func MinorDigits(code string) int8 {
	if d, ok := minorDigits[code]; ok {
		return d
	}
	return 2
}

// currencySigns are the signs that stand beside amounts, and the codes each
// may stand for; a sign that several currencies share stands for any of them.
var currencySigns = map[string][]string{
	"€": {"EUR"},
	"£": {"GBP", "EGP", "FKP", "GIP", "LBP", "SHP", "SSP", "SYP"},
	"¥": {"JPY", "CNY"},
	"$": nil, // of any currency
}

// sameCurrency tells whether a code or sign may mean the currency of another.
func sameCurrency(found, wanted string) bool {
	if found == wanted {
		return true
	}
	for _, pair := range [...][2]string{{found, wanted}, {wanted, found}} {
		codes, sign := currencySigns[pair[0]]
		if _, both := currencySigns[pair[1]]; !sign || both {
			continue
		}
		if codes == nil {
			return pair[1] != "EUR" && pair[1] != "GBP" && pair[1] != "JPY"
		}
		for _, code := range codes {
			if code == pair[1] {
				return true
			}
		}
	}
	return false
}

// unsigned strips signs, brackets and currencies off a number, and names the
// currency, if any.
func unsigned(cell []byte) (body []byte, negative bool, code string) {
	body = trim(cell)
	if n := len(body); n > 2 && body[0] == '(' && body[n-1] == ')' {
		body, code = stripCurrency(trim(body[1 : n-1]))
		return body, true, code
	}
	body, code = stripCurrency(body)
	for _, minus := range [...]string{"-", "\u2212", "\u2013"} {
		rest, ok := bytes.CutPrefix(body, []byte(minus))
		if !ok {
			rest, ok = bytes.CutSuffix(body, []byte(minus))
		}
		if ok {
			body = trim(rest)
			if code == "" {
				body, code = stripCurrency(body)
			}
			return body, true, code
		}
	}
	return bytes.TrimPrefix(body, []byte("+")), false, code
}

// stripCurrency takes a currency sign or an ISO 4217 code off either end.
func stripCurrency(body []byte) (rest []byte, code string) {
	if len(body) == 0 || plainEnds(body) {
		return body, ""
	}
	for sign := range currencySigns {
		rest, ok := bytes.CutPrefix(body, []byte(sign))
		if !ok {
			rest, ok = bytes.CutSuffix(body, []byte(sign))
		}
		if ok {
			return trim(rest), sign
		}
	}
	if n := len(body); n > 3 {
		if isCode(body[:3]) {
			return trim(body[3:]), string(body[:3])
		}
		if isCode(body[n-3:]) {
			return trim(body[:n-3]), string(body[n-3:])
		}
	}
	return body, ""
}

// plainEnds tells that a number begins and ends with a digit or a mark, so
// that there is nothing to strip.
func plainEnds(body []byte) bool {
	first, last := body[0], body[len(body)-1]
	return first < 'A' && first != '$' && last < 'A' && last != '$'
}

func isCode(b []byte) bool {
	for _, c := range b {
		if c < 'A' || c > 'Z' {
			return false
		}
	}
	_, err := currency.ParseISO(string(b))
	return err == nil
}
