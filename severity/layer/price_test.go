package layer

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"spillway/severity"
)

func near(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance*math.Abs(want)
}

func gamma(t testing.TB, shape, scale float64) severity.Gamma {
	t.Helper()
	g, err := severity.NewGamma(shape, scale)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// inverse of a symmetric 2×2 matrix.
func inverse(h [][]float64) [][]float64 {
	d := h[0][0]*h[1][1] - h[0][1]*h[1][0]
	return [][]float64{{h[1][1] / d, -h[0][1] / d}, {-h[1][0] / d, h[0][0] / d}}
}

func TestPriceOfTheReference(t *testing.T) {
	raw, err := os.ReadFile("../../testdata/layers/layers.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Cases []struct {
			Name          string
			A, Theta      float64
			Attachment    float64
			Limit         *float64
			Mean          float64 `json:"layer_mean"`
			Deviation     float64 `json:"layer_sd"`
			Reach         float64 `json:"prob_reach"`
			Exhaust       float64 `json:"prob_exhaust"`
			MeanReached   float64 `json:"layer_mean_given_reached"`
			DevReached    float64 `json:"layer_sd_given_reached"`
			D             float64
			LimitedD      float64 `json:"lev_d"`
			RatioD        float64 `json:"loss_elimination_ratio_d"`
			MeanExcessD   float64 `json:"mean_excess_d"`
			Quantiles     map[string]float64
			TailValueRisk map[string]float64 `json:"tvar"`
		}
	}
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Cases) != 26 {
		t.Fatalf("layers.json holds %d cases, want 26", len(file.Cases))
	}
	for _, c := range file.Cases {
		l := Layer{Attachment: c.Attachment, Limit: math.Inf(1)}
		if c.Limit != nil {
			l.Limit = *c.Limit
		}
		curve := gamma(t, c.A, c.Theta)
		f := Price(curve, nil, l, 0.95)
		d := Price(curve, nil, Layer{Attachment: c.D, Limit: 1}, 0.95)
		for what, pair := range map[string][2]float64{
			"expected loss":                  {f.ExpectedLoss.Value, c.Mean},
			"standard deviation":             {f.StandardDeviation.Value, c.Deviation},
			"probability attach":             {f.ProbabilityAttach.Value, c.Reach},
			"probability exhaust":            {f.ProbabilityExhaust.Value, c.Exhaust},
			"mean if attached":               {f.MeanIfAttached.Value, c.MeanReached},
			"standard deviation if attached": {f.StandardDeviationIfAttached.Value, c.DevReached},
			"limited expected value at d":    {d.LimitedExpectedValueAttachment.Value, c.LimitedD},
			"loss elimination ratio at d":    {d.LossEliminationRatio.Value, c.RatioD},
			"mean excess at d":               {d.MeanExcess.Value, c.MeanExcessD},
			"quantile 0.995":                 {Quantiles(curve, nil, 0.995, 0.95).Value.Value, c.Quantiles["0.995"]},
			"tail value at risk 0.995":       {Quantiles(curve, nil, 0.995, 0.95).TailValueAtRisk.Value, c.TailValueRisk["0.995"]},
		} {
			if !near(pair[0], pair[1], 1e-12) {
				t.Errorf("%s: %s is %.17g, want %.17g", c.Name, what, pair[0], pair[1])
			}
		}
		if !math.IsNaN(f.ExpectedLoss.StandardError) || !math.IsNaN(f.ExpectedLoss.Interval.Upper) {
			t.Errorf("%s: without a covariance there is an error %+v", c.Name, f.ExpectedLoss)
		}
	}
}

// Gamma fits whose covariance, layer cost with its delta-method standard error,
// 95% quantile and tail value were computed with mpmath at 40 digits, outside
// this project, by differentiating the likelihood numerically. Losses of B are
// the 20 payments known as Data Set B (Klugman, Panjer & Willmot, Loss Models).
var oracles = []struct {
	name                                string
	shape, scale                        float64
	seShape, seScale, covariance        float64
	layer                               string
	cost, costError, quantile, tailRisk float64
}{
	{"O1, B complete", 0.556157797371492, 2561.14362997694, 0.146637068396273, 1022.59770388176, -99.0201188276197,
		"1000 xs 1000", 317.511865510292, 79.148020303536, 5267.31276671978, 7541.98411987662},
	{"O2, B above 50", 0.637568937573177, 1142.27178999094, 0.387000420933103, 589.842723778697, -191.711844085572,
		"1000 xs 1000", 153.062743944428, 68.192694552919, 2563.84324678426, 3605.62690982701},
	{"O3, B limited at 1000", 1.03543844430355, 688.211014562866, 0.32947153566259, 317.803188131884, -87.5861637672703,
		"1000 xs 1000", 130.488446627715, 73.2139748500967, 2108.68644995791, 2802.06386871132},
	{"O4, failure times of NIST/SEMATECH 8.4.1.3, limited at 500", 2.16839749390983, 266.341418978429, 0.901787893064293, 151.274828919917, -128.162476394103,
		"300 xs 200", 201.993170431468, 25.4131068966686, 1335.57965466695, 1654.74966064948},
	{"O5, payments above 5, limited at 25", 2.79321681403685, 5.55291193054325, 2.53045675215857, 4.77238935854346, -11.7057756336021,
		"10 xs 10", 4.52402674306459, 1.60252959484473, 33.2307924117788, 40.3428976726419},
	{"O6, mixed terms", 0.291513260076571, 24250.3638312512, 0.0991331490671388, 18655.6759894813, -1220.98955519101,
		"9000 xs 1000", 3006.98359497086, 853.271341935351, 32636.2798250571, 51724.185729357},
	{"FX, 30 claims of testdata/fixture.csv at the cost level of 2025", 0.997821867719046, 7765.27056657856, 0.295194126349964, 2583.85468406747, -627.460951999259,
		"15000 xs 10000", 1825.48564119854, 687.470763293628, 23229.9024285366, 30991.5519453214},
}

func TestDeltaErrorsOfTheOracles(t *testing.T) {
	for _, o := range oracles {
		l, err := ParseLayer(o.layer)
		if err != nil {
			t.Fatal(err)
		}
		// Of (ln shape, ln scale), from that of (shape, scale).
		sa, st := o.seShape/o.shape, o.seScale/o.scale
		c := o.covariance / (o.shape * o.scale)
		covariance := [][]float64{{sa * sa, c}, {c, st * st}}
		curve := gamma(t, o.shape, o.scale)
		f, q := Price(curve, covariance, l, 0.95), Quantiles(curve, covariance, 0.95, 0.95)
		for what, pair := range map[string][2]float64{
			"layer cost":           {f.ExpectedLoss.Value, o.cost},
			"its standard error":   {f.ExpectedLoss.StandardError, o.costError},
			"95% quantile":         {q.Value.Value, o.quantile},
			"95% tail value":       {q.TailValueAtRisk.Value, o.tailRisk},
			"limited values' part": {f.LimitedExpectedValueExhaustion.Value - f.LimitedExpectedValueAttachment.Value, o.cost},
		} {
			// The parameters are printed with 15 digits.
			if !near(pair[0], pair[1], 1e-11) {
				t.Errorf("%s: %s is %.15g, want %.15g", o.name, what, pair[0], pair[1])
			}
		}
		i := f.ExpectedLoss.Interval
		if !(0 < i.Lower && i.Lower < o.cost && o.cost < i.Upper && i.Upper < l.Limit) || i.Method != severity.DeltaLogit {
			t.Errorf("%s: the interval of the layer cost is %+v", o.name, i)
		}
	}
}

// TestDeltaErrorsFromHessians takes the covariance of the fits of
// testdata/fits from their Hessians, made outside this project, and holds the
// error of the mean, of which the manifest has se_mean.
func TestDeltaErrorsFromHessians(t *testing.T) {
	raw, err := os.ReadFile("../../testdata/fits/manifest.json")
	if err != nil {
		t.Fatal(err)
	}
	var manifest struct {
		Sets []struct {
			Name, Status string
			A, Theta     float64
			SeMean       float64     `json:"se_mean"`
			Hessian      [][]float64 `json:"hessian_ln"`
		}
	}
	if err := json.Unmarshal(raw, &manifest); err != nil {
		t.Fatal(err)
	}
	checked := 0
	for _, s := range manifest.Sets {
		if s.Status != "ok" {
			continue
		}
		checked++
		covariance := inverse(s.Hessian)
		for _, row := range covariance {
			row[0], row[1] = -row[0], -row[1]
		}
		curve := gamma(t, s.A, s.Theta)
		f := Price(curve, covariance, Layer{Limit: math.Inf(1)}, 0.95)
		for what, e := range map[string]severity.Estimate{
			"unlimited layer from the ground": f.ExpectedLoss,
			"mean excess of nothing":          f.MeanExcess,
			"limited only at infinity":        f.LimitedExpectedValueExhaustion,
		} {
			// The Hessian is given in doubles; inverting it costs its condition.
			h := s.Hessian
			trace, determinant := h[0][0]+h[1][1], h[0][0]*h[1][1]-h[0][1]*h[1][0]
			if !near(e.StandardError, s.SeMean, 1e-11+1e-15*trace*trace/determinant) {
				t.Errorf("%s: standard error of the mean as %s is %.15g, want %.15g", s.Name, what, e.StandardError, s.SeMean)
			}
		}
	}
	if checked < 15 {
		t.Fatalf("only %d sets of the manifest have a maximum", checked)
	}
}

func TestPriceOfNoLayer(t *testing.T) {
	curve := gamma(t, 1.3, 3000)
	for _, l := range []Layer{{-1, 10}, {0, 0}, {0, -5}, {math.NaN(), 10}, {10, math.NaN()}, {math.Inf(1), 10}} {
		f := Price(curve, [][]float64{{1, 0}, {0, 1}}, l, 0.95)
		if !math.IsNaN(f.ExpectedLoss.Value) || !math.IsNaN(f.ProbabilityAttach.Value) || !math.IsNaN(f.LossEliminationRatio.Value) {
			t.Errorf("layer %+v has a price: %+v", l, f.ExpectedLoss)
		}
	}
	for _, p := range []float64{0, 1, -1, 2, math.NaN()} {
		q := Quantiles(curve, nil, p, 0.95)
		if !math.IsNaN(q.Value.Value) || !math.IsNaN(q.TailValueAtRisk.Value) {
			t.Errorf("probability %v has a quantile: %+v", p, q)
		}
	}
}

func BenchmarkPrice(b *testing.B) {
	curve := gamma(b, 0.7, 3000)
	covariance := [][]float64{{0.01, -0.005}, {-0.005, 0.02}}
	for b.Loop() {
		Price(curve, covariance, Layer{10000, 15000}, 0.95)
	}
}
