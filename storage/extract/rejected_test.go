package extract

import (
	"bytes"
	"encoding/csv"
	"slices"
	"strings"
	"testing"
)

// TestGuard: texts that a spreadsheet would run are neutralised, numbers are
// left as they are.
func TestGuard(t *testing.T) {
	for text, want := range map[string]string{
		"": "", "plain": "plain", "=1+1": "'=1+1", "@SUM(A1)": "'@SUM(A1)", "+1-2": "'+1-2", "-cmd|' /C calc'!A0": "'-cmd|' /C calc'!A0",
		"\t=1": "'\t=1", "\r=1": "'\r=1", "\n=1": "'\n=1", "-1200.00": "-1200.00", "+5": "+5", "-1.2E+05": "-1.2E+05", "-1.234,56": "-1.234,56", "-1 200": "-1 200",
		"-": "-", "- none": "'- none", "-1+1": "'-1+1", "(1,200.00)": "(1,200.00)", "-A1": "'-A1", "+": "+", "-1E9+A1": "'-1E9+A1", "-INF": "'-INF", "−5": "−5",
	} {
		if got := Guard(text); got != want {
			t.Errorf("%q is guarded as %q, want %q", text, got, want)
		}
	}
}

// TestWriteRejected reads the rejected rows back: their lines, their reasons
// beside them, their cells as they came.
func TestWriteRejected(t *testing.T) {
	const file = "claim_id,segment,paid,=x\nA1,ok,1,\nA2,\"=HYPERLINK(\"\"a\"\")\",x,\"two\nlines\"\nA2,, -5 ,y\n"
	plan := Plan{Format: Format{Kind: Delimited, Encoding: UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1}, Columns: ColumnMap{ClaimID: "claim_id", Segment: "segment", Paid: "paid"}}
	r, err := NewReader(strings.NewReader(file), int64(len(file)), plan)
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := WriteRejected(&b, r); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(&b).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != 3 || !slices.Equal(rows[0], []string{"line", "reasons", "claim_id", "segment", "paid", "'=x"}) ||
		rows[1][0] != "3" || !slices.Equal(rows[1][2:], []string{"A2", `'=HYPERLINK("a")`, "x", "two\nlines"}) ||
		rows[2][0] != "5" || !slices.Equal(rows[2][2:], []string{"A2", "", " -5 ", "y"}) {
		t.Errorf("%q", rows)
	}
	if !strings.Contains(rows[1][1], "amount_unreadable") || !strings.Contains(rows[2][1], "duplicate_claim_id") || !strings.Contains(rows[2][1], "negative_amount") {
		t.Errorf("reasons %q and %q", rows[1][1], rows[2][1])
	}
}
