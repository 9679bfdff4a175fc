package severity

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// claimsWithTerms are n observations with 11 distinct deductibles and 8
// distinct limits.
func claimsWithTerms(n int) []Observation {
	random := rand.New(rand.NewPCG(8, 9))
	deductibles := []float64{0, 100, 250, 500, 750, 1000, 1500, 2000, 2500, 5000, 10000}
	limits := []float64{25000, 50000, 75000, 100000, 150000, 250000, 500000, 1000000}
	list := make([]Observation, 0, n)
	for len(list) < n {
		x := 8000 * (random.ExpFloat64() + 0.5*random.ExpFloat64())
		d, u := deductibles[random.IntN(len(deductibles))], limits[random.IntN(len(limits))]
		if x > d {
			list = append(list, Observation{Loss: math.Min(x, u), Threshold: d, Censored: x >= u, Weight: 1})
		}
	}
	return list
}

func BenchmarkSummarize(b *testing.B) {
	obs := claimsWithTerms(1_000_000)
	for b.Loop() {
		if _, err := Summarize(obs); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkFit measures the maximum alone, cold from the summary, and the
// whole fit with its profile intervals: flat in the number of claims.
func BenchmarkFit(b *testing.B) {
	for _, n := range []int{1_000, 1_000_000} {
		s, err := Summarize(claimsWithTerms(n))
		if err != nil {
			b.Fatal(err)
		}
		b.Run(fmt.Sprintf("maximum of %d", n), func(b *testing.B) {
			for b.Loop() {
				if _, _, failure := maximiseGamma(s); failure != nil {
					b.Fatal(failure)
				}
			}
		})
		b.Run(fmt.Sprintf("with intervals of %d", n), func(b *testing.B) {
			for b.Loop() {
				if _, failure := FitGamma(s, 0.95); failure != nil {
					b.Fatal(failure)
				}
			}
		})
	}
}
