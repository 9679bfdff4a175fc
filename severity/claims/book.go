package claims

// Book holds the claims of a study in columns, each claim once, at its latest
// valuation. Index i is one claim in every column. Its columns are never
// changed after it was built, so that it can be shared and cached.
type Book struct {
	Currency string
	Decimals int8 // of all amounts: minor units of the currency
	Batches  []BookBatch

	Batch []uint8 // index into Batches
	Line  []int32 // line in that batch's file

	Paid        []int64 // minor units, as in the extract
	Outstanding []int64
	Deductible  []int64 // NoTerm when the claim has none
	Limit       []int64 // NoTerm when the claim has none
	LossDate    []Date
	Status      []Status
	Terms       []TermFlags
	Business    []uint16  // index into Businesses
	Segment     []uint16  // index into Segments
	Weight      []float64 // nil when all are 1

	Businesses []string
	Segments   []string

	paidLosses, incurredLosses lossCache
}

// BookBatch is what a book needs to know of one of its batches.
type BookBatch struct {
	ID     int64
	Name   string
	Digest string // SHA-256 of the file, hexadecimal
	Basis  Basis
	// Superseded are the batch's claims that another batch of the book values
	// later; they are counted here and stand in no column.
	Superseded Superseded
}

// Superseded counts claims and sums their amounts in minor units.
type Superseded struct {
	Rows        int
	Paid        int64
	Outstanding int64
}

// NoTerm marks a claim without a deductible or without a limit.
const NoTerm = -1 << 63

// TermFlags packs the row's deductible type and limit flag.
type TermFlags uint8

// PackTerms makes the flags of one claim.
func PackTerms(t DeductibleType, r Reached) TermFlags { return TermFlags(t) | TermFlags(r)<<1 }

// DeductibleType of the row.
func (f TermFlags) DeductibleType() DeductibleType { return DeductibleType(f & 1) }

// Reached is the row's limit flag.
func (f TermFlags) Reached() Reached { return Reached(f >> 1) }

// Len is the number of claims.
func (b *Book) Len() int { return len(b.Paid) }

// Largest is the largest amount of a claim in money, 0 for an empty book.
func (b *Book) Largest(field AmountField) float64 {
	var most int64
	for i := range b.Paid {
		most = max(most, b.amount(field, i))
	}
	return Amount{Units: most, Decimals: int16(b.Decimals)}.Float()
}
