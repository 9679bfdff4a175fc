package chart

import (
	"encoding/xml"
	"flag"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"spillway/severity/evidence"
)

var renew = flag.Bool("renew", false, "write the golden pictures anew; look at them before you commit them")

// Round numbers: multiples of 1, 2 and 5 as a person would choose them
// (common practice, no source).
func TestTicks(t *testing.T) {
	for _, c := range []struct {
		axis axis
		n    int
		want string
	}{
		{axis{from: 0, to: 100}, 5, "0 20 40 60 80 100"},
		{axis{from: 0, to: 89000}, 6, "0 20k 40k 60k 80k"},
		{axis{from: 0, to: 1.2e9}, 6, "0 200m 400m 600m 800m 1bn 1.2bn"},
		{axis{from: 0, to: 0.003}, 3, "0 0.001 0.002 0.003"},
		{axis{from: -1, to: 1}, 4, "-1 -0.5 0 0.5 1"},
		{axis{from: 1, to: 1000, log: true}, 6, "1 2 5 10 20 50 100 200 500 1k"},
		{axis{from: 1e-9, to: 1, log: true}, 6, "1e-9 1e-7 1e-5 0.001 0.1"},
		{axis{from: 500, to: 76000, log: true}, 6, "500 1k 2k 5k 10k 20k 50k"},
		{axis{from: 5, to: 5}, 5, ""},
		{axis{from: 0, to: 5, log: true}, 5, ""},
		{axis{from: math.NaN(), to: 5}, 5, ""},
	} {
		var labels []string
		for _, tick := range c.axis.ticks(c.n) {
			labels = append(labels, tick.label)
		}
		if got := strings.Join(labels, " "); got != c.want {
			t.Errorf("%+v in about %d: %q, want %q", c.axis, c.n, got, c.want)
		}
	}
}

func samplePoints(n int) (qq []evidence.QQPoint, survival []evidence.SurvivalPoint) {
	for i := range n {
		p := (float64(i) + 0.5) / float64(n)
		x := -1000 * math.Log1p(-p)
		qq = append(qq, evidence.QQPoint{Observed: x * (1 + 0.05*math.Sin(float64(i))), Fitted: x, Survival: 1 - p, Censored: i%7 == 3})
		survival = append(survival, evidence.SurvivalPoint{Loss: x, Empirical: 1 - p, Lower: (1 - p) * 0.9, Upper: math.Min(1, (1-p)*1.1), Fitted: (1 - p) * 0.98})
	}
	return qq, survival
}

func TestPicturesAreWellFormed(t *testing.T) {
	qq, survival := samplePoints(40)
	empty, none := []evidence.QQPoint{}, []evidence.SurvivalPoint{}
	odd := []evidence.QQPoint{{Observed: 1, Fitted: math.Inf(1)}, {Observed: 2, Fitted: math.NaN()}}
	same := []evidence.SurvivalPoint{{Loss: 5, Empirical: 0, Fitted: math.NaN()}}
	for name, picture := range map[string]string{
		"qq": QQ(qq, "EUR"), "survival": Survival(survival, `<&"'>`), "empty qq": QQ(empty, "EUR"), "empty survival": Survival(none, "EUR"),
		"odd qq": QQ(odd, "EUR"), "one point": Survival(same, "EUR"),
	} {
		decoder := xml.NewDecoder(strings.NewReader(picture))
		for {
			token, err := decoder.Token()
			if err == io.EOF {
				break
			}
			if err != nil {
				t.Fatalf("%s: %v\n%s", name, err, picture)
			}
			if start, ok := token.(xml.StartElement); ok {
				for _, a := range start.Attr {
					if a.Name.Local == "style" || strings.HasPrefix(a.Name.Local, "on") {
						t.Errorf("%s: attribute %s is barred by the content policy", name, a.Name.Local)
					}
				}
			}
		}
		if strings.Contains(picture, "NaN") || strings.Contains(picture, "Inf") {
			t.Errorf("%s holds a coordinate that is no number", name)
		}
		if !strings.Contains(picture, "<title id=") || !strings.Contains(picture, "<desc id=") {
			t.Errorf("%s has no title or description", name)
		}
	}
}

// TestGoldenPictures compares with pictures that were looked at.
func TestGoldenPictures(t *testing.T) {
	qq, survival := samplePoints(12)
	for name, picture := range map[string]string{"qq.svg": QQ(qq, "EUR"), "survival.svg": Survival(survival, "EUR")} {
		path := filepath.Join("..", "..", "testdata", "pictures", name)
		if *renew {
			if err := os.WriteFile(path, []byte(picture+"\n"), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if strings.TrimSpace(string(want)) != picture {
			t.Errorf("%s has changed; look at it, then run with -renew", name)
		}
	}
}

func BenchmarkQQ1000(b *testing.B) {
	qq, _ := samplePoints(1000)
	for b.Loop() {
		QQ(qq, "EUR")
	}
}

func BenchmarkSurvival1000(b *testing.B) {
	_, survival := samplePoints(1000)
	for b.Loop() {
		Survival(survival, "EUR")
	}
}
