package main

import (
	"encoding/json"
	"fmt"
	"os"
	"strconv"
	"testing"
)

// TestLayersReferences holds the layers command against testdata/layers, which
// was computed at 25 digits and more outside this project.
func TestLayersReferences(t *testing.T) {
	text, err := os.ReadFile("../../testdata/layers/layers.json")
	if err != nil {
		t.Fatal(err)
	}
	var table struct {
		Cases []struct {
			Name             string
			A, Theta, Mean   float64
			Attachment       float64
			Limit            *float64
			ProbReach        float64  `json:"prob_reach"`
			ProbExhaust      *float64 `json:"prob_exhaust"`
			LayerMean        float64  `json:"layer_mean"`
			LayerSD          float64  `json:"layer_sd"`
			LayerMeanReached float64  `json:"layer_mean_given_reached"`
			LayerSDReached   float64  `json:"layer_sd_given_reached"`
			D                float64
			LevD             float64 `json:"lev_d"`
			LossElimination  float64 `json:"loss_elimination_ratio_d"`
			ExcessMean       float64 `json:"excess_mean_d"`
			Survival         float64 `json:"survival_d"`
			MeanExcess       float64 `json:"mean_excess_d"`
			U                float64
			LevU             float64 `json:"lev_u"`
			SDLimited        float64 `json:"sd_limited_u"`
			Quantiles        map[string]float64
			Tail             map[string]float64 `json:"tvar"`
		}
	}
	if err := json.Unmarshal(text, &table); err != nil {
		t.Fatal(err)
	}
	if len(table.Cases) < 20 {
		t.Fatalf("%d reference cases, want 26", len(table.Cases))
	}
	for _, c := range table.Cases {
		t.Run(c.Name, func(t *testing.T) {
			limit := "unlimited"
			if c.Limit != nil {
				limit = fmt.Sprint(*c.Limit)
			}
			args := []string{"layers", "--model", "gamma", "--shape", fmt.Sprint(c.A), "--scale", fmt.Sprint(c.Theta), "--json",
				"--layer", fmt.Sprintf("%s xs %v", limit, c.Attachment),
				"--layer", fmt.Sprintf("unlimited xs %v", c.D),
				"--layer", fmt.Sprintf("%v xs 0", c.U)}
			levels := []string{"0.5", "0.9", "0.95", "0.99", "0.995", "0.999"}
			for _, p := range levels {
				args = append(args, "--quantile", p)
			}
			got := answer(t, "", args...)
			got.is(t, "gamma", "model")
			got.near(t, c.A, 1e-15, "parameters", "shape")
			got.near(t, c.Theta, 1e-15, "parameters", "scale")
			got.near(t, c.Mean, 1e-14, "mean")
			got.is(t, c.Attachment, "layers", 0, "attachment")
			if c.Limit == nil {
				got.is(t, nil, "layers", 0, "limit")
			} else {
				got.is(t, *c.Limit, "layers", 0, "limit")
			}
			near := func(want float64, path ...any) {
				t.Helper()
				if want == 0 || want < 1e-290 { // below what a double can hold with all its digits
					if v := got.number(t, path...); v > 1e-290 {
						t.Errorf("%v = %g, want about 0", path, v)
					}
					return
				}
				got.near(t, want, 1e-10, path...)
			}
			near(c.ProbReach, "layers", 0, "probability_attach")
			near(c.LayerMean, "layers", 0, "expected_loss")
			near(c.LayerMeanReached, "layers", 0, "mean_if_attached")
			near(c.LayerSDReached, "layers", 0, "standard_deviation_if_attached")
			near(c.LayerSD, "layers", 0, "standard_deviation")
			if c.Limit != nil && c.ProbExhaust != nil {
				near(*c.ProbExhaust, "layers", 0, "probability_exhaust")
			}
			near(c.LevD, "layers", 1, "limited_expected_value_attachment")
			near(c.LossElimination, "layers", 1, "loss_elimination_ratio")
			near(c.Survival, "layers", 1, "probability_attach")
			near(c.MeanExcess, "layers", 1, "mean_excess")
			near(c.ExcessMean, "layers", 1, "expected_loss")
			near(c.Mean, "layers", 1, "limited_expected_value_exhaustion")
			got.is(t, 0, "layers", 2, "limited_expected_value_attachment")
			near(c.LevU, "layers", 2, "limited_expected_value_exhaustion")
			near(c.LevU, "layers", 2, "expected_loss")
			near(c.SDLimited, "layers", 2, "standard_deviation")
			for i, p := range levels {
				level, _ := strconv.ParseFloat(p, 64)
				got.is(t, level, "quantiles", i, "p")
				near(c.Quantiles[p], "quantiles", i, "value")
				near(c.Tail[p], "quantiles", i, "tail_value_at_risk")
			}
		})
	}
}

// TestLayersAddUp: adjoining layers make the whole, an identity of the
// definition, at a curve whose expected layer losses were computed at 30 digits
// (mpmath) outside this project.
func TestLayersAddUp(t *testing.T) {
	got := answer(t, "", "layers", "--shape", "1.5", "--scale", "40000", "--json",
		"--layer", "50000 xs 50000", "--layer", "100000 xs 100000", "--layer", "250000 xs 250000",
		"--layer", "50000 xs 0", "--layer", "50000 xs 200000", "--layer", "unlimited xs 500000", "--layer", "unlimited xs 0")
	for i, want := range []float64{15052.0533101911712, 6972.20911387507765, 248.781972912777372} {
		got.near(t, want, 1e-12, "layers", i, "expected_loss")
	}
	sum := 0.0
	for i := range 6 {
		sum += got.number(t, "layers", i, "expected_loss")
	}
	got.near(t, sum, 1e-12, "layers", 6, "expected_loss")
	got.near(t, 60000, 1e-12, "layers", 6, "expected_loss")
	got.is(t, nil, "layers", 6, "limit")
	if quantiles := got.at(t, "quantiles").([]any); len(quantiles) != 0 {
		t.Errorf("quantiles %v, none was asked", quantiles)
	}
}
