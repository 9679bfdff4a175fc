package layer

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestParseLayer(t *testing.T) {
	for text, want := range map[string]Layer{
		"15000 xs 10000":        {10000, 15000},
		"15,000 xs 10,000":      {10000, 15000},
		"1,000,000 XS 500,000":  {500000, 1e6},
		" 250000.50  xs  0 ":    {0, 250000.5},
		"1000xs1000":            {1000, 1000},
		"unlimited xs 10000":    {10000, math.Inf(1)},
		"Unlimited xs 0":        {0, math.Inf(1)},
		"2.5e5 xs 1E4":          {10000, 250000},
		".5 xs .25":             {0.25, 0.5},
		"5. xs 1.":              {1, 5},
		"1e-300 xs 1e300":       {1e300, 1e-300},
		"5,000,000.25 xs 1,000": {1000, 5000000.25},
	} {
		got, err := ParseLayer(text)
		if err != nil || got != want {
			t.Errorf("%q is %+v (%v), want %+v", text, got, err, want)
		}
	}
}

func TestParseLayerRefuses(t *testing.T) {
	for text, part := range map[string]string{
		"":                        "want \"L xs A\"",
		"1000":                    "want \"L xs A\"",
		"1000 x 1000":             "want \"L xs A\"",
		"1 xs 2 xs 3":             "want \"L xs A\"",
		"xs 1000":                 "the limit is \"\"",
		"1000 xs":                 "the attachment is \"\"",
		"0 xs 1000":               "the limit is 0",
		"-5 xs 1000":              "the limit is \"-5\"",
		"1000 xs -1":              "the attachment is \"-1\"",
		"1000 xs unlimited":       "the attachment is \"unlimited\"",
		"inf xs 0":                "the limit is \"inf\"",
		"NaN xs 0":                "the limit is \"NaN\"",
		"0x10 xs 0":               "the limit is \"0x10\"",
		"1,00 xs 0":               "the limit is \"1,00\"",
		"1000,000 xs 0":           "the limit is \"1000,000\"",
		"1.234,56 xs 0":           "the limit is \"1.234,56\"",
		"1e999 xs 0":              "the limit is \"1e999\"",
		"1_000 xs 0":              "the limit is \"1_000\"",
		"10 000 xs 0":             "the limit is \"10 000\"",
		". xs 0":                  "the limit is \".\"",
		"e5 xs 0":                 "the limit is \"e5\"",
		"15,000 xs ten thousand":  "the attachment is \"ten thousand\"",
		"1e-999999999999999 xs 0": "the limit is \"1e-999999999999999\"",
	} {
		l, err := ParseLayer(text)
		if err == nil || !strings.Contains(err.Error(), part) {
			t.Errorf("%q is %+v with error %v, want an error with %s", text, l, err, part)
		}
	}
}

func TestLayerTextIsReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := Layer{
			Attachment: rapid.Float64Range(0, 1e12).Draw(t, "attachment"),
			Limit:      rapid.Float64Range(1e-6, 1e12).Draw(t, "limit"),
		}
		if rapid.Bool().Draw(t, "unlimited") {
			l.Limit = math.Inf(1)
		}
		if back, err := ParseLayer(l.String()); err != nil || back != l {
			t.Errorf("%+v is written %q and read as %+v (%v)", l, l.String(), back, err)
		}
	})
}

func FuzzParseLayer(f *testing.F) {
	for _, text := range []string{"15,000 xs 10,000", "unlimited xs 0", "1e5xs.5", "xs", "1 xs 1 xs"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		l, err := ParseLayer(text)
		if err == nil && l.Validate() != nil {
			t.Errorf("%q is read as %+v, which is not a layer: %v", text, l, l.Validate())
		}
	})
}
