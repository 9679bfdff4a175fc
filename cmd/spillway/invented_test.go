package main

import (
	"bytes"
	"math"
	"testing"

	"spillway/severity"
	"spillway/severity/claims"
	"spillway/storage/extract"
	"spillway/storage/extract/invented"
)

// readInvented reads a file of the invented book as a user would have it read:
// everything guessed but the basis.
func readInvented(t *testing.T, f invented.File, row func(*extract.Row)) *extract.Report {
	t.Helper()
	file, size := bytes.NewReader(f.Content), int64(len(f.Content))
	guess, err := extract.Sniff(file, size, f.Name)
	if err != nil {
		t.Fatalf("%s: %v", f.Name, err)
	}
	if len(guess.Doubts) > 0 {
		t.Errorf("%s: doubts %+v", f.Name, guess.Doubts)
	}
	reader, err := extract.NewReader(file, size, extract.Plan{Format: guess.Format, Columns: guess.Columns, Basis: f.Basis})
	if err != nil {
		t.Fatalf("%s: %v", f.Name, err)
	}
	defer reader.Close()
	for reader.Next() {
		row(reader.Row())
	}
	if err := reader.Err(); err != nil {
		t.Fatalf("%s: %v", f.Name, err)
	}
	return reader.Report()
}

// TestInventedFaultsAreFound: what was put into the files is what is found in
// them, in every dress.
func TestInventedFaultsAreFound(t *testing.T) {
	for _, f := range invented.Book(1) {
		nil0 := 0
		report := readInvented(t, f, func(r *extract.Row) {
			if r.Claim.Status == claims.StatusNil {
				nil0++
			}
		})
		blocks, warns := map[extract.Rule]int{}, map[extract.Rule]int{}
		for _, g := range report.Groups {
			if g.Effect == extract.Blocks {
				blocks[g.Rule] += g.Count
			} else {
				warns[g.Rule] += g.Count
			}
		}
		for _, rule := range []extract.Rule{extract.DateUnreadable, extract.DuplicateClaimID, extract.NegativeAmount,
			extract.DeductibleBlank, extract.PaymentAboveLimit, extract.OtherCurrency, extract.TotalsRow} {
			if blocks[rule] != 1 {
				t.Errorf("%s: %s is found %d times, want once", f.Name, rule, blocks[rule])
			}
		}
		for _, rule := range []extract.Rule{extract.StatusUnknown, extract.ClosedWithReserve} {
			if warns[rule] != 1 {
				t.Errorf("%s: %s is found %d times, want once", f.Name, rule, warns[rule])
			}
		}
		if len(blocks) != invented.Faults || len(warns) != invented.Oddities+1 {
			t.Errorf("%s: rules that block %v and that warn %v: some were never put in", f.Name, blocks, warns)
		}
		if warns[extract.NilClaimRule] < 100 || report.Nil != warns[extract.NilClaimRule] || report.Rejected != invented.Faults {
			t.Errorf("%s: %d rows rejected, %d valued at nothing, %d warned of", f.Name, report.Rejected, report.Nil, warns[extract.NilClaimRule])
		}
		if f.Name == "claims-2024-q4.csv" && nil0 < 100 {
			t.Errorf("%s: %d claims closed without payment", f.Name, nil0)
		}
	}
}

// TestInventedTruthIsRecovered fits the claims that are closed at the last
// valuation, of which the generator promises a fair sample: shape and scale of
// every line come back within three standard errors.
func TestInventedTruthIsRecovered(t *testing.T) {
	for _, seed := range []uint64{1, 2} {
		files := invented.Book(seed)
		byLine := map[string][]severity.Observation{}
		readInvented(t, files[len(files)-1], func(r *extract.Row) {
			if !r.Rejected && r.Claim.Status == claims.StatusClosed {
				byLine[r.Claim.Business] = append(byLine[r.Claim.Business], r.Observation)
			}
		})
		for _, line := range invented.Lines() {
			summary, err := severity.Summarize(byLine[line.Name])
			if err != nil {
				t.Fatal(err)
			}
			fit, none := severity.FitGamma(summary, 0.95)
			if none != nil {
				t.Errorf("%s: %v", line.Name, none)
				continue
			}
			for i, truth := range []float64{line.Shape, line.Scale} {
				p := fit.Parameters[i]
				errors := (math.Log(p.Value) - math.Log(truth)) / p.LogStandardError
				if !(math.Abs(errors) < 3) {
					t.Errorf("%s: %s %v, truth %v: %.1f standard errors apart", line.Name, p.Name, p.Value, truth, errors)
				}
				t.Logf("%s: %s %.4g ± %.2g, truth %v, %d claims", line.Name, p.Name, p.Value, p.StandardError, truth, summary.Claims)
			}
			if summary.Censored < 20 || summary.Truncated < summary.Claims/2 {
				t.Errorf("%s: %d of %d claims at their limit, %d above a deductible: too few to be a test", line.Name, summary.Censored, summary.Claims, summary.Truncated)
			}
		}
	}
}
