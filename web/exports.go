package web

import (
	"bytes"
	"fmt"
	"net/http"

	"github.com/go-chi/chi/v5"

	"spillway/web/report"
)

// exportReport answers with a revision as XLSX, CSV or JSON.
func (s *server) exportReport(w http.ResponseWriter, r *http.Request) error {
	st, n, err := s.addressed(r)
	if err != nil {
		return err
	}
	revision, err := s.books.Revision(r.Context(), st.ID, n)
	if err != nil {
		return err
	}
	d := report.Document{Study: st.Name, Purpose: st.Purpose, Revision: revision.Number, Author: revision.Author, Note: revision.Note,
		Created: revision.Created, ProgramVersion: revision.ProgramVersion, Results: revision.Results}
	var out bytes.Buffer
	form, kind := chi.URLParam(r, "form"), ""
	switch form {
	case "json":
		kind, err = "application/json", report.JSON(&out, d)
	case "csv":
		kind, err = "text/csv; charset=utf-8", report.CSV(&out, d)
	case "xlsx":
		kind, err = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet", report.XLSX(&out, d)
	default:
		return errNoPage
	}
	if err != nil {
		return err
	}
	download(w, kind, fmt.Sprintf("severity-study-%d-revision-%d.%s", st.ID, n, form))
	_, _ = out.WriteTo(w) // a client that went away is no error of ours
	return nil
}
