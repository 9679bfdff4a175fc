// Package invented makes the claim extracts of an insurer that does not exist:
// a book of harbour, craft, plant and motor damage in four quarterly
// cumulative files, with the faults that real files have. The law behind every
// line is known (Lines), so that what is fitted to the files can be held
// against the truth.
package invented

import (
	"fmt"
	"math/rand/v2"

	"spillway/severity/claims"
)

// File is one quarterly extract as the sender would hand it over.
type File struct {
	Name      string // file name with its ending, .csv or .xlsx
	Source    string // the sender
	Valuation claims.Date
	Basis     claims.Basis
	Content   []byte
}

// Book returns the quarterly extracts in order of valuation. Each holds every
// claim reported by then at its state on that day. The same seed gives the
// same bytes. The files differ in dress: one in the continental manner
// (semicolons, decimal commas, days first, Windows-1252), one a spreadsheet.
func Book(seed uint64) []File {
	all := lives(rand.New(rand.NewPCG(seed, 0)))
	dresses := []dress{plain{}, continental{}, spreadsheet{}, plain{mark: true}}
	files := make([]File, len(valuations))
	for i, valuation := range valuations {
		random := rand.New(rand.NewPCG(seed, uint64(i)+1))
		records := spoil(random, quarter(all, valuation), valuation)
		year, month, _ := valuation.Civil()
		files[i] = File{
			Name:      fmt.Sprintf("claims-%d-q%d%s", year, month/3, dresses[i].ending()),
			Source:    Source,
			Valuation: valuation,
			Basis:     basis(valuation),
			Content:   dresses[i].write(records),
		}
	}
	return files
}

// quarter lists the claims known at a valuation.
func quarter(all []claim, valuation claims.Date) []record {
	var records []record
	for i := range all {
		c := &all[i]
		s, known := c.at(valuation)
		if !known {
			continue
		}
		records = append(records, record{
			columnID: text(c.id), columnLoss: date(c.loss), columnReport: date(c.report), columnClose: date(s.closed),
			columnStatus: text(s.status), columnLine: text(c.line), columnSegment: text(c.segment),
			columnPaid: money(s.paid), columnOutstanding: money(s.outstanding),
			columnDeductible: money(c.deductible), columnLimit: money(c.limit), columnCurrency: text(Currency),
		})
	}
	return records
}
