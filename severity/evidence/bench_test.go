package evidence

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"spillway/severity"
	"spillway/severity/layer"
)

// million are a million invented claims with 11 deductibles and 8 limits,
// amounts in cents.
func million() []severity.Observation {
	r := rand.New(rand.NewPCG(1, 2))
	deductibles := []float64{0, 250, 500, 750, 1000, 1500, 2000, 2500, 5000, 7500, 10000}
	limits := []float64{25e3, 50e3, 75e3, 100e3, 150e3, 250e3, 500e3, math.Inf(1)}
	obs := make([]severity.Observation, 0, 1e6)
	for len(obs) < 1e6 {
		d, u := deductibles[r.IntN(11)], limits[r.IntN(8)]
		x := math.Round(100*math.Exp(9+1.4*r.NormFloat64())) / 100
		if x <= d {
			continue
		}
		o := severity.Observation{Loss: x, Threshold: d, Weight: 1}
		if x >= u {
			o.Loss, o.Censored = u, true
		}
		obs = append(obs, o)
	}
	return obs
}

func BenchmarkBuildUnsorted(b *testing.B) {
	obs := million()
	for b.Loop() {
		if _, err := Build(obs); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkBuildSorted(b *testing.B) {
	obs := million()
	slices.SortFunc(obs, func(x, y severity.Observation) int {
		if x.Loss < y.Loss {
			return -1
		}
		return 1
	})
	for b.Loop() {
		if _, err := Build(obs); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkBuildWeighted(b *testing.B) {
	obs := million()
	for i := range obs {
		obs[i].Weight = 1 + float64(i%7)/10
	}
	for b.Loop() {
		if _, err := Build(obs); err != nil {
			b.Fatal(err)
		}
	}
}

var curve, _ = severity.NewGamma(0.7, 30000)

func sampleOf(b *testing.B) *Sample {
	s, err := Build(million())
	if err != nil {
		b.Fatal(err)
	}
	return s
}

func BenchmarkMeasure(b *testing.B) {
	s := sampleOf(b)
	for b.Loop() {
		s.uncensored = 0
		s.measure()
	}
}

func BenchmarkQQ(b *testing.B) {
	s := sampleOf(b)
	b.ReportMetric(float64(len(s.QQ(curve))), "points")
	for b.Loop() {
		s.QQ(curve)
	}
}

func BenchmarkSurvival(b *testing.B) {
	s := sampleOf(b)
	b.ReportMetric(float64(len(s.Survival(curve, 0.95))), "points")
	for b.Loop() {
		s.Survival(curve, 0.95)
	}
}

func BenchmarkBurningSixLayers(b *testing.B) {
	s := sampleOf(b)
	layers := []layer.Layer{{Attachment: 0, Limit: 1000}, {Attachment: 1000, Limit: 9000}, {Attachment: 10000, Limit: 15000},
		{Attachment: 25000, Limit: 75000}, {Attachment: 100000, Limit: 400000}, {Attachment: 0, Limit: math.Inf(1)}}
	for b.Loop() {
		for _, l := range layers {
			s.Burning(l, curve)
		}
	}
}
