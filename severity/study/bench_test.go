package study

import (
	"math/rand/v2"
	"testing"

	"spillway/severity/claims"
)

// inventedBook is a book of n claims, 11 distinct deductibles, 8 limits.
func inventedBook(n int) *claims.Book {
	random := rand.New(rand.NewPCG(3, 5))
	b := &claims.Book{Currency: "EUR", Decimals: 2, Batches: []claims.BookBatch{{ID: 1, Name: "invented", Basis: claims.Basis{Amounts: claims.NetOfDeductible, Currency: "EUR"}}},
		Businesses: []string{"cargo", "motor", "plant"}, Segments: []string{"north", "south"}}
	deductibles := []int64{0, 100, 250, 500, 750, 1000, 1500, 2000, 2500, 5000, 10000}
	limits := []int64{25000, 50000, 75000, 100000, 150000, 250000, 500000, 1000000}
	first, _ := claims.NewDate(2023, 1, 1)
	for i := range n {
		limit := 100 * limits[random.IntN(len(limits))]
		b.Paid = append(b.Paid, min(limit, 1+int64(400000*random.ExpFloat64())))
		b.Outstanding = append(b.Outstanding, 0)
		b.Deductible = append(b.Deductible, 100*deductibles[random.IntN(len(deductibles))])
		b.Limit = append(b.Limit, limit)
		b.LossDate = append(b.LossDate, first+claims.Date(random.IntN(730)))
		b.Status = append(b.Status, claims.StatusClosed)
		b.Terms = append(b.Terms, claims.PackTerms(claims.Ordinary, claims.ReachedNotStated))
		b.Business = append(b.Business, uint16(i%3))
		b.Segment = append(b.Segment, uint16(i%2))
		b.Batch = append(b.Batch, 0)
		b.Line = append(b.Line, int32(i+2))
	}
	return b
}

// BenchmarkRun measures a whole study on a million claims: cold, with the
// losses of the book still to be made and sorted, and after an assumption
// moved, with the book cached.
func BenchmarkRun(b *testing.B) {
	book := inventedBook(1_000_000)
	a := Default([]BatchRef{{ID: 1}}, book.Largest(claims.IncurredAmount))
	b.Run("cold", func(b *testing.B) {
		for b.Loop() {
			fresh := inventedColumns(book)
			if _, err := Run(fresh, a); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("assumption moved", func(b *testing.B) {
		if _, err := Run(book, a); err != nil {
			b.Fatal(err)
		}
		moved := a
		for i := 0; b.Loop(); i++ {
			moved.LossFrom = book.LossDate[0] - claims.Date(i%100)
			if _, err := Run(book, moved); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("assumption moved, all claims", func(b *testing.B) {
		moved := a
		for i := 0; b.Loop(); i++ {
			moved.Level = 0.9 + 0.0001*float64(i%100)
			if _, err := Run(book, moved); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// inventedColumns is a book on the same columns with nothing made yet.
func inventedColumns(b *claims.Book) *claims.Book {
	return &claims.Book{Currency: b.Currency, Decimals: b.Decimals, Batches: b.Batches, Batch: b.Batch, Line: b.Line, Paid: b.Paid,
		Outstanding: b.Outstanding, Deductible: b.Deductible, Limit: b.Limit, LossDate: b.LossDate, Status: b.Status, Terms: b.Terms,
		Business: b.Business, Segment: b.Segment, Businesses: b.Businesses, Segments: b.Segments}
}
