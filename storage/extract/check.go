package extract

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

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

var dateFields = [...]int{lossDateAt, reportDateAt, closeDateAt}

// check fills in the claim of the row and collects every problem it has.
func (r *Reader) check() {
	c := &r.row.Claim
	c.Line, c.Weight = r.row.Line, 1
	c.DeductibleType = r.plan.Basis.Deductible
	r.trimCells()
	r.readMoney()
	if why := r.isTotals(); why != "" {
		r.setTotalsApart(why)
		return
	}
	r.checkWidth()
	r.findMoney()
	r.readTexts()
	r.readDates()
	r.readTerms()
	r.checkID()
	r.setAmounts()
	r.checkStatus()
	r.observe()
	for i := range r.tallies.money {
		t := &r.tallies.money[i]
		switch m := &r.money[t.index]; m.state {
		case present:
			t.read.Add(m.amount)
			if r.row.Rejected {
				t.rejected.Add(m.amount)
			} else {
				t.accepted.Add(m.amount)
			}
		case unreadable:
			t.unreadable++
		}
	}
}

// trimCells finds the cells of the fields.
func (r *Reader) trimCells() {
	for f, column := range &r.at {
		if column < 0 || column >= len(r.row.cells) {
			r.cells[f] = nil
			continue
		}
		raw := r.row.cells[column]
		cell := trim(raw)
		if len(cell) != len(raw) {
			r.tallies.repairs[outerSpace]++
		}
		r.cells[f] = cell
	}
}

func (r *Reader) checkWidth() {
	switch cells, headers := len(r.row.cells), len(r.header); {
	case cells > headers && !blank(r.row.cells[headers:]):
		r.find(ClaimID, nil, RaggedRow, Blocks, fmt.Sprintf("%d cells under %d headers: a delimiter stands inside a value, or a quote is left open; put the value in quotes", cells, headers))
	case cells >= headers || r.plan.Format.Kind == Workbook: // workbooks leave out blank cells at the end
	case cells <= r.last:
		r.find(ClaimID, nil, RaggedRow, Warns, fmt.Sprintf("%d cells under %d headers: the cells that are missing count as blank", cells, headers))
	default:
		r.tallies.repairs[shortRow]++
	}
}

func (r *Reader) column(f Field) string {
	if c := r.at[fieldIndex[f]]; c >= 0 {
		return r.header[c]
	}
	return string(f)
}

// valueKept bounds how much of a cell a finding repeats, in bytes.
const valueKept = 200

func (r *Reader) find(f Field, value []byte, rule Rule, effect Effect, message string) {
	if len(value) > valueKept {
		cut := valueKept
		for !utf8.RuneStart(value[cut]) {
			cut--
		}
		value = append(slices.Clip(value[:cut]), "…"...)
	}
	r.row.Findings = append(r.row.Findings, Finding{
		Line: r.row.Line, Column: r.column(f), Value: string(value), Rule: rule, Effect: effect, Message: message,
	})
	if effect == Blocks {
		r.row.Rejected = true
	}
}

// text keeps one copy of a recurring text.
func (r *Reader) text(cell []byte) string {
	if len(cell) == 0 {
		return ""
	}
	if word, ok := r.words[string(cell)]; ok {
		return word
	}
	word := string(r.plainSpaces(cell))
	if len(r.words) < 1<<14 && len(cell) <= 256 {
		r.words[string(cell)] = word
	}
	return word
}

// plainSpaces reads no-break spaces inside a value as spaces, so that texts
// that look alike are alike.
func (r *Reader) plainSpaces(cell []byte) []byte {
	if !bytes.Contains(cell, []byte("\u00a0")) && !bytes.Contains(cell, []byte("\u202f")) {
		return cell
	}
	r.tallies.repairs[noBreakSpace]++
	return bytes.ReplaceAll(bytes.ReplaceAll(cell, []byte("\u00a0"), []byte(" ")), []byte("\u202f"), []byte(" "))
}

func (r *Reader) readTexts() {
	c := &r.row.Claim
	c.Business = r.text(r.cells[businessAt])
	c.Segment = r.text(r.cells[segmentAt])
	for _, at := range [...]int{claimIDAt, businessAt, segmentAt} {
		if cell := r.cells[at]; len(cell) > 1 && (cell[0] == '=' || cell[0] == '@') {
			r.find(Fields[at], cell, PossibleFormula, Warns, "a text that a spreadsheet would run as a formula; it is kept as text and guarded in exports")
		}
	}
	if r.at[currencyAt] >= 0 {
		r.checkCurrency(r.cells[currencyAt])
	}
	if r.at[weightAt] >= 0 {
		w, ok := r.readWeight(r.cells[weightAt])
		if !ok {
			r.find(Weight, r.cells[weightAt], WeightUnreadable, Blocks, "a weight is a number above zero")
			w = 1
		}
		c.Weight = w
	}
}

// checkCurrency wants every row in the currency of the batch; where none was
// stated, in that of the first row that names one.
func (r *Reader) checkCurrency(cell []byte) {
	if r.currency == "" {
		r.currency = strings.ToUpper(string(cell))
	}
	switch {
	case len(cell) > 0 && string(cell) == r.currency:
	case len(cell) > 0 && bytes.EqualFold(cell, []byte(r.currency)):
		r.tallies.repairs[currencyCase]++
	case len(cell) == 0:
		r.find(Currency, cell, OtherCurrency, Blocks, "no currency is stated, though the extract has a column for it; such amounts are not mixed with others")
	default:
		r.find(Currency, cell, OtherCurrency, Blocks, fmt.Sprintf("the batch is in %s; amounts of another currency are not mixed with it", r.currency))
	}
}

func (r *Reader) readWeight(cell []byte) (w float64, ok bool) {
	if len(cell) == 0 {
		return 0, false
	}
	a, _, err := r.amounts.read(cell)
	if w = a.Float(); err != nil {
		w, err = strconv.ParseFloat(string(bytes.Replace(cell, []byte(r.plan.Format.Decimal), []byte("."), 1)), 64)
	}
	return w, err == nil && w > 0 && w <= 1e300
}

// checkID wants an id that has not been seen, in whatever row.
func (r *Reader) checkID() {
	if r.at[claimIDAt] < 0 {
		r.row.Claim.ID = "line " + strconv.Itoa(r.row.Line)
		return
	}
	cell := r.cells[claimIDAt]
	if len(cell) == 0 {
		r.find(ClaimID, nil, ClaimIDBlank, Blocks, "no claim id; every claim needs one, so that later valuations find it")
		return
	}
	cell = r.plainSpaces(cell)
	r.row.Claim.ID = string(cell)
	if r.ids.add(cell) {
		r.find(ClaimID, cell, DuplicateClaimID, Blocks, "the claim stands in an earlier row of the file already; only that one can be used")
	}
}

func (r *Reader) readDates() {
	c := &r.row.Claim
	for _, d := range [...]struct {
		at int
		to *claims.Date
	}{{lossDateAt, &c.LossDate}, {reportDateAt, &c.ReportDate}, {closeDateAt, &c.CloseDate}} {
		f := Fields[d.at]
		cell := r.cells[d.at]
		if len(cell) == 0 {
			if d.at == lossDateAt && r.at[lossDateAt] >= 0 {
				r.find(f, nil, DateBlank, Warns, "no loss date; the claim is left out of every selection by date")
			}
			continue
		}
		date, err := readDate(cell, r.plan.Format, r.from1904)
		effect := Warns
		if d.at == lossDateAt {
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
		r.find(ReportDate, r.cells[reportDateAt], DatesOutOfOrder, Blocks, fmt.Sprintf("reported on %s, before the loss of %s", c.ReportDate, c.LossDate))
	}
	if c.CloseDate != 0 && c.CloseDate < max(c.LossDate, c.ReportDate) {
		r.find(CloseDate, r.cells[closeDateAt], DatesOutOfOrder, Warns, fmt.Sprintf("closed on %s, before the loss or the report", c.CloseDate))
	}
}

// oldest is 1900-01-02: the day before is the zero of spreadsheets.
var oldest, _ = claims.NewDate(1900, 1, 2)

func (r *Reader) checkStatus() {
	c := &r.row.Claim
	cell := r.cells[statusAt]
	if len(cell) == 0 {
		return
	}
	status, known := r.readStatus(cell)
	if !known {
		r.find(Status, cell, StatusUnknown, Warns, "not a status that is known; accepted are open, closed, reopened, closed without payment and usual codes for them; counted as not stated")
		return
	}
	c.Status = status
	split := r.at[paidAt] >= 0 || r.at[outstandingAt] >= 0 // an incurred amount alone says nothing of a reserve
	if (status == claims.StatusClosed || status == claims.StatusNil) && c.Outstanding.Units != 0 && split {
		r.find(Outstanding, []byte(c.Outstanding.String()), ClosedWithReserve, Warns, "outstanding on a closed claim")
	}
	if status == claims.StatusNil && c.Paid.Units != 0 {
		r.find(r.amountField(Paid), []byte(c.Paid.String()), PaidOnNilClaim, Warns, "a payment on a claim closed without payment")
	}
	if r.at[outstandingAt] >= 0 && r.money[outstandingAt].state == absent && r.money[incurredAt].state != present &&
		(status == claims.StatusOpen || status == claims.StatusReopened) {
		r.find(Outstanding, nil, PartBlank, Warns, "a blank outstanding amount on an open claim, counted as none")
	}
}
