package extract

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"spillway/severity/claims"
)

// benchRows is the size of the file of the benchmarks: about 128 MB.
const benchRows = 1_000_000

// benchPlan reads the files of bigExtract.
func benchPlan() Plan {
	valuation, _ := claims.NewDate(2025, 6, 30)
	columns := ColumnMap{}
	for _, f := range []Field{ClaimID, LossDate, ReportDate, CloseDate, Status, Business, Segment, Paid, Outstanding, Deductible, Limit, Currency} {
		columns[f] = string(f)
	}
	return Plan{
		Format:  Format{Kind: Delimited, Encoding: UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1},
		Columns: columns,
		Basis:   claims.Basis{Amounts: claims.NetOfDeductible, Limit: claims.MaximumPayment, Currency: "EUR", Valuation: valuation},
	}
}

// writeBig writes an extract of n claims: twelve columns, about 128 bytes a
// row, eleven deductibles, eight limits.
func writeBig(w io.Writer, n int) {
	fmt.Fprintln(w, "claim_id,loss_date,report_date,close_date,status,line,segment,paid,outstanding,deductible,limit,currency")
	random := rand.New(rand.NewPCG(11, 12))
	lines := []string{"motor third party liability", "motor own damage, comprehensive", "cargo and goods in transit", "plant and machinery"}
	segments := []string{"region north", "region east", "region south", "region west", "region overseas"}
	limits := []int{100000, 150000, 200000, 250000, 500000, 750000, 1000000, 2000000}
	var row bytes.Buffer
	for i := range n {
		row.Reset()
		deductible, limit := random.IntN(11)*500, limits[random.IntN(8)]
		day := random.IntN(27) + 1
		month := random.IntN(11) + 1
		year := 2022 + random.IntN(3)
		paid, outstanding, status, closed := 100+random.IntN(4_000_000), 0, "closed", ""
		if random.IntN(4) == 0 {
			status, outstanding = "open", random.IntN(1_000_000)
		} else {
			closed = fmt.Sprintf("%d-%02d-%02d", year, month+1, day)
		}
		line := lines[random.IntN(4)]
		if line == lines[1] {
			line = `"` + line + `"`
		}
		fmt.Fprintf(&row, "CL-%09d,%d-%02d-%02d,%d-%02d-%02d,%s,%s,%s,%s,%d.%02d,%d.%02d,%d.00,%d.00,EUR\n", i,
			year, month, day, year, month, day+1, closed, status, line,
			segments[random.IntN(5)], paid/100, paid%100, outstanding/100, outstanding%100, deductible, limit)
		w.Write(row.Bytes())
	}
}

var bigExtract = sync.OnceValue(func() []byte {
	var b bytes.Buffer
	writeBig(&b, benchRows)
	return b.Bytes()
})

// readThrough reads all rows and returns their number.
func readThrough(b *testing.B, file io.ReaderAt, size int64, plan Plan) int {
	r, err := NewReader(file, size, plan)
	if err != nil {
		b.Fatal(err)
	}
	defer r.Close()
	for r.Next() {
	}
	if r.Err() != nil {
		b.Fatal(r.Err())
	}
	report := r.Report()
	if report.Accepted == 0 || report.Reconciles() != nil {
		b.Fatalf("%d accepted of %d; %v", report.Accepted, report.Read, report.Reconciles())
	}
	return report.Read
}

// BenchmarkReader reads, parses and checks one million claims of twelve
// columns on one core.
func BenchmarkReader(b *testing.B) {
	file := bigExtract()
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	b.SetBytes(int64(len(file)))
	b.ReportAllocs()
	rows := 0
	for b.Loop() {
		rows += readThrough(b, bytes.NewReader(file), int64(len(file)), benchPlan())
	}
	b.ReportMetric(float64(rows)/b.Elapsed().Seconds(), "rows/s")
}

// BenchmarkSplit cuts the same file into cells and does nothing with them.
func BenchmarkSplit(b *testing.B) {
	file := bigExtract()
	b.SetBytes(int64(len(file)))
	for b.Loop() {
		in := newSplitter(bytes.NewReader(file), ',')
		for {
			if _, _, err := in.next(); err == io.EOF {
				break
			} else if err != nil {
				b.Fatal(err)
			}
		}
	}
}

// BenchmarkSniff guesses the same file.
func BenchmarkSniff(b *testing.B) {
	file := bigExtract()
	b.SetBytes(int64(len(file)))
	for b.Loop() {
		if _, err := Sniff(bytes.NewReader(file), int64(len(file)), "big.csv"); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkMemory reads a file of three million claims from disk and reports
// the largest heap seen, in MiB, and the same for a third of the file: what
// grows is the set of claim ids.
func BenchmarkMemory(b *testing.B) {
	for _, rows := range []int{benchRows, 3 * benchRows} {
		b.Run(fmt.Sprintf("rows=%d", rows), func(b *testing.B) {
			path := filepath.Join(b.TempDir(), "big.csv")
			file, err := os.Create(path)
			if err != nil {
				b.Fatal(err)
			}
			defer file.Close()
			writeBig(file, rows)
			size, err := file.Seek(0, io.SeekEnd)
			if err != nil {
				b.Fatal(err)
			}
			runtime.GC()
			peak := watchHeap(b)
			for b.Loop() {
				runtime.GC() // what an earlier reading left is not this one's
				readThrough(b, file, size, benchPlan())
			}
			b.ReportMetric(peak(), "MiB-heap")
		})
	}
}

// bigWorkbook is a workbook of n claims in the columns of writeBig; the texts
// are shared strings, as spreadsheets write them.
func bigWorkbook(b *testing.B, n int) []byte {
	var text, sheet, shared bytes.Buffer
	writeBig(&text, n)
	rows, err := csv.NewReader(&text).ReadAll()
	if err != nil {
		b.Fatal(err)
	}
	known := map[string]int{}
	sheet.WriteString(`<worksheet><sheetData>`)
	shared.WriteString(`<sst>`)
	for i, row := range rows {
		fmt.Fprintf(&sheet, `<row r="%d" spans="1:12">`, i+1)
		for column, cell := range row {
			at := fmt.Sprintf("%c%d", 'A'+column, i+1)
			if i > 0 && column >= 7 && column <= 10 {
				fmt.Fprintf(&sheet, `<c r="%s" s="1"><v>%s</v></c>`, at, cell)
				continue
			}
			if _, ok := known[cell]; !ok {
				known[cell] = len(known)
				fmt.Fprintf(&shared, `<si><t>%s</t></si>`, cell)
			}
			fmt.Fprintf(&sheet, `<c r="%s" t="s"><v>%d</v></c>`, at, known[cell])
		}
		sheet.WriteString(`</row>`)
	}
	sheet.WriteString(`</sheetData></worksheet>`)
	shared.WriteString(`</sst>`)
	return handmade(b, sheet.String(), shared.String(), "")
}

// BenchmarkWorkbook reads, parses and checks a workbook of 200,000 claims and
// reports the largest heap seen.
func BenchmarkWorkbook(b *testing.B) {
	file := bigWorkbook(b, 200_000)
	plan := benchPlan()
	plan.Format = Format{Kind: Workbook, Sheet: "claims", Decimal: ".", HeaderLine: 1}
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	runtime.GC()
	peak := watchHeap(b)
	b.ReportAllocs()
	rows := 0
	for b.Loop() {
		runtime.GC() // what an earlier reading left is not this one's
		rows += readThrough(b, bytes.NewReader(file), int64(len(file)), plan)
	}
	b.ReportMetric(float64(rows)/b.Elapsed().Seconds(), "rows/s")
	b.ReportMetric(peak(), "MiB-heap")
}

// watchHeap samples the heap in use until the returned function is called,
// which returns the largest, in MiB above what was in use at the start.
func watchHeap(b *testing.B) func() float64 {
	var before runtime.MemStats
	runtime.ReadMemStats(&before)
	var most atomic.Uint64
	stop, done := make(chan struct{}), make(chan struct{})
	go func() {
		defer close(done)
		for {
			select {
			case <-stop:
				return
			case <-time.After(5 * time.Millisecond):
				var m runtime.MemStats
				runtime.ReadMemStats(&m)
				most.Store(max(most.Load(), m.HeapInuse))
			}
		}
	}()
	return func() float64 {
		close(stop)
		<-done
		return (float64(most.Load()) - float64(before.HeapInuse)) / (1 << 20)
	}
}
