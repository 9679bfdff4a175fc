package extract

import (
	"bytes"
	"fmt"
	"hash/maphash"
	"strconv"

	"spillway/severity/claims"
)

// Indices of Fields, for the columns that every row is asked for.
const (
	claimIDAt = iota
	lossDateAt
	reportDateAt
	closeDateAt
	statusAt
	businessAt
	segmentAt
	paidAt
	outstandingAt
	incurredAt
	amountAt
	deductibleAt
	limitAt
	limitReachedAt
	deductibleTypeAt
	weightAt
	currencyAt
)

// check fills in the claim of the row and collects every problem it has.
func (r *Reader) check() {
	c := &r.row.Claim
	c.Line, c.Weight = r.row.Line, 1
	c.DeductibleType = r.plan.Basis.Deductible
	if r.isTotals() {
		r.tallies.report.TotalRows++
		r.find(ClaimID, r.cell(claimIDAt), TotalsRow, Blocks, "a row of totals, not a claim; it is set apart and stands in no sum")
		return
	}
	if len(r.row.cells) > len(r.header) && !blank(r.row.cells[len(r.header):]) {
		r.find(ClaimID, nil, RaggedRow, Blocks, fmt.Sprintf("%d cells under %d headers: a delimiter stands inside a value; put the value in quotes", len(r.row.cells), len(r.header)))
	} else if len(r.row.cells) < len(r.header) {
		r.tallies.repair("row shorter than the header: the cells that are missing count as blank")
	}
	money := r.readMoney()
	r.readTexts()
	r.readDates()
	r.readTerms()
	r.setAmounts(money)
	r.checkStatus()
	if r.at[claimIDAt] >= 0 {
		r.checkID()
	}
	if readable(money) && r.row.Claim.Weight > 0 {
		r.observe()
	}
	for i := range r.tallies.money {
		t := &r.tallies.money[i]
		if m := money[fieldIndex[t.field]]; m.state == present {
			t.read.Add(m.amount)
			if r.row.Rejected {
				t.rejected.Add(m.amount)
			} else {
				t.accepted.Add(m.amount)
			}
		} else if m.state == unreadable {
			t.unreadable++
		}
	}
}

// isTotals recognises a row of totals: a cell says so and there is no claim.
func (r *Reader) isTotals() bool {
	for i, cell := range r.row.cells {
		if len(cell) > 0 && len(cell) < 24 && (cell[0]|0x20 == 't' || cell[0]|0x20 == 's' || cell[0]|0x20 == 'g' || cell[0] <= ' ') && totalsWord(cell) {
			id := r.at[claimIDAt]
			return id < 0 || id == i || id >= len(r.row.cells) || len(trim(r.row.cells[id])) == 0
		}
	}
	return false
}

type moneyState uint8

const (
	absent moneyState = iota // no column, or blank
	present
	unreadable
)

type moneyCell struct {
	state  moneyState
	amount claims.Amount
}

func (r *Reader) readMoney() (cells [fieldCount]moneyCell) {
	for i := range r.tallies.money {
		f := r.tallies.money[i].field
		at := fieldIndex[f]
		cell := r.cell(at)
		if len(cell) == 0 {
			continue
		}
		amount, scientific, err := r.amounts.read(cell)
		if err != nil {
			cells[at].state = unreadable
			r.find(f, cell, AmountUnreadable, Blocks, fmt.Sprintf("%v; %s", err, r.acceptedAmounts()))
			continue
		}
		cells[at] = moneyCell{present, amount}
		if scientific && r.decimals >= 0 {
			r.find(f, cell, ScientificNotation, Warns, "scientific notation, as spreadsheets write large numbers: digits may be lost; export the column as plain numbers")
		}
		if r.decimals >= 0 {
			if _, whole := amount.MinorUnits(r.decimals); !whole {
				r.find(f, cell, TooManyDecimals, Blocks, fmt.Sprintf("finer than the minor unit of %s or beyond 18 digits; at most %d decimals are accepted", r.plan.Basis.Currency, r.decimals))
			}
		}
	}
	return cells
}

func (r *Reader) acceptedAmounts() string {
	thousands := "no mark of thousands"
	if t := r.plan.Format.Thousands; t != "" {
		thousands = fmt.Sprintf("%q between thousands", t)
	}
	return fmt.Sprintf("accepted are numbers with %q before the decimals and %s", r.plan.Format.Decimal, thousands)
}

func (r *Reader) readTexts() {
	c := &r.row.Claim
	c.Business = r.text(r.cell(businessAt))
	c.Segment = r.text(r.cell(segmentAt))
	for _, f := range []Field{Business, Segment} {
		if cell := r.cell(fieldIndex[f]); len(cell) > 1 && (cell[0] == '=' || cell[0] == '@') {
			r.find(f, cell, PossibleFormula, Warns, "a text that a spreadsheet would run as a formula; it is kept as text and guarded in exports")
		}
	}
	if cell := r.cell(currencyAt); r.at[currencyAt] >= 0 && r.plan.Basis.Currency != "" && string(cell) != r.plan.Basis.Currency {
		r.find(Currency, cell, OtherCurrency, Blocks, fmt.Sprintf("the batch is in %s; amounts of another currency, or of none stated, are not mixed with it", r.plan.Basis.Currency))
	}
	if cell := r.cell(weightAt); r.at[weightAt] >= 0 {
		w, err := strconv.ParseFloat(string(cell), 64)
		if err != nil && r.plan.Format.Decimal == "," {
			w, err = strconv.ParseFloat(string(bytes.Replace(cell, []byte(","), []byte("."), 1)), 64)
		}
		if err != nil || !(w > 0) || w > 1e300 {
			r.find(Weight, cell, WeightUnreadable, Blocks, "a weight is a number above zero")
			w = 1
		}
		c.Weight = w
	}
}

func (r *Reader) readTerms() {
	c := &r.row.Claim
	if cell := r.cell(limitReachedAt); len(cell) > 0 {
		reached, ok := readFlag(cell)
		if !ok {
			r.find(LimitReached, cell, FlagUnreadable, Blocks, "accepted are 1 or 0, yes or no, true or false, and blank for not stated")
		}
		c.LimitReached = reached
	}
	if cell := r.cell(deductibleTypeAt); len(cell) > 0 {
		t, ok := readType(cell)
		if !ok {
			r.find(DeductibleType, cell, TypeUnreadable, Blocks, "accepted are ordinary and franchise, and blank for the batch's own")
		} else {
			c.DeductibleType = t
		}
	}
}

// setAmounts settles paid and outstanding from whatever columns there are.
func (r *Reader) setAmounts(m [fieldCount]moneyCell) {
	c := &r.row.Claim
	c.Deductible, c.HasDeductible = m[deductibleAt].amount, m[deductibleAt].state == present
	c.Limit, c.HasLimit = m[limitAt].amount, m[limitAt].state == present
	if r.at[amountAt] >= 0 {
		c.Paid = m[amountAt].amount
		r.wantAmount(Amount, m[amountAt])
		return
	}
	paid, outstanding, incurred := m[paidAt], m[outstandingAt], m[incurredAt]
	c.Paid, c.Outstanding = paid.amount, outstanding.amount
	if incurred.state == present {
		rest, ok := difference(incurred.amount, paid.amount)
		switch {
		case !ok:
			r.find(Incurred, nil, AmountUnreadable, Blocks, "more digits than 18 between incurred and paid")
		case outstanding.state != present:
			c.Outstanding = rest
		case rest != outstanding.amount && !sameAmount(rest, outstanding.amount):
			r.find(Incurred, []byte(incurred.amount.String()), SumDiffers, Warns,
				fmt.Sprintf("paid %s and outstanding %s are not the incurred amount; paid and outstanding are used", paid.amount, outstanding.amount))
		}
	} else if paid.state == absent && outstanding.state == absent {
		f := Paid
		if r.at[paidAt] < 0 {
			f = Incurred
		}
		r.wantAmount(f, moneyCell{})
	}
	if c.Outstanding.Units < 0 && outstanding.state == present {
		r.find(Outstanding, []byte(outstanding.amount.String()), NegativePart, Warns, "an outstanding amount below zero: a recovery expected, or an error")
	}
}

func (r *Reader) wantAmount(f Field, m moneyCell) {
	if m.state == absent {
		r.find(f, nil, AmountBlank, Blocks, "no amount; a blank is not read as zero")
	}
}

func difference(a, b claims.Amount) (claims.Amount, bool) {
	d := max(a.Decimals, b.Decimals)
	x, ok1 := a.MinorUnits(int(d))
	y, ok2 := b.MinorUnits(int(d))
	return claims.Amount{Units: x - y, Decimals: d}, ok1 && ok2
}

func sameAmount(a, b claims.Amount) bool {
	d, ok := difference(a, b)
	return ok && d.Units == 0
}

func (r *Reader) readDates() {
	c := &r.row.Claim
	for _, d := range []struct {
		at int
		to *claims.Date
	}{{lossDateAt, &c.LossDate}, {reportDateAt, &c.ReportDate}, {closeDateAt, &c.CloseDate}} {
		f := Fields[d.at]
		cell := r.cell(d.at)
		if len(cell) == 0 {
			if f == LossDate && r.at[lossDateAt] >= 0 {
				r.find(f, nil, DateBlank, Warns, "no loss date; the claim is left out of every selection by date")
			}
			continue
		}
		date, err := readDate(cell, r.plan.Format)
		effect := Warns
		if f == LossDate {
			effect = Blocks
		}
		if err != nil {
			r.find(f, cell, DateUnreadable, effect, err.Error())
			continue
		}
		*d.to = date
		if date < oldest {
			r.find(f, cell, DateImplausible, effect, "a date before 1900-01-02 stands for a missing one in many systems")
		}
		if v := r.plan.Basis.Valuation; v != 0 && date > v {
			r.find(f, cell, DateAfterValuation, effect, fmt.Sprintf("after the valuation date %s", v))
		}
	}
	if c.LossDate != 0 && c.ReportDate != 0 && c.ReportDate < c.LossDate {
		r.find(ReportDate, []byte(c.ReportDate.String()), DatesOutOfOrder, Blocks, fmt.Sprintf("reported before the loss of %s", c.LossDate))
	}
	if c.CloseDate != 0 && c.CloseDate < max(c.LossDate, c.ReportDate) {
		r.find(CloseDate, []byte(c.CloseDate.String()), DatesOutOfOrder, Warns, "closed before the loss or the report")
	}
}

// oldest is 1900-01-02: the day before is the zero of spreadsheets.
var oldest, _ = claims.NewDate(1900, 1, 2)

func (r *Reader) checkStatus() {
	c := &r.row.Claim
	cell := r.cell(statusAt)
	if len(cell) == 0 {
		return
	}
	status, known := readStatus(cell)
	if !known {
		r.find(Status, cell, StatusUnknown, Warns, "not a status that is known; accepted are open, closed, reopened, closed without payment and usual codes for them; counted as not stated")
		return
	}
	c.Status = status
	if (status == claims.StatusClosed || status == claims.StatusNil) && c.Outstanding.Units != 0 {
		r.find(Outstanding, []byte(c.Outstanding.String()), ClosedWithReserve, Warns, "outstanding on a closed claim")
	}
	if status == claims.StatusNil && c.Paid.Units != 0 {
		r.find(Paid, []byte(c.Paid.String()), PaidOnNilClaim, Warns, "a payment on a claim closed without payment")
	}
}

func (r *Reader) checkID() {
	cell := r.cell(claimIDAt)
	if len(cell) == 0 {
		r.find(ClaimID, nil, ClaimIDBlank, Blocks, "no claim id; every claim needs one, so that later valuations find it")
		return
	}
	r.row.Claim.ID = string(cell)
	key := [2]uint64{maphash.Bytes(r.seeds[0], cell), maphash.Bytes(r.seeds[1], cell)}
	if _, seen := r.ids[key]; seen {
		r.find(ClaimID, cell, DuplicateClaimID, Blocks, "the claim stands in the file already; only its first row is used")
		return
	}
	r.row.key = key
}

// readable tells that there is an amount and that no amount or term is in the
// way of judging it.
func readable(m [fieldCount]moneyCell) bool {
	some := false
	for _, at := range []int{amountAt, paidAt, outstandingAt, incurredAt} {
		if m[at].state == unreadable {
			return false
		}
		some = some || m[at].state == present
	}
	return some && m[deductibleAt].state != unreadable && m[limitAt].state != unreadable
}

// observe turns amounts and terms into the observation, or says why not.
func (r *Reader) observe() {
	c := &r.row.Claim
	if c.ID == "" && r.at[claimIDAt] < 0 {
		c.ID = "line " + strconv.Itoa(c.Line)
	}
	o, remark, problem := r.plan.Basis.Observe(c)
	r.row.Observation = o
	amount, field := c.Incurred(), r.amountField()
	value := []byte(amount.String())
	limit, deductible := []byte(c.Limit.String()), []byte(c.Deductible.String())
	switch problem {
	case claims.NilClaim:
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
		r.find(Deductible, deductible, DeductibleNegative, Blocks, "a deductible is zero or more")
	case claims.BadLimit:
		r.find(Limit, limit, LimitNotPositive, Blocks, fmt.Sprintf("a limit is above zero, and a top of cover above the deductible (%s); zero is not read as unlimited", c.Deductible))
	case claims.BadWeight:
		r.find(Weight, nil, WeightUnreadable, Blocks, "a weight is a number above zero")
	}
	if remark&claims.EqualsDeductible != 0 {
		r.find(field, value, LossEqualsDeductible, Warns, "the loss equals its deductible")
	}
	if remark&claims.AboveCover != 0 {
		r.find(field, value, LossAboveCover, Warns, "above the top of its cover: the loss is taken as known only to be at least the top")
	}
	if remark&claims.FlagContradicts != 0 {
		r.find(LimitReached, nil, LimitFlagContradicts, Warns, "the amount reaches the limit but the flag says that it was not reached; the flag is followed")
	}
	if c.HasLimit && placeholder(limit) {
		r.find(Limit, limit, LimitPlaceholder, Warns, "nines only: is this the system's way of writing unlimited? As a limit far above the loss it changes nothing")
	}
}

func (r *Reader) amountField() Field {
	for _, f := range []Field{Amount, Incurred, Paid} {
		if r.at[fieldIndex[f]] >= 0 {
			return f
		}
	}
	return Amount
}

// placeholder tells that a limit consists of six nines or more.
func placeholder(limit []byte) bool {
	whole, _, _ := bytes.Cut(limit, []byte("."))
	return len(whole) >= 6 && len(bytes.Trim(whole, "9")) == 0
}
