package layer

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Top is where the layer is exhausted, Attachment + Limit; +Inf when unlimited.
func (l Layer) Top() float64 { return l.Attachment + l.Limit }

// Validate refuses an attachment that is not a finite number at or above zero,
// and a limit that is not above zero, finite or +Inf.
func (l Layer) Validate() error {
	if !(l.Attachment >= 0) || math.IsInf(l.Attachment, 1) {
		return fmt.Errorf("layer: the attachment is %v: want a finite amount at or above 0", l.Attachment)
	}
	if !(l.Limit > 0) {
		return fmt.Errorf("layer: the limit is %v: want an amount above 0, or unlimited", l.Limit)
	}
	return nil
}

// String is the layer as ParseLayer reads it: "15000 xs 10000".
func (l Layer) String() string {
	limit := "unlimited"
	if !math.IsInf(l.Limit, 1) {
		limit = strconv.FormatFloat(l.Limit, 'f', -1, 64)
	}
	return limit + " xs " + strconv.FormatFloat(l.Attachment, 'f', -1, 64)
}

var (
	separator = regexp.MustCompile(`(?i)xs`)
	money     = regexp.MustCompile(`^(\d+|\d{1,3}(,\d{3})+)?(\.\d*)?([eE][+-]?\d{1,3})?$`)
)

// ParseLayer reads "L xs A", the limit L in excess of the attachment A, both
// plain numbers of money such as 250000, 250,000 or 2.5e5, L perhaps the word
// unlimited. Commas, when there are any, must group thousands.
func ParseLayer(text string) (Layer, error) {
	parts := separator.Split(text, -1)
	if len(parts) != 2 {
		return Layer{}, fmt.Errorf(`layer %q: want "L xs A", the limit in excess of the attachment, such as "15,000 xs 10,000" or "unlimited xs 10,000"`, text)
	}
	l := Layer{Limit: math.Inf(1)}
	var err error
	if limit := strings.TrimSpace(parts[0]); !strings.EqualFold(limit, "unlimited") {
		if l.Limit, err = parseMoney(limit); err != nil {
			return Layer{}, fmt.Errorf("layer %q: the limit is %q: %w or unlimited", text, limit, err)
		}
	}
	attachment := strings.TrimSpace(parts[1])
	if l.Attachment, err = parseMoney(attachment); err != nil {
		return Layer{}, fmt.Errorf("layer %q: the attachment is %q: %w", text, attachment, err)
	}
	if l.Limit == 0 {
		return Layer{}, fmt.Errorf("layer %q: the limit is 0: want an amount above 0, or unlimited", text)
	}
	return l, nil
}

func parseMoney(text string) (float64, error) {
	wanted := fmt.Errorf("want a number at or above 0 such as 10000, 10,000 or 10000.50")
	if !money.MatchString(text) || !strings.ContainsAny(text, "0123456789") || strings.HasPrefix(strings.ToLower(text), "e") {
		return 0, wanted
	}
	v, err := strconv.ParseFloat(strings.ReplaceAll(text, ",", ""), 64)
	if err != nil || math.IsInf(v, 1) {
		return 0, wanted
	}
	return v, nil
}
