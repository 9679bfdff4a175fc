package web

import (
	"fmt"
	"net/http"

	"github.com/a-h/templ"

	"spillway/storage"
	"spillway/web/view"
)

func (s *server) home(r *http.Request) (templ.Component, error) {
	batches, err := s.books.Batches(r.Context())
	if err != nil {
		return nil, err
	}
	studies, err := s.books.Studies(r.Context())
	if err != nil {
		return nil, err
	}
	uploads, err := s.books.OpenUploads(r.Context())
	if err != nil {
		return nil, err
	}
	p := view.HomePage{Page: s.basics("Start", "", r)}
	for _, b := range batches[:min(len(batches), 8)] {
		p.Batches = append(p.Batches, batchRow(&b))
	}
	for _, st := range studies[:min(len(studies), 8)] {
		p.Studies = append(p.Studies, studyRow(&st))
	}
	for _, u := range uploads {
		p.Uploads = append(p.Uploads, uploadRow(&u))
	}
	return view.Home(p), nil
}

func (s *server) listBatches(r *http.Request) (templ.Component, error) {
	rows, err := s.batchRows(r)
	if err != nil {
		return nil, err
	}
	return view.Batches(view.ListPage{Page: s.basics("Batches", "batches", r), Batches: rows}), nil
}

func (s *server) batchRows(r *http.Request) ([]view.BatchRow, error) {
	batches, err := s.books.Batches(r.Context())
	if err != nil {
		return nil, err
	}
	var rows []view.BatchRow
	for _, b := range batches {
		rows = append(rows, batchRow(&b))
	}
	return rows, nil
}

func (s *server) listStudies(r *http.Request) (templ.Component, error) {
	studies, err := s.books.Studies(r.Context())
	if err != nil {
		return nil, err
	}
	p := view.ListPage{Page: s.basics("Studies", "studies", r)}
	for _, st := range studies {
		p.Studies = append(p.Studies, studyRow(&st))
	}
	return view.Studies(p), nil
}

func batchRow(b *storage.Batch) view.BatchRow {
	return view.BatchRow{ID: int64(b.ID), Name: b.Name, Source: b.Source, FileName: b.FileName, Currency: b.Currency, Valuation: b.Valuation,
		Accepted: b.Accepted, Rejected: b.Rejected, Later: b.LaterValuations, AcceptedAt: b.AcceptedAt}
}

func studyRow(st *storage.Study) view.StudyRow {
	return view.StudyRow{ID: int64(st.ID), Name: st.Name, Purpose: st.Purpose, Latest: st.Latest, Claims: st.Headline.Claims,
		Status: st.Headline.Status, Currency: st.Headline.Currency, Mean: st.Headline.Mean, Shape: st.Headline.Shape, Changed: st.Changed}
}

func uploadRow(u *storage.Upload) view.UploadRow {
	return view.UploadRow{ID: int64(u.ID), Source: u.Source, FileName: u.FileName, Bytes: u.Bytes, Created: u.Created,
		NextStep: fmt.Sprintf("/uploads/%d/columns", u.ID)}
}
