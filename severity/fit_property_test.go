package severity

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// sampleOf draws gamma losses seen through mixed deductibles and limits.
func sampleOf(random *rand.Rand, n int, shape, scale float64) []Observation {
	var list []Observation
	for len(list) < n {
		// Sum of shape exponentials for whole shapes, Johnk's rule for the rest.
		x := 0.0
		for range int(shape) {
			x += random.ExpFloat64()
		}
		if rest := shape - math.Floor(shape); rest > 0 {
			for {
				u, v := math.Pow(random.Float64(), 1/rest), math.Pow(random.Float64(), 1/(1-rest))
				if u+v <= 1 {
					x += random.ExpFloat64() * u / (u + v)
					break
				}
			}
		}
		x *= scale
		d := []float64{0, 0.1, 0.4}[random.IntN(3)] * scale
		limit := []float64{math.Inf(1), 2, 4}[random.IntN(3)] * scale
		if x <= d || x == 0 {
			continue
		}
		list = append(list, Observation{Loss: math.Min(x, d+limit), Threshold: d, Censored: x >= d+limit, Weight: 1})
	}
	return list
}

func draw(t *rapid.T) []Observation {
	random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
	return sampleOf(random, rapid.IntRange(30, 200).Draw(t, "n"), rapid.Float64Range(0.3, 6).Draw(t, "shape"), 1000)
}

func fitted(t *rapid.T, obs []Observation) *Fit {
	s, err := Summarize(obs)
	if err != nil {
		t.Fatal(err)
	}
	fit, failure := FitGamma(s, 0.95)
	if failure != nil {
		t.Skip(failure.Reason)
	}
	return fit
}

func near(t *rapid.T, what string, got, want, tolerance float64) {
	t.Helper()
	if math.IsInf(got, 1) && math.IsInf(want, 1) || got == want {
		return
	}
	if e := math.Abs(got-want) / math.Abs(want); !(e <= tolerance) {
		t.Errorf("%s = %.17g, want %.17g (relative error %.1e)", what, got, want, e)
	}
}

func TestScaleEquivariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := draw(t)
		c := math.Exp(rapid.Float64Range(math.Log(1e-6), math.Log(1e9)).Draw(t, "ln factor"))
		scaled := slices.Clone(obs)
		exact := 0.0
		for i := range scaled {
			scaled[i].Loss *= c
			scaled[i].Threshold *= c
			if !scaled[i].Censored {
				exact++
			}
		}
		a, b := fitted(t, obs), fitted(t, scaled)
		near(t, "shape", b.Parameters[0].Value, a.Parameters[0].Value, 1e-10)
		near(t, "scale", b.Parameters[1].Value, c*a.Parameters[1].Value, 1e-10)
		near(t, "log-likelihood", b.LogLikelihood, a.LogLikelihood-exact*math.Log(c), 1e-11)
		near(t, "upper end of the mean", b.Mean.Interval.Upper, c*a.Mean.Interval.Upper, 1e-8)
	})
}

func TestOrderWeightsAndPartsDoNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		obs := draw(t)
		want := fitted(t, obs)
		random := rand.New(rand.NewPCG(5, 6))
		shuffled := slices.Clone(obs)
		random.Shuffle(len(shuffled), func(i, k int) { shuffled[i], shuffled[k] = shuffled[k], shuffled[i] })
		got := fitted(t, shuffled)
		near(t, "shape of shuffled rows", got.Parameters[0].Value, want.Parameters[0].Value, 1e-11)

		var doubled, twice []Observation
		for _, o := range obs {
			twice = append(twice, o, o)
			o.Weight = 2
			doubled = append(doubled, o)
		}
		a, b := fitted(t, doubled), fitted(t, twice)
		near(t, "shape with weights of two", a.Parameters[0].Value, b.Parameters[0].Value, 1e-11)
		near(t, "standard error with weights of two", a.Parameters[0].StandardError, b.Parameters[0].StandardError, 1e-9)

		cut := rapid.IntRange(0, len(obs)).Draw(t, "cut")
		first, err1 := Summarize(obs[:cut])
		second, err2 := Summarize(obs[cut:])
		if err1 != nil || err2 != nil {
			t.Fatal(err1, err2)
		}
		sum, failure := FitGamma(first.Add(second), 0.95)
		if failure != nil {
			t.Fatal(failure)
		}
		near(t, "shape of added summaries", sum.Parameters[0].Value, want.Parameters[0].Value, 1e-11)
		near(t, "log-likelihood of added summaries", sum.LogLikelihood, want.LogLikelihood, 1e-12)
	})
}

func TestGradientEqualsDifferences(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, err := Summarize(draw(t))
		if err != nil {
			t.Fatal(err)
		}
		l := GammaLikelihood{s}
		u, v := rapid.Float64Range(-2, 3).Draw(t, "ln shape"), rapid.Float64Range(5, 9).Draw(t, "ln scale")
		const h = 1e-5
		p := l.at(u, v)
		u1, u0, v1, v0 := l.at(u+h, v), l.at(u-h, v), l.at(u, v+h), l.at(u, v-h)
		size := math.Abs(p.value) + math.Abs(p.h00) + math.Abs(p.h11)
		for _, c := range []struct {
			what      string
			got, want float64
		}{
			{"slope in ln shape", p.g0, (u1.value - u0.value) / (2 * h)},
			{"slope in ln scale", p.g1, (v1.value - v0.value) / (2 * h)},
			{"curvature in ln shape", p.h00, (u1.g0 - u0.g0) / (2 * h)},
			{"mixed", p.h01, (u1.g1 - u0.g1) / (2 * h)},
			{"mixed, other way", p.h01, (v1.g0 - v0.g0) / (2 * h)},
			{"curvature in ln scale", p.h11, (v1.g1 - v0.g1) / (2 * h)},
		} {
			if !(math.Abs(c.got-c.want) <= 1e-8*size) {
				t.Errorf("%s = %.12g, differences give %.12g", c.what, c.got, c.want)
			}
		}
	})
}

// TestParametersAreRecovered fits simulated samples: the standardised errors
// of 200 of them have a mean near zero and a spread near one.
func TestParametersAreRecovered(t *testing.T) {
	random := rand.New(rand.NewPCG(21, 22))
	sum, squares, n := 0.0, 0.0, 0
	for range 200 {
		s, err := Summarize(sampleOf(random, 400, 1.6, 500))
		if err != nil {
			t.Fatal(err)
		}
		fit, failure := FitGamma(s, 0.95)
		if failure != nil {
			t.Fatal(failure)
		}
		z := math.Log(fit.Parameters[0].Value/1.6) / fit.Parameters[0].LogStandardError
		sum += z
		squares += z * z
		n++
	}
	mean, spread := sum/float64(n), math.Sqrt(squares/float64(n))
	// Standard errors of the two: 0.07 and 0.05; allowed four of each.
	if math.Abs(mean) > 0.28 || math.Abs(spread-1) > 0.2 {
		t.Errorf("standardised errors have mean %.3f and spread %.3f", mean, spread)
	}
}

// FuzzFitGamma holds that any finite positive observations give a fit of
// finite numbers or a reason.
func FuzzFitGamma(f *testing.F) {
	f.Add(uint64(1), uint8(3), 100.0, 0.5, 0.3)
	f.Add(uint64(2), uint8(1), 1e-300, 0.0, 0.0)
	f.Add(uint64(3), uint8(40), 1e300, 1.0, 1.0)
	f.Add(uint64(4), uint8(9), 5.0, 0.999999, 0.5)
	f.Fuzz(func(t *testing.T, seed uint64, n uint8, size, truncated, spread float64) {
		if !(size > 1e-290 && size < 1e290) || !(truncated >= 0 && truncated <= 1) || !(spread >= 0 && spread <= 20) {
			t.Skip()
		}
		random := rand.New(rand.NewPCG(seed, 3))
		var obs []Observation
		for range n % 64 {
			x := size * math.Exp(spread*random.NormFloat64())
			if !(x > 0) || math.IsInf(x, 1) {
				continue
			}
			o := Observation{Loss: x, Weight: math.Exp(random.NormFloat64()), Censored: random.IntN(3) == 0}
			if random.Float64() < truncated {
				o.Threshold = x * random.Float64()
			}
			obs = append(obs, o)
		}
		s, err := Summarize(obs)
		if err != nil {
			t.Fatal(err)
		}
		fit, failure := FitGamma(s, 0.95)
		if (fit == nil) == (failure == nil) {
			t.Fatal("neither a fit nor a reason, or both")
		}
		if failure != nil {
			if failure.Reason == "" || failure.Status == "" {
				t.Fatalf("no reason: %+v", failure)
			}
			return
		}
		for _, v := range []float64{fit.Parameters[0].Value, fit.Parameters[1].Value, fit.LogLikelihood, fit.Covariance[0][0], fit.Covariance[1][1],
			fit.Parameters[0].StandardError, fit.Mean.Value} {
			if !finite(v) {
				t.Fatalf("a fit of numbers that are none: %+v\n%+v", fit, obs)
			}
		}
		for _, i := range []Interval{fit.Parameters[0].Interval, fit.Parameters[1].Interval, fit.Mean.Interval} {
			if math.IsNaN(i.Lower) || math.IsNaN(i.Upper) || i.Lower > i.Upper {
				t.Fatalf("interval %+v\n%+v", i, obs)
			}
		}
	})
}
