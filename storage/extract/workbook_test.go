package extract

import (
	"archive/zip"
	"bytes"
	"compress/flate"
	"fmt"
	"io"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"spillway/severity/claims"
)

// cellsOf reads a sheet as the reader sees it.
func cellsOf(file []byte, sheet string) (rows map[int][]string, err error) {
	w, err := openWorkbook(bytes.NewReader(file), int64(len(file)), Format{Kind: Workbook, Sheet: sheet, Decimal: "."})
	if err != nil {
		return nil, err
	}
	defer w.Close()
	rows = map[int][]string{}
	for {
		cells, line, err := w.next()
		if err == io.EOF {
			return rows, nil
		}
		if err != nil {
			return rows, err
		}
		for _, c := range cells {
			rows[line] = append(rows[line], string(c))
		}
	}
}

// TestWorkbooksOfALibrary holds the cells against those that excelize, which
// wrote them, reads: texts of all kinds, numbers, gaps, formulas.
func TestWorkbooksOfALibrary(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	words := []string{"north", "a & b < c > \"d\" 'e'", " padded ", "", "two\nlines", "=1+1", "ÄÖÜ €", "0012", "\u00a0x", "]]>", "_x0041_", "tab\there"}
	for round := range 20 {
		f := excelize.NewFile()
		for row := range 1 + random.IntN(40) {
			if random.IntN(6) == 0 {
				continue
			}
			for column := range 1 + random.IntN(30) {
				at, err := excelize.CoordinatesToCellName(column+1, row+1)
				if err != nil {
					t.Fatal(err)
				}
				switch random.IntN(5) {
				case 0:
					err = f.SetCellValue("Sheet1", at, words[random.IntN(len(words))])
				case 1:
					err = f.SetCellValue("Sheet1", at, random.NormFloat64()*1e5)
				case 2:
					err = f.SetCellValue("Sheet1", at, random.IntN(1e6))
				case 3:
					err = f.SetCellRichText("Sheet1", at, []excelize.RichTextRun{{Text: "bold ", Font: &excelize.Font{Bold: true}}, {Text: words[random.IntN(len(words))]}})
				}
				if err != nil {
					t.Fatal(err)
				}
			}
		}
		var b bytes.Buffer
		if err := f.Write(&b); err != nil {
			t.Fatal(err)
		}
		got, err := cellsOf(b.Bytes(), "Sheet1")
		if err != nil {
			t.Fatalf("round %d: %v", round, err)
		}
		back, err := excelize.OpenReader(bytes.NewReader(b.Bytes()), excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		want, err := back.GetRows("Sheet1")
		if err != nil {
			t.Fatal(err)
		}
		for i, row := range want {
			cells := got[i+1]
			for len(cells) > 0 && cells[len(cells)-1] == "" {
				cells = cells[:len(cells)-1]
			}
			for len(row) > 0 && row[len(row)-1] == "" {
				row = row[:len(row)-1]
			}
			if fmt.Sprintf("%q", cells) != fmt.Sprintf("%q", row) {
				t.Fatalf("round %d, row %d:\n%q\n%q", round, i+1, cells, row)
			}
			delete(got, i+1)
		}
		for line, cells := range got {
			if strings.Join(cells, "") != "" {
				t.Errorf("round %d: row %d more than the library reads: %q", round, line, cells)
			}
		}
	}
}

// handmade packs a workbook by hand, with the sheet's rows, the shared strings
// and the workbook's own part as given.
func handmade(t testing.TB, sheet, shared, main string) []byte {
	t.Helper()
	const office = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
	if main == "" {
		main = `<workbook xmlns:r="` + office + `"><sheets><sheet name="claims" sheetId="1" r:id="rId1"/></sheets></workbook>`
	}
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	for _, part := range [][2]string{
		{"_rels/.rels", `<Relationships><Relationship Id="x" Type="` + office + `/officeDocument" Target="xl/workbook.xml"/></Relationships>`},
		{"xl/workbook.xml", main},
		{"xl/_rels/workbook.xml.rels", `<Relationships><Relationship Id="rId1" Type="` + office + `/worksheet" Target="worksheets/sheet1.xml"/>` +
			`<Relationship Id="rId2" Type="` + office + `/worksheet" Target="/xl/worksheets/sheet2.xml"/>` +
			`<Relationship Id="rId3" Type="` + office + `/sharedStrings" Target="sharedStrings.xml"/></Relationships>`},
		{"xl/worksheets/sheet1.xml", sheet},
		{"xl/worksheets/sheet2.xml", `<worksheet><sheetData/></worksheet>`},
		{"xl/sharedStrings.xml", shared},
	} {
		w, err := z.Create(part[0])
		if err != nil {
			t.Fatal(err)
		}
		if _, err := io.WriteString(w, part[1]); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// TestHandmadeSheets: forms of ECMA-376 that libraries seldom write.
func TestHandmadeSheets(t *testing.T) {
	const shared = `<?xml version="1.0"?><sst><si><t>zero</t></si><si/><si><r><t>ri</t></r><r><t xml:space="preserve">ch </t></r><rPh sb="0" eb="1"><t>say</t></rPh></si><si><t>a&#10;b&amp;c_x000D__x005F_x</t></si></sst>`
	for _, c := range []struct {
		name, sheet, want string
	}{
		{"shared", `<row><c t="s"><v>0</v></c><c t="s"><v>1</v></c><c t="s"><v>2</v></c><c t="s"><v>3</v></c></row>`, `1 ["zero" "" "rich " "a\nb&c\r_x"]`},
		{"gaps", `<row r="3"><c r="B3"><v>1</v></c><c r="D3"><v>2.50</v></c><c/></row><row/><row r="9"><c><v>3</v></c></row>`, `3 ["" "1" "" "2.50" ""];4 [];9 ["3"]`},
		{"inline", `<row><c t="inlineStr"><is><t>in</t></is></c><c t="inlineStr"><is><r><t>a</t></r><r><t>b</t></r></is></c></row>`, `1 ["in" "ab"]`},
		{"values", `<row><c t="str"><f>A1&amp;"x"</f><v>text</v></c><c t="b"><v>1</v></c><c t="e"><v>#N/A</v></c><c t="d"><v>2024-01-05</v></c></row>`, `1 ["text" "1" "#N/A" "2024-01-05"]`},
		{"formulas", `<row><c><f>1+1</f><v>2</v></c><c><f>SUM(A1&lt;2)</f></c><c><f>1</f><v/></c><c><f/></c></row>`, `1 ["2" "=SUM(A1<2)" "=1" ""]`},
		{"dressed", `<!-- > --><x:row xmlns:x="u" x:r="7" r='2' spans="1:2" ><x:c s="1" cm="a>b" r = "A2" ><x:v><![CDATA[4<2]]></x:v></x:c><!--c--></x:row >`, `2 ["4<2"]`},
	} {
		rows, err := cellsOf(handmade(t, `<?xml version="1.0"?><worksheet><dimension ref="A1"/><sheetData>`+c.sheet+`</sheetData><mergeCells/></worksheet>`, shared, ""), "claims")
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		var got []string
		for line := 1; line < 10; line++ {
			if cells, ok := rows[line]; ok {
				got = append(got, fmt.Sprintf("%d %q", line, cells))
			}
		}
		want := c.want
		if c.name == "gaps" {
			want = strings.Replace(want, ";4 []", "", 1) // an empty row has no cells to note
		}
		if strings.Join(got, ";") != want {
			t.Errorf("%s: %s, want %s", c.name, strings.Join(got, ";"), want)
		}
	}
}

// TestBrokenWorkbooks: each is refused, with a reason and a line; none loses
// rows in silence.
func TestBrokenWorkbooks(t *testing.T) {
	const good = `<worksheet><sheetData><row r="1"><c t="s"><v>0</v></c></row><row r="2"><c><v>2</v></c></row></sheetData></worksheet>`
	const shared = `<sst><si><t>x</t></si></sst>`
	if rows, err := cellsOf(handmade(t, good, shared, ""), "claims"); err != nil || len(rows) != 2 {
		t.Fatalf("the good one: %v, %v", rows, err)
	}
	cut := handmade(t, good, shared, "")
	for _, c := range []struct {
		name, want string
		file       []byte
	}{
		{"sheet cut", "end is missing", handmade(t, good[:strings.Index(good, `<row r="2"`)], shared, "")},
		{"row cut", "breaks off", handmade(t, good[:strings.Index(good, `</row></sheetData`)], shared, "")},
		{"tag cut", "breaks off", handmade(t, good[:strings.Index(good, `"2"`)], shared, "")},
		{"rows out of order", "behind that of 1", handmade(t, strings.Replace(good, `"2"`, `"1"`, 1), shared, "")},
		{"row number beyond", "behind that of 1", handmade(t, strings.Replace(good, `"2"`, `"99999999999"`, 1), shared, "")},
		{"column beyond", "a cell at", handmade(t, strings.Replace(good, `<c>`, `<c r="XFE2">`, 1), shared, "")},
		{"text that there is none", "reference", handmade(t, strings.Replace(good, `<v>0<`, `<v>1<`, 1), shared, "")},
		{"document type", "document type", handmade(t, `<!DOCTYPE x [<!ENTITY a "aaaa">]>`+good, shared, "")},
		{"document type in texts", "document type", handmade(t, good, `<!DOCTYPE x [<!ENTITY a "aaaa">]>`+shared, "")},
		{"no UTF-8", "UTF-8", handmade(t, strings.Replace(good, "<v>2", "<v>\xff", 1), shared, "")},
		{"long tag", "1 MiB", handmade(t, strings.Replace(good, `<c>`, `<c a="`+strings.Repeat("a", 2<<20)+`">`, 1), shared, "")},
		{"other document", "main part is a document", handmade(t, good, shared, "<document/>")},
		{"half an archive", "no readable workbook", cut[:len(cut)/2]},
		{"another archive", "no readable workbook", append([]byte(nil), "PK\x03\x04 nothing else of an archive"...)},
		{"no such sheet", "the sheets are other", handmade(t, good, shared, `<workbook xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships"><sheets><sheet name="other" r:id="rId1"/></sheets></workbook>`)},
		{"damaged bytes", "", damaged(t, good, shared)},
	} {
		rows, err := cellsOf(c.file, "claims")
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, %v; want an error with %q", c.name, rows, err, c.want)
		}
	}
}

// damaged is a stored workbook with a digit changed: only the checksum tells.
func damaged(t *testing.T, sheet, shared string) []byte {
	t.Helper()
	from := handmade(t, sheet, shared, "")
	in, err := zip.NewReader(bytes.NewReader(from), int64(len(from)))
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	for _, f := range in.File {
		w, err := z.CreateHeader(&zip.FileHeader{Name: f.Name, Method: zip.Store})
		if err != nil {
			t.Fatal(err)
		}
		r, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		if _, err := io.Copy(w, r); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return bytes.Replace(b.Bytes(), []byte("<v>2</v>"), []byte("<v>3</v>"), 1)
}

// TestUnpackingIsBounded packs a sheet that unpacks to five gibibytes and
// wants it refused without holding it.
func TestUnpackingIsBounded(t *testing.T) {
	if testing.Short() {
		t.Skip("unpacks gibibytes")
	}
	l := &limited{in: io.NopCloser(io.LimitReader(zeros{}, 1<<40)), left: 1 << 20}
	if n, err := io.Copy(io.Discard, l); err != errUnpacked || n != 1<<20 {
		t.Errorf("%d bytes and %v", n, err)
	}
	// Blanks behind the rows, a thousand to one.
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	z.RegisterCompressor(zip.Deflate, func(w io.Writer) (io.WriteCloser, error) { return flate.NewWriter(w, flate.BestSpeed) })
	shell := handmade(t, "", "<sst/>", "")
	in, err := zip.NewReader(bytes.NewReader(shell), int64(len(shell)))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range in.File {
		if f.Name == "xl/worksheets/sheet1.xml" {
			continue
		}
		if err := z.Copy(f); err != nil {
			t.Fatal(err)
		}
	}
	w, err := z.Create("xl/worksheets/sheet1.xml")
	if err != nil {
		t.Fatal(err)
	}
	if _, err := io.WriteString(w, "<worksheet><sheetData><row><c><v>1</v></c></row><row><c><v>"); err != nil {
		t.Fatal(err)
	}
	if _, err := io.Copy(w, io.LimitReader(zeros{}, 64<<20)); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	rows, err := cellsOf(b.Bytes(), "claims")
	if len(rows) != 1 || err == nil || !strings.Contains(err.Error(), "1 MiB") {
		t.Errorf("%d rows and %v", len(rows), err)
	}
}

// zeros yields the digit 0 for ever.
type zeros struct{}

func (zeros) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = '0'
	}
	return len(p), nil
}

// TestWorkbookAsExtract reads a workbook to the end: day numbers of both
// systems, numbers with the rounding of spreadsheets, texts in another number
// style beside numbers, a hidden sheet.
func TestWorkbookAsExtract(t *testing.T) {
	const main = `<workbook xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships">%s<sheets><sheet name="old" sheetId="2" state="veryHidden" r:id="rId2"/><sheet name="claims" sheetId="1" r:id="rId1"/></sheets></workbook>`
	texts := func(words ...string) string {
		var b strings.Builder
		for _, w := range words {
			fmt.Fprintf(&b, `<c t="inlineStr"><is><t>%s</t></is></c>`, w)
		}
		return b.String()
	}
	sheet := `<worksheet><sheetData><row r="2">` + texts("claim id", "date of loss", "paid") + `</row>` +
		// 45296 is 2024-01-05 in the system of 1900 (ECMA-376 part 1, 18.17.4.1; common practice).
		`<row r="4">` + texts("A1") + `<c><v>45296</v></c><c><v>1234.5600000000001</v></c></row>` +
		`<row r="5">` + texts("A2", "2024-02-29", "1.234,56") + `</row>` +
		`<row r="6">` + texts("A3", "20240229") + `<c><v>7.25</v></c></row>` +
		`<row r="7">` + texts("A4") + `<c><v>43834.75</v></c><c><v>1.2E-2</v></c></row>` +
		`<row r="8">` + texts("A5", "2024-02-29") + `<c><f>B7*2</f></c></row>` +
		`</sheetData></worksheet>`
	for _, c := range []struct {
		properties string
		dates      [4]string
	}{
		{"", [4]string{"2024-01-05", "2024-02-29", "2024-02-29", "2020-01-04"}},
		// The same numbers 1,462 days later.
		{`<workbookPr date1904="1"/>`, [4]string{"2028-01-06", "2024-02-29", "2024-02-29", "2024-01-05"}},
	} {
		file := handmade(t, sheet, "<sst/>", fmt.Sprintf(main, c.properties))
		rows, report := readAll(t, string(file), func(p *Plan) {
			p.Basis.Currency = "EUR"
			if p.Format.Sheet != "claims" || p.Format.HeaderLine != 2 || p.Format.Decimal != "," || p.Format.Thousands != "." {
				t.Errorf("guessed %+v", p.Format)
			}
		})
		paid := [...]claims.Amount{{Units: 123456, Decimals: 2}, {Units: 123456, Decimals: 2}, {Units: 725, Decimals: 2}}
		for i, row := range rows {
			if i < 3 && (row.Rejected || row.Line != i+4 || row.Claim.Paid != paid[i]) {
				t.Errorf("row %d: %+v", i, row)
			}
			if i < 4 && row.Claim.LossDate.String() != c.dates[i] {
				t.Errorf("row %d: lost on %v, want %s", i, row.Claim.LossDate, c.dates[i])
			}
		}
		if len(rows) != 5 || rows[3].Findings[0].Rule != TooManyDecimals || rows[4].Findings[0].Rule != AmountUnreadable || report.Accepted != 3 {
			t.Errorf("%+v", rows)
		}
		if len(report.Repairs) != 2 || report.Repairs[0].Count != 2 { // lines 1 and 3 are blank
			t.Errorf("repairs %v", report.Repairs)
		}
	}
	g, err := Sniff(bytes.NewReader(handmade(t, sheet, "<sst/>", fmt.Sprintf(main, ""))), int64(len(handmade(t, sheet, "<sst/>", fmt.Sprintf(main, "")))), "x")
	if err != nil || g.Hidden != 1 || len(g.Sheets) != 1 {
		t.Errorf("%+v, %v", g, err)
	}
}
