package extract

import (
	"bytes"
	"io"
	"os"
	"strings"
	"testing"

	"spillway/severity/claims"
)

// readAll reads a text as a file under its own guess, changed by change.
func readAll(t *testing.T, text string, change func(*Plan)) ([]Row, *Report) {
	t.Helper()
	file := strings.NewReader(text)
	g, err := Sniff(file, int64(len(text)), "test.csv")
	if err != nil {
		t.Fatal(err)
	}
	plan := Plan{Format: g.Format, Columns: g.Columns}
	if change != nil {
		change(&plan)
	}
	r, err := NewReader(file, int64(len(text)), plan)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	var rows []Row
	for r.Next() {
		row := *r.Row()
		row.Findings = append([]Finding(nil), row.Findings...)
		rows = append(rows, row)
	}
	if err := r.Err(); err != nil {
		t.Fatal(err)
	}
	report := r.Report()
	if err := report.Reconciles(); err != nil {
		t.Error(err)
	}
	if len(rows) != report.Read {
		t.Errorf("%d rows seen, %d in the report", len(rows), report.Read)
	}
	return rows, report
}

// fixture is the invented extract of testdata/fixture.csv, whose treatment is
// worked out by hand beside each row: 36 rows, 221,498.69 in all.
func TestFixture(t *testing.T) {
	text, err := os.ReadFile("../../testdata/fixture.csv")
	if err != nil {
		t.Fatal(err)
	}
	rows, report := readAll(t, string(text), func(p *Plan) {
		p.Columns = ColumnMap{ClaimID: "claim_id", Status: "status", Currency: "currency", Deductible: "deductible",
			DeductibleType: "deductible_type", Limit: "payment_limit", Paid: "paid"}
		p.Basis = claims.Basis{Amounts: claims.NetOfDeductible, Limit: claims.MaximumPayment, Currency: "USD"}
	})
	if report.Read != 36 || report.Accepted != 31 || report.Rejected != 5 {
		t.Errorf("read %d, accepted %d, rejected %d; want 36, 31 (the open claim among them), 5", report.Read, report.Accepted, report.Rejected)
	}
	for _, total := range report.Totals {
		// 198,930.22 closed and usable, and 8,000.00 open; the rest is rejected.
		if total.Field == Paid && (total.Read != "221498.69" || total.Accepted != "206930.22" || total.Rejected != "14568.47") {
			t.Errorf("paid: %+v", total)
		}
	}
	want := map[int]Rule{32: NilClaimRule, 33: NegativeAmount, 35: OtherCurrency, 36: PaymentAboveLimit, 37: DuplicateClaimID}
	for _, row := range rows {
		if rule, bad := want[row.Line]; bad != row.Rejected || bad && row.Findings[0].Rule != rule {
			t.Errorf("line %d: rejected %v, findings %v; want %q", row.Line, row.Rejected, row.Findings, rule)
		}
	}
	// Ordinary d = 500, paid 3,100.77: 3,600.77; franchise d = 500, paid 1,714.19: itself;
	// ordinary d = 1000, paid its limit of 10,000: at least 11,000.
	for line, loss := range map[int]float64{4: 3600.77, 10: 1714.19, 27: 11000} {
		o := rows[line-2].Observation
		if o.Loss != loss || o.Censored != (line == 27) {
			t.Errorf("line %d: %+v, want loss %v", line, o, loss)
		}
	}
}

func TestUTF16AndWindows1252(t *testing.T) {
	for name, text := range map[string]string{
		"utf-16 little endian": "\xff\xfeclaim_id;paid\nÄ1;1.234,50\n",
		"windows-1252":         "claim_id;paid\n\xc41;1.234,50\n",
	} {
		if name[0] == 'u' {
			var b bytes.Buffer
			b.WriteString("\xff\xfe")
			for _, c := range strings.TrimPrefix(text, "\xff\xfe") {
				b.Write([]byte{byte(c), byte(c >> 8)})
			}
			text = b.String()
		}
		rows, _ := readAll(t, text, nil)
		if len(rows) != 1 || rows[0].Claim.ID != "Ä1" || rows[0].Claim.Paid != (claims.Amount{Units: 123450, Decimals: 2}) {
			t.Errorf("%s: %+v", name, rows)
		}
	}
}

func TestQuotes(t *testing.T) {
	text := "claim_id,segment,paid\r\n" +
		"A1,\"North, \"\"upper\"\"\",10.00\r\n" +
		"A2,\"two\nlines\",20.00\r\n" +
		"A3,plain,30.00"
	rows, _ := readAll(t, text, nil)
	if len(rows) != 3 || rows[0].Claim.Segment != `North, "upper"` || rows[1].Claim.Segment != "two\nlines" || rows[2].Line != 5 {
		t.Errorf("%+v", rows)
	}
	if _, err := NewReader(strings.NewReader("a\n"), 2, Plan{Format: Format{Kind: Delimited, Encoding: UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 9}}); err == nil {
		t.Error("a header line beyond the file is accepted")
	}
	in := newSplitter(strings.NewReader("a,b\n\"never closed\n1,2\n"), ',')
	var err error
	for err == nil {
		_, _, err = in.next()
	}
	if err == io.EOF || !strings.Contains(err.Error(), "line 2") {
		t.Errorf("an open quote: %v", err)
	}
}
