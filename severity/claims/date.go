package claims

import "fmt"

// Date is a calendar day of the proleptic Gregorian calendar, counted in days
// from 0001-01-01 = 1, so that the zero value means "not stated" and dates
// order and subtract as integers. Years 1 to 9999.
type Date int32

// NewDate returns the day, or an error naming the parts when no such day
// exists.
func NewDate(year, month, day int) (Date, error) {
	if year < 1 || year > 9999 || month < 1 || month > 12 || day < 1 || day > daysIn(year, month) {
		return 0, fmt.Errorf("no day %04d-%02d-%02d in the calendar (years 1 to 9999)", year, month, day)
	}
	return Date(daysBeforeYear(year) + daysBeforeMonth(year, month) + day), nil
}

// ParseDate reads the ISO 8601 form 2025-06-30.
func ParseDate(text string) (Date, error) {
	var year, month, day int
	if len(text) != 10 || text[4] != '-' || text[7] != '-' {
		return 0, fmt.Errorf("date %q: want the form 2025-06-30", text)
	}
	for i, part := range []*int{&year, &month, &day} {
		digits := [3]string{text[0:4], text[5:7], text[8:10]}[i]
		for _, c := range digits {
			if c < '0' || c > '9' {
				return 0, fmt.Errorf("date %q: want the form 2025-06-30", text)
			}
			*part = *part*10 + int(c-'0')
		}
	}
	return NewDate(year, month, day)
}

// Civil returns year, month and day; zeros for the zero Date.
func (d Date) Civil() (year, month, day int) {
	if d <= 0 {
		return 0, 0, 0
	}
	n := int(d) - 1
	year = n*400/146097 + 1
	for daysBeforeYear(year+1) <= n {
		year++
	}
	for daysBeforeYear(year) > n {
		year--
	}
	n -= daysBeforeYear(year)
	month = 1
	for month < 12 && daysBeforeMonth(year, month+1) <= n {
		month++
	}
	return year, month, n - daysBeforeMonth(year, month) + 1
}

// String is the ISO 8601 form, empty for the zero Date.
func (d Date) String() string {
	if d <= 0 {
		return ""
	}
	year, month, day := d.Civil()
	return fmt.Sprintf("%04d-%02d-%02d", year, month, day)
}

// MarshalText writes the ISO 8601 form, empty for the zero Date.
func (d Date) MarshalText() ([]byte, error) { return []byte(d.String()), nil }

// UnmarshalText reads the ISO 8601 form; empty text is the zero Date.
func (d *Date) UnmarshalText(text []byte) error {
	if len(text) == 0 {
		*d = 0
		return nil
	}
	parsed, err := ParseDate(string(text))
	if err != nil {
		return err
	}
	*d = parsed
	return nil
}

func leap(year int) bool { return year%4 == 0 && (year%100 != 0 || year%400 == 0) }

func daysIn(year, month int) int {
	if month == 2 && leap(year) {
		return 29
	}
	return [...]int{31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31}[month-1]
}

func daysBeforeYear(year int) int {
	y := year - 1
	return y*365 + y/4 - y/100 + y/400
}

func daysBeforeMonth(year, month int) int {
	days := [...]int{0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334}[month-1]
	if month > 2 && leap(year) {
		days++
	}
	return days
}
