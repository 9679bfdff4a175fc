package extract

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"spillway/severity/claims"
)

// euros is the basis of most of the awkward files: payments net of an
// ordinary deductible, limits as maximum payment, valued at mid 2025.
func euros(p *Plan) {
	valuation, _ := claims.NewDate(2025, 6, 30)
	p.Basis = claims.Basis{Amounts: claims.NetOfDeductible, Limit: claims.MaximumPayment, Currency: "EUR", Valuation: valuation}
}

func groundUp(p *Plan) {
	euros(p)
	p.Basis.Amounts = claims.GroundUp
}

// awkward are small invented files with one kind of defect each. Every finding
// is written down by hand: line, ! for one that blocks, rule, column. Rows
// without one are accepted.
var awkward = []struct {
	name     string
	file     string
	change   func(*Plan) // euros when nil
	want     []string
	rejected int
	repaired []string // "count what"
}{
	{name: "clean", file: "claim_id,loss_date,status,paid\nA1,2024-01-05,closed,100.00\nA2,2024-02-29,open,0.01\n"},
	{name: "unreadable amount", file: "claim_id,paid\nA1,12x\nA2,n/a\nA3,1.2.3\nA4,5\n",
		want: []string{"2! amount_unreadable paid", "3! amount_unreadable paid", "4! amount_unreadable paid"}, rejected: 3},
	{name: "marks of thousands out of place", file: "claim_id;paid\nA1;1.234,50\nA2;12.34,50\nA3;1234.567,00\nA4;.123,00\nA5;1..234,00\n",
		want: []string{"3! amount_unreadable paid", "4! amount_unreadable paid", "5! amount_unreadable paid", "6! amount_unreadable paid"}, rejected: 4},
	{name: "blank amount", file: "claim_id,paid\nA1,\nA2,5\n", want: []string{"2! amount_blank paid"}, rejected: 1},
	{name: "blank paid beside outstanding", file: "claim_id,status,paid,outstanding\nA1,open,,500\nA2,open,500,\nA3,closed,500,\nA4,open,,\n",
		want: []string{"2 part_blank paid", "3 part_blank outstanding", "5! amount_blank paid", "5 part_blank outstanding"}, rejected: 1},
	{name: "brackets and signs", file: "claim_id,paid\nA1,\"(1,200.00)\"\nA2,1200-\nA3,−1200\nA4,- 1200\nA5,+1200\nA6,--1200\n",
		want:     []string{"2! negative_amount paid", "3! negative_amount paid", "4! negative_amount paid", "5! negative_amount paid", "7! amount_unreadable paid"},
		rejected: 5},
	{name: "nil claims", file: "claim_id,status,paid\nA1,closed,0.00\nA2,closed without payment,0\nA3,CNP,12\n",
		want: []string{"2 nil_claim paid", "3 nil_claim paid", "4 payment_on_closed_without_payment paid"}},
	{name: "nil claims without a valuation date", file: "claim_id,status,paid\nA1,closed,0.00\nA2,closed without payment,0\nA3,CNP,12\n", change: func(*Plan) {},
		want: []string{"2! nil_claim paid", "3! nil_claim paid", "4 payment_on_closed_without_payment paid"}, rejected: 2},
	{name: "scientific notation", file: "claim_id,paid\nA1,1.2E+05\nA2,12e\nA3,1.2e3.4\n",
		want: []string{"2 scientific_notation paid", "3! amount_unreadable paid", "4! amount_unreadable paid"}, rejected: 2},
	{name: "finer than the cent", file: "claim_id,paid,deductible\nA1,1.005,0\nA2,1.050000,0\nA3,1,0.001\n",
		want: []string{"2! too_many_decimals paid", "4! too_many_decimals deductible"}, rejected: 2},
	{name: "yen have no decimals", file: "claim_id,paid\nA1,100.5\nA2,100.00\nA3,100\n",
		change: func(p *Plan) { p.Basis.Currency = "JPY" }, want: []string{"2! too_many_decimals paid"}, rejected: 1},
	{name: "dinars have three decimals", file: "claim_id,paid\nA1,100.125\nA2,100.1255\n",
		change: func(p *Plan) { p.Basis.Currency = "KWD" }, want: []string{"3! too_many_decimals paid"}, rejected: 1},
	{name: "amounts beyond belief", file: "claim_id,paid\nA1,123456789012345678.00\nA2,99999999999999999999999\nA3,90071992547409.92\nA4,90071992547409.93\n",
		want: []string{"2! amount_too_large paid", "3! amount_unreadable paid", "5! amount_too_large paid"}, rejected: 3},
	{name: "currency beside the amount", file: "claim_id,paid\nA1,€ 100.00\nA2,100.00 EUR\nA3,USD 100.00\nA4,£100\nA5,CLM100\nA6,$5\n",
		want: []string{"4! other_currency paid", "5! other_currency paid", "6! amount_unreadable paid", "7! other_currency paid"}, rejected: 4},
	{name: "currency column", file: "claim_id,paid,currency\nA1,1,EUR\nA2,1,eur\nA3,1,USD\nA4,1,\n",
		want: []string{"4! other_currency currency", "5! other_currency currency"}, rejected: 2, repaired: []string{"1 currency code read in capital letters"}},
	{name: "duplicate ids", file: "claim_id,paid\nA1,1\nA1,2\nA2,0\nA2,5\nA1\u00a0,9\n",
		want: []string{"3! duplicate_claim_id claim_id", "4 nil_claim paid", "5! duplicate_claim_id claim_id", "6! duplicate_claim_id claim_id"}, rejected: 3,
		repaired: []string{"1 white space around a value left out"}},
	{name: "no id", file: "claim_id,paid\n,5\nA1,6\n", want: []string{"2! claim_id_blank claim_id"}, rejected: 1},
	{name: "blank terms", file: "claim_id,paid,deductible,limit\nA1,5,,100\nA2,5,0,\nA3,5,,\nA4,5,0,100\n",
		want: []string{"2! deductible_blank deductible", "3! limit_blank limit", "4! deductible_blank deductible", "4! limit_blank limit"}, rejected: 3},
	{name: "blank terms decided to mean none", file: "claim_id,paid,deductible,limit\nA1,5,,100\nA2,5,0,\nA3,5,,\n",
		change: func(p *Plan) {
			euros(p)
			p.Basis.NoDeduct, p.Basis.NoLimit = claims.BlankMeansNone, claims.BlankMeansNone
		}},
	{name: "bad terms", file: "claim_id,paid,deductible,limit\nA1,5,-1,100\nA2,5,0,0\nA3,5,-1,-1\nA4,5,x,y\n",
		want: []string{"2! deductible_negative deductible", "3! limit_not_positive limit", "4! deductible_negative deductible", "4! limit_not_positive limit",
			"5! amount_unreadable deductible", "5! amount_unreadable limit"}, rejected: 4},
	{name: "placeholder limits", file: "claim_id,paid,limit\nA1,5,9999999\nA2,5,999999.00\nA3,5,99999\nA4,5,9999990\n",
		want: []string{"2 limit_placeholder limit", "3 limit_placeholder limit"}},
	{name: "payment above its limit", file: "claim_id,paid,deductible,limit\nA1,10450,0,10000\nA2,10000,500,10000\nA3,10000.01,500,10000\n",
		want: []string{"2! payment_above_limit paid", "4! payment_above_limit paid"}, rejected: 2},
	{name: "ground-up against the terms", file: "claim_id,amount,deductible,limit\nA1,400,500,10000\nA2,500,500,10000\nA3,10500,500,10000\nA4,12000,500,10000\n",
		change: groundUp, want: []string{"2! loss_below_deductible amount", "3 loss_equals_deductible amount", "5 loss_above_cover amount"}, rejected: 1},
	{name: "top of cover below deductible", file: "claim_id,amount,deductible,limit\nA1,600,500,400\nA2,600,500,700\n",
		change: func(p *Plan) { groundUp(p); p.Basis.Limit = claims.TopOfCover }, want: []string{"2! limit_not_positive limit"}, rejected: 1},
	{name: "limit flags", file: "claim_id,amount,limit,limit_reached\nA1,100,100,1\nA2,100,100,no\nA3,50,100,TRUE\nA4,50,100,maybe\nA5,50,,0\nA6,50,100,\n",
		change: groundUp, want: []string{"3 limit_flag_contradicts limit_reached", "4 limit_flag_contradicts limit_reached", "5! limit_reached_unreadable limit_reached"}, rejected: 1},
	{name: "deductible types", file: "claim_id,paid,deductible,deductible_type\nA1,400,500,franchise\nA2,600,500,Franchise\nA3,400,500,straight\nA4,400,500,percent\nA5,400,500,\n",
		want: []string{"2! loss_below_deductible paid", "5! deductible_type_unreadable deductible_type"}, rejected: 2},
	{name: "weights", file: "claim_id,paid,weight\nA1,1,2.5\nA2,1,0\nA3,1,-1\nA4,1,\nA5,1,x\nA6,1,Inf\nA7,1,1e-3\n",
		want: []string{"3! weight_unreadable weight", "4! weight_unreadable weight", "5! weight_unreadable weight", "6! weight_unreadable weight", "7! weight_unreadable weight"}, rejected: 5},
	{name: "dates that are none", file: "claim_id,loss_date,report_date,paid\nA1,2024-02-30,2024-03-01,1\nA2,soon,2024-03-01,1\nA3,45123,2024-03-01,1\nA4,03/04/25,2024-03-01,1\nA5,2024-01-01,later,1\nA6,,2024-01-01,1\nA7,20240105,2024.01.06,1\nA8,2024-01-05 13:45:00,2024-01-06T00:00:00Z,1\n",
		want: []string{"2! date_unreadable loss_date", "3! date_unreadable loss_date", "4! date_unreadable loss_date", "5! date_unreadable loss_date", "6 date_unreadable report_date", "7 loss_date_blank loss_date"}, rejected: 4},
	{name: "dates out of order", file: "claim_id,loss_date,report_date,close_date,paid\nA1,2024-05-01,2024-04-30,,1\nA2,2024-05-01,2024-05-02,2024-05-01,1\nA3,2025-07-01,,,1\nA4,2024-05-01,2025-07-01,2025-07-02,1\nA5,1900-01-01,,,1\nA6,2024-05-01,2024-05-01,2024-05-01,1\n",
		want: []string{"2! dates_out_of_order report_date", "3 dates_out_of_order close_date", "4! date_after_valuation loss_date",
			"5 date_after_valuation report_date", "5 date_after_valuation close_date", "6! date_implausible loss_date"}, rejected: 3},
	{name: "day first", file: "claim_id,loss_date,paid\nA1,13/02/2024,1\nA2,01.03.2024,1\nA3,02/13/2024,1\n",
		change: func(p *Plan) { euros(p); p.Format.DateOrder = DayFirst }, want: []string{"4! date_unreadable loss_date"}, rejected: 1},
	{name: "months by name", file: "claim_id,loss_date,paid\nA1,5-Jan-2024,1\nA2,05JAN2024,1\nA3,5 January 2024,1\nA4,\"January 5, 2024\",1\nA5,5-Jan-24,1\nA6,5-Foo-2024,1\nA7,31-Feb-2024,1\nA8,Jan 2024,1\nA9,30-Jun-2024 12:30:00,1\n",
		want: []string{"6! date_unreadable loss_date", "7! date_unreadable loss_date", "8! date_unreadable loss_date", "9! date_unreadable loss_date"}, rejected: 4},
	{name: "currencies where none is stated", file: "claim_id,paid,currency\nA1,1,\nA2,1,usd\nA3,1,USD\nA4,1,EUR\nA5,1.123,USD\n", change: func(*Plan) {},
		want: []string{"2! other_currency currency", "5! other_currency currency"}, rejected: 2},
	{name: "limits in words", file: "claim_id,paid,limit\nA1,1,unlimited\nA2,1,5\n", want: []string{"2! amount_unreadable limit"}, rejected: 1},
	{name: "status codes", file: "claim_id,status,paid\nA1,O,1\nA2,Closed,1\nA3,RE-OPENED,1\nA4,XYZ,1\nA5,,1\nA6,CWP,1\nA7,closed – nil,1\n",
		want: []string{"5 status_unknown status", "7 status_unknown status", "8 payment_on_closed_without_payment paid"}},
	{name: "closed with a reserve", file: "claim_id,status,paid,outstanding\nA1,closed,1,5\nA2,closed,1,0\nA3,open,1,5\nA4,open,6,-5\nA5,open,-1,5\n",
		want: []string{"2 closed_with_reserve outstanding", "5 negative_part outstanding", "6 negative_part paid"}},
	{name: "sums that differ", file: "claim_id,paid,outstanding,incurred\nA1,1.00,2.00,3.00\nA2,1,2,3.01\nA3,1,,3\nA4,,2,3\nA5,x,2,3\n",
		want: []string{"3 sum_differs incurred", "6! amount_unreadable paid"}, rejected: 1},
	{name: "incurred alone", file: "claim_id,status,incurred\nA1,closed,100\nA2,open,0\n", want: []string{"3 nil_claim incurred"}},
	{name: "ragged rows", file: "claim_id,paid,note\nA1,1,\nA2,1,a,b\nA3,1\nA4\nA5,1,a,,\n",
		want:     []string{"3! ragged_row claim_id", "5 ragged_row claim_id", "5! amount_blank paid"},
		rejected: 2, repaired: []string{"1 row shorter than the header: the columns that it lacks, none of which is read, count as blank"}},
	{name: "totals at the bottom", file: "claim_id,segment,paid\nA1,n,1.25\nA2,n,2.50\n,Total,3.75\nTotal,,3.75\n,,3.75\nA3,Total,1\n,Subtotal n:,9\n",
		want: []string{"4! totals_row claim_id", "5! totals_row claim_id", "6! totals_row claim_id", "8! totals_row claim_id"}, rejected: 4},
	{name: "formulas", file: "claim_id,segment,paid\n=1+1,\"=HYPERLINK(\"\"x\"\")\",1\nA2,@SUM(A1),1\nA3,-,1\n",
		want: []string{"2 possible_formula claim_id", "2 possible_formula segment", "3 possible_formula segment"}},
	{name: "white space", file: "claim_id,segment,paid\n A1 ,north\u00a0sea,\u00a01.00\u00a0\nA2\t,north sea,\u202f2.00\n\n ,\n\ufeffA3,x,1\n",
		want: nil, repaired: []string{"2 blank line passed over", "5 white space around a value left out", "1 no-break space inside a value read as a space"}},
	{name: "quotes", file: "claim_id,segment,paid\nA1,\"two\nlines\",1\nA2,3\" pipe,x\nA3,\"a\"b,1\n",
		want: []string{"4! amount_unreadable paid"}, rejected: 1,
		repaired: []string{"1 row with a line break inside quotes kept as one row", "2 quote inside a value kept as it stands"}},
	{name: "every problem of one row", file: "claim_id,loss_date,report_date,status,paid,outstanding,deductible,limit,currency\nA1,2024-01-01,2024-01-02,open,1,0,0,9,EUR\nA1,2026-01-01,2025-01-01,??,-5,0.001,-3,0,USD\n",
		want: []string{"3! duplicate_claim_id claim_id", "3! date_after_valuation loss_date", "3! dates_out_of_order report_date", "3 status_unknown status",
			"3! too_many_decimals outstanding", "3! negative_amount paid", "3! deductible_negative deductible", "3! limit_not_positive limit", "3! other_currency currency"}, rejected: 1},
	{name: "old line ends", file: "claim_id,paid\rA1,1\rA2,x\r", want: []string{"3! amount_unreadable paid"}, rejected: 1},
	{name: "separator line and titles", file: "sep=;\nClaims as at 30 June\n\nclaim no;paid to date;date of loss\nA1;1.234,50;2024-01-02\nA2;1,5;x\n",
		want: []string{"6! date_unreadable date of loss"}, rejected: 1},
}

func TestAwkwardFiles(t *testing.T) {
	kinds := map[Rule]bool{}
	for _, c := range awkward {
		t.Run(c.name, func(t *testing.T) {
			change := c.change
			if change == nil {
				change = euros
			}
			rows, report := readAll(t, c.file, change)
			var got []string
			for _, row := range rows {
				for _, f := range row.Findings {
					mark := ""
					if f.Effect == Blocks {
						mark = "!"
					}
					got = append(got, fmt.Sprintf("%d%s %s %s", f.Line, mark, f.Rule, f.Column))
					kinds[f.Rule] = true
					if f.Message == "" {
						t.Errorf("%s: no message", f.Rule)
					}
				}
			}
			slices.Sort(got)
			want := slices.Sorted(slices.Values(c.want))
			if !slices.Equal(got, want) {
				t.Errorf("findings\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
			}
			if report.Rejected != c.rejected {
				t.Errorf("%d rejected, want %d", report.Rejected, c.rejected)
			}
			var repaired []string
			for _, r := range report.Repairs {
				repaired = append(repaired, fmt.Sprint(r.Count, " ", r.What))
			}
			if c.repaired != nil && !slices.Equal(repaired, c.repaired) {
				t.Errorf("repairs %q, want %q", repaired, c.repaired)
			}
		})
	}
	if len(kinds) < 30 {
		t.Errorf("only %d rules are met", len(kinds))
	}
}
