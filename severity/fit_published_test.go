package severity

import (
	"math"
	"testing"
)

// Data arrays of textbooks and papers; each check below names its source.
var (
	// Klugman, Panjer and Willmot, Loss Models, Data Set B (recalled from memory).
	dataSetB = []float64{27, 82, 115, 126, 155, 161, 243, 294, 340, 384, 457, 680, 855, 877, 974, 1193, 1340, 1884, 2558, 15743}
	// The same with its largest value replaced, as in the book's chapter on goodness of fit (recalled from memory).
	dataSetBStar = append(append([]float64{}, dataSetB[:19]...), 3476)
	// Gross and Clark 1975, survival of 20 irradiated male rats (recalled from memory).
	rats = []float64{152, 152, 115, 109, 137, 88, 94, 77, 160, 165, 125, 40, 128, 123, 136, 101, 62, 153, 83, 69}
	// Lieblein and Zelen 1956, 23 ball bearings (recalled from memory).
	bearings = []float64{17.88, 28.92, 33.00, 41.52, 42.12, 45.60, 48.48, 51.84, 51.96, 54.12, 55.56, 67.80, 68.64, 68.64, 68.88, 84.12, 93.12, 98.64, 105.12, 105.84, 127.92, 128.04, 173.40}
	// Proschan 1963, 12 intervals between failures of air conditioning (recalled from memory).
	airConditioning = []float64{3, 5, 7, 18, 43, 85, 91, 98, 100, 130, 230, 487}
	// An online reference on reliability life data, gamma example, 24 units (seen).
	units = []float64{61, 50, 67, 49, 53, 62, 53, 61, 43, 65, 53, 56, 62, 56, 58, 55, 58, 48, 66, 44, 48, 58, 43, 40}
	// NIST/SEMATECH e-Handbook of Statistical Methods 8.4.1.3: 10 failures, 10 censored at 500 (seen).
	nistFailures = []float64{54, 187, 216, 240, 244, 335, 361, 373, 375, 386}
)

func exactLosses(losses []float64, threshold float64) []Observation {
	var list []Observation
	for _, x := range losses {
		if x > threshold {
			list = append(list, Observation{Loss: x, Threshold: threshold, Weight: 1})
		}
	}
	return list
}

func censoredAt(losses []float64, limit float64) []Observation {
	var list []Observation
	for _, x := range losses {
		list = append(list, Observation{Loss: math.Min(x, limit), Censored: x >= limit, Weight: 1})
	}
	return list
}

func mustFit(t testing.TB, obs []Observation) *Fit {
	t.Helper()
	s, err := Summarize(obs)
	if err != nil {
		t.Fatal(err)
	}
	fit, failure := FitGamma(s, 0.95)
	if failure != nil {
		t.Fatal(failure)
	}
	return fit
}

func TestPublishedFits(t *testing.T) {
	within := func(what string, got, want, half float64) {
		t.Helper()
		if !(math.Abs(got-want) <= half) {
			t.Errorf("%s = %.9g, published %.9g", what, got, want)
		}
	}
	// Loss Models, maximum likelihood chapter: 0.55616, 2561.1, -162.293 (recalled from memory).
	f := mustFit(t, exactLosses(dataSetB, 0))
	within("Data Set B shape", f.Parameters[0].Value, 0.55616, 5e-6)
	within("Data Set B scale", f.Parameters[1].Value, 2561.1, 0.05)
	within("Data Set B log-likelihood", f.LogLikelihood, -162.293, 5e-4)
	// Grice and Bain 1980, JASA; Lawless, Statistical Models and Methods for Lifetime Data (recalled from memory).
	f = mustFit(t, exactLosses(rats, 0))
	within("rats shape", f.Parameters[0].Value, 8.799, 5e-4)
	within("rats scale", f.Parameters[1].Value, 12.893, 5e-4)
	within("rats mean", f.Mean.Value, 113.45, 5e-3)
	// Lawless (recalled from memory).
	f = mustFit(t, exactLosses(bearings, 0))
	within("bearings shape", f.Parameters[0].Value, 4.03, 5e-3)
	// Davison and Hinkley, Bootstrap Methods and their Application (recalled from memory).
	f = mustFit(t, exactLosses(airConditioning, 0))
	within("air conditioning shape", f.Parameters[0].Value, 0.71, 5e-3)
	within("air conditioning mean", f.Mean.Value, 108.083, 5e-4)
	// The online reliability reference prints ln scale (seen).
	f = mustFit(t, exactLosses(units, 0))
	within("24 units shape", f.Parameters[0].Value, 50.4908, 5e-5)
	within("24 units ln scale", math.Log(f.Parameters[1].Value), 0.0772, 5e-5)
}

// Values computed outside this project with mpmath at 40 digits by Newton on a
// numerically differentiated likelihood; O1 to O5 also by scipy or R to their
// optimisers' precision.
func TestOracles(t *testing.T) {
	nist := exactLosses(nistFailures, 0)
	for range 10 {
		nist = append(nist, Observation{Loss: 500, Censored: true, Weight: 1})
	}
	// LDA (Loss Data Analytics, open textbook) exercise 3.5.7: d = 5, u = 25,
	// payments 2, 4, 5, 5, 8, 10, 12, 15 and two at the limit.
	var lda []Observation
	for _, y := range []float64{2, 4, 5, 5, 8, 10, 12, 15} {
		lda = append(lda, Observation{Loss: y + 5, Threshold: 5, Weight: 1})
	}
	lda = append(lda, Observation{Loss: 25, Threshold: 5, Censored: true, Weight: 2})
	// Examination sample item on mixed deductibles and limits (recalled from memory).
	mixed := []Observation{
		{Loss: 750, Threshold: 200, Weight: 3}, {Loss: 200, Weight: 3}, {Loss: 300, Weight: 4},
		{Loss: 10000, Censored: true, Weight: 6}, {Loss: 400, Threshold: 300, Weight: 4}}
	for _, c := range []struct {
		name                                          string
		obs                                           []Observation
		shape, scale, logLikelihood, seShape, seScale float64
	}{
		{"O1", exactLosses(dataSetB, 0), 0.556157797371492, 2561.14362997694, -162.293403055913, 0.146637068396273, 1022.59770388176},
		{"O2", exactLosses(dataSetBStar, 50), 0.637568937573177, 1142.27178999094, -145.667442598714, 0.387000420933103, 589.842723778697},
		{"O3", censoredAt(dataSetBStar, 1000), 1.03543844430355, 688.211014562866, -113.641104900252, 0.32947153566259, 317.803188131884},
		{"O4", nist, 2.16839749390983, 266.341418978429, -75.0690726461836, 0.901787893064293, 151.274828919917},
		{"O5", lda, 2.79321681403685, 5.55291193054325, -27.9768487144448, 2.53045675215857, 4.77238935854346},
		{"O6", mixed, 0.291513260076571, 24250.3638312512, -122.543831099799, 0.0991331490671388, 18655.6759894813},
	} {
		f := mustFit(t, c.obs)
		close(t, c.name+" shape", f.Parameters[0].Value, c.shape, 1e-11)
		close(t, c.name+" scale", f.Parameters[1].Value, c.scale, 1e-11)
		close(t, c.name+" log-likelihood", f.LogLikelihood, c.logLikelihood, 1e-13)
		close(t, c.name+" standard error of shape", f.Parameters[0].StandardError, c.seShape, 1e-10)
		close(t, c.name+" standard error of scale", f.Parameters[1].StandardError, c.seScale, 1e-10)
	}
}

// Boundary scores computed outside this project; above zero a maximum exists.
func TestExistence(t *testing.T) {
	for _, c := range []struct {
		name   string
		obs    []Observation
		exists bool
		score  float64
	}{
		{"Data Set B above 50", exactLosses(dataSetB, 50), true, 0.0456},
		{"Data Set B above 200", exactLosses(dataSetB, 200), false, -0.1459},
		{"a heavy toy", exactLosses([]float64{510, 520, 530, 600, 5000}, 500), false, -0.320},
		{"a light toy", exactLosses([]float64{600, 700, 900}, 500), true, 0.0294},
	} {
		s, err := Summarize(c.obs)
		if err != nil {
			t.Fatal(err)
		}
		b := boundaryTest(s)
		if b == nil || math.Abs(b.Score-c.score) > 1e-4*math.Max(1, math.Abs(c.score)*5) {
			t.Errorf("%s: boundary %+v, want a score of %g", c.name, b, c.score)
		}
		fit, failure := FitGamma(s, 0.95)
		if (fit != nil) != c.exists || !c.exists && failure.Status != NoInteriorMaximum {
			t.Errorf("%s: fit %v, failure %v", c.name, fit, failure)
		}
	}
}

// Cases without a maximum, by argument: see nothingToFit.
func TestReasons(t *testing.T) {
	one := func(x, d float64, censored bool) Observation {
		return Observation{Loss: x, Threshold: d, Weight: 1, Censored: censored}
	}
	for _, c := range []struct {
		name string
		obs  []Observation
		want Status // "" for a maximum
	}{
		{"nothing", nil, NoClaims},
		{"one loss", []Observation{one(5, 0, false)}, Unbounded},
		{"one loss above its deductible", []Observation{one(5, 2, false)}, Unbounded},
		{"equal losses", []Observation{one(5, 0, false), one(5, 0, false)}, Unbounded},
		{"equal losses, a lower censoring point", []Observation{one(5, 0, false), one(5, 0, false), one(3, 0, true)}, Unbounded},
		{"equal losses, a higher censoring point", []Observation{one(5, 0, false), one(5, 0, false), one(9, 0, true)}, ""},
		{"censored only", []Observation{one(5, 0, true), one(9, 3, true)}, AllCensored},
		{"each at its own deductible", []Observation{one(5, 5, false), one(9, 9, false)}, Unbounded},
		{"two losses a last digit apart", []Observation{one(1000, 0, false), one(math.Nextafter(1000, 2000), 0, false)}, Unbounded},
		{"two losses", []Observation{one(5, 0, false), one(9, 0, false)}, ""},
		{"one truncated far out, one not", []Observation{one(1, 0, false), one(1e6, 999999, false)}, ""},
	} {
		s, err := Summarize(c.obs)
		if err != nil {
			t.Fatal(err)
		}
		fit, failure := FitGamma(s, 0.95)
		switch {
		case c.want == "" && fit == nil:
			t.Errorf("%s: %v, want a maximum", c.name, failure)
		case c.want != "" && (failure == nil || failure.Status != c.want || failure.Reason == ""):
			t.Errorf("%s: %v, want %s", c.name, failure, c.want)
		}
	}
}

func TestBadObservationsAreNamed(t *testing.T) {
	good := Observation{Loss: 1, Weight: 1}
	for _, bad := range []Observation{
		{Loss: 0, Weight: 1}, {Loss: -1, Weight: 1}, {Loss: math.NaN(), Weight: 1}, {Loss: math.Inf(1), Weight: 1},
		{Loss: 1, Threshold: -1, Weight: 1}, {Loss: 1, Threshold: 2, Weight: 1}, {Loss: 1, Threshold: math.NaN(), Weight: 1},
		{Loss: 1, Weight: 0}, {Loss: 1, Weight: math.NaN()}, {Loss: 1, Weight: math.Inf(1)}, {Loss: 1},
	} {
		_, err := Summarize([]Observation{good, bad, bad})
		problem, ok := err.(*BadObservation)
		if !ok || problem.Index != 1 || problem.Problem == "" {
			t.Errorf("%+v: %v", bad, err)
		}
	}
}
