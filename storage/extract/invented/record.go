package invented

import "spillway/severity/claims"

// The columns of every extract, in their order.
const (
	columnID = iota
	columnLoss
	columnReport
	columnClose
	columnStatus
	columnLine
	columnSegment
	columnPaid
	columnOutstanding
	columnDeductible
	columnLimit
	columnCurrency
	columns
)

// record is one row before it is dressed.
type record [columns]cell

// cell is a text, a date or an amount; blank when all are empty.
type cell struct {
	kind  kind
	text  string
	date  claims.Date
	cents int64
}

type kind uint8

const (
	isText kind = iota
	isDate
	isMoney
)

func text(s string) cell { return cell{kind: isText, text: s} }

// date is blank for the zero date.
func date(d claims.Date) cell {
	if d == 0 {
		return cell{}
	}
	return cell{kind: isDate, date: d}
}

func money(cents int64) cell { return cell{kind: isMoney, cents: cents} }
