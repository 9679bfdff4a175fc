package evidence

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"spillway/severity"
	"spillway/severity/layer"
)

// drawObservations are up to 60 observations with ties, thresholds, limits
// and, when weighted, whole weights.
func drawObservations(t *rapid.T, weighted bool) []severity.Observation {
	return rapid.SliceOfN(rapid.Custom(func(t *rapid.T) severity.Observation {
		o := severity.Observation{Loss: float64(rapid.IntRange(1, 40).Draw(t, "loss")), Weight: 1}
		o.Threshold = float64(rapid.IntRange(0, int(o.Loss)).Draw(t, "threshold"))
		if rapid.Bool().Draw(t, "from the ground") {
			o.Threshold = 0
		}
		o.Censored = rapid.IntRange(0, 3).Draw(t, "censored") == 0
		if weighted {
			o.Weight = float64(rapid.IntRange(1, 4).Draw(t, "weight"))
		}
		return o
	}), 1, 60).Draw(t, "observations")
}

var sameNaN = cmpopts.EquateNaNs()

// naive is the product-limit estimate by its definition, in time proportional
// to the square of the observations.
func naive(obs []severity.Observation) []ProductLimitPoint {
	times := map[float64]bool{}
	for _, o := range obs {
		if !o.Censored && o.Threshold < o.Loss {
			times[o.Loss] = true
		}
	}
	var points []ProductLimitPoint
	survival, variance := 1.0, 0.0
	for _, t := range slices.Sorted(func(yield func(float64) bool) {
		for t := range times {
			if !yield(t) {
				return
			}
		}
	}) {
		var risk, events float64
		for _, o := range obs {
			if o.Threshold < t && t <= o.Loss {
				risk += o.Weight
				if o.Loss == t && !o.Censored {
					events += o.Weight
				}
			}
		}
		survival *= 1 - events/risk
		variance += events / (risk * (risk - events))
		p := ProductLimitPoint{t, risk, events, survival, math.Sqrt(variance)}
		if survival == 0 {
			p.LogStandardError = math.NaN()
			variance = math.NaN()
		}
		points = append(points, p)
	}
	return points
}

func TestProductLimitByItsDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := drawObservations(t, true)
		got, want := build(t, obs).ProductLimit(), naive(obs)
		if d := cmp.Diff(want, got, sameNaN, cmpopts.EquateApprox(1e-13, 0), cmpopts.EquateEmpty()); d != "" {
			t.Errorf("by definition (-) and computed (+):\n%s", d)
		}
	})
}

func TestWeightsStandForRepeatedClaims(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := drawObservations(t, true)
		var repeated []severity.Observation
		for _, o := range obs {
			one := o
			one.Weight = 1
			for range int(o.Weight) {
				repeated = append(repeated, one)
			}
		}
		a, b := build(t, obs), build(t, repeated)
		if d := cmp.Diff(a.ProductLimit(), b.ProductLimit(), sameNaN, cmpopts.EquateApprox(1e-13, 0)); d != "" {
			t.Errorf("weighted (-) and repeated (+):\n%s", d)
		}
		l := layer.Layer{Attachment: 5.5, Limit: 20}
		x, y := a.Burning(l, nil), b.Burning(l, nil)
		x.AtRisk, x.Reaching, x.Exhausting = y.AtRisk, y.Reaching, y.Exhausting // these count rows
		if d := cmp.Diff(x, y, sameNaN, cmpopts.EquateApprox(1e-12, 1e-12)); d != "" {
			t.Errorf("weighted (-) and repeated (+):\n%s", d)
		}
	})
}

// TestOrderDoesNotMatter, to the last bit with weights of 1; other weights are
// added up in the order in which equal losses come.
func TestOrderDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		weighted := rapid.Bool().Draw(t, "weighted")
		obs := drawObservations(t, weighted)
		options := cmp.Options{sameNaN}
		if weighted {
			options = append(options, cmpopts.EquateApprox(1e-13, 1e-13))
		}
		shuffled := rapid.Permutation(obs).Draw(t, "shuffled")
		a, b := build(t, obs), build(t, shuffled)
		l := layer.Layer{Attachment: 3, Limit: 30}
		for _, pair := range [][2]any{
			{a.ProductLimit(), b.ProductLimit()}, {a.Burning(l, curve), b.Burning(l, curve)},
			{a.QQ(curve), b.QQ(curve)}, {a.Survival(curve, 0.9), b.Survival(curve, 0.9)}, {a.SmallestRisk(), b.SmallestRisk()},
		} {
			if d := cmp.Diff(pair[0], pair[1], options); d != "" {
				t.Errorf("in one order (-) and another (+):\n%s", d)
			}
		}
	})
}

func TestCompleteDataGiveTheEmpiricalSurvival(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		losses := rapid.SliceOfN(rapid.Float64Range(0.01, 1e6), 1, 80).Draw(t, "losses")
		s := build(t, lives(0, losses, nil))
		n, mean := float64(len(losses)), 0.0
		for _, x := range losses {
			beyond := 0.0
			for _, y := range losses {
				if y > x {
					beyond++
				}
			}
			if got := s.SurvivalAt(x); math.Abs(got-beyond/n) > 1e-13 {
				t.Errorf("survival beyond %v is %v, want %v", x, got, beyond/n)
			}
			mean += x / n
		}
		if got, ok := s.Integral(0, math.Inf(1)); !ok || !near(got, mean, 1e-12) {
			t.Errorf("the integral is %v (%v), the mean %v", got, ok, mean)
		}
	})
}

func TestEvidenceFollowsTheCurrency(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := drawObservations(t, false)
		const factor = 1024 // exact in doubles
		scaled := slices.Clone(obs)
		for i := range scaled {
			scaled[i].Loss *= factor
			scaled[i].Threshold *= factor
		}
		g := severity.Gamma{Shape: 1.7, Scale: 9}
		h := severity.Gamma{Shape: 1.7, Scale: 9 * factor}
		a := build(t, obs).Burning(layer.Layer{Attachment: 4, Limit: 16}, g)
		b := build(t, scaled).Burning(layer.Layer{Attachment: 4 * factor, Limit: 16 * factor}, h)
		for _, money := range []*float64{&b.LayerLoss, &b.PerClaim, &b.StandardErr, &b.ProductLimit, &b.Fitted} {
			*money /= factor
		}
		if d := cmp.Diff(a, b, sameNaN, cmpopts.EquateApprox(1e-12, 0)); d != "" {
			t.Errorf("in units (-) and in units of 1/%v (+):\n%s", factor, d)
		}
	})
}

// TestBurningByItsDefinition goes through all claims and, for the product
// limit, through all points.
func TestBurningByItsDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := drawObservations(t, true)
		l := layer.Layer{
			Attachment: rapid.Float64Range(0, 45).Draw(t, "attachment"),
			Limit:      rapid.Float64Range(0.001, 45).Draw(t, "limit"),
		}
		if rapid.Bool().Draw(t, "on a loss") {
			l.Attachment, l.Limit = math.Round(l.Attachment), math.Ceil(l.Limit)
		}
		s := build(t, obs)
		checkBurning(t, s, obs, l)
	})
}

func checkBurning(t rapid.TB, s *Sample, obs []severity.Observation, l layer.Layer) {
	t.Helper()
	g := severity.Gamma{Shape: 0.8, Scale: 20}
	got := s.Burning(l, g)
	var want BurningFigure
	var weight, end float64
	lowest := math.Inf(1)
	for _, o := range obs {
		weight += o.Weight
		want.LayerLoss += o.Weight * math.Min(math.Max(o.Loss-l.Attachment, 0), l.Limit)
		if !o.Censored || o.Loss > l.Attachment {
			want.AtRisk++
		}
		if o.Loss > l.Attachment {
			want.Reaching++
		}
		if o.Loss >= l.Top() {
			want.Exhausting++
		}
		lowest, end = math.Min(lowest, o.Threshold), math.Max(end, o.Loss)
	}
	want.PerClaim = want.LayerLoss / weight
	for _, o := range obs {
		y := math.Min(math.Max(o.Loss-l.Attachment, 0), l.Limit)
		want.StandardErr += o.Weight * (y - want.PerClaim) * (y - want.PerClaim)
	}
	want.StandardErr = math.Sqrt(want.StandardErr / weight / (weight - 1))
	if weight <= 1 {
		want.StandardErr = math.NaN()
	}
	from, height := 0.0, 1.0
	add := func(to float64) {
		if to = math.Min(to, l.Top()); to > math.Max(from, l.Attachment) {
			want.ProductLimit += height * (to - math.Max(from, l.Attachment))
		}
	}
	for _, p := range naive(obs) {
		add(p.Loss)
		from, height = p.Loss, p.Survival
	}
	add(end)
	collapse, collapsed := s.Collapse()
	if height > 0 && l.Top() > end || collapsed && l.Top() > collapse {
		want.ProductLimit = math.NaN()
	}
	flat := math.Max(math.Min(lowest, l.Top())-l.Attachment, 0)
	want.Fitted = flat
	if l.Top() > lowest {
		want.Fitted += (g.LimitedExpectedValue(l.Top()) - g.LimitedExpectedValue(math.Max(lowest, l.Attachment))) / g.Survival(lowest)
	}
	if d := cmp.Diff(want, got, sameNaN, cmpopts.EquateApprox(1e-9, 1e-12)); d != "" {
		t.Errorf("%v by definition (-) and computed (+):\n%s", l, d)
	}
}

// Many rows, so that blocks, buckets and both goroutines come into play.
func manyObservations(n int, seed uint64, weighted bool) []severity.Observation {
	r := rand.New(rand.NewPCG(seed, 7))
	obs := make([]severity.Observation, n)
	for i := range obs {
		o := severity.Observation{Loss: math.Ceil(2000*math.Exp(1.5*r.NormFloat64())) / 100, Weight: 1, Censored: r.IntN(5) == 0}
		if r.IntN(3) > 0 {
			o.Threshold = math.Floor(o.Loss*r.Float64()*100) / 100
		}
		if weighted {
			o.Weight = 0.5 + r.Float64()
		}
		obs[i] = o
	}
	return obs
}

func TestManyRowsByDefinition(t *testing.T) {
	for _, weighted := range []bool{false, true} {
		obs := manyObservations(40000, 3, weighted)
		s := build(t, obs)
		for i := 1; i < len(s.keys); i++ {
			if s.keys[i-1] > s.keys[i] {
				t.Fatalf("rows %d and %d are out of order", i-1, i)
			}
		}
		small := obs[:5000]
		part := build(t, small)
		if d := cmp.Diff(naive(small), part.ProductLimit(), sameNaN, cmpopts.EquateApprox(1e-9, 1e-13)); d != "" {
			t.Errorf("by definition (-) and computed (+):\n%s", d)
		}
		for _, l := range []layer.Layer{{Attachment: 0, Limit: 5}, {Attachment: 3.21, Limit: 0.01}, {Attachment: 10, Limit: 90}, {Attachment: 50, Limit: 1e9}, {Attachment: 1e6, Limit: 1}} {
			checkBurning(t, part, small, l)
		}
	}
}

// TestGlidingIsWalking: skipping through the rows in which nothing is to be
// noted gives, to the last bit, what noting every step gives.
func TestGlidingIsWalking(t *testing.T) {
	check := func(t rapid.TB, obs []severity.Observation) {
		t.Helper()
		glided := build(t, obs)
		if glided.atThreshold != nil {
			return // walked anyway
		}
		walked := *glided
		walked.atThreshold = map[float64]exact{}
		walked.measure()
		walked.atThreshold = nil
		if d := cmp.Diff(&walked, glided, sameNaN, cmp.AllowUnexported(Sample{}, block{}, state{}, exact{}, spread{}, entry{}, mark{})); d != "" {
			t.Errorf("walked (-) and glided (+):\n%s", d)
		}
	}
	rapid.Check(t, func(t *rapid.T) { check(t, drawObservations(t, false)) })
	for seed := range uint64(4) {
		obs := manyObservations(30000, seed, false)
		for i := range obs {
			if obs[i].Threshold == obs[i].Loss {
				obs[i].Threshold = 0
			}
			if seed > 1 && obs[i].Censored { // few limits
				obs[i].Loss = math.Exp(math.Ceil(math.Log(obs[i].Loss)))
			}
		}
		check(t, obs)
	}
}
