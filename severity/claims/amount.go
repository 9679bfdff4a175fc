package claims

import (
	"errors"
	"fmt"
	"math/big"
	"strconv"
	"strings"
)

// Amount is money as a whole number of units of 10^-Decimals of the currency,
// exactly as the extract states it: 1,234.50 is {123450, 2}. No rounding has
// taken place, so sums of amounts are exact.
type Amount struct {
	Units    int64
	Decimals int16 // 0 to 360
}

// ErrTooManyDigits is the error of a number with more than 18 significant
// digits, which no Amount holds exactly.
var ErrTooManyDigits = errors.New("more than 18 significant digits")

// mostUnits bounds Units to 18 digits, so that a digit can be added without
// overflow.
const mostUnits = 999_999_999_999_999_999

// ParseAmount reads a plain decimal number, optionally signed and optionally
// with a decimal exponent: -1234.5, 3.183e-05. Marks of thousands and other
// decimal marks are the reader's business. At most 18 significant digits.
func ParseAmount(text string) (Amount, error) {
	mantissa, exponentText, hasExponent := strings.Cut(strings.ToLower(text), "e")
	exponent := 0
	if hasExponent {
		e, err := strconv.Atoi(exponentText)
		if err != nil || e < -340 || e > 40 {
			return Amount{}, fmt.Errorf("amount %q: the exponent must lie between -340 and 40", text)
		}
		exponent = e
	}
	negative := false
	if mantissa != "" && (mantissa[0] == '-' || mantissa[0] == '+') {
		negative = mantissa[0] == '-'
		mantissa = mantissa[1:]
	}
	var units int64
	decimals, digits, seenPoint := 0, 0, false
	for i := 0; i < len(mantissa); i++ {
		c := mantissa[i]
		if c == '.' && !seenPoint {
			seenPoint = true
			continue
		}
		if c < '0' || c > '9' {
			return Amount{}, fmt.Errorf("amount %q: want a decimal number such as 1234.50", text)
		}
		digits++
		if units > mostUnits/10 {
			// Zeros behind the point say nothing, however many they are.
			if seenPoint && strings.Trim(mantissa[i:], "0") == "" {
				break
			}
			return Amount{}, fmt.Errorf("amount %q: %w", text, ErrTooManyDigits)
		}
		units = units*10 + int64(c-'0')
		if seenPoint {
			decimals++
		}
	}
	if digits == 0 {
		return Amount{}, fmt.Errorf("amount %q: want a decimal number such as 1234.50", text)
	}
	decimals -= exponent
	for decimals < 0 {
		if units > mostUnits/10 {
			return Amount{}, fmt.Errorf("amount %q: %w", text, ErrTooManyDigits)
		}
		units *= 10
		decimals++
	}
	// Zeros behind the point say nothing and would only make sums wider.
	for decimals > 2 && units%10 == 0 {
		units /= 10
		decimals--
	}
	if decimals > 360 {
		return Amount{}, fmt.Errorf("amount %q: more than 360 decimals", text)
	}
	if negative {
		units = -units
	}
	return Amount{units, int16(decimals)}, nil
}

// MinorUnits is the amount as a whole number of 10^-decimals, and whether it
// is one: {12345, 3} has no whole number of cents.
func (a Amount) MinorUnits(decimals int) (int64, bool) {
	units, have := a.Units, int(a.Decimals)
	for have > decimals {
		if units%10 != 0 {
			return 0, false
		}
		units /= 10
		have--
	}
	for have < decimals {
		if units > mostUnits/10 || units < -mostUnits/10 {
			return 0, false
		}
		units *= 10
		have++
	}
	return units, true
}

// Plus is the exact sum; exact is false, and the sum meaningless, when it has
// more than 18 digits.
func (a Amount) Plus(b Amount) (sum Amount, exact bool) {
	if a.Decimals < b.Decimals {
		a, b = b, a
	}
	units, ok := b.MinorUnits(int(a.Decimals))
	sum = Amount{a.Units + units, a.Decimals}
	return sum, ok && sum.Units <= mostUnits && sum.Units >= -mostUnits
}

// Minus is the exact difference; exact is false, and the difference
// meaningless, when it has more than 18 digits.
func (a Amount) Minus(b Amount) (difference Amount, exact bool) {
	return a.Plus(Amount{-b.Units, b.Decimals})
}

// Float is the double nearest to the amount.
func (a Amount) Float() float64 {
	if a.Units < 1<<53 && a.Units > -(1<<53) && a.Decimals <= 22 {
		return float64(a.Units) / powersOfTen[a.Decimals] // both exact, so one rounding
	}
	f, _ := strconv.ParseFloat(strconv.FormatInt(a.Units, 10)+"e-"+strconv.Itoa(int(a.Decimals)), 64)
	return f
}

// String is the plain decimal form with all decimals: "1234.50".
func (a Amount) String() string {
	text := strconv.FormatInt(a.Units, 10)
	sign := ""
	if text[0] == '-' {
		sign, text = "-", text[1:]
	}
	d := int(a.Decimals)
	if d == 0 {
		return sign + text
	}
	if len(text) <= d {
		text = strings.Repeat("0", d-len(text)+1) + text
	}
	return sign + text[:len(text)-d] + "." + text[len(text)-d:]
}

// Total is an exact sum of amounts of any number of decimals. The zero value
// is ready for use.
type Total struct {
	units    big.Int // of 10^-decimals
	decimals int
	fast     int64 // pending sum of amounts with fastDecimals decimals
	fastDec  int16
}

// Add adds one amount.
func (t *Total) Add(a Amount) {
	if a.Decimals == t.fastDec {
		sum := t.fast + a.Units
		if (sum > t.fast) == (a.Units > 0) {
			t.fast = sum
			return
		}
	}
	t.flush()
	t.fast, t.fastDec = a.Units, a.Decimals
}

// AddTotal adds another total.
func (t *Total) AddTotal(o *Total) {
	t.flush()
	o.flush()
	t.addScaled(new(big.Int).Set(&o.units), o.decimals)
}

func (t *Total) flush() {
	if t.fast == 0 {
		return
	}
	t.addScaled(big.NewInt(t.fast), int(t.fastDec))
	t.fast = 0
}

func (t *Total) addScaled(units *big.Int, decimals int) {
	if decimals > t.decimals {
		t.units.Mul(&t.units, pow10(decimals-t.decimals))
		t.decimals = decimals
	} else if decimals < t.decimals {
		units.Mul(units, pow10(t.decimals-decimals))
	}
	t.units.Add(&t.units, units)
}

// String is the exact sum with at least two decimals: "221498.69".
func (t *Total) String() string {
	t.flush()
	units, decimals := new(big.Int).Set(&t.units), t.decimals
	if decimals < 2 {
		units.Mul(units, pow10(2-decimals))
		decimals = 2
	}
	text := new(big.Int).Abs(units).String()
	if len(text) <= decimals {
		text = strings.Repeat("0", decimals-len(text)+1) + text
	}
	text = text[:len(text)-decimals] + "." + text[len(text)-decimals:]
	if units.Sign() < 0 {
		text = "-" + text
	}
	return text
}

func pow10(n int) *big.Int {
	return new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(n)), nil)
}

var powersOfTen = func() (p [23]float64) {
	p[0] = 1
	for i := 1; i < len(p); i++ {
		p[i] = p[i-1] * 10
	}
	return p
}()

// ParseTotal reads what Total.String writes.
func ParseTotal(text string) (*Total, error) {
	whole, decimals := text, 0
	if i := strings.IndexByte(text, '.'); i >= 0 {
		whole, decimals = text[:i]+text[i+1:], len(text)-i-1
	}
	t := &Total{decimals: decimals}
	if _, ok := t.units.SetString(whole, 10); !ok {
		return nil, fmt.Errorf("total %q: want a decimal number such as 1234.50", text)
	}
	return t, nil
}

// Equals tells whether the sum is exactly the amount.
func (t *Total) Equals(a Amount) bool {
	t.flush()
	other := Total{decimals: t.decimals}
	other.addScaled(big.NewInt(a.Units), int(a.Decimals))
	mine := Total{decimals: other.decimals}
	mine.addScaled(new(big.Int).Set(&t.units), t.decimals)
	return mine.units.Cmp(&other.units) == 0
}
