package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"testing"
)

// reference is one set of testdata/fits/manifest.json, which was computed at 50
// digits outside this project; testdata/fits/README.md says how.
type reference struct {
	Name, File, Status string
	N                  int
	SumWeights         float64 `json:"sum_weights"`
	NCensored          int     `json:"n_censored"`
	NTruncated         int     `json:"n_truncated"`
	A, Theta, Mean     float64
	Loglik, AIC        float64
	BIC                float64 `json:"bic_sum_weights"`
	SeLnA              float64 `json:"se_ln_a"`
	SeLnTheta          float64 `json:"se_ln_theta"`
	CovLn              float64 `json:"cov_ln_a_ln_theta"`
	SeA                float64 `json:"se_a"`
	SeTheta            float64 `json:"se_theta"`
	Profile            struct {
		ALower    *float64 `json:"a_lower"`
		AUpper    *float64 `json:"a_upper"`
		MeanLower *float64 `json:"mean_lower"`
		MeanUpper *float64 `json:"mean_upper"`
	} `json:"profile95"`
}

func references(t *testing.T) []reference {
	t.Helper()
	text, err := os.ReadFile("../../testdata/fits/manifest.json")
	if err != nil {
		t.Fatal(err)
	}
	var manifest struct{ Sets []reference }
	if err := json.Unmarshal(text, &manifest); err != nil {
		t.Fatal(err)
	}
	if len(manifest.Sets) < 30 {
		t.Fatalf("%d reference sets, want 30", len(manifest.Sets))
	}
	return manifest.Sets
}

func TestFitReferences(t *testing.T) {
	statuses := map[string]string{"ok": "converged", "no_interior_maximum": "no_interior_maximum", "unbounded": "unbounded", "no_mle_all_censored": "all_censored"}
	for _, want := range references(t) {
		t.Run(want.Name, func(t *testing.T) {
			got := answer(t, "", "fit", filepath.Join("../../testdata/fits", want.File), "--columns", "amount=loss", "--json")
			got.is(t, statuses[want.Status], "status")
			got.is(t, "gamma", "model")
			got.is(t, want.N, "claims", "read")
			got.is(t, 0, "claims", "rejected")
			got.is(t, want.N, "claims", "used")
			got.is(t, want.NCensored, "claims", "censored")
			got.is(t, want.N-want.NCensored, "claims", "uncensored")
			got.near(t, want.SumWeights, 1e-12, "claims", "weight")
			if reason, _ := got.at(t, "reason").(string); len(reason) < 20 {
				t.Errorf("reason %q is no sentence", reason)
			}
			if want.Status != "ok" {
				for _, key := range []string{"parameters", "mean", "log_likelihood", "aic", "bic", "standard_errors", "covariance_ln", "intervals"} {
					got.is(t, nil, key)
				}
				return
			}
			got.near(t, want.A, 1e-9, "parameters", "shape")
			got.near(t, want.Theta, 1e-9, "parameters", "scale")
			got.near(t, want.Mean, 1e-9, "mean")
			got.near(t, want.Loglik, 1e-10, "log_likelihood")
			got.near(t, want.AIC, 1e-10, "aic")
			got.near(t, want.BIC, 1e-10, "bic")
			got.near(t, want.SeA, 1e-7, "standard_errors", "shape")
			got.near(t, want.SeTheta, 1e-7, "standard_errors", "scale")
			got.near(t, want.SeLnA, 1e-7, "standard_errors", "ln_shape")
			got.near(t, want.SeLnTheta, 1e-7, "standard_errors", "ln_scale")
			got.near(t, want.SeLnA*want.SeLnA, 1e-6, "covariance_ln", 0, 0)
			got.near(t, want.CovLn, 1e-6, "covariance_ln", 0, 1)
			got.near(t, want.SeLnTheta*want.SeLnTheta, 1e-6, "covariance_ln", 1, 1)
			got.near(t, 0.95, 1e-15, "intervals", "level")
			for _, end := range []struct {
				parameter, end string
				want           *float64
			}{
				{"shape", "lower", want.Profile.ALower}, {"shape", "upper", want.Profile.AUpper},
				{"mean", "lower", want.Profile.MeanLower}, {"mean", "upper", want.Profile.MeanUpper},
			} {
				switch {
				case end.want == nil:
					got.is(t, nil, "intervals", end.parameter, end.end)
					got.at(t, "intervals", end.parameter, "note")
				case *end.want == 0:
					got.is(t, 0, "intervals", end.parameter, end.end)
					got.at(t, "intervals", end.parameter, "note")
				default:
					got.near(t, *end.want, 1e-6, "intervals", end.parameter, end.end)
				}
			}
			if got.number(t, "convergence", "iterations") < 1 || got.number(t, "convergence", "condition") < 1 {
				t.Errorf("convergence %v", got["convergence"])
			}
			if got.number(t, "convergence", "score_norm") > 1e-8 || got.number(t, "convergence", "newton_decrement") > 1e-6 {
				t.Errorf("convergence %v is no proof of a maximum", got["convergence"])
			}
		})
	}
}
