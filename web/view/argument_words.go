package view

import (
	"math"
	"strconv"
	"strings"

	"spillway/severity"
	"spillway/severity/layer"
	"spillway/severity/study"
)

// Figure9 writes a dimensionless number to nine significant digits.
func Figure9(v float64) string { return strconv.FormatFloat(v, 'g', 9, 64) }

func notes(f *severity.Fit) []string {
	var list []string
	for _, p := range f.Parameters {
		if p.Interval.Note != "" {
			list = append(list, "Interval of the "+p.Name+": "+p.Interval.Note+".")
		}
	}
	if f.Mean.Interval.Note != "" {
		list = append(list, "Interval of the mean: "+f.Mean.Interval.Note+".")
	}
	return list
}

func covariance(f *severity.Fit) string {
	var rows []string
	for _, row := range f.Covariance {
		var cells []string
		for _, v := range row {
			cells = append(cells, Figure(v))
		}
		rows = append(rows, "("+strings.Join(cells, ", ")+")")
	}
	return strings.Join(rows, ", ")
}

func sentence(reason string) string {
	if reason == "" {
		return ""
	}
	return strings.ToUpper(reason[:1]) + reason[1:] + "."
}

// advice says what to try next.
func advice(s severity.Status) string {
	switch s {
	case severity.NoInteriorMaximum:
		return "Look at the product-limit estimate below, and consider a curve with a heavier tail, or a narrower selection of claims."
	case severity.Unbounded:
		return "More claims with different losses are needed."
	case severity.AllCensored:
		return "Choose claims that settled below their limit too, or another amount."
	case severity.NoClaims:
		return "Widen the selection of lines, segments, dates or statuses."
	}
	return ""
}

func kindOf(censored bool) string {
	if censored {
		return "at least"
	}
	return "exact"
}

func layerName(l layer.Layer) string {
	if math.IsInf(l.Limit, 1) {
		return "unlimited xs " + wholeMoney(l.Attachment)
	}
	return wholeMoney(l.Limit) + " xs " + wholeMoney(l.Attachment)
}

// wholeMoney writes terms without needless decimals.
func wholeMoney(v float64) string {
	if v == math.Trunc(v) && math.Abs(v) < 1e15 {
		return grouped(strconv.FormatFloat(v, 'f', 0, 64))
	}
	return Money(v)
}

// freeCover lists the layers that no claim reaches.
func freeCover(r *study.Results) string {
	var names []string
	for _, l := range r.Layers {
		if l.Burning.Reaching == 0 && l.Model != nil {
			names = append(names, layerName(l.Layer))
		}
	}
	return strings.Join(names, ", ")
}

// FormOf fills the fields of a study from its assumptions.
func FormOf(a study.Assumptions) StudyForm {
	var form StudyForm
	var quantiles []string
	for _, q := range a.Quantiles {
		quantiles = append(quantiles, strings.TrimSuffix(Level(q), "%"))
	}
	form.Quantiles = strings.Join(quantiles, ", ")
	for _, l := range a.Layers {
		attachment := Field(l.Attachment)
		if attachment == "" {
			attachment = "0"
		}
		form.Layers = append(form.Layers, LayerField{Limit: Field(l.Limit), Attachment: attachment})
	}
	return form
}
