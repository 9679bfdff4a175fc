package extract

import (
	"bytes"
	"errors"
	"fmt"
	"strconv"

	"spillway/severity/claims"
)

type moneyState uint8

const (
	absent moneyState = iota // no column, or blank
	present
	unreadable
)

type moneyCell struct {
	state  moneyState
	amount claims.Amount
	notes  amountNotes
	err    error
}

// readMoney reads the money cells of the row; findMoney says what is wrong
// with them.
func (r *Reader) readMoney() {
	for i := range r.tallies.money {
		at := r.tallies.money[i].index
		m, cell := &r.money[at], r.cells[at]
		if len(cell) == 0 {
			*m = moneyCell{}
			continue
		}
		if amount, ok := plain(cell, r.amounts.decimal); ok {
			*m = moneyCell{state: present, amount: amount}
		} else if amount, notes, err := r.amounts.read(cell); err == nil {
			*m = moneyCell{state: present, amount: amount, notes: notes}
		} else {
			r.readOddly(m, cell, notes, err)
		}
	}
}

// readOddly reads, where no currency says how exact amounts are, a number of
// more digits than an Amount holds as its nearest double.
func (r *Reader) readOddly(m *moneyCell, cell []byte, notes amountNotes, err error) {
	*m = moneyCell{state: unreadable, notes: notes, err: err}
	if r.decimals >= 0 || !errors.Is(err, claims.ErrTooManyDigits) {
		return
	}
	f, parseErr := strconv.ParseFloat(string(r.amounts.scratch), 64)
	if parseErr != nil {
		return
	}
	// 17 digits name the double uniquely.
	if amount, err := claims.ParseAmount(strconv.FormatFloat(f, 'e', 16, 64)); err == nil {
		notes.rounded = true
		*m = moneyCell{state: present, amount: amount, notes: notes}
	}
}

// mostMinorUnits is the largest amount of a batch in minor units: up to 2^53
// every whole number is a double, and paid and outstanding add up.
const mostMinorUnits = 1 << 53

func (r *Reader) findMoney() {
	for i := range r.tallies.money {
		f, at := r.tallies.money[i].field, r.tallies.money[i].index
		m := &r.money[at]
		if m.state == absent {
			continue
		}
		cell := r.cells[at]
		if m.state == unreadable {
			r.find(f, cell, AmountUnreadable, Blocks, fmt.Sprintf("%v; %s", m.err, r.acceptedAmounts(f)))
			continue
		}
		if m.notes != (amountNotes{}) {
			r.findNotes(f, cell, m)
		}
		if r.decimals >= 0 && (int(m.amount.Decimals) != r.decimals || m.amount.Units > mostMinorUnits || m.amount.Units < -mostMinorUnits) {
			r.findMinorUnits(f, cell, m)
		}
	}
}

func (r *Reader) findNotes(f Field, cell []byte, m *moneyCell) {
	if m.notes.scientific && r.decimals >= 0 && r.plan.Format.Kind != Workbook {
		r.find(f, cell, ScientificNotation, Warns, "scientific notation, as spreadsheets write large numbers: digits may be lost; export the column as plain numbers")
	}
	if m.notes.rounded {
		r.find(f, cell, DigitsRounded, Warns, fmt.Sprintf("more than 18 digits: read as the nearest double, %s", m.amount))
	}
	if code := m.notes.currency; code != "" {
		if r.currency == "" {
			r.currency = code
		}
		if !sameCurrency(code, r.currency) {
			r.find(f, cell, OtherCurrency, Blocks, fmt.Sprintf("an amount in %s among amounts in %s", code, r.currency))
		}
	}
}

// findMinorUnits wants a whole number of minor units within bounds.
func (r *Reader) findMinorUnits(f Field, cell []byte, m *moneyCell) {
	units, whole := m.amount.MinorUnits(r.decimals)
	if !whole && r.plan.Format.Kind == Workbook {
		// A spreadsheet computes in doubles and shows 15 digits of them.
		if a, err := claims.ParseAmount(strconv.FormatFloat(m.amount.Float(), 'e', 14, 64)); err == nil {
			if units, whole = a.MinorUnits(r.decimals); whole {
				m.amount = a
				r.tallies.repairs[spreadsheetRounding]++
			}
		}
	}
	switch {
	case !whole && int(m.amount.Decimals) > r.decimals:
		r.find(f, cell, TooManyDecimals, Blocks, fmt.Sprintf("finer than the minor unit of %s; at most %d decimals are accepted", r.plan.Basis.Currency, r.decimals))
	case !whole || units > mostMinorUnits || units < -mostMinorUnits:
		r.find(f, cell, AmountTooLarge, Blocks, fmt.Sprintf("beyond %s, the largest amount that is accepted", claims.Amount{Units: mostMinorUnits, Decimals: int16(r.decimals)}))
	}
}

func (r *Reader) acceptedAmounts(f Field) string {
	thousands := "no mark of thousands"
	if t := r.plan.Format.Thousands; t != "" {
		thousands = fmt.Sprintf("%q between thousands", t)
	}
	accepted := fmt.Sprintf("accepted are numbers with %q before the decimals and %s", r.plan.Format.Decimal, thousands)
	if f == Limit || f == Deductible {
		accepted += "; for none, leave the cell blank and decide that blank means none"
	}
	return accepted
}

// setAmounts settles paid and outstanding from whatever columns there are.
func (r *Reader) setAmounts() {
	c, m := &r.row.Claim, &r.money
	c.Deductible, c.HasDeductible = m[deductibleAt].amount, m[deductibleAt].state == present
	c.Limit, c.HasLimit = m[limitAt].amount, m[limitAt].state == present
	if r.at[amountAt] >= 0 {
		c.Paid = m[amountAt].amount
		if m[amountAt].state == absent {
			r.blankAmount(Amount)
		}
		return
	}
	paid, outstanding, incurred := &m[paidAt], &m[outstandingAt], &m[incurredAt]
	c.Paid, c.Outstanding = paid.amount, outstanding.amount
	if incurred.state != present {
		switch {
		case paid.state != absent:
		case outstanding.state == present:
			r.find(Paid, nil, PartBlank, Warns, "a blank paid amount beside an outstanding one, counted as nothing paid")
		case outstanding.state == absent && incurred.state == absent:
			r.blankAmount(r.amountField(Incurred, Paid))
		}
	} else if paid.state != unreadable && outstanding.state != unreadable {
		r.setParts(paid, outstanding, incurred)
	}
	if c.Outstanding.Units < 0 && outstanding.state == present {
		r.find(Outstanding, r.cells[outstandingAt], NegativePart, Warns, "an outstanding amount below zero: a recovery expected, or an error")
	}
	if c.Paid.Units < 0 && c.Incurred().Units > 0 {
		r.find(Paid, r.cells[paidAt], NegativePart, Warns, "a paid amount below zero, though not the incurred one: a recovery, or an error")
	}
}

// setParts derives the part that is missing from the incurred amount, or
// compares them.
func (r *Reader) setParts(paid, outstanding, incurred *moneyCell) {
	c := &r.row.Claim
	exact := true
	switch {
	case outstanding.state == absent:
		c.Outstanding, exact = incurred.amount.Minus(paid.amount)
	case paid.state == absent:
		c.Paid, exact = incurred.amount.Minus(outstanding.amount)
	default:
		var sum, off claims.Amount
		if sum, exact = paid.amount.Plus(outstanding.amount); !exact {
			break
		}
		if off, exact = incurred.amount.Minus(sum); exact && off.Units != 0 {
			r.find(Incurred, r.cells[incurredAt], SumDiffers, Warns,
				fmt.Sprintf("%s off paid %s plus outstanding %s, which are used", off, paid.amount, outstanding.amount))
		}
	}
	if !exact {
		r.find(Incurred, r.cells[incurredAt], AmountUnreadable, Blocks, "more than 18 digits between incurred, paid and outstanding")
	}
}

func (r *Reader) blankAmount(f Field) {
	r.find(f, nil, AmountBlank, Blocks, "no amount; a blank is not read as zero")
}

// amountField is the first of the fields that has a column; all of them, in
// the order in which an amount is looked for, when none is named.
func (r *Reader) amountField(order ...Field) Field {
	for _, f := range append(order, Amount, Incurred, Paid, Outstanding) {
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
