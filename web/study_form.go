package web

import (
	"fmt"
	"net/http"
	"slices"
	"strconv"
	"strings"

	"spillway/severity/claims"
	"spillway/severity/study"
)

// readAssumptions reads the fields of the study form; the error says which
// field, what was found and what is accepted.
func readAssumptions(r *http.Request, batches []study.BatchRef) (a study.Assumptions, err error) {
	if len(batches) == 0 {
		return a, fmt.Errorf("batches: none is ticked; a study rests on at least one")
	}
	a = study.Assumptions{Batches: batches, Model: "gamma"}
	a.Businesses = slices.Sorted(slices.Values(r.Form["line"]))
	a.Segments = slices.Sorted(slices.Values(r.Form["segment"]))
	a.Amount = claims.AmountField(r.FormValue("amount"))
	for name, to := range map[string]*claims.Date{"loss_from": &a.LossFrom, "loss_to": &a.LossTo} {
		if text := strings.TrimSpace(r.FormValue(name)); text != "" {
			if *to, err = claims.ParseDate(text); err != nil {
				return a, fmt.Errorf("loss dates: %w", err)
			}
		}
	}
	for _, text := range r.Form["status"] {
		var status claims.Status
		if err := status.UnmarshalText([]byte(text)); err != nil {
			return a, err
		}
		a.Statuses = append(a.Statuses, status)
	}
	slices.Sort(a.Statuses)
	if a.Level, err = strconv.ParseFloat(r.FormValue("level"), 64); err != nil {
		return a, fmt.Errorf("level of the intervals %q: want a number between 0 and 1", r.FormValue("level"))
	}
	if a.Quantiles, err = readQuantiles(r.FormValue("quantiles")); err != nil {
		return a, err
	}
	a.Layers, err = readLayers(r.Form["layer_limit"], r.Form["layer_attachment"])
	return a, err
}

// readQuantiles reads "50, 90, 99.5": percent, between commas, semicolons or
// spaces.
func readQuantiles(text string) ([]float64, error) {
	var list []float64
	for _, word := range strings.FieldsFunc(text, func(c rune) bool { return c == ',' || c == ';' || c == ' ' || c == '%' }) {
		v, err := strconv.ParseFloat(word, 64)
		if err != nil || !(v > 0 && v < 100) {
			return nil, fmt.Errorf("quantile %q: want percent between 0 and 100, both excluded, such as 50, 90, 99.5", word)
		}
		// v/100 would miss the double nearest to the decimal: 99.9% is 0.999.
		p, err := strconv.ParseFloat(word+"e-2", 64)
		if err != nil {
			p = v / 100
		}
		list = append(list, p)
	}
	slices.Sort(list)
	return slices.Compact(list), nil
}

// readLayers reads the layer fields, in pairs; a pair without both is no
// layer, an empty limit is unlimited.
func readLayers(limits, attachments []string) ([]study.LayerTerm, error) {
	if len(limits) != len(attachments) {
		return nil, fmt.Errorf("layers: %d limits and %d attachments", len(limits), len(attachments))
	}
	var list []study.LayerTerm
	for i := range limits {
		limit, attachment := strings.TrimSpace(limits[i]), strings.TrimSpace(attachments[i])
		if attachment == "" && limit == "" {
			continue
		}
		var term study.LayerTerm
		var err error
		if term.Attachment, err = readMoney(attachment); err != nil {
			return nil, fmt.Errorf("attachment of layer %d: %w", i+1, err)
		}
		if limit != "" && !strings.EqualFold(limit, "unlimited") {
			if term.Limit, err = readMoney(limit); err != nil {
				return nil, fmt.Errorf("limit of layer %d: %w", i+1, err)
			}
			if term.Limit == 0 {
				return nil, fmt.Errorf("limit of layer %d is zero: want an amount above zero, or nothing for unlimited", i+1)
			}
		}
		list = append(list, term)
	}
	return list, nil
}

// readMoney reads an amount as people type it: 250000, 250 000, 250,000, 2.5e5.
// An empty text is zero.
func readMoney(text string) (float64, error) {
	if text == "" {
		return 0, nil
	}
	plain := strings.Map(func(c rune) rune {
		switch c {
		case ' ', '\u00a0', '\u202f', '\'', '_':
			return -1
		}
		return c
	}, text)
	if parts := strings.Split(plain, ","); len(parts) > 1 {
		for i, part := range parts[1:] {
			whole := part
			if i == len(parts)-2 {
				whole, _, _ = strings.Cut(part, ".")
			}
			if len(whole) != 3 {
				return 0, fmt.Errorf("found %q: a comma stands between thousands, as in 250,000", text)
			}
		}
		plain = strings.Join(parts, "")
	}
	v, err := strconv.ParseFloat(plain, 64)
	if err != nil || !(v >= 0) || v > 1e300 {
		return 0, fmt.Errorf("found %q: want an amount of zero or more, such as 250000 or 250,000", text)
	}
	return v, nil
}
