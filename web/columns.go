package web

import (
	"errors"
	"fmt"
	"net/http"
	"slices"
	"strconv"

	"github.com/a-h/templ"

	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/view"
)

func (s *server) showColumns(r *http.Request) (templ.Component, error) {
	u, err := s.upload(r)
	if err != nil {
		return nil, err
	}
	p := view.ColumnsPage{Page: s.basics("Columns", "batches", r), Upload: uploadRow(u)}
	plan := u.Plan
	if plan == nil {
		if plan, err = s.books.RememberedPlan(r.Context(), u.Source); err != nil {
			return nil, err
		}
		p.Remember = plan != nil
	}
	guess, err := s.look(u, nil)
	if err != nil {
		return nil, err
	}
	// A remembered plan holds where the file is written in the same way.
	if plan != nil && plan.Format.Kind == guess.Format.Kind {
		if known, err := s.look(u, plan); err == nil && holdsAll(known.Header, plan.Columns) {
			known.Format.Decimal, known.Format.Thousands, known.Format.DateOrder = plan.Format.Decimal, plan.Format.Thousands, plan.Format.DateOrder
			known.Columns, known.Doubts = plan.Columns, nil
			guess = known
		} else {
			p.Remember = false
		}
	}
	p.Guess = guess
	p.Plan = extract.Plan{Format: guess.Format, Columns: guess.Columns}
	p.Fields = view.FieldChoices(guess.Columns)
	return view.Columns(p), nil
}

// holdsAll tells whether every mapped column is in the header.
func holdsAll(header []string, columns extract.ColumnMap) bool {
	for _, name := range columns {
		if !slices.Contains(header, name) {
			return false
		}
	}
	return true
}

// formatOf reads the format fields of the columns form.
func formatOf(r *http.Request, kind extract.Kind) extract.Format {
	line, err := strconv.Atoi(r.FormValue("header_line"))
	if err != nil || line < 1 {
		line = 1
	}
	f := extract.Format{Kind: kind, Decimal: r.FormValue("decimal"), Thousands: r.FormValue("thousands"),
		DateOrder: extract.DateOrder(r.FormValue("date_order")), HeaderLine: line}
	if kind == extract.Workbook {
		f.Sheet = r.FormValue("sheet")
	} else {
		f.Encoding, f.Delimiter = extract.Encoding(r.FormValue("encoding")), r.FormValue("delimiter")
	}
	return f
}

func (s *server) postColumns(w http.ResponseWriter, r *http.Request) error {
	u, err := s.upload(r)
	if err != nil {
		return err
	}
	first, err := s.look(u, nil)
	if err != nil {
		return err
	}
	plan := extract.Plan{Format: formatOf(r, first.Format.Kind), Columns: extract.ColumnMap{}}
	if u.Plan != nil {
		plan.Basis = u.Plan.Basis
	} else if remembered, err := s.books.RememberedPlan(r.Context(), u.Source); err != nil {
		return err
	} else if remembered != nil {
		plan.Basis = remembered.Basis
		plan.Basis.Valuation = 0 // every extract has its own
	}
	for _, f := range extract.Fields {
		if column := r.FormValue("field-" + string(f)); column != "" {
			plan.Columns[f] = column
		}
	}
	guess, err := s.look(u, &plan)
	problem := ""
	if err != nil {
		if problem, err = fileProblem(err); err != nil {
			return err
		}
		guess = first
	}
	again := r.FormValue("do") == "again"
	if again && problem == "" && !holdsAll(guess.Header, plan.Columns) {
		plan.Columns = guess.Columns // another header: the old choices name nothing in it
	}
	if problem == "" && r.FormValue("told") == "" && sameMarks(plan.Format, first.Format) && !sameMarks(plan.Format, guess.Format) {
		// The columns that the user named are written otherwise than those
		// that the guess went by.
		plan.Format.Decimal, plan.Format.Thousands = guess.Format.Decimal, guess.Format.Thousands
		problem = "In the columns named now amounts are written with other marks than it seemed before; the marks are set to match. Look at them, and go on."
	}
	if !again && problem == "" {
		if problem, err = s.tryPlan(u, plan, guess); err != nil {
			return err
		}
	}
	if again || problem != "" {
		p := view.ColumnsPage{Page: s.basics("Columns", "batches", r), Upload: uploadRow(u), Guess: guess, Plan: plan,
			Fields: view.FieldChoices(plan.Columns), Problem: problem}
		p.Guess.Doubts = stillOpen(guess.Doubts, plan)
		status := http.StatusOK
		if problem != "" {
			status = http.StatusUnprocessableEntity
		}
		s.render(w, r, status, view.Columns(p))
		return nil
	}
	if err := s.books.SavePlan(r.Context(), u.ID, plan); err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/uploads/%d/basis", u.ID), http.StatusSeeOther)
	return nil
}

func sameMarks(a, b extract.Format) bool { return a.Decimal == b.Decimal && a.Thousands == b.Thousands }

// tryPlan opens the file under the plan and says what stands in the way.
func (s *server) tryPlan(u *storage.Upload, plan extract.Plan, guess extract.Guess) (problem string, err error) {
	for _, d := range stillOpen(guess.Doubts, plan) {
		if d.About == "date_order" {
			return d.Question + " Choose it under Writing; nothing is loaded before.", nil
		}
	}
	if plan.Columns[extract.ClaimID] == "" {
		return "Say which column holds the claim id: without it later valuations of a claim could not be told from new claims.", nil
	}
	file, size, err := s.books.OpenFile(u.SHA256)
	if err != nil {
		return "", err
	}
	defer file.Close()
	reader, err := extract.NewReader(file, size, plan)
	if err != nil {
		return fileProblem(err)
	}
	return "", reader.Close()
}

// fileProblem separates what the user can mend from what went wrong here.
func fileProblem(err error) (string, error) {
	var file *extract.FileError
	if errors.As(err, &file) {
		return "In " + file.Error() + ".", nil
	}
	return "", err
}

// stillOpen are the doubts that the plan does not settle.
func stillOpen(doubts []extract.Doubt, plan extract.Plan) []extract.Doubt {
	var open []extract.Doubt
	dated := plan.Columns[extract.LossDate] != "" || plan.Columns[extract.ReportDate] != "" || plan.Columns[extract.CloseDate] != ""
	for _, d := range doubts {
		// Marks, encoding and sheet are settled by the fields that were sent;
		// years of two digits stay in doubt however the file is read.
		if dated && (d.About == "dates" || d.About == "date_order" && plan.Format.DateOrder == extract.OrderUndecided) {
			open = append(open, d)
		}
	}
	return open
}
