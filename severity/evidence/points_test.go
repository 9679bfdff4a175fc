package evidence

import (
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"

	"spillway/severity"
)

// For complete data the plotting positions are (i - 1/2)/n.
func TestQQOfCompleteData(t *testing.T) {
	exponential := severity.Gamma{Shape: 1, Scale: 100}
	points := build(t, lives(0, []float64{300, 10, 40, 120}, nil)).QQ(exponential)
	if len(points) != 4 {
		t.Fatalf("%d points, want 4", len(points))
	}
	for i, p := range points {
		position := (float64(i) + 0.5) / 4
		if p.Censored || p.Observed != []float64{10, 40, 120, 300}[i] || !near(p.Survival, 1-position, 1e-14) || !near(p.Fitted, -100*math.Log(1-position), 1e-12) {
			t.Errorf("point %d is %+v, want survival %v and fitted %v", i, p, 1-position, -100*math.Log(1-position))
		}
	}
}

// An exponential forgets: above a common threshold d its quantiles are d plus
// those of the excess. Two of four claims are known only to be at least 150.
func TestQQAboveAThresholdWithLimits(t *testing.T) {
	exponential := severity.Gamma{Shape: 1, Scale: 100}
	points := build(t, lives(50, []float64{60, 90}, []float64{150, 150})).QQ(exponential)
	want := []QQPoint{
		{60, 50 - 100*math.Log(0.875), 0.875, false},
		{90, 50 - 100*math.Log(0.625), 0.625, false},
		{150, 50 - 100*math.Log(0.5), 0.5, true},
	}
	if len(points) != 3 {
		t.Fatalf("points %+v, want three", points)
	}
	for i, p := range points {
		if p.Observed != want[i].Observed || p.Censored != want[i].Censored || !near(p.Survival, want[i].Survival, 1e-14) || !near(p.Fitted, want[i].Fitted, 1e-12) {
			t.Errorf("point %+v, want %+v", p, want[i])
		}
	}
}

// The band against its formula in terms of ordinary functions, for 4 4 5+ 5+ 5+
// 8 10+ 10+ 12 15 (Loss Data Analytics, example 4.3.5).
func TestSurvivalBand(t *testing.T) {
	g := severity.Gamma{Shape: 2, Scale: 5}
	points := build(t, lives(0, []float64{4, 4, 8, 12, 15}, []float64{5, 5, 5, 10, 10})).Survival(g, 0.9)
	survival := []float64{0.8, 0.64, 0.32, 0}
	sum := []float64{2. / (10 * 8), 2./(10*8) + 1./(5*4), 2./(10*8) + 1./(5*4) + 1./(2*1)}
	z := distuv.UnitNormal.Quantile(0.95)
	if len(points) != 4 {
		t.Fatalf("points %+v, want four", points)
	}
	for i, p := range points {
		if !near(p.Empirical, survival[i], 1e-14) || !near(p.Fitted, g.Survival(p.Loss), 1e-14) {
			t.Errorf("point %+v, want %v and %v", p, survival[i], g.Survival(p.Loss))
		}
		if i == 3 {
			if p.Lower != 0 || p.Upper != points[2].Upper {
				t.Errorf("band at zero %v to %v, want 0 to %v", p.Lower, p.Upper, points[2].Upper)
			}
			continue
		}
		l := math.Log(-math.Log(survival[i]))
		half := z * math.Sqrt(sum[i]) / -math.Log(survival[i])
		lower, upper := math.Exp(-math.Exp(l+half)), math.Exp(-math.Exp(l-half))
		if !near(p.Lower, lower, 1e-12) || !near(p.Upper, upper, 1e-12) {
			t.Errorf("band at %v is %v to %v, want %v to %v", p.Loss, p.Lower, p.Upper, lower, upper)
		}
	}
	for _, p := range build(t, lives(0, []float64{1, 2}, nil)).Survival(nil, 0.9) {
		if !math.IsNaN(p.Fitted) {
			t.Errorf("without a curve there is a fitted survival %v", p.Fitted)
		}
	}
}

func TestThinning(t *testing.T) {
	type place struct{ x, y float64 }
	var line []place
	for i := range 200000 {
		x := math.Exp(float64(i) / 20000)
		line = append(line, place{x, 3 * x})
	}
	at := func(p place) (float64, float64) { return p.x, p.y }
	kept := Thin(line, at)
	if len(kept) < 300 || len(kept) > 1400 {
		t.Errorf("%d points kept of %d", len(kept), len(line))
	}
	if !slices.Equal(kept[len(kept)-50:], line[len(line)-50:]) || kept[0] != line[0] {
		t.Error("the first point or the 50 largest are not all kept")
	}
	if !slices.Equal(kept, Thin(line, at)) {
		t.Error("the same points give another picture")
	}
	// No dropped point lies further from the one kept before it than the eye
	// tells apart on either scale.
	width, ratio := line[len(line)-1].x-line[0].x, math.Log(line[len(line)-1].x/line[0].x)
	i := 0
	for _, p := range line {
		for i+1 < len(kept) && kept[i+1].x <= p.x {
			i++
		}
		if p.x-kept[i].x > width/320*(1+1e-9) || math.Log(p.x/kept[i].x) > ratio/320*(1+1e-9) {
			t.Fatalf("the point at %v is shown by the one at %v", p.x, kept[i].x)
		}
	}
	if few := Thin(line[:50], at); len(few) != 50 {
		t.Errorf("%d of 50 points kept", len(few))
	}
	if none := Thin(nil, at); len(none) != 0 {
		t.Errorf("%d points from none", len(none))
	}
	same := slices.Repeat([]place{{7, 7}}, 1000)
	if kept := Thin(same, at); len(kept) != 51 {
		t.Errorf("%d of 1000 equal points kept, want the first and the last 50", len(kept))
	}
}

// TestPicturesAreThinned: with many claims the picture has few points, among
// them the fifty largest of either kind, and shows the others.
func TestPicturesAreThinned(t *testing.T) {
	obs := manyObservations(60000, 11, false)
	s := build(t, obs)
	g := severity.Gamma{Shape: 0.6, Scale: 90}
	qq, survival := s.QQ(g), s.Survival(g, 0.95)
	if len(qq) > 3000 || len(survival) > 1500 {
		t.Errorf("%d and %d points are too many for a picture", len(qq), len(survival))
	}
	for _, censored := range []bool{false, true} {
		var losses []float64
		for _, o := range obs {
			if o.Censored == censored {
				losses = append(losses, o.Loss)
			}
		}
		slices.Sort(losses)
		losses = slices.Compact(losses)
		shown := map[float64]QQPoint{}
		var last QQPoint
		for _, p := range qq {
			if p.Censored == censored {
				shown[p.Observed] = p
				if p.Observed <= last.Observed || last.Survival != 0 && p.Survival > last.Survival || p.Fitted < last.Fitted {
					t.Fatalf("points %+v and %+v are out of order", last, p)
				}
				last = p
			}
		}
		for _, x := range losses[len(losses)-50:] {
			if _, ok := shown[x]; !ok {
				t.Errorf("the loss %v of the 50 largest (censored: %v) is not shown", x, censored)
			}
		}
	}
	// Every step of the estimate lies close to a point shown.
	i := 0
	for _, p := range s.ProductLimit() {
		for i+1 < len(survival) && survival[i+1].Loss <= p.Loss {
			i++
		}
		if survival[i].Empirical-p.Survival > 1.0/320 {
			t.Fatalf("the step at %v down to %v is shown by %+v", p.Loss, p.Survival, survival[i])
		}
	}
}

func TestMergedMarksAreInOrder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		points := build(t, drawObservations(t, false)).QQ(curve)
		sorted := slices.IsSortedFunc(points, func(a, b QQPoint) int {
			switch {
			case a.Observed < b.Observed || a.Observed == b.Observed && !a.Censored && b.Censored:
				return -1
			case a.Observed == b.Observed && a.Censored == b.Censored:
				return 0
			}
			return 1
		})
		if !sorted {
			t.Errorf("points are out of order:\n%s", cmp.Diff(nil, points))
		}
	})
}
