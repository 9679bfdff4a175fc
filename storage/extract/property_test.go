package extract

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"spillway/severity/claims"
)

// style writes whole cents in one way of writing numbers.
type style struct {
	decimal, thousands string
	delimiter          string
}

func (s style) write(cents int64, negative int) string {
	whole, rest := strconv.FormatInt(cents/100, 10), fmt.Sprintf("%02d", cents%100)
	if s.thousands != "" {
		for i := len(whole) - 3; i > 0; i -= 3 {
			whole = whole[:i] + s.thousands + whole[i:]
		}
	}
	text := whole + s.decimal + rest
	switch negative {
	case 1:
		text = "-" + text
	case 2:
		text = "(" + text + ")"
	case 3:
		text += "\u2212"
	}
	if strings.Contains(text, s.delimiter) {
		text = `"` + text + `"`
	}
	return text
}

// TestBooksReconcile writes random books in random styles and wants every row
// and every cent back: read as written, read = accepted + rejected, accepted
// as the rows themselves say.
func TestBooksReconcile(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.SampledFrom([]style{
			{".", "", ","}, {".", ",", ","}, {",", "", ";"}, {",", ".", ";"}, {",", " ", "\t"}, {",", "\u00a0", ";"}, {".", "'", "|"}, {".", "", "\t"},
		}).Draw(t, "style")
		end := rapid.SampledFrom([]string{"\n", "\r\n"}).Draw(t, "line end")
		n := rapid.IntRange(1, 60).Draw(t, "rows")
		var file strings.Builder
		line := 1
		join := func(cells ...string) {
			file.WriteString(strings.Join(cells, s.delimiter) + end)
			line++
		}
		join("claim_id", "segment", "paid", "outstanding", "limit")
		type written struct{ line, paid, outstanding int64 }
		var rows []written
		readable := 0
		for i := range n {
			if rapid.IntRange(0, 9).Draw(t, "gap") == 0 {
				file.WriteString(end)
				line++
			}
			paid := rapid.Int64Range(0, 1e12).Draw(t, "paid")
			outstanding := rapid.Int64Range(0, 1e7).Draw(t, "outstanding")
			sign := rapid.IntRange(0, 3).Draw(t, "sign")
			id := fmt.Sprintf("C%04d", i)
			if rapid.IntRange(0, 9).Draw(t, "twice") == 0 {
				id = "C0000"
			}
			segment, began := "north", int64(line)
			if rapid.IntRange(0, 9).Draw(t, "long") == 0 {
				segment = `"two` + end + `lines, ""quoted""; and|more"`
				line++
			}
			limit := rapid.SampledFrom([]string{"", s.write(5e13, 0), "none"}).Draw(t, "limit")
			join(id, segment, s.write(paid, sign), s.write(outstanding, 0), limit)
			if sign != 0 {
				paid = -paid
			}
			rows = append(rows, written{began, paid, outstanding})
			if limit != "none" {
				readable++
			}
		}
		text := file.String()
		plan := Plan{
			Format:  Format{Kind: Delimited, Encoding: UTF8, Delimiter: s.delimiter, Decimal: s.decimal, Thousands: strings.ReplaceAll(s.thousands, "\u00a0", " "), HeaderLine: 1},
			Columns: ColumnMap{ClaimID: "claim_id", Segment: "segment", Paid: "paid", Outstanding: "outstanding", Limit: "limit"},
			Basis:   claims.Basis{Currency: "EUR"},
		}
		r, err := NewReader(strings.NewReader(text), int64(len(text)), plan)
		if err != nil {
			t.Fatal(err)
		}
		defer r.Close()
		read, accepted := [2]int64{}, [2]int64{}
		for i := 0; r.Next(); i++ {
			row, want := r.Row(), rows[i]
			if int64(row.Line) != want.line {
				t.Fatalf("row %d stands on line %d, want %d", i, row.Line, want.line)
			}
			got := [2]claims.Amount{row.Claim.Paid, row.Claim.Outstanding}
			for k, cents := range [2]int64{want.paid, want.outstanding} {
				if units, whole := got[k].MinorUnits(2); !whole || units != cents {
					t.Fatalf("line %d: %v, want %d cents", row.Line, got[k], cents)
				}
				read[k] += cents
				if !row.Rejected {
					accepted[k] += cents
				}
			}
		}
		if r.Err() != nil {
			t.Fatal(r.Err())
		}
		report := r.Report()
		if err := report.Reconciles(); err != nil {
			t.Fatal(err)
		}
		if report.Read != n || report.Read != report.Accepted+report.Rejected || report.Accepted > readable {
			t.Fatalf("%d rows written; %d read, %d accepted, %d rejected", n, report.Read, report.Accepted, report.Rejected)
		}
		for k, field := range []Field{Paid, Outstanding} {
			for _, total := range report.Totals {
				if total.Field == field && (!isCents(total.Read, read[k]) || !isCents(total.Accepted, accepted[k]) || !isCents(total.Rejected, read[k]-accepted[k]) || total.Unreadable != 0) {
					t.Fatalf("%s: %+v, want %d and %d cents", field, total, read[k], accepted[k])
				}
			}
		}
		if limit := report.Totals[2]; limit.Field != Limit || limit.Unreadable != n-readable {
			t.Fatalf("%d limits cannot be read: %+v", n-readable, limit)
		}
	})
}

func isCents(text string, cents int64) bool {
	got, ok := new(big.Rat).SetString(text)
	return ok && got.Cmp(big.NewRat(cents, 100)) == 0
}

// TestPlainLossesAreNearestDoubles: a ground-up loss without terms is the
// double that strconv reads from the same text, however it is written, and
// more digits than an amount holds are rounded with a warning.
func TestPlainLossesAreNearestDoubles(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := rapid.Float64Range(1e-30, 1e15).Draw(t, "loss")
		form := rapid.SampledFrom([]byte("efgG")).Draw(t, "form")
		digits := rapid.SampledFrom([]int{-1, -1, 17, 20, 25}).Draw(t, "digits")
		text := strconv.FormatFloat(want, form, digits, 64)
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatal(err)
		}
		file := "loss,limit_reached\n" + text + ",0\n"
		plan := Plan{Format: Format{Kind: Delimited, Encoding: UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1}, Columns: ColumnMap{Amount: "loss", LimitReached: "limit_reached"}}
		r, err := NewReader(strings.NewReader(file), int64(len(file)), plan)
		if err != nil {
			t.Fatal(err)
		}
		if !r.Next() {
			t.Fatal(r.Err())
		}
		row := r.Row()
		if want == 0 {
			if !row.Rejected {
				t.Fatalf("%s is accepted", text)
			}
			return
		}
		if row.Rejected || row.Observation.Loss != want || row.Observation.Censored {
			t.Fatalf("%s: %v %+v, want %v", text, row.Findings, row.Observation, want)
		}
		if row.Claim.ID != "line 2" {
			t.Fatalf("id %q", row.Claim.ID)
		}
	})
}
