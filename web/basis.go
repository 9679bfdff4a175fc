package web

import (
	"fmt"
	"net/http"
	"strings"

	"github.com/a-h/templ"

	"spillway/severity/claims"
	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/view"
)

func (s *server) showBasis(r *http.Request) (templ.Component, error) {
	u, err := s.upload(r)
	if err != nil {
		return nil, err
	}
	if u.Plan == nil {
		return nil, &usageError{"The columns have to be settled before the basis."}
	}
	return view.Basis(s.basisPage(r, u, u.Plan.Basis, "")), nil
}

func (s *server) basisPage(r *http.Request, u *storage.Upload, b claims.Basis, problem string) view.BasisPage {
	has := func(f extract.Field) bool { return u.Plan.Columns[f] != "" }
	b.MissingTerm = claims.MissingColumns{Deductible: !has(extract.Deductible), Limit: !has(extract.Limit)}
	return view.BasisPage{Page: s.basics("Basis", "batches", r), Upload: uploadRow(u), Basis: b,
		HasDeductible: has(extract.Deductible), HasLimit: has(extract.Limit), HasRow: has(extract.DeductibleType),
		Examples: view.WorkedClaims(b), Problem: problem}
}

func (s *server) postBasis(w http.ResponseWriter, r *http.Request) error {
	u, err := s.upload(r)
	if err != nil {
		return err
	}
	if u.Plan == nil {
		return &usageError{"The columns have to be settled before the basis."}
	}
	b := u.Plan.Basis
	for name, to := range map[string]interface{ UnmarshalText([]byte) error }{
		"amounts": &b.Amounts, "deductible": &b.Deductible, "limit": &b.Limit, "blank_deductible": &b.NoDeduct, "blank_limit": &b.NoLimit,
	} {
		if text := r.FormValue(name); text != "" {
			if err := to.UnmarshalText([]byte(text)); err != nil {
				return &usageError{fmt.Sprintf("%s: %v", name, err)}
			}
		}
	}
	problem := ""
	b.Currency = strings.ToUpper(strings.TrimSpace(r.FormValue("currency")))
	if !currencyCode(b.Currency) {
		problem = fmt.Sprintf("Currency %q: want an ISO 4217 code of three letters, such as EUR.", b.Currency)
	}
	if b.Valuation, err = claims.ParseDate(r.FormValue("valuation")); err != nil {
		problem = strings.TrimSpace(problem + " Valuation date: " + err.Error() + ".")
	}
	if examples := r.FormValue("do") == "examples"; examples || problem != "" {
		if examples {
			problem = ""
		}
		status := http.StatusOK
		if problem != "" {
			status = http.StatusUnprocessableEntity
		}
		s.render(w, r, status, view.Basis(s.basisPage(r, u, b, problem)))
		return nil
	}
	plan := *u.Plan
	plan.Basis = b
	if err := s.books.SavePlan(r.Context(), u.ID, plan); err != nil {
		return err
	}
	if _, err := s.books.Check(r.Context(), u.ID); err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/uploads/%d/findings", u.ID), http.StatusSeeOther)
	return nil
}

func currencyCode(code string) bool {
	if len(code) != 3 {
		return false
	}
	for _, c := range code {
		if c < 'A' || c > 'Z' {
			return false
		}
	}
	return true
}
