package evidence

import (
	"math"
	"testing"

	"spillway/severity"
	"spillway/severity/layer"
)

// lives are exact and censored losses above the thresholds, one claim each.
func lives(threshold float64, exact, censored []float64) []severity.Observation {
	var obs []severity.Observation
	for _, x := range exact {
		obs = append(obs, severity.Observation{Loss: x, Threshold: threshold, Weight: 1})
	}
	for _, x := range censored {
		obs = append(obs, severity.Observation{Loss: x, Threshold: threshold, Weight: 1, Censored: true})
	}
	return obs
}

func survivals(t *testing.T, s *Sample, at, printed []float64, lastDigit float64) {
	t.Helper()
	for i, x := range at {
		if got := s.SurvivalAt(x); math.Abs(got-printed[i]) > lastDigit/2*(1+1e-9) {
			t.Errorf("survival at %v is %v, printed as %v", x, got, printed[i])
		}
	}
}

// Loss Data Analytics (open textbook, 2023), examples 4.3.5 and 4.3.8:
// 4 4 5+ 5+ 5+ 8 10+ 10+ 12 15 has S(11) = 0.64 and by Greenwood the variance
// 0.0307 of it.
func TestPublishedProductLimit(t *testing.T) {
	s := build(t, lives(0, []float64{4, 4, 8, 12, 15}, []float64{5, 5, 5, 10, 10}))
	survivals(t, s, []float64{11}, []float64{0.64}, 0.01)
	for _, p := range s.ProductLimit() {
		if p.Loss == 8 {
			if v := math.Pow(p.Survival*p.LogStandardError, 2); math.Abs(v-0.0307) > 0.00005 {
				t.Errorf("Greenwood's variance at 11 is %v, printed as 0.0307", v)
			}
		}
	}
}

// Loss Data Analytics, example 4.3.7: ten observations, three of them with late
// entry, S(1.6) = 0.7142857 and S(2.1) = 0.1904762; the array recalled from
// memory.
func TestPublishedDelayedEntry(t *testing.T) {
	obs := lives(0, []float64{0.9, 1.5, 1.7}, []float64{1.2, 1.5, 1.6, 1.7})
	obs = append(obs, lives(1.3, []float64{2.1}, nil)...)
	obs = append(obs, lives(1.5, []float64{2.1}, nil)...)
	obs = append(obs, lives(1.6, nil, []float64{2.3})...)
	survivals(t, build(t, obs), []float64{1.6, 2.1}, []float64{0.7142857, 0.1904762}, 1e-7)
}

// Data Set D2 of Klugman, Panjer & Willmot, Loss Models: forty policies,
// left-truncated and right-censored. A weak check: recalled from memory, one row
// of the array rebuilt so that the last value fits.
func TestProductLimitOfDelayedEntries(t *testing.T) {
	obs := lives(0, []float64{0.8, 2.9, 2.9, 4.0, 4.8},
		[]float64{0.1, 0.5, 0.8, 1.8, 1.8, 2.1, 2.5, 2.8, 3.9, 4.0, 4.1, 4.8, 4.8, 5, 5, 5, 5, 5, 5, 5, 5, 5, 5, 5, 5})
	for _, late := range [][3]float64{{0.3, 5, 1}, {0.7, 5, 1}, {1, 4.1, 0}, {1.8, 3.1, 0}, {2.1, 3.9, 1}, {2.9, 5, 1}, {2.9, 4.8, 1}, {3.2, 4, 0}, {3.4, 5, 1}, {3.9, 5, 1}} {
		obs = append(obs, severity.Observation{Loss: late[1], Threshold: late[0], Weight: 1, Censored: late[2] == 1})
	}
	s := build(t, obs)
	survivals(t, s, []float64{0.8, 2.9, 3.1, 4.0, 4.1, 4.8}, []float64{0.9667, 0.8923, 0.858, 0.792, 0.7576, 0.7215}, 0.0001)
	risk := []float64{30, 26, 26, 26, 23, 21}
	for i, p := range s.ProductLimit() {
		if p.AtRisk != risk[i] {
			t.Errorf("at risk at %v: %v, printed as %v", p.Loss, p.AtRisk, risk[i])
		}
	}
}

// Remission under 6-MP, Freireich et al. 1963, as in Klein & Moeschberger,
// Survival Analysis; recalled from memory.
func TestProductLimitOfRemissions(t *testing.T) {
	s := build(t, lives(0, []float64{6, 6, 6, 7, 10, 13, 16, 22, 23}, []float64{6, 9, 10, 11, 17, 19, 20, 25, 32, 32, 34, 35}))
	survivals(t, s, []float64{6, 7, 10, 13, 16, 22, 23}, []float64{0.857, 0.807, 0.753, 0.69, 0.627, 0.538, 0.448}, 0.001)
}

// Maintained remission of acute myelogenous leukaemia, Miller 1981, Survival
// Analysis; recalled from memory.
func TestProductLimitOfMaintainedRemissions(t *testing.T) {
	s := build(t, lives(0, []float64{9, 13, 18, 23, 31, 34, 48}, []float64{13, 28, 45, 161}))
	survivals(t, s, []float64{9, 13, 18, 23, 31, 34, 48}, []float64{0.91, 0.82, 0.72, 0.61, 0.49, 0.37, 0.18}, 0.01)
}

// Werner & Modlin, Basic Ratemaking, chapter on trend; recalled from memory: of five
// claims 10,000 to 50,000 the part below 25,000 is 99,000 and above it 30,000;
// after a trend of 10% they are 102,500 and 39,400.
func TestPublishedLayerLosses(t *testing.T) {
	claims := []float64{10000, 15000, 24000, 30000, 50000}
	for trend, want := range map[float64][2]float64{1: {99000, 30000}, 1.1: {102500, 39400}} {
		var trended []float64
		for _, x := range claims {
			trended = append(trended, x*trend)
		}
		s := build(t, lives(0, trended, nil))
		below := s.Burning(layer.Layer{Attachment: 0, Limit: 25000}, nil)
		above := s.Burning(layer.Layer{Attachment: 25000, Limit: math.Inf(1)}, nil)
		if !near(below.LayerLoss, want[0], 1e-14) || !near(above.LayerLoss, want[1], 1e-14) {
			t.Errorf("trend %v: %v below and %v above, printed as %v", trend, below.LayerLoss, above.LayerLoss, want)
		}
		// Without thresholds and limits the estimate is the mean of the claims.
		if !near(below.ProductLimit, want[0]/5, 1e-13) || !near(above.ProductLimit, want[1]/5, 1e-13) {
			t.Errorf("trend %v: integrals %v and %v, want %v over five claims", trend, below.ProductLimit, above.ProductLimit, want)
		}
	}
}
