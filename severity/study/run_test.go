package study

import (
	"bytes"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"spillway/severity/claims"
)

// randomBook has every reason for leaving a claim out in it.
func randomBook(seed uint64, n int) *claims.Book {
	random := rand.New(rand.NewPCG(seed, 17))
	b := &claims.Book{Currency: "EUR", Decimals: 2, Businesses: []string{"cargo", "motor", ""}, Segments: []string{"north", "south"},
		Batches: []claims.BookBatch{
			{ID: 1, Name: "first", Basis: claims.Basis{Amounts: claims.NetOfDeductible}, Superseded: claims.Superseded{Rows: 1 + random.IntN(9), Paid: random.Int64N(1e6), Outstanding: random.Int64N(1e6)}},
			{ID: 2, Name: "second", Basis: claims.Basis{Amounts: claims.GroundUp, Deductible: claims.Franchise, Limit: claims.TopOfCover, NoDeduct: claims.BlankMeansNone}},
		}}
	first, _ := claims.NewDate(2024, 1, 1)
	for i := range n {
		b.Batch = append(b.Batch, uint8(random.IntN(2)))
		b.Line = append(b.Line, int32(i+2))
		b.Paid = append(b.Paid, random.Int64N(3_000_000)-100_000)
		b.Outstanding = append(b.Outstanding, random.Int64N(2)*random.Int64N(1_000_000))
		if random.IntN(4) == 0 {
			b.Paid[i], b.Outstanding[i] = 0, 0
		}
		deductible, limit := []int64{0, 10_000, 50_000, claims.NoTerm}[random.IntN(4)], []int64{2_000_000, 5_000_000, claims.NoTerm, 0}[random.IntN(4)]
		b.Deductible, b.Limit = append(b.Deductible, deductible), append(b.Limit, limit)
		date := first + claims.Date(random.IntN(730))
		if random.IntN(10) == 0 {
			date = 0
		}
		b.LossDate = append(b.LossDate, date)
		b.Status = append(b.Status, claims.Statuses[random.IntN(len(claims.Statuses))])
		b.Terms = append(b.Terms, claims.PackTerms(claims.DeductibleType(random.IntN(2)), claims.Reached(random.IntN(3))))
		b.Business = append(b.Business, uint16(random.IntN(3)))
		b.Segment = append(b.Segment, uint16(random.IntN(2)))
	}
	return b
}

func drawSelection(t *rapid.T) claims.Selection {
	from, _ := claims.NewDate(2024, 6, 1)
	s := claims.Selection{Amount: rapid.SampledFrom([]claims.AmountField{claims.PaidAmount, claims.IncurredAmount}).Draw(t, "amount")}
	if rapid.Bool().Draw(t, "by line") {
		s.Businesses = []string{"cargo", ""}
	}
	if rapid.Bool().Draw(t, "by segment") {
		s.Segments = []string{"south"}
	}
	if rapid.Bool().Draw(t, "by date") {
		s.LossFrom, s.LossTo = from, from+200
	}
	if rapid.Bool().Draw(t, "by status") {
		s.Statuses = []claims.Status{claims.StatusClosed, claims.StatusReopened}
	}
	return s
}

// TestReconciliationAddsUp follows rows and cents of random books: what is
// read is used or left out for one stated reason.
func TestReconciliationAddsUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		book := randomBook(rapid.Uint64().Draw(t, "seed"), rapid.IntRange(0, 300).Draw(t, "n"))
		s := drawSelection(t)
		sample := claims.Select(book, s)
		r := sample.Reconciliation

		want := claims.Line{Rows: book.Len() + book.Batches[0].Superseded.Rows, Amount: book.Batches[0].Superseded.Paid}
		if s.Amount == claims.IncurredAmount {
			want.Amount += book.Batches[0].Superseded.Outstanding
		}
		for i := range book.Paid {
			want.Amount += book.Paid[i]
			if s.Amount == claims.IncurredAmount {
				want.Amount += book.Outstanding[i]
			}
		}
		if r.Read != want {
			t.Errorf("read %+v, the book holds %+v", r.Read, want)
		}
		sum := r.Used
		for _, e := range r.Excluded {
			if e.Rows <= 0 || e.Reason == "" {
				t.Errorf("left out %+v", e)
			}
			sum.Rows += e.Rows
			sum.Amount += e.Amount
		}
		if sum != r.Read || r.Used.Rows != len(sample.Observations) {
			t.Errorf("used and left out make %+v of %+v; %d observations", sum, r.Read, len(sample.Observations))
		}
		for k, o := range sample.Observations {
			if !(o.Loss > 0) || o.Threshold > o.Loss || k > 0 && o.Loss < sample.Observations[k-1].Loss {
				t.Errorf("observation %d: %+v after %+v", k, o, sample.Observations[max(k-1, 0)])
			}
		}
	})
}

func TestSameClaimsAndAssumptionsGiveTheSameBytes(t *testing.T) {
	a := Default([]BatchRef{{ID: 1}, {ID: 2}}, 30_000)
	var stored [2][]byte
	for i := range stored {
		r, err := Run(randomBook(4, 3000), a)
		if err != nil {
			t.Fatal(err)
		}
		if stored[i], err = r.Encode(); err != nil {
			t.Fatal(err)
		}
		back, err := DecodeResults(stored[i])
		if err != nil {
			t.Fatal(err)
		}
		again, err := back.Encode()
		if err != nil || !bytes.Equal(again, stored[i]) {
			t.Errorf("results change in being stored (%v)", err)
		}
	}
	if !bytes.Equal(stored[0], stored[1]) {
		t.Error("two runs differ")
	}
	if _, err := DecodeResults([]byte("something else")); err == nil {
		t.Error("any bytes are taken for results")
	}
}

func TestNothingLeftToFit(t *testing.T) {
	a := Default([]BatchRef{{ID: 1}}, 0)
	a.Businesses = []string{"no such line"}
	r, err := Run(randomBook(1, 50), a)
	if err != nil {
		t.Fatal(err)
	}
	if r.Fit != nil || r.NoFit == nil || r.NoFit.Status != "no_claims" || r.Reconciliation.Used.Rows != 0 {
		t.Errorf("%+v", r.NoFit)
	}
	if _, err := r.Encode(); err != nil {
		t.Error(err)
	}
}

func TestAssumptionsThatMakeNoSense(t *testing.T) {
	day, _ := claims.NewDate(2025, 1, 1)
	for says, change := range map[string]func(*Assumptions){
		"model":                  func(a *Assumptions) { a.Model = "other" },
		"amount":                 func(a *Assumptions) { a.Amount = "ultimate" },
		"level":                  func(a *Assumptions) { a.Level = 1 },
		"first lies after":       func(a *Assumptions) { a.LossFrom, a.LossTo = day, day-1 },
		"quantile":               func(a *Assumptions) { a.Quantiles = []float64{0} },
		"at most 40":             func(a *Assumptions) { a.Layers = make([]LayerTerm, 41) },
		"limit and attachment":   func(a *Assumptions) { a.Layers = []LayerTerm{{Attachment: -1}} },
		"layer 2, -5 xs 0: limi": func(a *Assumptions) { a.Layers = []LayerTerm{{}, {Limit: -5}} },
	} {
		a := Default(nil, 1000)
		change(&a)
		if _, err := Run(randomBook(1, 5), a); err == nil || !strings.Contains(err.Error(), says) {
			t.Errorf("%v, want it to say %q", err, says)
		}
	}
}

func TestDefaultTower(t *testing.T) {
	// A largest loss of 700,000: doubling layers on round money up to 800,000.
	a := Default(nil, 700_000)
	want := []LayerTerm{{25000, 0}, {25000, 25000}, {50000, 50000}, {100000, 100000}, {200000, 200000}, {0, 400000}}
	if len(a.Layers) != len(want) {
		t.Fatalf("%v", a.Layers)
	}
	for i := range want {
		if a.Layers[i] != want[i] {
			t.Errorf("layer %d is %v, want %v", i+1, a.Layers[i], want[i])
		}
	}
}

func TestChangesNameWhatMoved(t *testing.T) {
	a := Default([]BatchRef{{ID: 1, Name: "first"}}, 1000)
	b := a
	b.Level, b.Segments = 0.9, []string{"south"}
	got := Changes(a, b)
	if len(got) != 2 || got[0] != (Change{"segments", "all", "south"}) || got[1] != (Change{"level", "0.95", "0.9"}) {
		t.Errorf("%+v", got)
	}
	if len(Changes(a, a)) != 0 {
		t.Error("nothing changed, something is named")
	}
}
