package web

import (
	"errors"
	"fmt"
	"io"
	"mime/multipart"
	"net/http"
	"path"
	"slices"
	"strconv"
	"strings"

	"github.com/a-h/templ"

	"spillway/severity/claims"
	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/view"
)

func (s *server) newUpload(r *http.Request) (templ.Component, error) {
	sources, err := s.books.Sources(r.Context())
	if err != nil {
		return nil, err
	}
	p := view.UploadPage{Page: s.basics("Upload", "batches", r), Sources: sources, MaxBytes: MaxUpload}
	if len(sources) == 1 {
		p.Source = sources[0]
	}
	return view.Upload(p), nil
}

// postUpload streams the file to the storage; the form's source comes first.
func (s *server) postUpload(w http.ResponseWriter, r *http.Request) error {
	r.Body = http.MaxBytesReader(w, r.Body, MaxUpload+maxForm)
	parts, err := r.MultipartReader()
	if err != nil {
		return &usageError{"an upload is a form with a source and a file"}
	}
	source := ""
	for {
		part, err := parts.NextPart()
		if err == io.EOF {
			return &usageError{"the form holds no file"}
		}
		if err != nil {
			return &usageError{"the upload broke off: " + err.Error()}
		}
		switch part.FormName() {
		case "source":
			text, err := io.ReadAll(io.LimitReader(part, 1000))
			if err != nil {
				return &usageError{"the upload broke off: " + err.Error()}
			}
			source = strings.TrimSpace(string(text))
		case "file":
			return s.storeUpload(w, r, source, part)
		}
	}
}

func (s *server) storeUpload(w http.ResponseWriter, r *http.Request, source string, part *multipart.Part) error {
	name := fileName(part.FileName())
	if source == "" || name == "" || len(source) > 200 {
		sources, err := s.books.Sources(r.Context())
		if err != nil {
			return err
		}
		s.render(w, r, http.StatusUnprocessableEntity, view.Upload(view.UploadPage{Page: s.basics("Upload", "batches", r), Sources: sources, Source: source,
			MaxBytes: MaxUpload, Problem: "Choose a file, and name its source in at most 200 characters."}))
		return nil
	}
	u, err := s.books.CreateUpload(r.Context(), name, source, part, MaxUpload)
	if err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/uploads/%d/columns", u.ID), http.StatusSeeOther)
	return nil
}

// fileName is the last part of a client's file name, without what could not
// be shown.
func fileName(sent string) string {
	name := path.Base(strings.ReplaceAll(sent, `\`, "/"))
	if name == "." || name == "/" {
		return ""
	}
	name = strings.Map(func(c rune) rune {
		if c < ' ' || c == 0x7f {
			return -1
		}
		return c
	}, name)
	for len(name) > 200 {
		name = name[:len(name)-1]
	}
	return strings.ToValidUTF8(name, "")
}

func (s *server) upload(r *http.Request) (*storage.Upload, error) {
	id, err := number(r, "upload")
	if err != nil {
		return nil, err
	}
	u, err := s.books.Upload(r.Context(), storage.UploadID(id))
	if err == nil && u.State != "open" {
		return nil, storage.ErrClosed
	}
	return u, err
}

// look reads the head of an upload under a plan, or under its own guess.
func (s *server) look(u *storage.Upload, plan *extract.Plan) (extract.Guess, error) {
	file, size, err := s.books.OpenFile(u.SHA256)
	if err != nil {
		return extract.Guess{}, err
	}
	defer file.Close()
	if plan == nil {
		return extract.Sniff(file, size, u.FileName)
	}
	return extract.SniffAs(file, size, plan.Format, plan.Columns)
}

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
