package report

import (
	"math"
	"strconv"
	"strings"

	"spillway/severity/claims"
	"spillway/severity/layer"
	"spillway/severity/study"
)

// row is one fact of the tidy table: what it belongs to, what it is, its
// value, its unit. A value is a text or a number.
type row struct {
	section, item, field string
	text                 string
	value                float64
	isNumber             bool
	unit                 string
}

func text(section, item, field, value string) row {
	return row{section: section, item: item, field: field, text: value}
}

func numeric(section, item, field string, value float64, unit string) row {
	return row{section: section, item: item, field: field, value: value, isNumber: true, unit: unit}
}

// digits writes a number to 17 significant digits, nothing for what is none.
func digits(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return ""
	}
	return strconv.FormatFloat(v, 'g', 17, 64)
}

// sections are the rows of the whole report, topic by topic.
func sections(d Document) [][]row {
	r := d.Results
	return [][]row{summaryRows(d), assumptionRows(r), dataRows(r), curveRows(r), layerRows(r), quantileRows(r), qqRows(r), survivalRows(r)}
}

func summaryRows(d Document) []row {
	return []row{
		text("summary", "report", "caution", Caution),
		text("summary", "report", "not in the intervals", NotInIntervals),
		text("summary", "report", "study", d.Study),
		text("summary", "report", "purpose", d.Purpose),
		text("summary", "report", "revision", strconv.Itoa(d.Revision)),
		text("summary", "report", "author", d.Author),
		text("summary", "report", "note", d.Note),
		text("summary", "report", "recorded", d.Created),
		text("summary", "report", "program", "Spillway "+d.ProgramVersion),
		text("summary", "report", "currency", d.Results.Currency),
	}
}

func assumptionRows(r *study.Results) []row {
	a := r.Assumptions
	all := func(list []string) string {
		if len(list) == 0 {
			return "all"
		}
		return strings.Join(list, ", ")
	}
	var statuses []string
	for _, s := range a.Statuses {
		statuses = append(statuses, s.String())
	}
	date := func(d claims.Date) string {
		if d == 0 {
			return "any"
		}
		return d.String()
	}
	return []row{
		text("assumptions", "selection", "lines of business", all(a.Businesses)),
		text("assumptions", "selection", "segments", all(a.Segments)),
		text("assumptions", "selection", "loss dates from", date(a.LossFrom)),
		text("assumptions", "selection", "loss dates to", date(a.LossTo)),
		text("assumptions", "selection", "status", all(statuses)),
		text("assumptions", "selection", "amount", string(a.Amount)),
		text("assumptions", "curve", "model", a.Model),
		numeric("assumptions", "curve", "level of intervals", a.Level, "probability"),
		text("assumptions", "prices", "cost level", "each claim at the prices of its own date: no trend, no development"),
	}
}

func dataRows(r *study.Results) []row {
	var rows []row
	for _, b := range r.Basis {
		rows = append(rows,
			text("data", b.Name, "sha256", b.Digest),
			text("data", b.Name, "amounts", b.Basis.Amounts.String()),
			text("data", b.Name, "deductible type", b.Basis.Deductible.String()),
			text("data", b.Name, "blank deductible", b.Basis.NoDeduct.String()),
			text("data", b.Name, "limit", b.Basis.Limit.String()),
			text("data", b.Name, "blank limit", b.Basis.NoLimit.String()),
			text("data", b.Name, "valuation date", b.Basis.Valuation.String()))
	}
	line := func(item string, l claims.Line) {
		rows = append(rows,
			numeric("data", item, "claims", float64(l.Rows), "claims"),
			row{section: "data", item: item, field: "amount as recorded", text: money(r, l.Amount), unit: r.Currency})
	}
	line("in the batches", r.Reconciliation.Read)
	for _, e := range r.Reconciliation.Excluded {
		line("left out: "+e.Reason, e.Line)
	}
	line("used", r.Reconciliation.Used)
	for _, f := range sampleFigures(r) {
		rows = append(rows, numeric("data", "losses used", f.name, f.value, f.unit))
	}
	return rows
}

func curveRows(r *study.Results) []row {
	if r.Fit == nil {
		rows := []row{text("curve", "verdict", "status", string(r.NoFit.Status)), text("curve", "verdict", "reason", r.NoFit.Reason)}
		if b := r.NoFit.Boundary; b != nil {
			rows = append(rows, numeric("curve", "verdict", "boundary score a claim", b.Score, ""),
				numeric("curve", "verdict", "log-likelihood at the boundary", b.LogLikelihood, ""))
		}
		return rows
	}
	rows := []row{text("curve", r.Fit.Model, "certificate", r.Fit.Convergence.Certificate)}
	for _, f := range curveFigures(r) {
		rows = append(rows, figureRows("curve", r.Fit.Model, f)...)
	}
	for i, line := range r.Fit.Covariance {
		for k, v := range line {
			rows = append(rows, numeric("curve", r.Fit.Model, "covariance of ln "+r.Fit.Parameters[i].Name+" and ln "+r.Fit.Parameters[k].Name, v, ""))
		}
	}
	c := r.Fit.Convergence
	return append(rows,
		numeric("curve", "proof", "iterations", float64(c.Iterations), ""),
		numeric("curve", "proof", "score norm", c.ScoreNorm, ""),
		numeric("curve", "proof", "newton decrement", c.NewtonDecrement, ""),
		numeric("curve", "proof", "condition", c.Condition, ""),
		numeric("curve", "proof", "starting points", float64(c.Starts), ""),
		numeric("curve", "proof", "maxima found", float64(c.StationaryPoints), ""))
}

// figureRows writes a figure with its standard error and interval.
func figureRows(section, item string, f figure) []row {
	rows := []row{numeric(section, item, f.name, f.value, f.unit)}
	if !math.IsNaN(f.se) {
		rows = append(rows, numeric(section, item, f.name+" standard error", f.se, f.unit))
	}
	if f.interval.Method != "" {
		rows = append(rows,
			numeric(section, item, f.name+" lower", f.interval.Lower, f.unit),
			numeric(section, item, f.name+" upper", f.interval.Upper, f.unit),
			text(section, item, f.name+" interval method", f.interval.Method))
	}
	return rows
}

func layerText(l layer.Layer) string { return l.String() }

func layerRows(r *study.Results) []row {
	var rows []row
	for _, l := range r.Layers {
		for _, f := range append(layerFigures(l, r.Currency), burningFigures(l, r.Currency)...) {
			rows = append(rows, figureRows("layers", layerText(l.Layer), f)...)
		}
	}
	return rows
}

func quantileRows(r *study.Results) []row {
	var rows []row
	for _, q := range r.Quantiles {
		item := strconv.FormatFloat(q.Probability, 'g', -1, 64)
		rows = append(rows, figureRows("quantiles", item, estimated("value", r.Currency, q.Value))...)
		rows = append(rows, figureRows("quantiles", item, estimated("tail_value_at_risk", r.Currency, q.TailValueAtRisk))...)
	}
	return rows
}

func qqRows(r *study.Results) []row {
	var rows []row
	for i, p := range r.QQ {
		item := strconv.Itoa(i + 1)
		kind := "exact"
		if p.Censored {
			kind = "at least"
		}
		rows = append(rows, numeric("qq", item, "observed", p.Observed, r.Currency), numeric("qq", item, "fitted", p.Fitted, r.Currency),
			numeric("qq", item, "plotting position", p.Survival, "probability"), text("qq", item, "kind", kind))
	}
	return rows
}

func survivalRows(r *study.Results) []row {
	var rows []row
	for i, p := range r.Survival {
		item := strconv.Itoa(i + 1)
		rows = append(rows, numeric("survival", item, "loss", p.Loss, r.Currency), numeric("survival", item, "empirical", p.Empirical, "probability"),
			numeric("survival", item, "lower", p.Lower, "probability"), numeric("survival", item, "upper", p.Upper, "probability"),
			numeric("survival", item, "fitted", p.Fitted, "probability"))
	}
	return rows
}
