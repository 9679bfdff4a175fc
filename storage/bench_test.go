package storage

import (
	"bufio"
	"context"
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// writeMillion writes an invented extract of n claims in 12 columns, 11
// distinct deductibles and 8 limits, about 128 bytes a row.
func writeMillion(b *testing.B, n int) string {
	b.Helper()
	path := filepath.Join(b.TempDir(), "million.csv")
	f, err := os.Create(path)
	if err != nil {
		b.Fatal(err)
	}
	defer f.Close()
	out := bufio.NewWriterSize(f, 1<<20)
	random := rand.New(rand.NewPCG(7, 11))
	fmt.Fprintln(out, "claim_id,loss_date,report_date,close_date,status,line,segment,paid,outstanding,deductible,limit,currency")
	deductibles := []int{0, 100, 250, 500, 750, 1000, 1500, 2000, 2500, 5000, 10000}
	limits := []int{25000, 50000, 75000, 100000, 150000, 250000, 500000, 1000000}
	for i := range n {
		cents := int64(100 * (1 + 4000*random.ExpFloat64()))
		limit := limits[random.IntN(len(limits))]
		cents = min(cents, int64(limit)*100-25000) // with what is outstanding at most the limit
		fmt.Fprintf(out, "CLAIM-2024-%09d,2024-%02d-%02d,2025-01-%02d,2025-02-%02d,%s,%s of business,%s segment,%d.%02d,%d.00,%d.00,%d.00,EUR\n",
			i, 1+i%12, 1+i%28, 1+i%28, 1+i%28, []string{"closed", "closed", "closed", "open"}[i%4], []string{"first line", "second line", "third line"}[i%3],
			[]string{"northern", "southern", "eastern", "western"}[i%4], cents/100, cents%100, (i%4/3)*250, deductibles[random.IntN(len(deductibles))], limit)
	}
	if err := out.Flush(); err != nil {
		b.Fatal(err)
	}
	return path
}

var millionPlan = extract.Plan{
	Format: extract.Format{Kind: extract.Delimited, Encoding: extract.UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1},
	Columns: extract.ColumnMap{extract.ClaimID: "claim_id", extract.LossDate: "loss_date", extract.ReportDate: "report_date", extract.CloseDate: "close_date",
		extract.Status: "status", extract.Business: "line", extract.Segment: "segment", extract.Paid: "paid", extract.Outstanding: "outstanding",
		extract.Deductible: "deductible", extract.Limit: "limit", extract.Currency: "currency"},
	Basis: claims.Basis{Amounts: claims.NetOfDeductible, Currency: "EUR"},
}

// BenchmarkImport measures, on the same million rows, the bare insert into the
// claims table (prepared, one row a statement, one transaction, with the
// unique index) and the whole acceptance with all checks, columns and totals;
// and the cold opening of the book from its columns.
func BenchmarkImport(b *testing.B) {
	const rows = 1_000_000
	path := writeMillion(b, rows)
	ctx := context.Background()

	b.Run("bare insert", func(b *testing.B) {
		list := readClaims(b, path)
		for b.Loop() {
			b.StopTimer()
			s := openTest(b)
			if _, err := s.writer.Exec("pragma foreign_keys = 0"); err != nil {
				b.Fatal(err)
			}
			b.StartTimer()
			tx, err := s.writer.BeginTx(ctx, nil)
			if err != nil {
				b.Fatal(err)
			}
			w, err := newClaimWriter(ctx, tx, 1, 2)
			if err != nil {
				b.Fatal(err)
			}
			args := make([]any, 0, claimFields)
			for i := range list {
				if args, err = w.appendArgs(args[:0], &list[i]); err != nil {
					b.Fatal(err)
				}
				if _, err := w.one.ExecContext(ctx, args...); err != nil {
					b.Fatal(err)
				}
			}
			if err := tx.Commit(); err != nil {
				b.Fatal(err)
			}
		}
		b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
	})
	b.Run("accept", func(b *testing.B) {
		for b.Loop() {
			b.StopTimer()
			s := openTest(b)
			u := uploadFile(b, s, path)
			runtime.GC()
			peak := newPeak()
			b.StartTimer()
			if _, err := s.Accept(ctx, u, "million", func(int) { peak.look() }); err != nil {
				b.Fatal(err)
			}
			b.StopTimer()
			b.ReportMetric(float64(peak.most)/(1<<20), "MiB-heap")
			b.StartTimer()
		}
		b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
	})
	b.Run("check", func(b *testing.B) {
		s := openTest(b)
		u := uploadFile(b, s, path)
		for b.Loop() {
			if _, err := s.Check(ctx, u); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("open book cold", func(b *testing.B) {
		s := openTest(b)
		id, err := s.Accept(ctx, uploadFile(b, s, path), "million", nil)
		if err != nil {
			b.Fatal(err)
		}
		for b.Loop() {
			s.books = bookCache{}
			if book, err := s.Book(ctx, []BatchID{id}); err != nil || book.Len() != rows {
				b.Fatal(err)
			}
		}
	})
}

func uploadFile(b *testing.B, s *Store, path string) UploadID {
	b.Helper()
	f, err := os.Open(path)
	if err != nil {
		b.Fatal(err)
	}
	defer f.Close()
	u, err := s.CreateUpload(context.Background(), "million.csv", "benchmark", f, 1<<30)
	if err != nil {
		b.Fatal(err)
	}
	if err := s.SavePlan(context.Background(), u.ID, millionPlan); err != nil {
		b.Fatal(err)
	}
	return u.ID
}

func readClaims(b *testing.B, path string) []claims.Claim {
	b.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		b.Fatal(err)
	}
	r, err := extract.NewReader(strings.NewReader(string(text)), int64(len(text)), millionPlan)
	if err != nil {
		b.Fatal(err)
	}
	defer r.Close()
	var list []claims.Claim
	for r.Next() {
		if row := r.Row(); !row.Rejected {
			list = append(list, row.Claim)
		}
	}
	if err := r.Err(); err != nil || len(list) == 0 {
		b.Fatal(err)
	}
	return list
}

// peak watches the heap in use.
type peak struct{ most uint64 }

func newPeak() *peak { return &peak{} }

func (p *peak) look() {
	var m runtime.MemStats
	runtime.ReadMemStats(&m)
	p.most = max(p.most, m.HeapInuse)
}
