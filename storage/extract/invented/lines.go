package invented

import "spillway/severity/claims"

// Line is a line of business of the invented insurer together with the truth
// that its claims are drawn from.
type Line struct {
	Name string
	// Shape (> 0) and Scale (> 0, whole currency units) of the gamma law of the
	// ground-up loss.
	Shape, Scale float64
	// Claims is the number of losses above the deductible over the whole book.
	Claims int
	// Deductibles are ordinary deductibles and Limits maximum payments, in whole
	// currency units, from which a policy takes one each.
	Deductibles, Limits []int64
	Segments            []string

	prefix string
}

// Lines are the insurer's lines of business. Over all of them there are 11
// distinct deductibles (0 among them) and 8 distinct limits.
func Lines() []Line {
	return []Line{
		{
			Name: "motor damage", prefix: "MD", Shape: 1.6, Scale: 2600, Claims: 4400,
			Deductibles: []int64{0, 250, 500, 750}, Limits: []int64{10000, 15000, 25000},
			Segments: []string{"vans", "lorries", "yard vehicles"},
		},
		{
			Name: "harbour cargo", prefix: "HC", Shape: 0.8, Scale: 14000, Claims: 2800,
			Deductibles: []int64{500, 1000, 2500, 5000}, Limits: []int64{25000, 50000, 75000},
			Segments: []string{"bulk", "boxed", "chilled", "entrepôt"},
		},
		{
			Name: "small craft", prefix: "SC", Shape: 1.1, Scale: 9000, Claims: 1900,
			Deductibles: []int64{500, 1500, 2000}, Limits: []int64{25000, 50000, 75000},
			Segments: []string{"barges", "tugs", "pilot boats"},
		},
		{
			Name: "quay plant", prefix: "QP", Shape: 0.55, Scale: 60000, Claims: 1300,
			Deductibles: []int64{1000, 2500, 5000, 7500, 10000}, Limits: []int64{50000, 100000, 150000, 250000},
			Segments: []string{"cranes", "conveyors", "lock gates"},
		},
	}
}

// Source is the name of the sender under which all files of the book arrive.
const Source = "harbour and locks office"

// Currency of the book, ISO 4217.
const Currency = "EUR"

func day(year, month, dayOfMonth int) claims.Date {
	d, err := claims.NewDate(year, month, dayOfMonth)
	if err != nil {
		panic(err) // only literals come here
	}
	return d
}

var (
	firstLoss  = day(2023, 7, 1)
	lastLoss   = day(2025, 6, 30)
	valuations = []claims.Date{day(2024, 9, 30), day(2024, 12, 31), day(2025, 3, 31), day(2025, 6, 30)}
)

// basis is the same for all quarters but for the valuation date: payments net
// of an ordinary deductible, limits as maximum payments, blanks refused.
func basis(valuation claims.Date) claims.Basis {
	return claims.Basis{
		Amounts:    claims.NetOfDeductible,
		Deductible: claims.Ordinary,
		Limit:      claims.MaximumPayment,
		Currency:   Currency,
		Valuation:  valuation,
	}
}
