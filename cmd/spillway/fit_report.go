package main

import (
	"math"

	"spillway/severity"
	"spillway/storage/extract"
)

// fitReport is the object of fit --json. Without a maximum, everything that
// rests on one is null.
type fitReport struct {
	Status         severity.Status   `json:"status"`
	Reason         string            `json:"reason"`
	Model          string            `json:"model"`
	Parameters     *parameters       `json:"parameters"`
	Mean           number            `json:"mean"`
	CV             number            `json:"coefficient_of_variation"`
	LogLikelihood  number            `json:"log_likelihood"`
	AIC            number            `json:"aic"`
	BIC            number            `json:"bic"`
	StandardErrors *standardErrors   `json:"standard_errors"`
	CovarianceLn   *[2][2]number     `json:"covariance_ln"` // of (ln shape, ln scale)
	Intervals      *intervals        `json:"intervals"`
	Claims         claimCounts       `json:"claims"`
	Convergence    convergence       `json:"convergence"`
	Boundary       *boundary         `json:"boundary"` // only where the maximum is lost at the edge of a truncated gamma
	Basis          basisReport       `json:"basis"`
	Columns        extract.ColumnMap `json:"columns"` // field to header, as read
	Findings       []findingGroup    `json:"findings"`
	Caution        string            `json:"caution"`
}

type standardErrors struct {
	Shape   number `json:"shape"`
	Scale   number `json:"scale"`
	Mean    number `json:"mean"`
	LnShape number `json:"ln_shape"`
	LnScale number `json:"ln_scale"`
}

type intervals struct {
	Level  number   `json:"level"`
	Method string   `json:"method"`
	Shape  interval `json:"shape"`
	Scale  interval `json:"scale"`
	Mean   interval `json:"mean"`
}

// interval has 0 for a lower and null for an upper end that is never reached.
type interval struct {
	Lower number `json:"lower"`
	Upper number `json:"upper"`
	Note  string `json:"note,omitempty"`
}

// claimCounts: Read and Rejected are rows of the file, the others are claims
// in the fit.
type claimCounts struct {
	Read       int    `json:"read"`
	Rejected   int    `json:"rejected"`
	Used       int    `json:"used"`
	Uncensored int    `json:"uncensored"`
	Censored   int    `json:"censored"`
	Truncated  int    `json:"truncated"`
	Weight     number `json:"weight"`
}

type convergence struct {
	Iterations       int    `json:"iterations"`
	ScoreNorm        number `json:"score_norm"`
	NewtonDecrement  number `json:"newton_decrement"`
	Condition        number `json:"condition"`
	Starts           int    `json:"starts"`
	StationaryPoints int    `json:"stationary_points"`
	Certificate      string `json:"certificate,omitempty"`
}

type boundary struct {
	Scale         number `json:"scale"`
	Score         number `json:"score_per_claim"`
	LogLikelihood number `json:"log_likelihood_supremum"`
}

type basisReport struct {
	Amounts    string `json:"amounts"`
	Deductible string `json:"deductible_type"`
	Limit      string `json:"limit_basis"`
	Currency   string `json:"currency,omitempty"`
}

func newFitReport(fit *severity.Fit, none *severity.FitError, read *extract.Report, plan extract.Plan) fitReport {
	missing, basis := number(math.NaN()), plan.Basis
	r := fitReport{
		Model: "gamma",
		Mean:  missing, CV: missing, LogLikelihood: missing, AIC: missing, BIC: missing,
		Basis:    basisReport{basis.Amounts.String(), basis.Deductible.String(), basis.Limit.String(), basis.Currency},
		Columns:  plan.Columns,
		Findings: groupFindings(read),
		Caution:  caution,
	}
	var sample severity.SampleSize
	if fit == nil {
		sample = none.Sample
		r.Status, r.Reason = none.Status, none.Reason
		r.Convergence = convergence{Iterations: none.Iterations, ScoreNorm: missing, NewtonDecrement: missing, Condition: missing}
		if b := none.Boundary; b != nil {
			r.Boundary = &boundary{number(b.Scale), number(b.Score), number(b.LogLikelihood)}
		}
	} else {
		sample = fit.Sample
		r.fill(fit)
	}
	r.Claims = claimCounts{read.Read, read.Rejected, sample.Claims, sample.Uncensored, sample.Censored, sample.Truncated, number(sample.Weight)}
	return r
}

func (r *fitReport) fill(fit *severity.Fit) {
	shape, scale := fit.Parameters[0], fit.Parameters[1]
	c := fit.Convergence
	r.Status, r.Reason = severity.Converged, c.Certificate
	r.Parameters = &parameters{number(shape.Value), number(scale.Value)}
	r.Mean, r.CV = number(fit.Mean.Value), number(fit.CV.Value)
	r.LogLikelihood, r.AIC, r.BIC = number(fit.LogLikelihood), number(fit.AIC), number(fit.BIC)
	r.StandardErrors = &standardErrors{
		number(shape.StandardError), number(scale.StandardError), number(fit.Mean.StandardError),
		number(shape.LogStandardError), number(scale.LogStandardError),
	}
	r.CovarianceLn = &[2][2]number{
		{number(fit.Covariance[0][0]), number(fit.Covariance[0][1])},
		{number(fit.Covariance[1][0]), number(fit.Covariance[1][1])},
	}
	r.Intervals = &intervals{
		Level: number(shape.Interval.Level), Method: shape.Interval.Method,
		Shape: newInterval(shape.Interval), Scale: newInterval(scale.Interval), Mean: newInterval(fit.Mean.Interval),
	}
	r.Convergence = convergence{
		c.Iterations, number(c.ScoreNorm), number(c.NewtonDecrement), number(c.Condition),
		c.Starts, c.StationaryPoints, c.Certificate,
	}
}

func newInterval(i severity.Interval) interval {
	return interval{number(i.Lower), number(i.Upper), i.Note}
}
