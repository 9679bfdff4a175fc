package main

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

const faulty = `claim_id,loss_date,amount,deductible,limit
A1,2025-01-05,1500,500,5000
A2,2025-02-30,1700,500,5000
A3,2025-01-07,400,500,5000
A4,2025-01-08,500,500,5000
A5,2025-01-09,-20,500,5000
A1,2025-01-10,900,500,5000
A6,2025-01-11,abc,500,5000
A7,2025-01-12,0,500,5000
A8,2025-01-13,9000,500,5000
A9,2025-01-14,2600,500,5000
Total,,16580,,
`

// TestFindingsNameTheirPlace: line, column, value and rule of every finding
// stand on standard error, and what was rejected is counted in the answer.
func TestFindingsNameTheirPlace(t *testing.T) {
	got := spillway(t, faulty, "fit", "-", "--json")
	if got.code != 0 {
		t.Fatalf("exit status %d\n%s", got.code, got.errors)
	}
	for _, want := range []string{
		`line 3, column loss_date, "2025-02-30"`, "date_unreadable",
		`line 4, column amount, "400"`, "loss_below_deductible",
		`line 5, column amount, "500"`, "loss_equals_deductible, warning",
		`line 6, column amount, "-20"`, "negative_amount",
		`line 7, column claim_id, "A1"`, "duplicate_claim_id",
		`line 8, column amount, "abc"`, "amount_unreadable",
		`line 9, column amount, "0"`, "nil_claim",
		`line 10, column amount, "9000"`, "loss_above_cover, warning",
		"line 12", "totals_row",
		"9 findings; 7 of 11 rows rejected",
	} {
		if !strings.Contains(got.errors, want) {
			t.Errorf("standard error lacks %q", want)
		}
	}
	result := answer(t, faulty, "fit", "-", "--json")
	result.is(t, 11, "claims", "read")
	result.is(t, 7, "claims", "rejected")
	result.is(t, 4, "claims", "used")
	result.is(t, 1, "claims", "censored")
	if t.Failed() {
		t.Log(got.errors)
	}
}

// TestFindingsAreCapped: a fault in every row is said ten times and counted.
func TestFindingsAreCapped(t *testing.T) {
	file := "amount\n" + strings.Repeat("-1\n", 5000) + "10\n20\n40\n"
	got := spillway(t, file, "fit", "-")
	if n := strings.Count(got.errors, "\n"); got.code != 0 || n > 20 || !strings.Contains(got.errors, "5000 × negative_amount") {
		t.Errorf("exit status %d, %d lines on standard error, want few and the total of 5000\n%s", got.code, n, got.errors)
	}
}

func TestCheck(t *testing.T) {
	got := answer(t, faulty, "check", "-", "--json")
	got.is(t, 11, "rows", "read")
	got.is(t, 4, "rows", "accepted")
	got.is(t, 7, "rows", "rejected")
	// Sums by hand; the totals row is in none of them.
	got.is(t, "16580.00", "amount", "read")
	got.is(t, "13600.00", "amount", "accepted")
	got.is(t, "2980.00", "amount", "rejected")
	findings := got.at(t, "findings").([]any)
	if len(findings) != 9 {
		t.Errorf("%d findings, want 9", len(findings))
	}
	first := object(findings[0].(map[string]any))
	want := map[string]any{"line": 3.0, "column": "loss_date", "value": "2025-02-30", "rule": "date_unreadable", "effect": "blocks"}
	for key, value := range want {
		first.is(t, value, key)
	}
	first.at(t, "message")
	text := spillway(t, faulty, "check", "-")
	if text.code != 0 || !strings.Contains(text.out, "11 rows read, 4 accepted, 7 rejected") || !strings.Contains(text.out, "13600.00") {
		t.Errorf("exit status %d\n%s", text.code, text.out)
	}
}

// TestBlanksAreDecidedByTheUser: refused, left out, or none, never guessed.
func TestBlanksAreDecidedByTheUser(t *testing.T) {
	file := "amount,deductible\n100,10\n200,\n320,10\n150,0\n90,0\n"
	if got := spillway(t, file, "fit", "-"); got.code != 1 || got.out != "" {
		t.Errorf("undecided: exit status %d, want 1", got.code)
	}
	answer(t, file, "fit", "-", "--json", "--blank-deductible", "exclude").is(t, 4, "claims", "used")
	answer(t, file, "fit", "-", "--json", "--blank-deductible", "none").is(t, 5, "claims", "used")
	answer(t, file, "fit", "-", "--json", "--columns", "deductible=").is(t, 5, "claims", "used")
}

// TestColumnsThatOnlyLookRight: a term under another header is not taken
// silently, nor silently left out.
func TestColumnsThatOnlyLookRight(t *testing.T) {
	file := "amount,payment limit\n100,500\n500,500\n250,500\n"
	got := spillway(t, file, "fit", "-", "--json")
	if !strings.Contains(got.errors, "payment limit") || !strings.Contains(got.errors, "--columns limit=") {
		t.Errorf("standard error does not tell of the column\n%s", got.errors)
	}
	answer(t, file, "fit", "-", "--json").is(t, 0, "claims", "censored")
	answer(t, file, "fit", "-", "--json", "--columns", "limit=payment limit").is(t, 1, "claims", "censored")
}

// TestAmountOrItsParts: where a file has both, what was asked for is the loss.
func TestAmountOrItsParts(t *testing.T) {
	file := "amount,paid,outstanding\n100,10,20\n200,30,40\n300,50,60\n"
	mean := func(want float64, flags ...string) {
		t.Helper()
		answer(t, file, append([]string{"fit", "-", "--json"}, flags...)...).near(t, want, 1e-12, "mean")
	}
	mean(200)
	mean(200, "--columns", "amount=amount")
	mean(70, "--columns", "paid=paid")
	mean(30, "--columns", "amount=paid")
	mean(30, "--columns", "paid=paid,outstanding=")
}

// TestRowOrderMovesNoDigit and a claim of weight two is two claims.
func TestRowOrderMovesNoDigit(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	var lines []string
	for range 300 {
		deductible := float64(random.IntN(3)) * 250
		lines = append(lines, fmt.Sprintf("%.2f,%v,3000,1", deductible+0.01+random.ExpFloat64()*1200, deductible))
	}
	header := "amount,deductible,limit,weight\n"
	first := answer(t, header+strings.Join(lines, "\n"), "fit", "-", "--json")
	random.Shuffle(len(lines), func(i, j int) { lines[i], lines[j] = lines[j], lines[i] })
	for _, key := range []string{"shape", "scale"} {
		shuffled := answer(t, header+strings.Join(lines, "\n"), "fit", "-", "--json")
		shuffled.near(t, first.number(t, "parameters", key), 1e-12, "parameters", key)
	}
	twice := answer(t, header+strings.Join(append(lines, lines...), "\n"), "fit", "-", "--json")
	double := answer(t, header+strings.ReplaceAll(strings.Join(lines, "\n")+"\n", ",1\n", ",2\n"), "fit", "-", "--json")
	for _, key := range []string{"shape", "scale"} {
		double.near(t, twice.number(t, "parameters", key), 1e-12, "parameters", key)
	}
	double.near(t, twice.number(t, "log_likelihood"), 1e-12, "log_likelihood")
	double.is(t, 600, "claims", "weight")
}

// TestNumbersSurvive: 17 significant digits bring every double back; what is
// not finite has no word in JSON.
func TestNumbersSurvive(t *testing.T) {
	for value, want := range map[float64]string{
		0.1: "0.10000000000000001", 2.0 / 3: "0.66666666666666663", 5e-324: "4.9406564584124654e-324", 1e9: "1000000000", 0: "0",
		math.Inf(1): "null", math.Inf(-1): "null",
	} {
		text, err := json.Marshal(number(value))
		if err != nil || string(text) != want {
			t.Errorf("%v is written %s, want %s (%v)", value, text, want, err)
		}
		if back, err := strconv.ParseFloat(string(text), 64); want != "null" && (err != nil || back != value) {
			t.Errorf("%s is read back as %v, want %v", text, back, value)
		}
	}
}
