package extract

import (
	"fmt"
	"io"
	"slices"

	"spillway/severity"
	"spillway/severity/claims"
)

// Reader reads a file row by row, in memory that does not grow with it but
// for 16 bytes and a slot a claim id.
type Reader struct {
	plan     Plan
	in       source
	header   []string
	at       [fieldCount]int // column of each field, -1 for none
	last     int             // the rightmost of these
	amounts  amountReader
	decimals int    // of the currency; -1 for any
	currency string // stated by the basis, or the first that a cell names
	row      Row
	cells    [fieldCount][]byte // of the row, trimmed; nil where there is no column or no cell
	money    [fieldCount]moneyCell
	from1904 bool // day numbers count from 1904
	tallies  tallies
	words    map[string]string // texts that recur, kept once
	statuses map[string]claims.Status
	ids      *idSet
	err      error
}

const fieldCount = 17

var fieldIndex = func() map[Field]int {
	m := map[Field]int{}
	for i, f := range Fields {
		m[f] = i
	}
	return m
}()

// Row is one data row of a file. It is valid until the next one is read.
type Row struct {
	Line        int
	Claim       claims.Claim
	Observation severity.Observation // of an accepted row, by its incurred amount
	Findings    []Finding
	Rejected    bool
	Nil         bool // accepted as a valuation at nothing: there is no Observation

	cells [][]byte
}

// Cells copies the row's cells as they stand in the file.
func (r *Row) Cells() []string {
	cells := make([]string, len(r.cells))
	for i, c := range r.cells {
		cells[i] = string(c)
	}
	return cells
}

// NewReader opens a file and reads up to its header. A *FileError says what is
// wrong with the file or the plan as a whole.
func NewReader(file io.ReaderAt, size int64, plan Plan) (*Reader, error) {
	in, err := open(file, size, plan.Format)
	if err != nil {
		return nil, err
	}
	r, err := newReader(plan, in)
	if err != nil {
		in.Close()
		return nil, err
	}
	expected := 0
	if plan.Format.Kind == Delimited && r.at[claimIDAt] >= 0 {
		expected = expectedRows(file, size)
	}
	r.ids = newIDSet(expected)
	return r, nil
}

func newReader(plan Plan, in source) (*Reader, error) {
	header, err := readHeader(in, plan.Format.HeaderLine)
	if err != nil {
		return nil, err
	}
	at, err := plan.resolve(header)
	if err != nil {
		return nil, err
	}
	r := &Reader{
		plan: plan, in: in, header: header,
		amounts:  newAmountReader(plan.Format),
		decimals: -1,
		currency: plan.Basis.Currency,
		words:    map[string]string{},
		statuses: map[string]claims.Status{},
		tallies:  tallies{groups: map[groupKey]int{}},
	}
	if book, ok := in.(*workbook); ok {
		r.from1904 = book.from1904
	}
	if plan.Basis.Currency != "" {
		r.decimals = int(MinorDigits(plan.Basis.Currency))
	}
	for i, f := range Fields {
		r.at[i] = -1
		if column, ok := at[f]; ok {
			r.at[i] = column
			r.last = max(r.last, column)
			if f.isMoney() {
				r.tallies.money = append(r.tallies.money, moneyTotals{field: f, index: i, column: header[column]})
			}
		}
	}
	// A term that the extract has no column for is no term of its claims.
	r.plan.Basis.MissingTerm = claims.MissingColumns{
		Deductible: r.at[deductibleAt] < 0,
		Limit:      r.at[limitAt] < 0,
	}
	return r, r.wantDateOrder()
}

// wantDateOrder refuses a file whose dates need an order that nobody has
// decided, before any row is read. A few such dates among others that begin
// with the year become findings of their rows instead.
func (r *Reader) wantDateOrder() error {
	if r.plan.Format.DateOrder != OrderUndecided || r.at[lossDateAt] < 0 && r.at[reportDateAt] < 0 && r.at[closeDateAt] < 0 {
		return nil
	}
	ahead := lookAhead(r.in, studiedRows)
	r.in = ahead
	for _, at := range dateFields {
		column := r.at[at]
		if column < 0 {
			continue
		}
		inNeed, others, line, example := 0, 0, 0, ""
		for _, row := range ahead.rows {
			if column >= len(row.cells) {
				continue
			}
			cell := trim(row.cells[column])
			if p, ok := splitDate(cell); !ok || p.yearFirst {
				if len(cell) > 0 {
					others++
				}
				continue
			}
			if inNeed++; inNeed == 1 {
				line, example = row.line, string(cell)
			}
		}
		if inNeed > others {
			return &FileError{Line: line,
				Found:    fmt.Sprintf("a date %q in column %q, and it is not decided whether the day or the month comes first", example, r.header[column]),
				Accepted: "choose day first or month first"}
		}
	}
	return nil
}

// Basis is the plan's basis, with the columns that the extract does not have.
func (r *Reader) Basis() claims.Basis { return r.plan.Basis }

// Header lists the header texts, one a column.
func (r *Reader) Header() []string { return r.header }

func readHeader(in source, headerLine int) ([]string, error) {
	for {
		cells, line, err := in.next()
		if err == io.EOF {
			return nil, &FileError{Found: fmt.Sprintf("no line %d, where the header is to be", headerLine), Accepted: "a header line and data rows below it"}
		}
		if err != nil {
			return nil, err
		}
		if line < headerLine {
			continue
		}
		header := make([]string, len(cells))
		for i, c := range cells {
			header[i] = string(trim(c))
		}
		return header, nil
	}
}

// Next reads one data row. It returns false at the end of the file and at an
// error; blank lines are counted and passed over.
func (r *Reader) Next() bool {
	for r.err == nil {
		cells, line, err := r.in.next()
		if err != nil {
			if err != io.EOF {
				r.err = err
			}
			return false
		}
		if blank(cells) {
			r.tallies.repairs[blankLine]++
			continue
		}
		r.row = Row{Line: line, cells: cells, Findings: r.row.Findings[:0]}
		r.check()
		r.account()
		return true
	}
	return false
}

func blank(cells [][]byte) bool {
	for _, c := range cells {
		if len(trim(c)) > 0 {
			return false
		}
	}
	return true
}

// Row is the row last read.
func (r *Reader) Row() *Row { return &r.row }

// Err is the error that ended reading, if any.
func (r *Reader) Err() error { return r.err }

// Close releases the file.
func (r *Reader) Close() error { return r.in.Close() }

// Report is the account of the rows read so far.
func (r *Reader) Report() *Report {
	report := r.tallies.report
	report.Groups = slices.Clone(report.Groups)
	report.Totals = nil
	for i := range r.tallies.money {
		m := &r.tallies.money[i]
		report.Totals = append(report.Totals, Total{
			Field: m.field, Column: m.column, Unreadable: m.unreadable,
			Read: m.read.String(), Accepted: m.accepted.String(), Rejected: m.rejected.String(),
		})
	}
	done := r.tallies.repairs
	for kind, count := range r.in.repaired() {
		done[kind] += count
	}
	report.Repairs = done.list()
	return &report
}

// account enters the checked row into the report.
func (r *Reader) account() {
	report := &r.tallies.report
	report.Read++
	if r.row.Rejected {
		report.Rejected++
	} else {
		report.Accepted++
		if r.row.Nil {
			report.Nil++
		} else if r.row.Observation.Censored {
			report.Censored++
		} else {
			report.Uncensored++
		}
		if d := r.row.Claim.LossDate; d != 0 {
			if report.FirstLoss == 0 || d < report.FirstLoss {
				report.FirstLoss = d
			}
			report.LastLoss = max(report.LastLoss, d)
		}
	}
	for _, f := range r.row.Findings {
		r.tallies.finding(f)
	}
}
