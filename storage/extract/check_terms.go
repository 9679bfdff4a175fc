package extract

import (
	"fmt"
	"math"
	"slices"

	"spillway/severity/claims"
)

func (r *Reader) readTerms() {
	c := &r.row.Claim
	if cell := r.cells[limitReachedAt]; len(cell) > 0 {
		reached, ok := readFlag(cell)
		if !ok {
			r.find(LimitReached, cell, FlagUnreadable, Blocks, "accepted are 1 or 0, yes or no, true or false, and blank for not stated")
		}
		c.LimitReached = reached
	}
	if cell := r.cells[deductibleTypeAt]; len(cell) > 0 {
		t, ok := readType(cell)
		if !ok {
			r.find(DeductibleType, cell, TypeUnreadable, Blocks, "accepted are ordinary and franchise, and blank for the batch's own")
		} else {
			c.DeductibleType = t
		}
	}
}

// observe turns amounts and terms into the observation, or says why not, with
// every reason.
func (r *Reader) observe() {
	c := &r.row.Claim
	if r.amountsReadable() {
		o, remark, problem := r.plan.Basis.Observe(c)
		r.row.Observation = o
		if problem == claims.NoProblem {
			r.remark(remark)
		} else {
			r.problems(problem)
		}
	} else {
		r.problems(claims.NoProblem)
	}
	if c.HasLimit && c.Limit.Units%9 == 0 && c.Limit.Units != 0 && placeholder([]byte(c.Limit.String())) {
		r.find(Limit, r.cells[limitAt], LimitPlaceholder, Warns, "nines only: is this the system's way of writing unlimited? As a limit far above the loss it changes nothing")
	}
}

// amountKnown tells that the amount of the loss could be read.
func (r *Reader) amountKnown() bool {
	some := false
	for _, at := range [...]int{amountAt, paidAt, outstandingAt, incurredAt} {
		switch r.money[at].state {
		case unreadable:
			return false
		case present:
			some = true
		}
	}
	return some
}

func (r *Reader) amountsReadable() bool {
	return r.amountKnown() && r.money[deductibleAt].state != unreadable && r.money[limitAt].state != unreadable
}

// problems reports every problem of the amount and the terms: what GroundUp
// stopped at and what it did not come to.
func (r *Reader) problems(first claims.Problem) {
	c := &r.row.Claim
	terms := c.Terms()
	// What cannot be read has its finding; here it must raise no second one.
	if r.money[deductibleAt].state == unreadable {
		terms.HasDeductible, terms.Deductible = true, 0
	}
	if r.money[limitAt].state == unreadable {
		terms.HasLimit, terms.Limit = true, math.Inf(1)
	}
	all := r.plan.Basis.TermProblems(terms)
	if r.amountKnown() {
		switch amount, exact := c.Paid.Plus(c.Outstanding); {
		case exact && amount.Units == 0:
			all = append(all, claims.NilClaim)
		case exact && amount.Units < 0:
			all = append(all, claims.NegativeAmount)
		}
	}
	if first != claims.NoProblem && !slices.Contains(all, first) {
		all = append(all, first)
	}
	for _, problem := range all {
		r.problem(problem)
	}
}

func (r *Reader) problem(problem claims.Problem) {
	c := &r.row.Claim
	field := r.amountField()
	value := []byte(c.Incurred().String())
	switch problem {
	case claims.NilClaim:
		// As of a valuation date a claim at nothing is a valuation like any
		// other: it must take the place of the reserve it once had.
		if r.plan.Basis.Valuation != 0 && r.at[claimIDAt] >= 0 {
			r.row.Nil = true
			r.find(field, value, NilClaimRule, Warns, "closed without payment, or nothing paid or reserved yet: kept as this claim's valuation, not part of a severity")
			return
		}
		r.find(field, value, NilClaimRule, Blocks, "closed without payment, or nothing paid or reserved yet: counted here, not part of a severity")
	case claims.NegativeAmount:
		r.find(field, value, NegativeAmount, Blocks, "below zero: a recovery stands in its claim's amount, not in a row of its own")
	case claims.BelowDeductible:
		r.find(field, value, LossBelowDeductible, Blocks, fmt.Sprintf("a ground-up loss below its deductible of %s cannot be here under a deductible per claim; are the amounts net of the deductible?", c.Deductible))
	case claims.AboveMaximum:
		r.find(field, value, PaymentAboveLimit, Blocks, fmt.Sprintf("above the most that the insurer pays (limit %s as %s): interest or expense in the amount, or wrong terms", c.Limit, r.plan.Basis.Limit))
	case claims.DeductibleBlank:
		r.find(Deductible, nil, DeductibleBlank, Blocks, "a blank deductible is not read as zero; decide once for the source that blank means none, or complete the extract")
	case claims.LimitBlank:
		r.find(Limit, nil, LimitBlank, Blocks, "a blank limit is not read as unlimited; decide once for the source that blank means none, or complete the extract")
	case claims.BadDeductible:
		r.find(Deductible, r.cells[deductibleAt], DeductibleNegative, Blocks, "a deductible is zero or more")
	case claims.BadLimit:
		r.find(Limit, r.cells[limitAt], LimitNotPositive, Blocks, fmt.Sprintf("a limit is above zero, and a top of cover above the deductible (%s); zero is not read as unlimited", c.Deductible))
	case claims.BadWeight:
		r.find(Weight, r.cells[weightAt], WeightUnreadable, Blocks, "a weight is a number above zero")
	}
}

func (r *Reader) remark(remark claims.Remark) {
	if remark == claims.NoRemark {
		return
	}
	c := &r.row.Claim
	field := r.amountField()
	value := []byte(c.Incurred().String())
	if remark&claims.EqualsDeductible != 0 {
		r.find(field, value, LossEqualsDeductible, Warns, "the loss equals its deductible")
	}
	if remark&claims.AboveCover != 0 {
		r.find(field, value, LossAboveCover, Warns, "above the top of its cover: the loss is taken as known only to be at least the top")
	}
	if remark&claims.FlagContradicts != 0 {
		r.find(LimitReached, r.cells[limitReachedAt], LimitFlagContradicts, Warns, fmt.Sprintf("the amount %s and the limit %s say otherwise; the flag is followed", value, c.Limit))
	}
}
