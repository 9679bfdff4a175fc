package claims

import (
	"math"

	"spillway/severity"
)

// Problem says why the amounts of a claim give no observation.
type Problem uint8

const (
	NoProblem       Problem = iota
	NilClaim                // amount of zero: settled for nothing, or nothing paid yet
	NegativeAmount          // below zero
	BelowDeductible         // a ground-up loss below its own deductible
	AboveMaximum            // a payment above the most that the insurer pays
	DeductibleBlank         // blank though the extract has the column, and no decision that blank means none
	LimitBlank              // likewise
	BadDeductible           // below zero
	BadLimit                // not above zero, or a top of cover at or below the deductible
	BadWeight               // not above zero and finite
	problems
)

// String is the reason in the trade's words.
func (p Problem) String() string {
	switch p {
	case NilClaim:
		return "no amount: closed without payment, or nothing paid yet"
	case NegativeAmount:
		return "negative amount"
	case BelowDeductible:
		return "loss below its deductible"
	case AboveMaximum:
		return "payment above the maximum payment"
	case DeductibleBlank:
		return "deductible blank"
	case LimitBlank:
		return "limit blank"
	case BadDeductible:
		return "deductible below zero"
	case BadLimit:
		return "limit not above zero, or top of cover not above the deductible"
	case BadWeight:
		return "weight not above zero"
	}
	return "no problem"
}

// Terms are the coverage terms of one claim, in money.
type Terms struct {
	Deductible    float64
	Limit         float64
	HasDeductible bool
	HasLimit      bool
	Type          DeductibleType
	Reached       Reached
}

// Remark is something about a usable observation that a user should know.
type Remark uint8

const (
	NoRemark         Remark = 0
	EqualsDeductible Remark = 1 << iota // the loss equals its deductible
	AboveCover                          // a ground-up amount above the top of cover: known only to be at least the top
	FlagContradicts                     // the file's flag says the limit was reached, or not, and the amount says otherwise
)

// GroundUp reconstructs what is known of the ground-up loss from an amount as
// recorded and the claim's terms; d is the deductible, L the limit as stated:
//
//	deductible  amounts    loss   threshold  top: maximum payment  top: top of cover
//	ordinary    net        y + d  d          d + L                 L
//	ordinary    ground-up  y      d          d + L                 L
//	franchise   either     y      d          L                     L
//
// The loss is exact below the top and only known to be at least the top from
// there on; a limit flag in the file, where there is one, decides instead:
// reached makes the recorded loss a lower bound, not reached makes it exact.
// (Payment per loss under ordinary and franchise deductibles: Klugman, Panjer
// and Willmot, Loss Models, coverage modifications, recalled from memory.)
func (b Basis) GroundUp(amount float64, t Terms) (severity.Observation, Remark, Problem) {
	deductible, problem := b.deductible(t)
	if problem != NoProblem {
		return severity.Observation{}, 0, problem
	}
	switch {
	case amount == 0:
		return severity.Observation{}, 0, NilClaim
	case !(amount > 0):
		return severity.Observation{}, 0, NegativeAmount
	}
	loss := amount
	if b.Amounts == NetOfDeductible && t.Type == Ordinary {
		loss += deductible
	}
	o := severity.Observation{Loss: loss, Threshold: deductible, Weight: 1}
	if loss < deductible {
		return o, 0, BelowDeductible
	}
	var remark Remark
	if loss == deductible && deductible > 0 {
		remark |= EqualsDeductible
	}
	top, problem := b.top(t, deductible)
	if problem != NoProblem {
		return o, remark, problem
	}
	if t.Reached == ReachedYes {
		o.Censored = true
		if t.HasLimit && aboveByMoreThanRounding(top, loss) {
			remark |= FlagContradicts
		}
		return o, remark, NoProblem
	}
	if loss < top {
		return o, remark, NoProblem
	}
	if t.Reached == ReachedNo {
		return o, remark | FlagContradicts, NoProblem
	}
	if b.Amounts == NetOfDeductible && aboveByMoreThanRounding(loss, top) {
		return o, remark, AboveMaximum
	}
	if loss > top && b.Amounts == GroundUp {
		remark |= AboveCover
	}
	o.Loss, o.Censored = top, true
	return o, remark, NoProblem
}

// aboveByMoreThanRounding forgives the rounding of adding a deductible.
func aboveByMoreThanRounding(loss, top float64) bool { return loss > top*(1+1e-14) }

func (b Basis) deductible(t Terms) (float64, Problem) {
	switch {
	case !t.HasDeductible:
		if !b.MissingTerm.Deductible && b.NoDeduct == BlankRefused {
			return 0, DeductibleBlank
		}
		return 0, NoProblem
	case t.Deductible < 0 || math.IsNaN(t.Deductible):
		return 0, BadDeductible
	}
	return t.Deductible, NoProblem
}

// top is the ground-up loss at which the payment stops growing; +Inf without
// a limit.
func (b Basis) top(t Terms, deductible float64) (float64, Problem) {
	if !t.HasLimit {
		// A flag that says whether the limit was reached needs no limit.
		if !b.MissingTerm.Limit && b.NoLimit == BlankRefused && t.Reached == ReachedNotStated {
			return 0, LimitBlank
		}
		return math.Inf(1), NoProblem
	}
	top := t.Limit
	if b.Limit == MaximumPayment && t.Type == Ordinary {
		top += deductible
	}
	if !(t.Limit > 0) || top <= deductible {
		return 0, BadLimit
	}
	return top, NoProblem
}

// TermProblems lists every problem of the terms by themselves: the deductible
// first, then the limit. GroundUp stops at the first; who reports to a user
// wants all.
func (b Basis) TermProblems(t Terms) []Problem {
	var all []Problem
	deductible, problem := b.deductible(t)
	if problem != NoProblem {
		all = append(all, problem)
		deductible = 0
	}
	if _, problem := b.top(t, deductible); problem != NoProblem {
		all = append(all, problem)
	}
	return all
}

// Terms are the claim's terms in money.
func (c *Claim) Terms() Terms {
	return Terms{
		Deductible: c.Deductible.Float(), HasDeductible: c.HasDeductible,
		Limit: c.Limit.Float(), HasLimit: c.HasLimit,
		Type: c.DeductibleType, Reached: c.LimitReached,
	}
}

// Observe is GroundUp for a claim as read, by its incurred amount (paid plus
// outstanding), with its weight.
func (b Basis) Observe(c *Claim) (severity.Observation, Remark, Problem) {
	o, remark, problem := b.GroundUp(c.incurred(), c.Terms())
	o.Weight = c.Weight
	if problem == NoProblem && !(c.Weight > 0 && c.Weight <= math.MaxFloat64) {
		problem = BadWeight
	}
	return o, remark, problem
}

// incurred is the double nearest to paid plus outstanding, or the sum of the
// nearest doubles where the exact sum has more digits than an Amount.
func (c *Claim) incurred() float64 {
	if c.Outstanding.Units == 0 {
		return c.Paid.Float()
	}
	if sum, exact := c.Paid.Plus(c.Outstanding); exact {
		return sum.Float()
	}
	return c.Paid.Float() + c.Outstanding.Float()
}
