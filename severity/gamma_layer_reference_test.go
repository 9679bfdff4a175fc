package severity

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"
)

// relative is |got/want - 1|; 0 when both are equal, zero and infinite ones
// included.
func relative(got, want float64) float64 {
	if got == want {
		return 0
	}
	return math.Abs(got-want) / math.Abs(want)
}

// layerCase is one case of testdata/layers/layers.json.
type layerCase struct {
	Name              string
	A, Theta          float64
	Attachment        float64
	Limit             *float64 // nil for unlimited
	Reach             float64  `json:"prob_reach"`
	LogReach          float64  `json:"ln_prob_reach"`
	Exhaust           float64  `json:"prob_exhaust"`
	Mean              float64  `json:"layer_mean"`
	SecondMoment      float64  `json:"layer_second_moment"`
	Deviation         float64  `json:"layer_sd"`
	MeanReached       float64  `json:"layer_mean_given_reached"`
	DeviationReached  float64  `json:"layer_sd_given_reached"`
	U                 float64  `json:"u"`
	LimitedU          float64  `json:"lev_u"`
	LimitedSquareU    float64  `json:"lev2_u"`
	LimitedDeviationU float64  `json:"sd_limited_u"`
	D                 float64  `json:"d"`
	LimitedD          float64  `json:"lev_d"`
	Ratio             float64  `json:"loss_elimination_ratio_d"`
	ExcessD           float64  `json:"excess_mean_d"`
	SurvivalD         float64  `json:"survival_d"`
	MeanExcessD       float64  `json:"mean_excess_d"`
	Quantiles         map[string]float64
	TailValues        map[string]float64 `json:"tvar"`
}

func layerCases(t testing.TB) []layerCase {
	t.Helper()
	raw, err := os.ReadFile("../testdata/layers/layers.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Cases []layerCase }
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Cases) != 26 {
		t.Fatalf("layers.json holds %d cases, want 26", len(file.Cases))
	}
	return file.Cases
}

func TestLayersOfTheReference(t *testing.T) {
	const tolerance = 1e-12
	worst := 0.0
	for _, c := range layerCases(t) {
		g, err := NewGamma(c.A, c.Theta)
		if err != nil {
			t.Fatal(err)
		}
		limit := math.Inf(1)
		if c.Limit != nil {
			limit = *c.Limit
		}
		check := func(what string, got, want float64) {
			e := relative(got, want)
			worst = math.Max(worst, e)
			if !(e <= tolerance) {
				t.Errorf("%s: %s is %.17g, want %.17g: relative error %.2g", c.Name, what, got, want, e)
			}
		}
		f := g.LayerFigures(c.Attachment, limit)
		check("survival at the attachment", g.Survival(c.Attachment), c.Reach)
		check("log survival at the attachment", g.LogSurvival(c.Attachment), c.LogReach)
		check("survival at the top", g.Survival(c.Attachment+limit), c.Exhaust)
		check("layer mean", g.LayerMean(c.Attachment, limit), c.Mean)
		check("layer mean, as a figure", f.Mean.Value, c.Mean)
		check("second moment", g.LayerSecondMoment(c.Attachment, limit), c.SecondMoment)
		check("standard deviation", f.StandardDeviation.Value, c.Deviation)
		check("mean if attached", f.MeanIfAttached.Value, c.MeanReached)
		check("standard deviation if attached", f.StandardDeviationIfAttached.Value, c.DeviationReached)
		check("limited expected value", g.LimitedExpectedValue(c.U), c.LimitedU)
		check("limited expected value, as a layer", g.LayerMean(0, c.U), c.LimitedU)
		check("limited second moment", g.LimitedSecondMoment(c.U), c.LimitedSquareU)
		check("limited second moment, as a layer", g.LayerSecondMoment(0, c.U), c.LimitedSquareU)
		check("limited standard deviation", g.LayerFigures(0, c.U).StandardDeviation.Value, c.LimitedDeviationU)
		check("limited expected value at d", g.LimitedExpectedValueFigure(c.D).Value, c.LimitedD)
		check("loss elimination ratio", g.LossEliminationRatioFigure(c.D).Value, c.Ratio)
		check("excess mean", g.LayerMean(c.D, math.Inf(1)), c.ExcessD)
		check("survival at d", g.SurvivalFigure(c.D).Value, c.SurvivalD)
		check("mean excess", g.MeanExcess(c.D), c.MeanExcessD)
		for level, want := range c.Quantiles {
			p, err := strconv.ParseFloat(level, 64)
			if err != nil {
				t.Fatal(err)
			}
			check("quantile "+level, g.Quantile(p), want)
			check("upper quantile of the complement of "+level, g.UpperQuantile(1-p), want)
			check("tail value at risk "+level, g.TailValueAtRisk(p), c.TailValues[level])
		}
	}
	t.Logf("largest relative error %.1e", worst)
}

// extreme is a row of testdata/layers/extreme.csv: each figure with its
// derivatives in ln shape and ln scale.
type extreme struct {
	name                            string
	shape, scale, attachment, limit float64
	figures                         map[string][3]float64
}

func extremes(t testing.TB) []extreme {
	t.Helper()
	file, err := os.Open("../testdata/layers/extreme.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != 27 {
		t.Fatalf("extreme.csv has %d rows, want a header and 26 cases", len(rows))
	}
	number := func(text string) float64 {
		if text == "unlimited" {
			return math.Inf(1)
		}
		v, err := strconv.ParseFloat(text, 64)
		if err != nil && v != 0 {
			t.Fatal(err)
		}
		return v
	}
	var cases []extreme
	for _, row := range rows[1:] {
		c := extreme{row[0], number(row[1]), number(row[2]), number(row[3]), number(row[4]), map[string][3]float64{}}
		for i := 5; i < len(row); i += 3 {
			c.figures[rows[0][i]] = [3]float64{number(row[i]), number(row[i+1]), number(row[i+2])}
		}
		cases = append(cases, c)
	}
	return cases
}

// TestExtremeLayers holds tiny and huge shapes, attachments far in the tail and
// thin layers against 400-digit arithmetic, values and gradients.
func TestExtremeLayers(t *testing.T) {
	worst, worstGradient := 0.0, 0.0
	for _, c := range extremes(t) {
		g := Gamma{c.shape, c.scale}
		top := c.attachment + c.limit
		f := g.LayerFigures(c.attachment, c.limit)
		second := g.LayerSecondMoment(c.attachment, c.limit)
		if e := relative(second, c.figures["second_moment"][0]); !(e <= 1e-12) {
			t.Errorf("%s: second moment is %.17g, want %.17g: relative error %.2g", c.name, second, c.figures["second_moment"][0], e)
		}
		// The top of a layer thinner than a part in 1e10 of its attachment is not
		// a double; what is asked at it would be asked at another point.
		figures := map[string]Figure{
			"survival_attachment":            g.SurvivalFigure(c.attachment),
			"mean_excess":                    g.MeanExcessFigure(c.attachment),
			"limited_mean_attachment":        g.LimitedExpectedValueFigure(c.attachment),
			"loss_elimination_ratio":         g.LossEliminationRatioFigure(c.attachment),
			"mean":                           f.Mean,
			"standard_deviation":             f.StandardDeviation,
			"mean_if_attached":               f.MeanIfAttached,
			"standard_deviation_if_attached": f.StandardDeviationIfAttached,
		}
		if c.limit > 1e-10*c.attachment {
			figures["survival_top"] = g.SurvivalFigure(top)
			figures["limited_mean_top"] = g.LimitedExpectedValueFigure(top)
		}
		for what, got := range figures {
			want := c.figures[what]
			e := relative(got.Value, want[0])
			worst = math.Max(worst, e)
			if !(e <= 1e-12) {
				t.Errorf("%s: %s is %.17g, want %.17g: relative error %.2g", c.name, what, got.Value, want[0], e)
			}
			for i, parameter := range []string{"shape", "scale"} {
				if want[1+i] == 0 || math.Abs(want[1+i]) < 1e-290 {
					continue // beside what a double holds
				}
				e := relative(got.Gradient[i], want[1+i])
				worstGradient = math.Max(worstGradient, e)
				if !(e <= 1e-9) {
					t.Errorf("%s: change of %s with ln %s is %.17g, want %.17g: relative error %.2g", c.name, what, parameter, got.Gradient[i], want[1+i], e)
				}
			}
		}
	}
	t.Logf("largest relative error %.1e in values, %.1e in gradients", worst, worstGradient)
}
