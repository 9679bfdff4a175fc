package evidence

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"

	"pgregory.net/rapid"

	"spillway/severity"
)

func near(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance*math.Abs(want)
}

// table reads a CSV file with a header and at least one row.
func table(t testing.TB, path string) []map[string]string {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) < 2 {
		t.Fatalf("%s holds no rows", path)
	}
	var out []map[string]string
	for _, row := range rows[1:] {
		m := map[string]string{}
		for i, name := range rows[0] {
			m[name] = row[i]
		}
		out = append(out, m)
	}
	return out
}

func number(t testing.TB, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func observations(t testing.TB, path string) []severity.Observation {
	t.Helper()
	var obs []severity.Observation
	for _, row := range table(t, path) {
		obs = append(obs, severity.Observation{
			Loss: number(t, row["loss"]), Threshold: number(t, row["deductible"]),
			Weight: number(t, row["weight"]), Censored: row["limit_reached"] == "1",
		})
	}
	return obs
}

func build(t rapid.TB, obs []severity.Observation) *Sample {
	t.Helper()
	s, err := Build(obs)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// productLimitSet is an entry of testdata/gof/gof.json.
type productLimitSet struct {
	Set           string
	Events        int     `json:"n_event_times"`
	FirstEntry    float64 `json:"first_entry"`
	FinalSurvival float64 `json:"final_survival"`
	CollapsedAt   *float64
	Distance      float64 `json:"sup_abs_km_minus_gamma_mle"`
}

func productLimitSets(t testing.TB) []productLimitSet {
	t.Helper()
	raw, err := os.ReadFile("../../testdata/gof/gof.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Sets []struct {
			productLimitSet
			Collapsed *float64 `json:"collapsed_at"`
		} `json:"product_limit"`
	}
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Sets) != 9 {
		t.Fatalf("gof.json has %d product-limit estimates, want 9", len(file.Sets))
	}
	var sets []productLimitSet
	for _, s := range file.Sets {
		s.CollapsedAt = s.Collapsed
		sets = append(sets, s.productLimitSet)
	}
	return sets
}

func (s productLimitSet) observations(t testing.TB) []severity.Observation {
	if s.Set == "collapse_demo" {
		return observations(t, "../../testdata/gof/collapse_demo.csv")
	}
	return observations(t, "../../testdata/fits/"+s.Set+".csv")
}

func TestProductLimitOfTheReference(t *testing.T) {
	worst := 0.0
	for _, set := range productLimitSets(t) {
		sample := build(t, set.observations(t))
		points := sample.ProductLimit()
		want := table(t, "../../testdata/gof/km_"+set.Set+".csv")
		if len(points) != len(want) || len(points) != set.Events {
			t.Errorf("%s: %d steps, want %d", set.Set, len(points), len(want))
			continue
		}
		for i, row := range want {
			p := points[i]
			check := func(what string, got, want float64) {
				if want != 0 {
					worst = math.Max(worst, math.Abs(got/want-1))
				}
				if !near(got, want, 1e-12) {
					t.Errorf("%s: %s at %v is %.17g, want %.17g", set.Set, what, p.Loss, got, want)
				}
			}
			check("loss", p.Loss, number(t, row["time"]))
			check("weight at risk", p.AtRisk, number(t, row["at_risk"]))
			check("events", p.Events, number(t, row["events"]))
			check("survival", p.Survival, number(t, row["surv"]))
			check("survival asked for", sample.SurvivalAt(p.Loss), number(t, row["surv"]))
			if se := row["greenwood_se_of_ln_surv"]; se != "" {
				check("standard error", p.LogStandardError, number(t, se))
			} else if !math.IsNaN(p.LogStandardError) {
				t.Errorf("%s: standard error at %v is %v, want none", set.Set, p.Loss, p.LogStandardError)
			}
		}
		if last := points[len(points)-1].Survival; !near(last, set.FinalSurvival, 1e-12) {
			t.Errorf("%s: final survival %v, want %v", set.Set, last, set.FinalSurvival)
		}
		if sample.LowestThreshold() != set.FirstEntry {
			t.Errorf("%s: lowest threshold %v, want %v", set.Set, sample.LowestThreshold(), set.FirstEntry)
		}
		at, collapsed := sample.Collapse()
		if collapsed != (set.CollapsedAt != nil) || collapsed && at != *set.CollapsedAt {
			t.Errorf("%s: collapse at %v (%v), want %v", set.Set, at, collapsed, set.CollapsedAt)
		}
	}
	t.Logf("largest relative difference %.1e", worst)
}

// TestDistanceToTheFit holds the estimate and the fitted survival, both given a
// loss above the lowest threshold, against the published largest distance.
func TestDistanceToTheFit(t *testing.T) {
	raw, err := os.ReadFile("../../testdata/fits/manifest.json")
	if err != nil {
		t.Fatal(err)
	}
	var manifest struct {
		Sets []struct {
			Name     string
			A, Theta float64
		}
	}
	if err := json.Unmarshal(raw, &manifest); err != nil {
		t.Fatal(err)
	}
	fits := map[string]severity.Gamma{}
	for _, s := range manifest.Sets {
		fits[s.Name] = severity.Gamma{Shape: s.A, Scale: s.Theta}
	}
	checked := 0
	for _, set := range productLimitSets(t) {
		if set.Distance == 0 {
			continue
		}
		checked++
		obs := set.observations(t)
		sample, fit := build(t, obs), fits[set.Set]
		base := fit.LogSurvival(sample.LowestThreshold())
		fitted := func(x float64) float64 { return math.Exp(fit.LogSurvival(x) - base) }
		largest, before := 0.0, 1.0
		for _, p := range sample.ProductLimit() {
			largest = math.Max(largest, math.Max(math.Abs(before-fitted(p.Loss)), math.Abs(p.Survival-fitted(p.Loss))))
			before = p.Survival
		}
		end := 0.0
		for _, o := range obs {
			end = math.Max(end, o.Loss)
		}
		largest = math.Max(largest, math.Abs(sample.SurvivalAt(end)-fitted(end)))
		if !near(largest, set.Distance, 1e-11) {
			t.Errorf("%s: largest distance %.15g, want %.15g", set.Set, largest, set.Distance)
		}
	}
	if checked != 8 {
		t.Errorf("%d distances checked, want 8", checked)
	}
}
