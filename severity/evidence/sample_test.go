package evidence

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"spillway/severity"
	"spillway/severity/layer"
)

func TestBuildRefuses(t *testing.T) {
	good := severity.Observation{Loss: 5, Threshold: 1, Weight: 1}
	for part, bad := range map[string]severity.Observation{
		"the loss is 0":                     {Loss: 0, Weight: 1},
		"the loss is NaN":                   {Loss: math.NaN(), Weight: 1},
		"the loss is +Inf":                  {Loss: math.Inf(1), Weight: 1},
		"the threshold is -1":               {Loss: 5, Threshold: -1, Weight: 1},
		"the threshold is NaN":              {Loss: 5, Threshold: math.NaN(), Weight: 1},
		"lies below its own threshold 6":    {Loss: 5, Threshold: 6, Weight: 1},
		"the weight is 0":                   {Loss: 5, Weight: 0},
		"the weight is +Inf":                {Loss: 5, Weight: math.Inf(1)},
		"the weight is NaN":                 {Loss: 5, Weight: math.NaN()},
		"want a finite number above 0":      {Loss: 5, Weight: -2},
		"observation 1: the loss is -3: wa": {Loss: -3, Weight: 1},
	} {
		_, err := Build([]severity.Observation{good, bad, good, {}})
		if err == nil || !strings.Contains(err.Error(), part) || !strings.HasPrefix(err.Error(), "observation 1: ") {
			t.Errorf("error %v, want one of observation 1 with %q", err, part)
		}
	}
}

func TestNoObservations(t *testing.T) {
	s := build(t, nil)
	if s.Claims() != 0 || s.Weight() != 0 || len(s.ProductLimit()) != 0 || len(s.QQ(curve)) != 0 || len(s.Survival(curve, 0.95)) != 0 {
		t.Errorf("an empty sample says something: %+v", s)
	}
	if _, ok := s.Collapse(); ok || s.SurvivalAt(10) != 1 || s.SmallestRisk().AtRisk != 0 {
		t.Error("an empty sample has a collapse, a survival below 1 or a risk set")
	}
	f := s.Burning(layer.Layer{Attachment: 0, Limit: 10}, curve)
	if f.AtRisk != 0 || f.LayerLoss != 0 || !math.IsNaN(f.PerClaim) || !math.IsNaN(f.StandardErr) || !math.IsNaN(f.ProductLimit) {
		t.Errorf("an empty sample burns: %+v", f)
	}
}

func TestAllCensored(t *testing.T) {
	s := build(t, lives(0, nil, []float64{5, 5, 7}))
	if len(s.ProductLimit()) != 0 || s.SurvivalAt(100) != 1 || s.LargestLoss() != 0 || s.Uncensored() != 0 {
		t.Error("without an exact loss the estimate is 1 throughout")
	}
	points := s.QQ(curve)
	if len(points) != 2 || !points[0].Censored || points[0].Survival != 1 || points[0].Fitted != 0 {
		t.Errorf("open marks %+v, want two at survival 1", points)
	}
}

func TestLossAtItsThresholdIsNoEvent(t *testing.T) {
	s := build(t, append(lives(10, []float64{10}, nil), lives(0, []float64{10, 20}, nil)...))
	points := s.ProductLimit()
	if len(points) != 2 || points[0].AtRisk != 2 || points[0].Events != 1 || points[1].AtRisk != 1 {
		t.Errorf("steps %+v, want one of two at 10 and one of one at 20", points)
	}
}

func TestCollapseIsReported(t *testing.T) {
	s := build(t, observations(t, "../../testdata/gof/collapse_demo.csv"))
	if at, ok := s.Collapse(); !ok || at != 120 {
		t.Fatalf("collapse at %v (%v), want 120", at, ok)
	}
	if p := s.SmallestRisk(); p.Loss != 120 || p.AtRisk != 1 || p.Survival != 0 {
		t.Errorf("smallest risk set %+v, want the lone claim at 120", p)
	}
	if got := s.Survival(curve, 0.95); len(got) != 1 || got[0].Empirical != 0 || got[0].Lower != 0 || got[0].Upper != 1 {
		t.Errorf("points %+v, want the one at the collapse", got)
	}
	if got := s.QQ(curve); len(got) != 1 || got[0].Survival != 0.5 {
		t.Errorf("points %+v, want the one at the collapse", got)
	}
	if _, ok := s.Integral(0, 120); !ok {
		t.Error("no integral up to the collapse")
	}
	if v, ok := s.Integral(0, 121); ok {
		t.Errorf("an integral of %v beyond the collapse", v)
	}
	if f := s.Burning(layer.Layer{Attachment: 100, Limit: 500}, nil); !math.IsNaN(f.ProductLimit) || f.Reaching != 8 {
		t.Errorf("burning figure %+v, want no product limit and 8 claims", f)
	}
}

// A lone claim is alone also when weights are no whole numbers.
func TestWeightedCollapseIsExact(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 5))
	obs := []severity.Observation{{Loss: 2, Threshold: 1, Weight: 0.1}}
	for range 5000 {
		obs = append(obs, severity.Observation{Loss: 3 + r.Float64(), Threshold: 2 + r.Float64(), Weight: 0.1 + r.Float64()*1e3})
	}
	s := build(t, obs)
	if at, ok := s.Collapse(); !ok || at != 2 {
		t.Errorf("collapse at %v (%v), want 2", at, ok)
	}
}

func TestSortKeys(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 9))
	draw := map[string]func() uint64{
		"any":        func() uint64 { return r.Uint64() },
		"few":        func() uint64 { return r.Uint64N(5) * 1e15 },
		"equal":      func() uint64 { return 42 },
		"one octave": func() uint64 { return math.Float64bits(1 + r.Float64()) },
		"an outlier": func() uint64 { return math.Float64bits(math.Exp(r.NormFloat64())) ^ (1<<62)*(r.Uint64N(1000)/999) },
		"money": func() uint64 {
			return math.Float64bits(math.Round(1e5*math.Exp(r.NormFloat64()))/100)<<1 | r.Uint64N(2)
		},
		"low bits":    func() uint64 { return 1<<60 + r.Uint64N(3000) },
		"extremes":    func() uint64 { return r.Uint64N(2) * math.MaxUint64 },
		"descending?": func() uint64 { return ^r.Uint64N(1 << 20) },
	}
	for name, next := range draw {
		for _, n := range []int{0, 1, 2, 40, 41, 1000, 1 << 14, 70001} {
			keys, weights := make([]uint64, n), make([]float64, n)
			for i := range keys {
				keys[i] = next()
				weights[i] = float64(keys[i]%97) + 0.5
			}
			want, bare := slices.Clone(keys), slices.Clone(keys)
			slices.Sort(want)
			sortKeys(keys, weights)
			sortKeys(bare, nil)
			if !slices.Equal(keys, want) || !slices.Equal(bare, want) {
				t.Fatalf("%s, %d keys: not in order", name, n)
			}
			for i := range keys {
				if weights[i] != float64(keys[i]%97)+0.5 {
					t.Fatalf("%s, %d keys: the weight at %d belongs to another key", name, n, i)
				}
			}
		}
	}
}

func TestSampleIsSharedSafely(t *testing.T) {
	s := build(t, manyObservations(5000, 1, false))
	want := s.Burning(layer.Layer{Attachment: 5, Limit: 10}, curve)
	done := make(chan BurningFigure)
	for range 4 {
		go func() {
			s.QQ(curve)
			s.Survival(curve, 0.9)
			done <- s.Burning(layer.Layer{Attachment: 5, Limit: 10}, curve)
		}()
	}
	for range 4 {
		if got := <-done; got.LayerLoss != want.LayerLoss || got.ProductLimit != want.ProductLimit {
			t.Errorf("%+v, want %+v", got, want)
		}
	}
}
