package main

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestWrongUsageExits2(t *testing.T) {
	file := filepath.Join(t.TempDir(), "claims.csv")
	if err := os.WriteFile(file, []byte("amount\n10\n20\n35\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	for name, args := range map[string][]string{
		"no command":              {},
		"unknown command":         {"estimate"},
		"unknown flag":            {"fit", file, "--colour", "red"},
		"no file":                 {"fit"},
		"unknown basis":           {"fit", file, "--basis", "gross"},
		"unknown deductible type": {"fit", file, "--deductible-type", "odd"},
		"unknown limit basis":     {"fit", file, "--limit-basis", "middle"},
		"columns without a sign":  {"fit", file, "--columns", "amount"},
		"columns: unknown field":  {"fit", file, "--columns", "size=amount"},
		"columns: field twice":    {"fit", file, "--columns", "amount=amount,amount=other"},
		"columns: no such header": {"fit", file, "--columns", "amount=loss"},
		"level above 1":           {"fit", file, "--level", "95"},
		"no date":                 {"fit", file, "--valuation", "yesterday"},
		"layers: no shape":        {"layers", "--scale", "10", "--layer", "10 xs 10"},
		"layers: nothing asked":   {"layers", "--shape", "1", "--scale", "10"},
		"layers: shape of zero":   {"layers", "--shape", "0", "--scale", "10", "--layer", "10 xs 10"},
		"layers: scale no number": {"layers", "--shape", "1", "--scale", "ten", "--layer", "10 xs 10"},
		"layers: scale NaN":       {"layers", "--shape", "1", "--scale", "NaN", "--layer", "10 xs 10"},
		"layers: no layer":        {"layers", "--shape", "1", "--scale", "10", "--layer", "10 over 10"},
		"layers: negative limit":  {"layers", "--shape", "1", "--scale", "10", "--layer", "-10 xs 10"},
		"layers: quantile 1":      {"layers", "--shape", "1", "--scale", "10", "--quantile", "1"},
		"layers: other model":     {"layers", "--model", "none", "--shape", "1", "--scale", "10", "--quantile", "0.5"},
		"serve: nowhere":          {"serve"},
		"serve: two places":       {"serve", "--data", "a", "--database", "b"},
		"serve: open address":     {"serve", "--data", t.TempDir(), "--addr", "0.0.0.0:0"},
		"serve: no port":          {"serve", "--data", t.TempDir(), "--addr", "127.0.0.1"},
		"demo: open address":      {"demo", "--addr", ":0"},
	} {
		t.Run(name, func(t *testing.T) {
			got := spillway(t, "", args...)
			if got.code != 2 {
				t.Errorf("exit status %d, want 2\n%s", got.code, got.errors)
			}
			if got.out != "" || !strings.Contains(got.errors, "spillway: ") {
				t.Errorf("standard output %q, standard error %q: want the message on standard error", got.out, got.errors)
			}
		})
	}
}

func TestUnreadableInputExits1(t *testing.T) {
	folder := t.TempDir()
	for name, c := range map[string]struct {
		content string
		flags   []string
		says    []string // on standard error
	}{
		"no such file":        {says: []string{"missing.csv"}},
		"empty file":          {content: "", says: []string{"empty"}},
		"no amount":           {content: "claim_id,colour\nA,red\nB,blue\n", says: []string{"amount", "colour", "--columns amount="}},
		"blank deductible":    {content: "amount,deductible\n100,10\n200,\n300,10\n", says: []string{"3", "deductible", "--blank-deductible none", "line"}},
		"blank limit":         {content: "amount,limit\n100,1000\n200,1000\n300,\n", says: []string{"4", "limit", "--blank-limit none", "line"}},
		"day or month first":  {content: "amount,loss_date\n10,03/04/2025\n20,05/06/2025\n", says: []string{"05/06/2025", "--date-order day-first or month-first"}},
		"thousands or not":    {content: "amount;segment\n1.234;A\n2.345;A\n", says: []string{"2.345", "--decimal"}},
		"two headers alike":   {content: "amount,amount\n1,2\n", says: []string{"line 1", "amount"}},
		"not a spreadsheet":   {content: "PK\x03\x04 this is no workbook", says: []string{"claims.csv"}},
		"picture, not a text": {content: "\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR\x00\x00", says: []string{"claims.csv"}},
	} {
		t.Run(name, func(t *testing.T) {
			file := filepath.Join(folder, "missing.csv")
			if name != "no such file" {
				file = filepath.Join(t.TempDir(), "claims.csv")
				if err := os.WriteFile(file, []byte(c.content), 0o600); err != nil {
					t.Fatal(err)
				}
			}
			got := spillway(t, "", append([]string{"fit", file, "--json"}, c.flags...)...)
			if got.code != 1 || got.out != "" {
				t.Errorf("exit status %d, want 1; standard output %q, want none\n%s", got.code, got.out, got.errors)
			}
			for _, word := range c.says {
				if !strings.Contains(got.errors, word) {
					t.Errorf("standard error does not name %q:\n%s", word, got.errors)
				}
			}
		})
	}
}

// TestDoubtsAreSettledByFlags: what stopped the runs above is settled by the
// flag that the message names.
func TestDoubtsAreSettledByFlags(t *testing.T) {
	dates := "amount,loss_date\n10,03/04/2025\n20,05/06/2025\n"
	answer(t, dates, "fit", "-", "--json", "--date-order", "day-first").is(t, 2, "claims", "used")
	answer(t, dates, "fit", "-", "--json", "--columns", "loss_date=").is(t, 2, "claims", "used")
	marks := "amount;segment\n1.234;A\n2.346;A\n"
	answer(t, marks, "fit", "-", "--json", "--decimal", ",", "--thousands", ".").near(t, 1790, 1e-12, "mean")
	answer(t, marks, "fit", "-", "--json", "--decimal", ".").near(t, 1.79, 1e-12, "mean")
}

// TestStatedNonExistenceExits0: no curve is an answer.
func TestStatedNonExistenceExits0(t *testing.T) {
	for name, c := range map[string]struct{ content, status string }{
		"no rows":       {"amount,deductible\n", "no_claims"},
		"all rejected":  {"amount\n-5\n0\n", "no_claims"},
		"one claim":     {"amount\n500\n", "unbounded"},
		"all equal":     {"amount\n500\n500\n500\n", "unbounded"},
		"all censored":  {"amount,limit\n500,500\n700,700\n", "all_censored"},
		"heavier tails": {"amount,deductible\n510,500\n520,500\n530,500\n600,500\n5000,500\n", "no_interior_maximum"},
	} {
		t.Run(name, func(t *testing.T) {
			got := answer(t, c.content, "fit", "-", "--json")
			got.is(t, c.status, "status")
			got.is(t, nil, "parameters")
			text := spillway(t, c.content, "fit", "-")
			if text.code != 0 || !strings.Contains(text.out, c.status) || strings.Contains(text.out, "NaN") {
				t.Errorf("without --json: exit status %d\n%s", text.code, text.out)
			}
		})
	}
}

// TestBoundaryScores holds the test of existence against scores per claim that
// were computed outside this project: Data Set B above 200 and two toy samples.
func TestBoundaryScores(t *testing.T) {
	above200 := rows("amount,deductible", setB, func(x float64) string {
		if x <= 200 {
			return ""
		}
		return fmt.Sprintf("%v,200", x)
	})
	got := answer(t, above200, "fit", "-", "--json")
	got.is(t, "no_interior_maximum", "status")
	if score := got.number(t, "boundary", "score_per_claim"); score < -0.1460 || score > -0.1458 {
		t.Errorf("score per claim %v, want -0.1459", score)
	}
	answer(t, "amount,deductible\n600,500\n700,500\n900,500\n", "fit", "-", "--json").is(t, "converged", "status")
}
