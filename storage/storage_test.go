package storage

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

var clock = func() time.Time { return time.Date(2026, 1, 31, 9, 30, 0, 0, time.UTC) }

func openTest(t testing.TB) *Store {
	t.Helper()
	s, err := Open(context.Background(), filepath.Join(t.TempDir(), "book.db"), clock)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := s.Close(); err != nil {
			t.Error(err)
		}
	})
	return s
}

// quarter writes an invented extract of n claims as of a valuation, paid
// growing with it.
func quarter(n, valuation int) string {
	var b strings.Builder
	b.WriteString("claim_id,loss_date,status,line,segment,paid,outstanding,deductible,limit\n")
	for i := range n {
		fmt.Fprintf(&b, "C%05d,2025-%02d-%02d,%s,%s,%s,%d.%02d,%d.00,%d,%d\n", i, 1+i%12, 1+i%28,
			[]string{"open", "closed"}[i%2], []string{"cargo", "motor"}[i%2], []string{"north", "south", "east"}[i%3],
			600+i*7%9000+valuation, i%100, (1-i%2)*250, []int{0, 250, 500}[i%3], []int{20000, 50000}[i%2])
	}
	return b.String()
}

var quarterPlan = extract.Plan{
	Format: extract.Format{Kind: extract.Delimited, Encoding: extract.UTF8, Delimiter: ",", Decimal: ".", HeaderLine: 1},
	Columns: extract.ColumnMap{extract.ClaimID: "claim_id", extract.LossDate: "loss_date", extract.Status: "status", extract.Business: "line",
		extract.Segment: "segment", extract.Paid: "paid", extract.Outstanding: "outstanding", extract.Deductible: "deductible", extract.Limit: "limit"},
	Basis: claims.Basis{Amounts: claims.NetOfDeductible, Currency: "EUR"},
}

func accept(t testing.TB, s *Store, text, source string, valuation claims.Date) BatchID {
	t.Helper()
	ctx := context.Background()
	u, err := s.CreateUpload(ctx, "quarter.csv", source, strings.NewReader(text), 1<<30)
	if err != nil {
		t.Fatal(err)
	}
	plan := quarterPlan
	plan.Basis.Valuation = valuation
	if err := s.SavePlan(ctx, u.ID, plan); err != nil {
		t.Fatal(err)
	}
	if _, err := s.Check(ctx, u.ID); err != nil {
		t.Fatal(err)
	}
	id, err := s.Accept(ctx, u.ID, "quarter", nil)
	if err != nil {
		t.Fatal(err)
	}
	return id
}

func day(t testing.TB, text string) claims.Date {
	t.Helper()
	d, err := claims.ParseDate(text)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func TestLaterValuationOfAClaimCountsOnce(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	first := accept(t, s, quarter(1000, 0), "harbour", day(t, "2026-03-31"))
	second := accept(t, s, quarter(1200, 40), "harbour", day(t, "2026-06-30"))
	other := accept(t, s, quarter(1000, 80), "other office", day(t, "2026-06-30"))
	b, err := s.Batch(ctx, second)
	if err != nil {
		t.Fatal(err)
	}
	if b.LaterValuations != 1000 {
		t.Errorf("%d later valuations, want 1000", b.LaterValuations)
	}
	book, err := s.Book(ctx, []BatchID{second, first, other})
	if err != nil {
		t.Fatal(err)
	}
	if book.Len() != 2200 || book.Batches[0].Superseded.Rows != 1000 || book.Batches[1].Superseded.Rows != 0 {
		t.Errorf("%d claims, superseded %+v and %+v", book.Len(), book.Batches[0].Superseded, book.Batches[1].Superseded)
	}
	history, err := s.ClaimHistory(ctx, first, "C00007")
	if err != nil || len(history) != 2 || history[0].Paid.String() != "649.07" || history[1].Paid.String() != "689.07" {
		t.Errorf("history %+v, %v", history, err)
	}
}

func TestBookEqualsRows(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	id := accept(t, s, quarter(70_000, 3), "harbour", day(t, "2026-03-31")) // more than one chunk
	compare := func() {
		t.Helper()
		s.books = bookCache{}
		book, err := s.Book(ctx, []BatchID{id})
		if err != nil {
			t.Fatal(err)
		}
		rows, err := s.Claims(ctx, id, 0, 100_000)
		if err != nil || len(rows) != book.Len() || len(rows) != 70_000 {
			t.Fatalf("%d rows, %d in the book, %v", len(rows), book.Len(), err)
		}
		for i, c := range rows {
			if int(book.Line[i]) != c.Line || book.Paid[i] != c.Paid.Units || book.Outstanding[i] != c.Outstanding.Units ||
				book.Deductible[i] != c.Deductible.Units || book.Limit[i] != c.Limit.Units || book.LossDate[i] != c.LossDate ||
				book.Status[i] != c.Status || book.Businesses[book.Business[i]] != c.Business || book.Segments[book.Segment[i]] != c.Segment {
				t.Fatalf("row %d: %+v differs from the columns", i, c)
			}
		}
	}
	compare()
	// The columns are a cache of the rows: without them they are made again.
	if _, err := s.writer.Exec("delete from claim_columns where name = 'paid'"); err != nil {
		t.Fatal(err)
	}
	compare()
}

// A claim open with a reserve in one quarter and closed without payment in the
// next is worth nothing, not its old reserve.
func TestClosedWithoutPaymentSupersedesTheReserve(t *testing.T) {
	s := openTest(t)
	head := "claim_id,loss_date,status,line,segment,paid,outstanding,deductible,limit\n"
	first := accept(t, s, head+"A1,2025-01-01,open,cargo,north,0,5000.00,0,20000\nA2,2025-01-01,closed,cargo,north,800.00,0,0,20000\n", "harbour", day(t, "2026-03-31"))
	second := accept(t, s, head+"A1,2025-01-01,closed,cargo,north,0,0,0,20000\nA2,2025-01-01,closed,cargo,north,800.00,0,0,20000\n", "harbour", day(t, "2026-06-30"))
	book, err := s.Book(context.Background(), []BatchID{first, second})
	if err != nil {
		t.Fatal(err)
	}
	sample := claims.Select(book, claims.Selection{Amount: claims.IncurredAmount})
	if book.Len() != 2 || len(sample.Observations) != 1 || sample.Reconciliation.Used.Amount != 80000 {
		t.Errorf("%d claims, %d used for %d", book.Len(), len(sample.Observations), sample.Reconciliation.Used.Amount)
	}
	want := []claims.Exclusion{
		{Reason: "valued again in a later batch: quarter", Line: claims.Line{Rows: 2, Amount: 580000}},
		{Reason: claims.NilClaim.String(), Line: claims.Line{Rows: 1}},
	}
	if !slices.Equal(sample.Reconciliation.Excluded, want) {
		t.Errorf("left out %+v, want %+v", sample.Reconciliation.Excluded, want)
	}
}
