package extract

import (
	"fmt"
	"slices"
	"strings"
	"testing"
	"unicode/utf16"

	"golang.org/x/text/currency"
)

func sniffText(t *testing.T, text string) Guess {
	t.Helper()
	g, err := Sniff(strings.NewReader(text), int64(len(text)), "a.csv")
	if err != nil {
		t.Fatalf("%.60q: %v", text, err)
	}
	return g
}

// utf16Of writes a text as UTF-16, least byte first or last.
func utf16Of(text string, littleEndian bool) string {
	var b strings.Builder
	for _, u := range utf16.Encode([]rune(text)) {
		if littleEndian {
			b.WriteByte(byte(u))
			b.WriteByte(byte(u >> 8))
		} else {
			b.WriteByte(byte(u >> 8))
			b.WriteByte(byte(u))
		}
	}
	return b.String()
}

// TestSniffFormat states by hand how each small file is written: encoding,
// delimiter, decimal mark, mark of thousands, order of dates, header line, and
// what the file leaves in doubt.
func TestSniffFormat(t *testing.T) {
	for _, c := range []struct{ name, file, want string }{
		{"comma", "claim_id,paid\nA,1.5\n", `utf-8 "," "." "" "" 1 []`},
		{"semicolon, decimal comma", "claim_id;paid;limit\nA;1,50;2,00\nB;3,25;4,00\n", `utf-8 ";" "," "" "" 1 []`},
		{"tab", "claim_id\tpaid\nA\t1,234.50\n", `utf-8 "\t" "." "," "" 1 []`},
		{"pipe", "claim_id|paid\nA|1\n", `utf-8 "|" "." "" "" 1 []`},
		{"byte order mark", "\ufeffclaim_id,paid\nA,1\n", `utf-8 "," "." "" "" 1 []`},
		{"windows-1252", "claim_id,line,paid\nA,Geb\xe4ude,1\n", `windows-1252 "," "." "" "" 1 []`},
		{"two encodings", "claim_id,line,paid\nA,Geb\xc3\xa4ude,1\nB,Geb\xe4ude,1\n", `windows-1252 "," "." "" "" 1 [encoding]`},
		{"mostly utf-8", "claim_id,line,paid\nA,Gr\u00f6\u00dfe \u00fcber\u00e4ll,1\n", `utf-8 "," "." "" "" 1 []`},
		{"utf-16 le, marked", utf16Of("\ufeffclaim_id,paid\nA,1\n", true), `utf-16le "," "." "" "" 1 []`},
		{"utf-16 be, marked", utf16Of("\ufeffclaim_id,paid\nA,1\n", false), `utf-16be "," "." "" "" 1 []`},
		{"utf-16 le, bare", utf16Of("claim_id,paid\nA,1\n", true), `utf-16le "," "." "" "" 1 []`},
		{"utf-16 be, bare", utf16Of("claim_id,paid\nA,1\n", false), `utf-16be "," "." "" "" 1 []`},
		{"continental", "claim_id;paid\nA;1.234,56\nB;7,10\n", `utf-8 ";" "," "." "" 1 []`},
		{"spaces", "claim_id;paid\nA;1 234,56\nB;7,10\n", `utf-8 ";" "," " " "" 1 []`},
		{"no-break spaces", "claim_id;paid\nA;1\u00a0234,56\nB;1\u202f234\n", `utf-8 ";" "," " " "" 1 []`},
		{"apostrophes", "claim_id;paid\nA;1'234.56\nB;1’234\n", `utf-8 ";" "." "'" "" 1 []`},
		{"one odd space", "claim_id;paid\nA;1,234.56\nB;1,234.56\nC;1 234.56\n", `utf-8 ";" "." "," "" 1 []`},
		{"words are no style", "claim_id;paid\nA;see note 1, 2\nB;7.10\n", `utf-8 ";" "." "" "" 1 []`},
		{"either mark", "claim_id;paid\nA;1,234\n", `utf-8 ";" "." "," "" 1 [decimal]`},
		{"either mark, point", "claim_id;paid\nA;1.234\n", `utf-8 ";" "," "." "" 1 [decimal]`},
		{"two styles", "claim_id;paid\nA;1.234,56\nB;1,234.56\nC;2.345,67\n", `utf-8 ";" "," "." "" 1 [decimal]`},
		{"millions", "claim_id;paid\nA;1.234.567\n", `utf-8 ";" "," "." "" 1 []`},
		{"scientific", "claim_id,paid\nA,1.234E+05\nB,3.2e-06\n", `utf-8 "," "." "" "" 1 []`},
		{"day first", "claim_id,loss_date,paid\nA,13/01/2024,1\nB,01/02/2024,1\n", `utf-8 "," "." "" "day_first" 1 []`},
		{"month first", "claim_id,loss_date,paid\nA,01-13-2024,1\n", `utf-8 "," "." "" "month_first" 1 []`},
		{"order open", "claim_id,loss_date,paid\nA,03/04/2025,1\nB,05/05/2025,1\n", `utf-8 "," "." "" "" 1 [date_order]`},
		{"order without matter", "claim_id,loss_date,paid\nA,05.05.2025,1\nB,2025-01-02,1\n", `utf-8 "," "." "" "" 1 []`},
		{"two orders", "claim_id,loss_date,paid\nA,13/04/2025,1\nB,04/13/2025,1\n", `utf-8 "," "." "" "" 1 [date_order]`},
		{"years of two digits", "claim_id,loss_date,paid\nA,03/04/25,1\n", `utf-8 "," "." "" "" 1 [dates]`},
		{"compact dates", "claim_id,loss_date,paid\nA,20250403,1\n", `utf-8 "," "." "" "" 1 []`},
		{"dates of other columns do not matter", "claim_id,birthday,paid\nA,03/04/2025,1\n", `utf-8 "," "." "" "" 1 []`},
		{"titles above", "Extract of claims\nas at,2025-06-30\n\nclaim_id,loss_date,paid\nA,2024-01-01,1\nB,2024-01-01,1\n", `utf-8 "," "." "" "" 4 []`},
		{"wide title", "Claims,for,review\nclaim_id,loss_date,paid\nA,2024-01-01,1\n", `utf-8 "," "." "" "" 2 []`},
		{"header with a number", "claim_id,2024 class,paid\nA,x,1\n", `utf-8 "," "." "" "" 1 []`},
		{"no known header", "number,thing\nA,1\n", `utf-8 "," "." "" "" 1 [columns]`},
		{"twice the same header", "claim_id,paid,paid\nA,1,2\n", `utf-8 "," "." "" "" 1 [columns]`},
		{"separator line", "sep=|\nclaim_id|paid, total|loss\nA|1,5|2,5\n", `utf-8 "|" "," "" "" 2 []`},
		{"one column", "loss\n1.5\n2.5\n", `utf-8 "," "." "" "" 1 []`},
		{"commas inside texts", "claim_id;line;paid\nA;a, b;1\nB;c, d;2\nC;e, f;3\n", `utf-8 ";" "." "" "" 1 []`},
		{"more commas than semicolons", "claim_id;paid;outstanding;limit\nA;1,5;2,5;3,5\nB;1,5;2,5;3,5\n", `utf-8 ";" "," "" "" 1 []`},
		{"old line ends", "claim_id,paid\rA,1.5\r", `utf-8 "," "." "" "" 1 []`},
		{"quoted", "\"claim_id\",\"paid\"\r\n\"A\",\"1,234.50\"\r\n", `utf-8 "," "." "," "" 1 []`},
	} {
		g := sniffText(t, c.file)
		doubts := []string{}
		for _, d := range g.Doubts {
			doubts = append(doubts, d.About)
			if d.Question == "" {
				t.Errorf("%s: a doubt without a question", c.name)
			}
		}
		f := g.Format
		got := fmt.Sprintf("%s %q %q %q %q %d %v", f.Encoding, f.Delimiter, f.Decimal, f.Thousands, f.DateOrder, f.HeaderLine, doubts)
		if got != c.want {
			t.Errorf("%s:\n%s, want\n%s", c.name, got, c.want)
		}
	}
}

// TestSniffColumns: headers in the spellings of the trade (common practice, no
// source), and a header equal to a field's name above all others.
func TestSniffColumns(t *testing.T) {
	for header, want := range map[string]string{
		"Claim No.;Date of Loss;Date Reported;Date Closed;Claim Status;LOB;Sub-Class;Total Paid;O/S;Ccy": "claim_id=Claim No. loss_date=Date of Loss report_date=Date Reported close_date=Date Closed status=Claim Status line=LOB segment=Sub-Class paid=Total Paid outstanding=O/S currency=Ccy",
		"claim_number;accident_date;notification date;PAID;case reserve;policy limit;Excess":             "claim_id=claim_number loss_date=accident_date report_date=notification date paid=PAID outstanding=case reserve deductible=Excess limit=policy limit",
		"loss;deductible;limit_reached;weight":                                                           "amount=loss deductible=deductible limit_reached=limit_reached weight=weight",
		"loss;paid;outstanding":                                                                          "paid=paid outstanding=outstanding",
		"amount;paid;outstanding":                                                                        "amount=amount",
		"paid;Paid Amount;id":                                                                            "claim_id=id paid=paid",
		"State;Count;Reported;paid":                                                                      "paid=paid",
	} {
		g := sniffText(t, header+"\n"+strings.Repeat("1;", strings.Count(header, ";"))+"1\n")
		var got []string
		for _, f := range Fields {
			if name, ok := g.Columns[f]; ok {
				got = append(got, string(f)+"="+name)
			}
		}
		if strings.Join(got, " ") != want {
			t.Errorf("%s:\n%s, want\n%s", header, strings.Join(got, " "), want)
		}
	}
	g, err := SniffAs(strings.NewReader("a;b;paid\n1;2;3\n"), 15, Format{}, ColumnMap{Amount: "b", ClaimID: "paid"})
	if err != nil || len(g.Columns) != 2 || g.Columns[Amount] != "b" || g.Columns[ClaimID] != "paid" {
		t.Errorf("stated columns: %v, %v", g.Columns, err)
	}
}

// TestSniffRefuses: what is no extract is named, and what is accepted is said.
func TestSniffRefuses(t *testing.T) {
	for _, c := range []struct{ file, want string }{
		{"", "empty"},
		{"%PDF-1.7\n", "PDF"},
		{"\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1", "old XLS"},
		{"\x1f\x8b\x08\x00", "gzip"},
		{"PK\x05\x06" + strings.Repeat("\x00", 18), "empty archive"},
		{"<html><table>", "markup"},
		{"\ufeff <?xml?>", "markup"},
		{"{\"a\": 1}", "JSON"},
		{"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR", "no text"},
		{"\xff\xfe\x00\x00a\x00\x00\x00", "UTF-32"},
		{"\n\n\n", "no header"},
		{"1,2\n3,4\n", "no header"},
		{"claim_id,paid\n\"A,1\n", "never closed"},
		{string(handmade(t, "<worksheet/>", "<sst/>", `<workbook xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships"><sheets><sheet name="a" state="hidden" r:id="rId1"/></sheets></workbook>`)), "visible sheet"},
	} {
		_, err := Sniff(strings.NewReader(c.file), int64(len(c.file)), "x")
		if err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), ";") {
			t.Errorf("%.20q: %v, want one with %q and what is accepted", c.file, err, c.want)
		}
	}
}

// TestPlanErrors: what is wrong with a plan is said before any row is read.
func TestPlanErrors(t *testing.T) {
	const file = "claim_id,paid,note,note,loss_date\nA,1,x,y,03/04/2025\nB,2,x,y,13/04/2025\n"
	base := func() Plan {
		return Plan{Format: Format{Kind: Delimited, Encoding: UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1, DateOrder: DayFirst}, Columns: ColumnMap{Paid: "paid"}}
	}
	for _, c := range []struct {
		want   string
		change func(*Plan)
	}{
		{"line 1: no column with amounts", func(p *Plan) { p.Columns = ColumnMap{ClaimID: "claim_id"} }},
		{`line 1: no column with the header "cost"`, func(p *Plan) { p.Columns[Incurred] = "cost" }},
		{`line 1: two columns with the header "note"`, func(p *Plan) { p.Columns[Segment] = "note" }},
		{`both paid and limit`, func(p *Plan) { p.Columns[Limit] = "paid" }},
		{`amount ("note`, func(p *Plan) { p.Columns = ColumnMap{Amount: "claim_id", Paid: "paid"} }},
		{`line 2: a date "03/04/2025" in column "loss_date"`, func(p *Plan) { p.Columns[LossDate] = "loss_date"; p.Format.DateOrder = OrderUndecided }},
		{"no line 9", func(p *Plan) { p.Format.HeaderLine = 9 }},
		{`decimal mark ";"`, func(p *Plan) { p.Format.Decimal = ";" }},
		{`mark of thousands "."`, func(p *Plan) { p.Format.Thousands = "." }},
		{`delimiter "x"`, func(p *Plan) { p.Format.Delimiter = "x" }},
		{`encoding "latin"`, func(p *Plan) { p.Format.Encoding = "latin" }},
		{`kind of file "ods"`, func(p *Plan) { p.Format.Kind = "ods" }},
		{`order of dates "year"`, func(p *Plan) { p.Format.DateOrder = "year" }},
		{`header line "0"`, func(p *Plan) { p.Format.HeaderLine = 0 }},
		{"no readable workbook", func(p *Plan) { p.Format.Kind = Workbook }},
	} {
		plan := base()
		c.change(&plan)
		if c.want == `amount ("note` {
			c.want = `amount ("claim_id") and to paid ("paid")`
		}
		_, err := NewReader(strings.NewReader(file), int64(len(file)), plan)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v; want one with %s", err, c.want)
		}
	}
	// A wrong encoding is found at its line, and no row behind it is lost unsaid.
	wrong := "claim_id,paid\nA,1\nB\xe4,2\n"
	r, err := NewReader(strings.NewReader(wrong), int64(len(wrong)), Plan{Format: base().Format, Columns: ColumnMap{Paid: "paid"}})
	if err != nil {
		t.Fatal(err)
	}
	for r.Next() {
	}
	if r.Err() == nil || !strings.Contains(r.Err().Error(), "line 3") {
		t.Errorf("%v", r.Err())
	}
}

// TestMinorDigits holds the table against that of x/text, which is CLDR's. It
// leaves aside the codes that were withdrawn and those of which ISO 4217
// states two decimals (the dinar of Iraq: three) though none are in use, as
// CLDR has it (recalled from memory).
func TestMinorDigits(t *testing.T) {
	differ := strings.Fields("AFN ALL AMD COP GYD IDR IQD IRR KPW LAK LBP MGA MMK MNT MUR PKR RSD SLL SOS SYP TZS UZS YER" +
		" ADP BYR ESP ITL LUF MGF MRO STD TMM TRL ZMK ZWD")
	compared := 0
	for a := 'A'; a <= 'Z'; a++ {
		for b := 'A'; b <= 'Z'; b++ {
			for c := 'A'; c <= 'Z'; c++ {
				code := string([]rune{a, b, c})
				unit, err := currency.ParseISO(code)
				if err != nil || slices.Contains(differ, code) {
					continue
				}
				compared++
				if scale, _ := currency.Standard.Rounding(unit); int(MinorDigits(code)) != scale {
					t.Errorf("%s has %d decimals, %d by x/text", code, MinorDigits(code), scale)
				}
			}
		}
	}
	if compared < 100 {
		t.Errorf("only %d currencies compared", compared)
	}
	for code, want := range map[string]int8{"EUR": 2, "USD": 2, "JPY": 0, "KRW": 0, "KWD": 3, "BHD": 3, "OMR": 3, "CLF": 4, "IQD": 3, "HUF": 2} {
		if MinorDigits(code) != want {
			t.Errorf("%s has %d decimals, want %d", code, MinorDigits(code), want)
		}
	}
}
