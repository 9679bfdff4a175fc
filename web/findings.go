package web

import (
	"fmt"
	"net/http"
	"strings"

	"github.com/a-h/templ"

	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/view"
)

func (s *server) showFindings(r *http.Request) (templ.Component, error) {
	u, err := s.upload(r)
	if err != nil {
		return nil, err
	}
	if u.Plan == nil || u.Plan.Basis.Currency == "" {
		return nil, &usageError{"Columns and basis have to be settled before the findings."}
	}
	report := u.Report
	if report == nil {
		if report, err = s.books.Check(r.Context(), u.ID); err != nil {
			return nil, err
		}
	}
	return view.Findings(s.findingsPage(r, u, report, batchName(u), "")), nil
}

func (s *server) findingsPage(r *http.Request, u *storage.Upload, report *extract.Report, name, problem string) view.FindingsPage {
	return view.FindingsPage{Page: s.basics("Findings", "batches", r), Upload: uploadRow(u),
		BasisLine: view.BasisLine(s.basisPage(r, u, u.Plan.Basis, "").Basis), Report: *report, BatchName: name, Problem: problem}
}

func batchName(u *storage.Upload) string {
	return u.Source + ", as of " + u.Plan.Basis.Valuation.String()
}

func (s *server) postAccept(w http.ResponseWriter, r *http.Request) error {
	u, err := s.upload(r)
	if err != nil {
		return err
	}
	name := strings.TrimSpace(r.FormValue("name"))
	if name == "" || len(name) > 200 {
		if u.Plan == nil || u.Report == nil {
			return &usageError{"The upload has not been checked yet."}
		}
		s.render(w, r, http.StatusUnprocessableEntity, view.Findings(s.findingsPage(r, u, u.Report, batchName(u), "Name the batch in at most 200 characters.")))
		return nil
	}
	if u.Report == nil {
		return &usageError{"The upload has not been checked yet."}
	}
	batch, err := s.books.Accept(r.Context(), u.ID, name, nil)
	if err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/batches/%d?done=accepted", batch), http.StatusSeeOther)
	return nil
}

func (s *server) postDiscard(w http.ResponseWriter, r *http.Request) error {
	u, err := s.upload(r)
	if err != nil {
		return err
	}
	if err := s.books.DiscardUpload(r.Context(), u.ID); err != nil {
		return err
	}
	http.Redirect(w, r, "/?done=discarded", http.StatusSeeOther)
	return nil
}

func (s *server) uploadRejected(w http.ResponseWriter, r *http.Request) error {
	u, err := s.upload(r)
	if err != nil {
		return err
	}
	if u.Plan == nil {
		return &usageError{"Columns and basis have to be settled before rows are rejected."}
	}
	download(w, "text/csv; charset=utf-8", "rejected-rows.csv")
	return s.streamed(s.books.WriteRejected(r.Context(), u.ID, w))
}
