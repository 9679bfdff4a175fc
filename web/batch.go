package web

import (
	"net/http"
	"net/url"
	"strconv"

	"github.com/a-h/templ"
	"github.com/go-chi/chi/v5"

	"spillway/storage"
	"spillway/web/view"
)

// claimsPerPage is one page of a batch's claims.
const claimsPerPage = 50

func (s *server) showBatch(r *http.Request) (templ.Component, error) {
	id, err := number(r, "batch")
	if err != nil {
		return nil, err
	}
	b, err := s.books.Batch(r.Context(), storage.BatchID(id))
	if err != nil {
		return nil, err
	}
	after := 0
	if text := r.URL.Query().Get("after"); text != "" {
		if after, err = strconv.Atoi(text); err != nil || after < 0 {
			return nil, &usageError{"after: want the number of a line"}
		}
	}
	list, err := s.books.Claims(r.Context(), b.ID, after, claimsPerPage+1)
	if err != nil {
		return nil, err
	}
	p := view.BatchPage{Page: s.basics(b.Name, "batches", r), Batch: batchRow(b), SHA256: b.SHA256, Bytes: b.Bytes,
		BasisLine: view.BasisLine(b.Plan.Basis), Report: b.Report, First: after == 0}
	if len(list) > claimsPerPage {
		list = list[:claimsPerPage]
		p.Next = list[claimsPerPage-1].Line
	}
	for i := range list {
		p.Claims = append(p.Claims, claimRow(&list[i]))
	}
	return view.Batch(p), nil
}

func claimRow(c *storage.StoredClaim) view.ClaimRow {
	row := view.ClaimRow{BatchID: int64(c.Batch), BatchName: c.BatchName, Valuation: c.Valuation, Line: c.Line, ID: c.ID, LossDate: c.LossDate,
		Status: c.Status.String(), Business: c.Business, Segment: c.Segment,
		Paid:        view.Units(c.Paid.Units, c.Decimals),
		Outstanding: view.Units(c.Outstanding.Units, c.Decimals),
		Incurred:    view.Units(c.Incurred().Units, c.Decimals),
	}
	if c.HasDeductible {
		row.Deductible = view.Units(c.Deductible.Units, c.Decimals)
	}
	if c.HasLimit {
		row.Limit = view.Units(c.Limit.Units, c.Decimals)
	}
	return row
}

func (s *server) showClaim(r *http.Request) (templ.Component, error) {
	id, err := number(r, "batch")
	if err != nil {
		return nil, err
	}
	claimID, err := url.PathUnescape(chi.URLParam(r, "claim"))
	if err != nil {
		return nil, errNoPage
	}
	history, err := s.books.ClaimHistory(r.Context(), storage.BatchID(id), claimID)
	if err != nil {
		return nil, err
	}
	b, err := s.books.Batch(r.Context(), storage.BatchID(id))
	if err != nil {
		return nil, err
	}
	p := view.ClaimPage{Page: s.basics("Claim "+claimID, "batches", r), ID: claimID, Currency: b.Currency}
	for i := range history {
		p.Valuations = append(p.Valuations, claimRow(&history[i]))
	}
	return view.Claim(p), nil
}

func (s *server) batchRejected(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "batch")
	if err != nil {
		return err
	}
	if _, err := s.books.Batch(r.Context(), storage.BatchID(id)); err != nil {
		return err
	}
	download(w, "text/csv; charset=utf-8", "rejected-rows.csv")
	return s.streamed(s.books.WriteBatchRejected(r.Context(), storage.BatchID(id), w))
}

// download names the file that an answer is to be saved as; name is our own.
func download(w http.ResponseWriter, kind, name string) {
	w.Header().Set("Content-Type", kind)
	w.Header().Set("Content-Disposition", `attachment; filename="`+name+`"`)
	w.Header().Set("Cache-Control", "no-store")
}

// streamed ends an answer that failed on the way: its status is sent already,
// so the connection is cut for the client to see that it is not whole.
func (s *server) streamed(err error) error {
	if err != nil {
		s.log.Error("download broke off", "error", err)
		panic(http.ErrAbortHandler)
	}
	return nil
}
