package report

import (
	"encoding/json"
	"io"
	"math"
	"strconv"

	"spillway/severity"
	"spillway/severity/study"
)

// schema names the form of the JSON; members may be added to it, a change of
// meaning needs a new name.
const schema = "spillway-report/1"

// number is written with 17 significant digits, so that it reads back as the
// same double; what is no finite number is null.
type number float64

func (n number) MarshalJSON() ([]byte, error) {
	v := float64(n)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return []byte("null"), nil
	}
	return []byte(strconv.FormatFloat(v, 'g', 17, 64)), nil
}

type jsonFigure struct {
	Value         number        `json:"value"`
	Unit          string        `json:"unit,omitempty"`
	StandardError *number       `json:"standard_error,omitempty"`
	Interval      *jsonInterval `json:"interval,omitempty"`
}

type jsonInterval struct {
	Level  number `json:"level"`
	Method string `json:"method"`
	Lower  number `json:"lower"`
	Upper  number `json:"upper"`
	Note   string `json:"note,omitempty"`
}

func figureOf(f figure) jsonFigure {
	j := jsonFigure{Value: number(f.value), Unit: f.unit}
	if !math.IsNaN(f.se) {
		se := number(f.se)
		j.StandardError = &se
	}
	if f.interval.Method != "" {
		i := f.interval
		j.Interval = &jsonInterval{number(i.Level), i.Method, number(i.Lower), number(i.Upper), i.Note}
	}
	return j
}

func figures(list []figure) map[string]jsonFigure {
	m := map[string]jsonFigure{}
	for _, f := range list {
		m[f.name] = figureOf(f)
	}
	return m
}

type jsonLine struct {
	Reason string `json:"reason,omitempty"`
	Rows   int    `json:"rows"`
	Amount string `json:"amount"`
}

type jsonLayer struct {
	Attachment number                `json:"attachment"`
	Limit      number                `json:"limit"` // null: unlimited
	Model      map[string]jsonFigure `json:"model"`
	Burning    map[string]jsonFigure `json:"burning"`
}

type jsonBatch struct {
	Name     string `json:"name"`
	SHA256   string `json:"sha256"`
	Basis    any    `json:"basis"`
	Replaced int    `json:"claims_valued_again_later"`
}

// JSON writes the revision as one object, the same bytes every time.
func JSON(w io.Writer, d Document) error {
	r := d.Results
	out := struct {
		Schema         string                `json:"schema"`
		Caution        string                `json:"caution"`
		NotInIntervals string                `json:"not_in_intervals"`
		Study          string                `json:"study"`
		Purpose        string                `json:"purpose"`
		Revision       int                   `json:"revision"`
		Author         string                `json:"author"`
		Note           string                `json:"note"`
		Created        string                `json:"created"`
		Program        string                `json:"program"`
		Currency       string                `json:"currency"`
		Assumptions    study.Assumptions     `json:"assumptions"`
		Batches        []jsonBatch           `json:"batches"`
		Reconciliation any                   `json:"reconciliation"`
		Sample         map[string]jsonFigure `json:"sample"`
		Fit            any                   `json:"fit"`
		NoFit          any                   `json:"no_fit"`
		Layers         []jsonLayer           `json:"layers"`
		Quantiles      []any                 `json:"quantiles"`
		QQ             []any                 `json:"qq"`
		Survival       []any                 `json:"survival"`
	}{
		Schema: schema, Caution: Caution, NotInIntervals: NotInIntervals, Study: d.Study, Purpose: d.Purpose, Revision: d.Revision,
		Author: d.Author, Note: d.Note, Created: d.Created, Program: "Spillway " + d.ProgramVersion, Currency: r.Currency,
		Assumptions: r.Assumptions, Reconciliation: reconciliation(r), Sample: figures(sampleFigures(r)),
		Layers: []jsonLayer{}, Quantiles: []any{}, QQ: []any{}, Survival: []any{},
	}
	for _, b := range r.Basis {
		out.Batches = append(out.Batches, jsonBatch{b.Name, b.Digest, b.Basis, b.Superseded.Rows})
	}
	if r.Fit != nil {
		out.Fit = fitOf(r)
	} else if r.NoFit != nil {
		out.NoFit = noFitOf(r.NoFit)
	}
	for _, l := range r.Layers {
		j := jsonLayer{Attachment: number(l.Layer.Attachment), Limit: number(l.Layer.Limit), Burning: figures(burningFigures(l, r.Currency))}
		if l.Model != nil {
			j.Model = figures(layerFigures(l, r.Currency))
		}
		out.Layers = append(out.Layers, j)
	}
	for _, q := range r.Quantiles {
		out.Quantiles = append(out.Quantiles, struct {
			Probability     number     `json:"probability"`
			Value           jsonFigure `json:"value"`
			TailValueAtRisk jsonFigure `json:"tail_value_at_risk"`
		}{number(q.Probability), figureOf(estimated("", r.Currency, q.Value)), figureOf(estimated("", r.Currency, q.TailValueAtRisk))})
	}
	for _, p := range r.QQ {
		out.QQ = append(out.QQ, struct {
			Observed number `json:"observed"`
			Fitted   number `json:"fitted"`
			Position number `json:"survival"`
			Censored bool   `json:"censored"`
		}{number(p.Observed), number(p.Fitted), number(p.Survival), p.Censored})
	}
	for _, p := range r.Survival {
		out.Survival = append(out.Survival, struct {
			Loss      number `json:"loss"`
			Empirical number `json:"empirical"`
			Lower     number `json:"lower"`
			Upper     number `json:"upper"`
			Fitted    number `json:"fitted"`
		}{number(p.Loss), number(p.Empirical), number(p.Lower), number(p.Upper), number(p.Fitted)})
	}
	encoder := json.NewEncoder(w)
	encoder.SetIndent("", " ")
	return encoder.Encode(out)
}

func reconciliation(r *study.Results) any {
	c := r.Reconciliation
	out := struct {
		Read     jsonLine   `json:"read"`
		Excluded []jsonLine `json:"excluded"`
		Used     jsonLine   `json:"used"`
	}{jsonLine{"", c.Read.Rows, money(r, c.Read.Amount)}, []jsonLine{}, jsonLine{"", c.Used.Rows, money(r, c.Used.Amount)}}
	for _, e := range c.Excluded {
		out.Excluded = append(out.Excluded, jsonLine{e.Reason, e.Rows, money(r, e.Amount)})
	}
	return out
}

func fitOf(r *study.Results) any {
	f := r.Fit
	covariance := [][]number{}
	for _, row := range f.Covariance {
		var numbers []number
		for _, v := range row {
			numbers = append(numbers, number(v))
		}
		covariance = append(covariance, numbers)
	}
	c := f.Convergence
	return struct {
		Model       string                `json:"model"`
		Status      severity.Status       `json:"status"`
		Figures     map[string]jsonFigure `json:"figures"`
		Covariance  [][]number            `json:"covariance_ln"` // ln shape, ln scale
		Iterations  int                   `json:"iterations"`
		ScoreNorm   number                `json:"score_norm"`
		Decrement   number                `json:"newton_decrement"`
		Condition   number                `json:"condition"`
		Starts      int                   `json:"starts"`
		Maxima      int                   `json:"stationary_points"`
		Certificate string                `json:"certificate"`
	}{f.Model, severity.Converged, figures(curveFigures(r)), covariance, c.Iterations, number(c.ScoreNorm), number(c.NewtonDecrement),
		number(c.Condition), c.Starts, c.StationaryPoints, c.Certificate}
}

func noFitOf(e *severity.FitError) any {
	out := struct {
		Status        severity.Status `json:"status"`
		Reason        string          `json:"reason"`
		BoundaryScore *number         `json:"boundary_score_per_claim"`
		BoundaryScale *number         `json:"boundary_scale"`
		Supremum      *number         `json:"log_likelihood_supremum"`
	}{Status: e.Status, Reason: e.Reason}
	if b := e.Boundary; b != nil {
		score, scale, supremum := number(b.Score), number(b.Scale), number(b.LogLikelihood)
		out.BoundaryScore, out.BoundaryScale, out.Supremum = &score, &scale, &supremum
	}
	return out
}
