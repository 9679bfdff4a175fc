package invented

import (
	"fmt"
	"math/rand/v2"
	"slices"

	"spillway/severity/claims"
)

// Faults is the number of rows of every extract that a reader must reject:
// a date that no calendar has, a claim id met before, a negative payment, a
// blank deductible, a payment far above its limit, another currency, and the
// totals row at the end.
const Faults = 7

// Oddities is the number of rows of every extract that deserve a warning
// and are claims all the same: a status of no known meaning and a closed claim
// with a case reserve.
const Oddities = 2

// spoil puts among the claims what real extracts have among theirs. The faulty
// rows are rows of their own, so that the good ones stay as drawn.
func spoil(random *rand.Rand, records []record, valuation claims.Date) []record {
	// closed is the place of a closed claim below its limit.
	closed := func() int {
		for {
			at := random.IntN(len(records))
			if r := &records[at]; r[columnStatus].text == "closed" && r[columnPaid].cents > 0 && r[columnPaid].cents < r[columnLimit].cents {
				return at
			}
		}
	}
	year, _, _ := valuation.Civil()
	extra := 0
	// another copies such a claim under an id of its own.
	another := func() record {
		r := records[closed()]
		extra++
		r[columnID] = text(fmt.Sprintf("%s-%d-9%03d%d", r[columnID].text[:2], year, int(valuation)%1000, extra))
		return r
	}
	insert := func(r record) {
		records = slices.Insert(records, 1+random.IntN(len(records)-1), r)
	}

	// The copy of a claim stands behind the claim itself.
	at := random.IntN(len(records) / 2)
	twice := records[at]
	twice[columnPaid] = money(twice[columnPaid].cents / 2)
	records = slices.Insert(records, at+1+random.IntN(len(records)/2), twice)

	odd := closed()
	records[odd][columnStatus] = text("see file note")
	odd = closed()
	records[odd][columnOutstanding] = money(min(25000, records[odd][columnLimit].cents-records[odd][columnPaid].cents))

	r := another()
	r[columnLoss] = text(fmt.Sprintf("%d-02-30", year))
	insert(r)

	r = another()
	r[columnPaid] = money(-120000)
	insert(r)

	r = another()
	r[columnDeductible] = cell{}
	insert(r)

	r = another()
	r[columnPaid] = money(r[columnLimit].cents * 7 / 5)
	insert(r)

	r = another()
	r[columnCurrency] = text("SEK")
	insert(r)

	// Spaces behind words are a typist's, and harmless.
	for range 12 {
		i := random.IntN(len(records))
		for _, column := range []int{columnID, columnSegment} {
			records[i][column].text += "  "
		}
	}

	total := record{columnID: text("Total")}
	for _, column := range []int{columnPaid, columnOutstanding} {
		sum := int64(0)
		for i := range records {
			sum += records[i][column].cents
		}
		total[column] = money(sum)
	}
	return append(records, total)
}
