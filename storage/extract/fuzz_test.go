package extract

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"math"
	"strings"
	"testing"

	"spillway/severity/claims"
)

func addAwkward(f *testing.F, add func(file string)) {
	f.Helper()
	for _, c := range awkward {
		add(c.file)
	}
	add(utf16Of("\ufeffclaim_id;paid\nA;1,5\n", true))
	add("claim_id;loss_date;paid\n\xc4;13.01.2024;1.234,50\n")
	add("loss,deductible,limit_reached,weight\n1234.5678901234567,100,0,1\n3.2e-06,0,1,0.5\n")
	add("a|b\n\"")
	add("claim_id,paid\n\"A\n1,2\n\"\"\",3")
}

// wantFileError wants an error that says what was found and what is accepted.
func wantFileError(t *testing.T, err error) {
	t.Helper()
	var file *FileError
	if !errors.As(err, &file) || file.Found == "" || file.Accepted == "" {
		t.Fatalf("an error of another kind: %v", err)
	}
}

// FuzzReader: whatever the bytes, there are claims or findings or an error of
// the file, never a panic and never a row lost.
func FuzzReader(f *testing.F) {
	addAwkward(f, func(file string) {
		f.Add([]byte(file), byte(0))
		f.Add([]byte(file), byte(0x7f))
	})
	f.Add(handmade(f, "<worksheet><sheetData><row><c t=\"inlineStr\"><is><t>paid</t></is></c></row><row><c><v>1</v></c></row></sheetData></worksheet>", "<sst/>", ""), byte(3))
	f.Fuzz(func(t *testing.T, file []byte, choices byte) {
		in := bytes.NewReader(file)
		g, err := Sniff(in, int64(len(file)), "fuzz")
		if err != nil {
			wantFileError(t, err)
			return
		}
		plan := Plan{Format: g.Format, Columns: g.Columns}
		if plan.Format.DateOrder == OrderUndecided && choices&1 != 0 {
			plan.Format.DateOrder = MonthFirst
		}
		if choices&2 != 0 {
			plan.Basis.Currency = "EUR"
		}
		if choices&64 != 0 {
			plan.Basis.Valuation, _ = claims.NewDate(2025, 6, 30)
		}
		if choices&4 != 0 {
			plan.Basis.Amounts = claims.NetOfDeductible
		}
		if choices&8 != 0 {
			plan.Basis.Limit = claims.TopOfCover
		}
		if choices&16 != 0 {
			plan.Basis.NoDeduct, plan.Basis.NoLimit = claims.BlankMeansNone, claims.BlankMeansNone
		}
		if choices&32 != 0 {
			plan.Basis.Deductible = claims.Franchise
		}
		r, err := NewReader(in, int64(len(file)), plan)
		if err != nil {
			wantFileError(t, err)
			return
		}
		defer r.Close()
		rows, line := 0, plan.Format.HeaderLine
		for r.Next() {
			row := r.Row()
			rows++
			if row.Line <= line {
				t.Fatalf("line %d behind line %d", row.Line, line)
			}
			line = row.Line
			checkRow(t, row, plan)
		}
		if r.Err() != nil {
			wantFileError(t, r.Err())
		} else if want, plain := plainRows(file, plan.Format); plain && rows != want {
			t.Fatalf("%d rows, want %d", rows, want)
		}
		report := r.Report()
		if err := report.Reconciles(); err != nil {
			t.Fatal(err)
		}
		if rows != report.Read || report.Uncensored+report.Censored+report.Nil != report.Accepted {
			t.Fatalf("%d rows seen, %+v", rows, report)
		}
		again, err := NewReader(in, int64(len(file)), plan)
		if err != nil {
			t.Fatal(err)
		}
		defer again.Close()
		checkExport(t, again, report)
	})
}

func checkRow(t *testing.T, row *Row, plan Plan) {
	t.Helper()
	blocks := false
	for _, f := range row.Findings {
		blocks = blocks || f.Effect == Blocks
		if f.Line != row.Line || f.Message == "" || f.Rule == "" || len(f.Value) > valueKept+3 {
			t.Fatalf("a finding that says too little or too much: %+v", f)
		}
	}
	if blocks != row.Rejected {
		t.Fatalf("rejected %v with %+v", row.Rejected, row.Findings)
	}
	if row.Rejected {
		return
	}
	o, c := row.Observation, &row.Claim
	if row.Nil != (c.Incurred().Units == 0) {
		t.Fatalf("at nothing %v with %+v", row.Nil, c)
	}
	if !row.Nil && !(o.Loss > 0 && o.Loss <= math.MaxFloat64 && o.Threshold >= 0 && o.Loss >= o.Threshold && o.Weight > 0 && o.Weight <= math.MaxFloat64) {
		t.Fatalf("accepted as %+v", o)
	}
	if o.Censored && o.Loss == o.Threshold && c.LimitReached != claims.ReachedYes {
		t.Fatalf("limited at the deductible: %+v of %+v", o, c)
	}
	if c.ID == "" {
		t.Fatal("accepted without an id")
	}
	if code := plan.Basis.Currency; code != "" {
		for _, a := range []claims.Amount{c.Paid, c.Outstanding, c.Deductible, c.Limit} {
			if _, whole := a.MinorUnits(int(MinorDigits(code))); !whole {
				t.Fatalf("accepted with %v %s", a, code)
			}
		}
	}
}

// plainRows counts the data rows of a text without quotes, whose lines end in
// newlines, by its lines.
func plainRows(file []byte, f Format) (rows int, plain bool) {
	if f.Kind != Delimited || f.Encoding != UTF8 || bytes.ContainsAny(file, "\"\r\x00") || !bytes.Contains(file, []byte("\n")) {
		return 0, false
	}
	for _, line := range bytes.Split(file, []byte("\n"))[f.HeaderLine:] {
		for _, cell := range bytes.Split(line, []byte(f.Delimiter)) {
			if len(trim(cell)) > 0 {
				rows++
				break
			}
		}
	}
	return rows, true
}

// checkExport reads back what is written of the rejected rows.
func checkExport(t *testing.T, r *Reader, report *Report) {
	t.Helper()
	var b bytes.Buffer
	if err := WriteRejected(&b, r); err != nil {
		if r.Err() == nil {
			t.Fatal(err)
		}
		return
	}
	in := csv.NewReader(&b)
	in.FieldsPerRecord = -1
	rows := -1 // the header
	for {
		cells, err := in.Read()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		rows++
		for _, c := range cells {
			if c != "" && strings.ContainsRune("=@\t\r", rune(c[0])) {
				t.Fatalf("a cell that a spreadsheet runs: %q", c)
			}
		}
	}
	if rows != report.Rejected {
		t.Fatalf("%d rows written, %d rejected", rows, report.Rejected)
	}
}

// FuzzSniff: a guess that a reader accepts, or an error of the file.
func FuzzSniff(f *testing.F) {
	addAwkward(f, func(file string) { f.Add([]byte(file), "") })
	f.Add([]byte("x;y\n1;2\n"), "y")
	f.Fuzz(func(t *testing.T, file []byte, amount string) {
		in := bytes.NewReader(file)
		g, err := Sniff(in, int64(len(file)), "fuzz")
		if err != nil {
			wantFileError(t, err)
			return
		}
		if err := g.Format.Validate(); err != nil {
			t.Fatal(err)
		}
		taken := map[string]Field{}
		for field, name := range g.Columns {
			if other, twice := taken[name]; twice || name == "" {
				t.Fatalf("%q is %s and %s", name, field, other)
			}
			taken[name] = field
		}
		for _, d := range g.Doubts {
			if d.About == "" || d.Question == "" {
				t.Fatalf("a doubt that asks nothing: %+v", d)
			}
		}
		same, err := SniffAs(in, int64(len(file)), g.Format, g.Columns)
		if err != nil || same.Format != g.Format {
			t.Fatalf("guessed %+v, then %+v (%v)", g.Format, same.Format, err)
		}
		if _, err := SniffAs(in, int64(len(file)), Format{Delimiter: "|", HeaderLine: len(amount)}, ColumnMap{Amount: amount}); err != nil {
			wantFileError(t, err)
		}
		if r, err := NewReader(in, int64(len(file)), Plan{Format: g.Format, Columns: g.Columns}); err != nil {
			wantFileError(t, err)
		} else if err := r.Close(); err != nil {
			t.Fatal(err)
		}
	})
}

// FuzzSheet: whatever stands in a workbook's sheet and shared strings, its
// rows come in order or an error says where they end.
func FuzzSheet(f *testing.F) {
	f.Add(`<worksheet><sheetData><row r="2"><c r="B2" t="s"><v>0</v></c><c t="inlineStr"><is><t>a&amp;b</t></is></c></row></sheetData></worksheet>`, `<sst><si><t>x_x000D_</t></si></sst>`)
	f.Add(`<worksheet><sheetData><row><c><f>1</f></c><c t="e"><v><![CDATA[#N/A]]></v></c></row><row r="9"/></sheetData>`, `<sst/>`)
	f.Add(`<!--x--><?y?><worksheet><sheetData/>`, `<sst><si/></sst>`)
	f.Fuzz(func(t *testing.T, sheet, shared string) {
		texts, err := readSharedStrings(strings.NewReader(shared))
		if err != nil {
			return
		}
		w := &workbook{in: io.NopCloser(strings.NewReader(sheet)), shared: texts, decimal: ','}
		w.scan = newXMLScan(w.in)
		for line := 0; ; {
			cells, at, err := w.next()
			if err == io.EOF {
				break
			}
			if err != nil {
				wantFileError(t, err)
				break
			}
			if at <= line || at > mostSheetRows || len(cells) > mostSheetColumns {
				t.Fatalf("%d cells on line %d behind line %d", len(cells), at, line)
			}
			line = at
		}
		if _, _, err := w.next(); err == nil {
			t.Fatal("a row behind the end")
		}
	})
}
