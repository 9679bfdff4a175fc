package invented

import (
	"cmp"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"spillway/severity/claims"

	"gonum.org/v1/gonum/stat/distuv"
)

// claim is the whole life of one invented claim. Money is in cents.
type claim struct {
	id, line, segment string
	deductible, limit int64
	final             int64 // payment once all is settled; 0 when there is none
	reserve           int64 // first estimate of a claim that ends without payment

	loss, report, closed claims.Date
	settled, reopened    claims.Date // first closing and reopening, 0 when it closes once
	part                 float64     // share of the final payment made at the first closing
	interim              [2]payment
	opinion              float64 // standard normal: how far the handler's first estimate is off
}

// payment is a part payment on the way to the final one.
type payment struct {
	on    claims.Date
	share float64 // of the final payment, this one and those before together
}

// lives draws every claim of the book. Report and settlement lags do not
// depend on the size of the loss, so that at the last valuation the closed
// claims are a fair sample of the truth above their deductibles.
func lives(random *rand.Rand) []claim {
	var all []claim
	for _, line := range Lines() {
		law := distuv.Gamma{Alpha: line.Shape, Beta: 1 / line.Scale, Src: random}
		for range line.Claims {
			c := begin(random, line)
			for {
				// A loss within the deductible never reaches the insurer's file.
				if loss := law.Rand(); loss > float64(c.deductible)/100 {
					payment := int64(math.Round(loss*100)) - c.deductible
					c.final = min(max(payment, 1), c.limit)
					break
				}
			}
			all = append(all, c)
		}
		for range line.Claims / 14 {
			c := begin(random, line)
			c.reopened, c.settled = 0, 0
			c.reserve = int64(math.Round(line.Scale*line.Shape*(0.1+0.4*random.Float64()))) * 100
			c.reserve = min(c.reserve, c.limit)
			all = append(all, c)
		}
	}
	number(all)
	return all
}

func begin(random *rand.Rand, line Line) claim {
	c := claim{
		line:       line.Name,
		segment:    line.Segments[random.IntN(len(line.Segments))],
		deductible: line.Deductibles[random.IntN(len(line.Deductibles))] * 100,
		limit:      line.Limits[random.IntN(len(line.Limits))] * 100,
		id:         line.prefix,
		loss:       firstLoss + claims.Date(random.IntN(int(lastLoss-firstLoss)+1)),
		opinion:    random.NormFloat64(),
	}
	c.report = c.loss + claims.Date(random.ExpFloat64()*18)
	lag := 10 + int(130*math.Pow(random.ExpFloat64(), 0.8))
	c.closed = c.report + claims.Date(lag)
	first := 0.1 + 0.3*random.Float64()
	c.interim = [2]payment{
		{c.report + claims.Date(lag/3), first},
		{c.report + claims.Date(2*lag/3), first + 0.35*random.Float64()},
	}
	// A claim that reopens does so before the last valuation: none of those
	// closed by then has more to pay.
	again, end := random.Float64(), valuations[len(valuations)-1]
	if wait := claims.Date(30 + random.IntN(120)); again < 0.03 && c.closed+wait <= end {
		c.settled, c.reopened = c.closed, c.closed+wait
		c.part = 0.55 + 0.35*random.Float64()
		c.closed = c.reopened + claims.Date(20+random.IntN(150))
	}
	return c
}

// number gives the claims their ids in order of report, and sorts by id.
func number(all []claim) {
	slices.SortStableFunc(all, func(a, b claim) int { return cmp.Compare(a.report, b.report) })
	counts := map[string]int{}
	for i := range all {
		year, _, _ := all[i].report.Civil()
		stem := fmt.Sprintf("%s-%d", all[i].id, year)
		counts[stem]++
		all[i].id = fmt.Sprintf("%s-%05d", stem, counts[stem])
	}
	slices.SortFunc(all, func(a, b claim) int { return cmp.Compare(a.id, b.id) })
}

// state is what the file says of a claim at one valuation.
type state struct {
	status            string
	closed            claims.Date
	paid, outstanding int64
}

// at is the claim's state at a valuation, and whether it is known by then.
func (c *claim) at(valuation claims.Date) (state, bool) {
	switch {
	case c.report > valuation:
		return state{}, false
	case c.final == 0 && c.closed <= valuation:
		return state{status: "closed without payment", closed: c.closed}, true
	case c.final == 0:
		return state{status: "open", outstanding: c.reserve}, true
	case c.closed <= valuation:
		return state{status: "closed", closed: c.closed, paid: c.final}, true
	case c.reopened > 0 && c.reopened <= valuation:
		paid := c.share(c.part)
		return state{status: "reopened", paid: paid, outstanding: c.estimate(valuation, paid)}, true
	case c.settled > 0 && c.settled <= valuation:
		return state{status: "closed", closed: c.settled, paid: c.share(c.part)}, true
	}
	var paid int64
	for _, p := range c.interim {
		if p.on <= valuation && (c.settled == 0 || p.share < c.part) {
			paid = int64(float64(c.final) * p.share)
		}
	}
	return state{status: "open", paid: paid, outstanding: c.estimate(valuation, paid)}, true
}

// share is a part of the final payment, at least a cent.
func (c *claim) share(part float64) int64 { return max(int64(float64(c.final)*part), 1) }

// estimate is the handler's case reserve: right on average, less wrong the
// nearer the closing, in whole units, never above what the limit leaves.
func (c *claim) estimate(valuation claims.Date, paid int64) int64 {
	left := float64(c.closed-valuation) / float64(c.closed-c.report)
	spread := 0.5 * left
	final := float64(c.final) * math.Exp(spread*c.opinion-spread*spread/2)
	reserve := int64(math.Ceil((final-float64(paid))/100)) * 100
	return min(max(reserve, 5000), c.limit-paid)
}
