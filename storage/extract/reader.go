package extract

import (
	"fmt"
	"hash/maphash"
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
	amounts  amountReader
	decimals int // of the currency; -1 for any
	row      Row
	tallies  tallies
	words    map[string]string // texts that recur, kept once
	ids      map[[2]uint64]struct{}
	seeds    [2]maphash.Seed
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

	cells [][]byte
	key   [2]uint64 // of the claim id
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
	header, err := readHeader(in, plan.Format.HeaderLine)
	if err == nil {
		var at map[Field]int
		if at, err = plan.resolve(header); err == nil {
			return newReader(plan, in, header, at), nil
		}
	}
	in.Close()
	return nil, err
}

func newReader(plan Plan, in source, header []string, at map[Field]int) *Reader {
	r := &Reader{
		plan: plan, in: in, header: header,
		amounts:  newAmountReader(plan.Format),
		decimals: -1,
		words:    map[string]string{},
		ids:      map[[2]uint64]struct{}{},
		seeds:    [2]maphash.Seed{maphash.MakeSeed(), maphash.MakeSeed()},
		tallies:  tallies{groups: map[groupKey]int{}, marks: map[string]int{}},
	}
	if plan.Basis.Currency != "" {
		r.decimals = int(MinorDigits(plan.Basis.Currency))
	}
	for i, f := range Fields {
		r.at[i] = -1
		if column, ok := at[f]; ok {
			r.at[i] = column
			if f.isMoney() {
				r.tallies.money = append(r.tallies.money, moneyTotals{field: f, column: header[column]})
			}
		}
	}
	// A term that the extract has no column for is no term of its claims.
	r.plan.Basis.MissingTerm = claims.MissingColumns{
		Deductible: r.at[fieldIndex[Deductible]] < 0,
		Limit:      r.at[fieldIndex[Limit]] < 0,
	}
	return r
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
			r.tallies.repair("blank line passed over")
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
	for what, count := range r.tallies.marks {
		report.Repairs = append(report.Repairs, Repair{What: what, Count: count})
	}
	slices.SortFunc(report.Repairs, func(a, b Repair) int { return b.Count - a.Count })
	return &report
}

// cell is the trimmed cell of a field; nil where the field has no column or
// the row ends before it.
func (r *Reader) cell(f int) []byte {
	column := r.at[f]
	if column < 0 || column >= len(r.row.cells) {
		return nil
	}
	raw := r.row.cells[column]
	cell := trim(raw)
	if len(cell) != len(raw) {
		r.tallies.repair("white space around a value left out")
	}
	return cell
}

func (r *Reader) column(f Field) string {
	if c := r.at[fieldIndex[f]]; c >= 0 {
		return r.header[c]
	}
	return string(f)
}

func (r *Reader) find(f Field, value []byte, rule Rule, effect Effect, message string) {
	r.row.Findings = append(r.row.Findings, Finding{
		Line: r.row.Line, Column: r.column(f), Value: string(value), Rule: rule, Effect: effect, Message: message,
	})
	if effect == Blocks {
		r.row.Rejected = true
	}
}

// text keeps one copy of a recurring text.
func (r *Reader) text(cell []byte) string {
	if word, ok := r.words[string(cell)]; ok {
		return word
	}
	word := string(cell)
	if len(r.words) < 1<<16 {
		r.words[word] = word
	}
	return word
}

// account enters the checked row into the report.
func (r *Reader) account() {
	report := &r.tallies.report
	report.Read++
	if r.row.Rejected {
		report.Rejected++
	} else {
		report.Accepted++
		if r.row.key != [2]uint64{} {
			r.ids[r.row.key] = struct{}{}
		}
		if r.row.Observation.Censored {
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
