package extract

import (
	"bytes"
	"errors"
	"fmt"
	"strconv"
	"strings"

	"spillway/severity/claims"
)

// dateParts are the three numbers of a date as written; year, month and day
// where yearFirst.
type dateParts struct {
	a, b, c   int
	yearFirst bool
}

// splitDate takes a date apart; ok is false for a cell that is no date in any
// accepted form. A time of day behind the date is left out.
func splitDate(cell []byte) (p dateParts, ok bool) {
	if colon := bytes.IndexByte(cell, ':'); colon > 0 {
		if gap := bytes.LastIndexAny(cell[:colon], " T"); gap >= 8 {
			cell = cell[:gap]
		}
	}
	if p, ok := namedMonth(cell); ok {
		return p, true
	}
	for i, c := range cell {
		if (c == ' ' || c == 'T') && i >= 8 {
			cell = cell[:i]
			break
		}
	}
	if len(cell) == 8 && digitsOnly(cell) {
		return dateParts{atoi(cell[:4]), atoi(cell[4:6]), atoi(cell[6:]), true}, true
	}
	var parts [3][]byte
	n, start := 0, 0
	var separator byte
	for i := 0; i <= len(cell); i++ {
		if i < len(cell) && cell[i] >= '0' && cell[i] <= '9' {
			continue
		}
		if i < len(cell) {
			c := cell[i]
			if c != '-' && c != '/' && c != '.' || separator != 0 && c != separator {
				return p, false
			}
			separator = c
		}
		if n == 3 || i == start || i-start > 4 {
			return p, false
		}
		parts[n] = cell[start:i]
		n++
		start = i + 1
	}
	if n != 3 {
		return p, false
	}
	switch {
	case len(parts[0]) == 4 && len(parts[1]) <= 2 && len(parts[2]) <= 2:
		return dateParts{atoi(parts[0]), atoi(parts[1]), atoi(parts[2]), true}, true
	case len(parts[2]) == 4 && len(parts[0]) <= 2 && len(parts[1]) <= 2:
		return dateParts{atoi(parts[0]), atoi(parts[1]), atoi(parts[2]), false}, true
	}
	return p, false
}

// namedMonth takes apart 5-Jan-2024, 05JAN2024, 5 January 2024 and January 5,
// 2024: whatever the order, nothing is in doubt.
func namedMonth(cell []byte) (p dateParts, ok bool) {
	first := bytes.IndexFunc(cell, func(r rune) bool { return r|0x20 >= 'a' && r|0x20 <= 'z' })
	if first < 0 || first > 3 || len(cell) > 18 {
		return p, false
	}
	last := first
	for last < len(cell) && cell[last]|0x20 >= 'a' && cell[last]|0x20 <= 'z' {
		last++
	}
	month := monthOf(bytes.ToLower(cell[first:last]))
	day, year := bytes.Trim(cell[:first], " -./"), bytes.Trim(cell[last:], " -./,")
	if first == 0 {
		day, year, _ = bytes.Cut(year, []byte(" "))
		day = bytes.TrimRight(day, ",")
	}
	if month == 0 || len(day) > 2 || len(year) != 4 || !digitsOnly(day) || !digitsOnly(year) {
		return p, false
	}
	return dateParts{atoi(year), month, atoi(day), true}, true
}

// monthOf is the number of a month by its English name or the first three
// letters of it; 0 for none.
func monthOf(name []byte) int {
	for i, month := range [...]string{"january", "february", "march", "april", "may", "june", "july", "august", "september", "october", "november", "december"} {
		if string(name) == month || string(name) == month[:3] {
			return i + 1
		}
	}
	return 0
}

func digitsOnly(b []byte) bool {
	for _, c := range b {
		if c < '0' || c > '9' {
			return false
		}
	}
	return len(b) > 0
}

func atoi(b []byte) int {
	n := 0
	for _, c := range b {
		n = n*10 + int(c-'0')
	}
	return n
}

const acceptedDates = "accepted are 2025-06-30, 20250630, 30-Jun-2025 and, once their order is decided, 30/06/2025 or 06/30/2025 with / . or - and a year of four digits"

// readDate turns a trimmed, non-empty cell into a date.
func readDate(cell []byte, f Format, from1904 bool) (claims.Date, error) {
	p, ok := splitDate(cell)
	switch {
	case !ok && f.Kind == Workbook:
		if serial, err := strconv.ParseFloat(strings.Replace(string(cell), f.Decimal, ".", 1), 64); err == nil {
			return fromSerial(serial, from1904)
		}
		return 0, errors.New(noDate(cell))
	case !ok:
		return 0, errors.New(noDate(cell))
	case p.yearFirst:
		return dateOf(p.a, p.b, p.c)
	case f.DateOrder == DayFirst:
		return dateOf(p.c, p.b, p.a)
	case f.DateOrder == MonthFirst:
		return dateOf(p.c, p.a, p.b)
	}
	return 0, fmt.Errorf("day or month may come first and it is not decided which; %s", acceptedDates)
}

// noDate says what a cell that is no date looks like.
func noDate(cell []byte) string {
	switch {
	case twoDigitYear(cell):
		return "the year has two digits, and the century cannot be told; export it with four; " + acceptedDates
	case len(cell) == 5 && digitsOnly(cell):
		return "a number such as spreadsheets keep for a date; export the column as dates; " + acceptedDates
	}
	return "no date; " + acceptedDates
}

// twoDigitYear tells that a cell is a date but for a year of two digits:
// 03/04/25.
func twoDigitYear(cell []byte) bool {
	numbers := bytes.FieldsFunc(cell, func(c rune) bool { return c == '/' || c == '-' || c == '.' })
	for _, n := range numbers {
		if len(n) > 2 || !digitsOnly(n) {
			return false
		}
	}
	return len(numbers) == 3
}

func dateOf(year, month, day int) (claims.Date, error) {
	d, err := claims.NewDate(year, month, day)
	if err != nil {
		return 0, fmt.Errorf("%w; %s", err, acceptedDates)
	}
	return d, nil
}

var (
	march1900, _   = claims.NewDate(1900, 3, 1)
	january1904, _ = claims.NewDate(1904, 1, 1)
)

// fromSerial reads the day number of a workbook (ECMA-376 part 1, 18.17.4.1).
// In the system of 1900 number 61 is 1900-03-01; earlier numbers are off by
// the day that never was, and refused. In that of 1904 number 0 is its first
// day. The time of day is left out.
func fromSerial(serial float64, from1904 bool) (claims.Date, error) {
	if from1904 {
		if !(serial >= 0 && serial < 2957004) {
			return 0, fmt.Errorf("a day number outside 1904-01-01 to 9999-12-31; %s", acceptedDates)
		}
		return january1904 + claims.Date(int(serial)), nil
	}
	if !(serial >= 61 && serial < 2958466) {
		return 0, fmt.Errorf("a day number outside 1900-03-01 to 9999-12-31; %s", acceptedDates)
	}
	return march1900 + claims.Date(int(serial)-61), nil
}
