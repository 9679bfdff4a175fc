package claims

import (
	"testing"
	"time"
)

// TestDateIsTheCalendar holds every day of the years 1 to 9999 against the
// standard library's calendar.
func TestDateIsTheCalendar(t *testing.T) {
	day := time.Date(1, 1, 1, 0, 0, 0, 0, time.UTC)
	days := 0
	for want := Date(1); day.Year() < 10000; want++ {
		year, month, date := day.Date()
		got, err := NewDate(year, int(month), date)
		if err != nil || got != want {
			t.Fatalf("%v is day %d (%v), want %d", day, got, err, want)
		}
		if y, m, d := got.Civil(); y != year || m != int(month) || d != date {
			t.Fatalf("day %d is %d-%d-%d, want %v", got, y, m, d, day)
		}
		day = day.AddDate(0, 0, 1)
		days++
	}
	if days != 3652059 {
		t.Errorf("%d days looked at", days)
	}
}

func TestDateText(t *testing.T) {
	for _, text := range []string{"0001-01-01", "1900-02-28", "2000-02-29", "2024-02-29", "9999-12-31"} {
		d, err := ParseDate(text)
		if err != nil || d.String() != text {
			t.Errorf("%s is read as %v (%v)", text, d, err)
		}
		var back Date
		if err := back.UnmarshalText([]byte(text)); err != nil || back != d {
			t.Errorf("%s: %v, %v", text, back, err)
		}
	}
	for _, text := range []string{"", "1900-02-29", "2023-02-29", "2024-13-01", "2024-00-10", "2024-04-31", "2024-1-01", "0000-01-01",
		"20240101", "2024/01/01", "-024-01-01", "2024-01-0a", "2024-01-01 "} {
		if d, err := ParseDate(text); err == nil {
			t.Errorf("%q is read as %v", text, d)
		}
	}
	var none Date
	if y, m, d := none.Civil(); y != 0 || m != 0 || d != 0 || none.String() != "" {
		t.Error("the zero date is a day")
	}
	if err := none.UnmarshalText(nil); err != nil || none != 0 {
		t.Errorf("an empty text is %v, %v", none, err)
	}
}
