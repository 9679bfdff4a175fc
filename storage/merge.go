package storage

import (
	"slices"

	"spillway/severity/claims"
)

// merge puts the columns of batches together, each claim of a source once.
func merge(heads []bookHead, parts []*batchColumns) *claims.Book {
	book := &claims.Book{Currency: heads[0].currency, Decimals: heads[0].decimals}
	superseded := supersededRows(heads, parts)
	weighted := false
	total := 0
	for i, p := range parts {
		weighted = weighted || p.weight != nil
		total += p.rows
		if superseded[i] != nil {
			for _, gone := range superseded[i] {
				if gone {
					total--
				}
			}
		}
	}
	if len(parts) == 1 {
		p := parts[0]
		book.Batches = []claims.BookBatch{heads[0].BookBatch}
		book.Batch = make([]uint8, p.rows)
		book.Line, book.Paid, book.Outstanding, book.Deductible, book.Limit = p.line, p.paid, p.outstanding, p.deductible, p.limit
		book.LossDate, book.Status, book.Terms, book.Business, book.Segment = p.lossDate, p.status, p.terms, p.business, p.segment
		book.Weight, book.Businesses, book.Segments = p.weight, p.businesses, p.segments
		return book
	}
	grow(total, &book.Paid, &book.Outstanding, &book.Deductible, &book.Limit)
	businesses, segments := map[string]uint16{}, map[string]uint16{}
	for i, p := range parts {
		business := recode(p.businesses, businesses, &book.Businesses)
		segment := recode(p.segments, segments, &book.Segments)
		head := heads[i].BookBatch
		for k := range p.rows {
			if superseded[i] != nil && superseded[i][k] {
				head.Superseded.Rows++
				head.Superseded.Paid += p.paid[k]
				head.Superseded.Outstanding += p.outstanding[k]
				continue
			}
			book.Batch = append(book.Batch, uint8(i))
			book.Line = append(book.Line, p.line[k])
			book.Paid = append(book.Paid, p.paid[k])
			book.Outstanding = append(book.Outstanding, p.outstanding[k])
			book.Deductible = append(book.Deductible, p.deductible[k])
			book.Limit = append(book.Limit, p.limit[k])
			book.LossDate = append(book.LossDate, p.lossDate[k])
			book.Status = append(book.Status, p.status[k])
			book.Terms = append(book.Terms, p.terms[k])
			book.Business = append(book.Business, business[p.business[k]])
			book.Segment = append(book.Segment, segment[p.segment[k]])
			if weighted {
				w := 1.0
				if p.weight != nil {
					w = p.weight[k]
				}
				book.Weight = append(book.Weight, w)
			}
		}
		book.Batches = append(book.Batches, head)
	}
	return book
}

func grow(n int, columns ...*[]int64) {
	for _, c := range columns {
		*c = make([]int64, 0, n)
	}
}

// recode maps a batch's codes to the book's.
func recode(texts []string, codes map[string]uint16, all *[]string) []uint16 {
	to := make([]uint16, len(texts))
	for i, text := range texts {
		code, ok := codes[text]
		if !ok {
			code = uint16(len(*all))
			codes[text] = code
			*all = append(*all, text)
		}
		to[i] = code
	}
	return to
}

// supersededRows marks, for each batch, the rows whose claim another batch of
// the same source values later.
func supersededRows(heads []bookHead, parts []*batchColumns) [][]bool {
	marks := make([][]bool, len(parts))
	order := make([]int, len(parts)) // the latest valuation first
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(a, b int) int {
		if d := int(heads[b].Basis.Valuation) - int(heads[a].Basis.Valuation); d != 0 {
			return d
		}
		return int(heads[b].ID - heads[a].ID)
	})
	seen := map[int64]map[string]struct{}{}
	for _, i := range order {
		if parts[i].id == nil {
			continue // the only batch of its source
		}
		latest := seen[heads[i].source]
		if latest == nil {
			latest = make(map[string]struct{}, parts[i].rows)
			seen[heads[i].source] = latest
		}
		marks[i] = make([]bool, parts[i].rows)
		for k, id := range parts[i].id {
			if _, later := latest[id]; later {
				marks[i][k] = true
			} else {
				latest[id] = struct{}{}
			}
		}
		parts[i].id = nil
	}
	return marks
}
