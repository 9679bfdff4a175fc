package extract

import (
	"bytes"
	"strings"
)

// isTotals recognises a row of totals: there is no claim id, or it is a word
// for totals itself, and either a cell says what the row is or every amount in
// it is the sum of the rows above. It returns what gave the row away, or "".
func (r *Reader) isTotals() string {
	id := r.at[claimIDAt]
	noID := id < 0 || len(r.cells[claimIDAt]) == 0
	for i, cell := range r.row.cells {
		if len(cell) == 0 || len(cell) > 64 || !beginsTotals[cell[0]] {
			continue
		}
		switch {
		case i == id:
			if totalsWord(cell) {
				return string(trim(cell))
			}
		case noID && id >= 0 && totalsPhrase(cell), id < 0 && totalsWord(cell):
			return string(trim(cell))
		}
	}
	if id >= 0 && noID && r.repeatsSums() {
		return "no claim id, and amounts equal to the sums of the rows above"
	}
	return ""
}

// beginsTotals marks the bytes with which a cell that names totals can begin:
// the first letters of the words, white space, and marks before them.
var beginsTotals = func() (b [256]bool) {
	for _, c := range []byte("tTsSgG \t\r\n*-(:.\xc2\xe2\xef") {
		b[c] = true
	}
	return b
}()

// repeatsSums tells that every amount in the row is the sum of its column so
// far, and that there is one.
func (r *Reader) repeatsSums() bool {
	some := false
	for i := range r.tallies.money {
		t := &r.tallies.money[i]
		m := &r.money[t.index]
		if t.field == Deductible || t.field == Limit || m.state == absent {
			continue
		}
		if m.state != present || r.tallies.report.Read < 2 || !t.read.Equals(m.amount) {
			return false
		}
		some = some || m.amount.Units != 0
	}
	return some
}

// setTotalsApart rejects a row of totals, with what it states beside what has
// been read.
func (r *Reader) setTotalsApart(why string) {
	r.tallies.report.TotalRows++
	var stated []string
	for i := range r.tallies.money {
		t := &r.tallies.money[i]
		if m := &r.money[t.index]; m.state == present {
			verdict := "which is not the sum of the rows above, " + t.read.String()
			if t.read.Equals(m.amount) {
				verdict = "the sum of the rows above"
			}
			stated = append(stated, t.column+" "+m.amount.String()+", "+verdict)
		}
	}
	message := "a row of totals, not a claim; it is set apart and stands in no sum"
	if len(stated) > 0 {
		message += ". It states " + strings.Join(stated, "; ")
	}
	r.find(ClaimID, []byte(why), TotalsRow, Blocks, message)
}

// totalsWord tells that a cell names a row of totals and nothing else.
func totalsWord(cell []byte) bool {
	switch letters(string(cell)) {
	case "total", "totals", "sum", "sums", "grandtotal", "subtotal", "subtotals", "totalclaims", "sumtotal", "totalamount":
		return !bytes.ContainsAny(cell, "0123456789")
	}
	return false
}

// totalsPhrase tells that a cell begins with a word for totals: "Total, 36
// claims", "Sub-total motor".
func totalsPhrase(cell []byte) bool {
	first, _, _ := strings.Cut(strings.ToLower(string(trim(cell))), " ")
	switch strings.Trim(first, ":.,;*-") {
	case "total", "totals", "sum", "sums", "grand", "subtotal", "subtotals", "sub-total":
		return true
	}
	return false
}
