package severity

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"
)

// referenceSet is one entry of testdata/fits/manifest.json: figures made
// outside this project, see testdata/fits/README.md.
type referenceSet struct {
	Name, File, Status string
	A, Theta, Mean     float64
	LogLikelihood      float64        `json:"loglik"`
	AIC                float64        `json:"aic"`
	BIC                float64        `json:"bic_sum_weights"`
	SeA                float64        `json:"se_a"`
	SeTheta            float64        `json:"se_theta"`
	SeLnA              float64        `json:"se_ln_a"`
	SeLnTheta          float64        `json:"se_ln_theta"`
	SeMean             float64        `json:"se_mean"`
	CovLn              float64        `json:"cov_ln_a_ln_theta"`
	Supremum           float64        `json:"loglik_supremum"`
	SupremumScale      float64        `json:"theta_at_supremum"`
	Profile            map[string]any `json:"profile95"`
	CheckPoints        []struct {
		A, Theta      float64
		LogLikelihood float64 `json:"loglik"`
		G0            float64 `json:"dl_dlna"`
		G1            float64 `json:"dl_dlntheta"`
		H00           float64 `json:"d2l_dlna2"`
		H01           float64 `json:"d2l_dlna_dlntheta"`
		H11           float64 `json:"d2l_dlntheta2"`
	} `json:"check_points"`
}

func referenceSets(t testing.TB) []referenceSet {
	t.Helper()
	raw, err := os.ReadFile("../testdata/fits/manifest.json")
	if err != nil {
		t.Fatal(err)
	}
	var manifest struct{ Sets []referenceSet }
	if err := json.Unmarshal(raw, &manifest); err != nil {
		t.Fatal(err)
	}
	if len(manifest.Sets) != 30 {
		t.Fatalf("the manifest names %d sets, want 30", len(manifest.Sets))
	}
	return manifest.Sets
}

func referenceObservations(t testing.TB, file string) []Observation {
	t.Helper()
	f, err := os.Open("../testdata/fits/" + file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%s: %d rows, %v", file, len(rows), err)
	}
	var observations []Observation
	for _, row := range rows[1:] {
		var v [4]float64
		for i := range v {
			if v[i], err = strconv.ParseFloat(row[i], 64); err != nil {
				t.Fatal(err)
			}
		}
		observations = append(observations, Observation{Loss: v[0], Threshold: v[1], Censored: v[2] == 1, Weight: v[3]})
	}
	return observations
}

func close(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if e := math.Abs(got-want) / math.Abs(want); !(e <= tolerance) {
		t.Errorf("%s = %.17g, want %.17g (relative error %.1e, allowed %.0e)", what, got, want, e, tolerance)
	}
}

func TestReferenceFits(t *testing.T) {
	statuses := map[string]Status{"no_interior_maximum": NoInteriorMaximum, "unbounded": Unbounded, "no_mle_all_censored": AllCensored}
	for _, set := range referenceSets(t) {
		t.Run(set.Name, func(t *testing.T) {
			s, err := Summarize(referenceObservations(t, set.File))
			if err != nil {
				t.Fatal(err)
			}
			fit, failure := FitGamma(s, 0.95)
			if (fit == nil) == (failure == nil) {
				t.Fatalf("exactly one of fit and failure: %v, %v", fit, failure)
			}
			if set.Status != "ok" {
				if failure == nil || failure.Status != statuses[set.Status] {
					t.Fatalf("got %v, want status %s", failure, set.Status)
				}
				if set.Supremum != 0 {
					close(t, "supremum", failure.Boundary.LogLikelihood, set.Supremum, 1e-12)
					close(t, "scale at the supremum", failure.Boundary.Scale, set.SupremumScale, 1e-9)
				}
				return
			}
			if failure != nil {
				t.Fatal(failure)
			}
			shape, scale := fit.Parameters[0], fit.Parameters[1]
			close(t, "shape", shape.Value, set.A, 1e-9)
			close(t, "scale", scale.Value, set.Theta, 1e-9)
			close(t, "mean", fit.Mean.Value, set.Mean, 1e-12)
			close(t, "log-likelihood", fit.LogLikelihood, set.LogLikelihood, 1e-13)
			close(t, "AIC", fit.AIC, set.AIC, 1e-13)
			close(t, "BIC", fit.BIC, set.BIC, 1e-13)
			close(t, "standard error of shape", shape.StandardError, set.SeA, 1e-8)
			close(t, "standard error of scale", scale.StandardError, set.SeTheta, 1e-8)
			close(t, "standard error of ln shape", shape.LogStandardError, set.SeLnA, 1e-8)
			close(t, "standard error of ln scale", scale.LogStandardError, set.SeLnTheta, 1e-8)
			close(t, "standard error of the mean", fit.Mean.StandardError, set.SeMean, 1e-8)
			close(t, "covariance", fit.Covariance[0][1], set.CovLn, 1e-8)
			for key, got := range map[string]float64{
				"a_lower": shape.Interval.Lower, "a_upper": shape.Interval.Upper,
				"mean_lower": fit.Mean.Interval.Lower, "mean_upper": fit.Mean.Interval.Upper,
			} {
				switch want := set.Profile[key].(type) {
				case nil:
					if !math.IsInf(got, 1) {
						t.Errorf("%s = %g, want no end", key, got)
					}
				case float64:
					if want == 0 {
						if got != 0 {
							t.Errorf("%s = %g, want 0", key, got)
						}
					} else {
						close(t, key, got, want, 1e-10)
					}
				}
			}
			if c := fit.Convergence; !(c.NewtonDecrement < 1e-10 && c.ScoreNorm < 1e-7 && c.Condition >= 1 && c.Starts > 0 && c.Certificate != "") {
				t.Errorf("proof of the maximum: %+v", c)
			}
		})
	}
}

func TestReferenceLikelihood(t *testing.T) {
	points := 0
	for _, set := range referenceSets(t) {
		if len(set.CheckPoints) == 0 {
			continue
		}
		s, err := Summarize(referenceObservations(t, set.File))
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range set.CheckPoints {
			points++
			value, g, h := GammaLikelihood{s}.At(p.A, p.Theta)
			name := set.Name
			close(t, name+" log-likelihood", value, p.LogLikelihood, 1e-12)
			// A score of a sum that cancels is judged by the size of its terms.
			size := 1e-12 * (math.Abs(p.H00) + math.Abs(p.H11))
			for i, want := range []float64{p.G0, p.G1} {
				if !(math.Abs(g[i]-want) <= size+1e-12*math.Abs(want)) {
					t.Errorf("%s score %d at (%g, %g) = %.17g, want %.17g", name, i, p.A, p.Theta, g[i], want)
				}
			}
			close(t, name+" d²/d ln shape²", h[0][0], p.H00, 1e-9)
			close(t, name+" d²/d ln shape d ln scale", h[0][1], p.H01, 1e-9)
			close(t, name+" d²/d ln scale²", h[1][1], p.H11, 1e-9)
		}
	}
	if points < 50 {
		t.Fatalf("only %d check points", points)
	}
}
