package web

import (
	"bytes"
	"errors"
	"fmt"
	"net/http"
	"slices"
	"strconv"
	"strings"

	"github.com/a-h/templ"

	"spillway/severity/claims"
	"spillway/severity/study"
	"spillway/storage"
	"spillway/web/view"
)

func (s *server) newStudy(r *http.Request) (templ.Component, error) {
	rows, err := s.batchRows(r)
	if err != nil {
		return nil, err
	}
	p := view.NewStudyPage{Page: s.basics("New study", "studies", r), Batches: rows, Chosen: map[int64]bool{}}
	for _, text := range r.URL.Query()["batch"] {
		if id, err := strconv.ParseInt(text, 10, 64); err == nil {
			p.Chosen[id] = true
		}
	}
	if len(p.Chosen) == 0 && len(rows) > 0 {
		p.Chosen[rows[0].ID] = true
	}
	return view.NewStudy(p), nil
}

func (s *server) postStudy(w http.ResponseWriter, r *http.Request) error {
	name, purpose := strings.TrimSpace(r.FormValue("name")), strings.TrimSpace(r.FormValue("purpose"))
	refs, err := s.batchRefs(r, r.Form["batch"])
	if err != nil {
		return err
	}
	problem := ""
	switch {
	case name == "" || len(name) > 200:
		problem = "Name the study in at most 200 characters."
	case len(refs) == 0:
		problem = "Choose at least one batch."
	}
	if problem != "" {
		rows, err := s.batchRows(r)
		if err != nil {
			return err
		}
		p := view.NewStudyPage{Page: s.basics("New study", "studies", r), Batches: rows, Chosen: map[int64]bool{}, Name: name, Purpose: purpose, Problem: problem}
		for _, ref := range refs {
			p.Chosen[ref.ID] = true
		}
		s.render(w, r, http.StatusUnprocessableEntity, view.NewStudy(p))
		return nil
	}
	book, err := s.books.Book(r.Context(), batchIDs(refs))
	if err != nil {
		return err
	}
	results, err := study.Run(book, study.Default(refs, book.Largest(claims.IncurredAmount)))
	if err != nil {
		return err
	}
	id, err := s.books.CreateStudy(r.Context(), name, purpose)
	if err != nil {
		return err
	}
	first := storage.Revision{Assumptions: results.Assumptions, Results: results, ProgramVersion: s.version, Author: author(r), Note: "first look"}
	if _, err := s.books.AddRevision(r.Context(), id, 0, first); err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/studies/%d/revisions/1", id), http.StatusSeeOther)
	return nil
}

// author is who says to be at work, until there are accounts.
func author(r *http.Request) string {
	name := strings.TrimSpace(r.FormValue("author"))
	if name == "" || len(name) > 100 {
		return view.NotNamed
	}
	return name
}

func (s *server) batchRefs(r *http.Request, texts []string) ([]study.BatchRef, error) {
	var refs []study.BatchRef
	for _, text := range texts {
		id, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			return nil, &usageError{fmt.Sprintf("batch %q: want its number", text)}
		}
		b, err := s.books.Batch(r.Context(), storage.BatchID(id))
		if err != nil {
			return nil, err
		}
		refs = append(refs, study.BatchRef{ID: id, Name: b.Name, Digest: b.SHA256})
	}
	slices.SortFunc(refs, func(a, b study.BatchRef) int { return int(a.ID - b.ID) })
	return refs, nil
}

func batchIDs(refs []study.BatchRef) []storage.BatchID {
	ids := make([]storage.BatchID, len(refs))
	for i, ref := range refs {
		ids[i] = storage.BatchID(ref.ID)
	}
	return ids
}

func (s *server) latestRevision(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "study")
	if err != nil {
		return err
	}
	st, err := s.books.Study(r.Context(), storage.StudyID(id))
	if err != nil {
		return err
	}
	if st.Latest == 0 {
		return fmt.Errorf("study %d has no revision: %w", id, storage.ErrNotFound)
	}
	http.Redirect(w, r, fmt.Sprintf("/studies/%d/revisions/%d", id, st.Latest), http.StatusSeeOther)
	return nil
}

func (s *server) showRevision(w http.ResponseWriter, r *http.Request) error {
	return s.revisionPage(w, r, view.Study)
}

func (s *server) showReport(w http.ResponseWriter, r *http.Request) error {
	return s.revisionPage(w, r, view.Report)
}

// revisionPage shows a revision. What its page shows besides the revision
// itself changes with the latest revision, the batches and the notice only.
func (s *server) revisionPage(w http.ResponseWriter, r *http.Request, component func(view.StudyPage) templ.Component) error {
	st, n, err := s.addressed(r)
	if err != nil {
		return err
	}
	batches, err := s.books.BatchCount(r.Context())
	if err != nil {
		return err
	}
	key := fmt.Sprintf("%s %d %d %s", r.URL.Path, st.Latest, batches, r.URL.Query().Get("done"))
	return s.cached(w, r, key, func() (*bytes.Buffer, error) {
		revision, err := s.books.Revision(r.Context(), st.ID, n)
		if err != nil {
			return nil, err
		}
		p, err := s.pageOf(r, revision)
		if err != nil {
			return nil, err
		}
		page := new(bytes.Buffer)
		return page, component(*p).Render(r.Context(), page)
	})
}

// addressed is the study of an address, and the number of the revision there.
func (s *server) addressed(r *http.Request) (st *storage.Study, revision int, err error) {
	id, err := number(r, "study")
	if err != nil {
		return nil, 0, err
	}
	n, err := number(r, "revision")
	if err != nil {
		return nil, 0, err
	}
	st, err = s.books.Study(r.Context(), storage.StudyID(id))
	return st, int(n), err
}

func (s *server) pageOf(r *http.Request, revision *storage.Revision) (*view.StudyPage, error) {
	ctx := r.Context()
	st, err := s.books.Study(ctx, revision.Study)
	if err != nil {
		return nil, err
	}
	rows, err := s.batchRows(r)
	if err != nil {
		return nil, err
	}
	revisions, err := s.books.Revisions(ctx, revision.Study)
	if err != nil {
		return nil, err
	}
	p := &view.StudyPage{
		Page: s.basics(st.Name, "studies", r), ID: int64(st.ID), Name: st.Name, Purpose: st.Purpose,
		Number: revision.Number, Latest: st.Latest, Author: revision.Author, Note: revision.Note, Created: revision.Created,
		ProgramVersion: revision.ProgramVersion, Results: revision.Results, Batches: rows, Form: view.FormOf(revision.Assumptions),
	}
	book, err := s.books.Book(ctx, batchIDs(revision.Assumptions.Batches))
	if err != nil {
		return nil, err
	}
	p.Businesses, p.Segments = slices.Sorted(slices.Values(book.Businesses)), slices.Sorted(slices.Values(book.Segments))
	for i, rev := range revisions {
		row := view.RevisionRow{Number: rev.Number, Author: rev.Author, Note: rev.Note, Created: rev.Created, Claims: rev.Headline.Claims, Mean: rev.Headline.Mean}
		if i+1 < len(revisions) {
			for _, c := range study.Changes(revisions[i+1].Assumptions, rev.Assumptions) {
				row.Changes = append(row.Changes, fmt.Sprintf("%s: %s → %s", c.What, c.From, c.To))
			}
		}
		p.Revisions = append(p.Revisions, row)
	}
	return p, nil
}

// postRevision moves the assumptions: computes, and records a new revision
// after the one that the user saw.
func (s *server) postRevision(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "study")
	if err != nil {
		return err
	}
	if err := r.ParseForm(); err != nil {
		return &usageError{"the form broke off: " + err.Error()}
	}
	st, err := s.books.Study(r.Context(), storage.StudyID(id))
	if err != nil {
		return err
	}
	seen, err := strconv.Atoi(r.FormValue("seen"))
	if err != nil || seen < 1 || seen > st.Latest {
		return &usageError{"the form does not say which revision was seen last"}
	}
	last, err := s.books.Revision(r.Context(), st.ID, st.Latest)
	if err != nil {
		return err
	}
	refs, err := s.batchRefs(r, r.Form["batch"])
	if err != nil {
		return err
	}
	a, err := readAssumptions(r, refs)
	var results *study.Results
	if err == nil {
		var book *claims.Book
		if book, err = s.books.Book(r.Context(), batchIDs(a.Batches)); err != nil {
			return err
		}
		results, err = study.Run(book, a)
	}
	if err != nil {
		return s.refuse(w, r, last, sentence(err))
	}
	if st.Latest == seen && len(study.Changes(last.Assumptions, a)) == 0 {
		http.Redirect(w, r, fmt.Sprintf("/studies/%d/revisions/%d?done=same", id, st.Latest), http.StatusSeeOther)
		return nil
	}
	next := storage.Revision{Assumptions: a, Results: results, ProgramVersion: s.version, Author: author(r), Note: strings.TrimSpace(r.FormValue("note"))}
	n, err := s.books.AddRevision(r.Context(), st.ID, seen, next)
	var conflict *storage.Conflict
	if errors.As(err, &conflict) {
		return s.refuse(w, r, last, fmt.Sprintf("Revision %d was recorded by somebody else in the meantime and is shown here. Your change is not recorded: repeat it to record it after that one.", conflict.Latest))
	}
	if err != nil {
		return err
	}
	http.Redirect(w, r, fmt.Sprintf("/studies/%d/revisions/%d?done=recorded", id, n), http.StatusSeeOther)
	return nil
}

// refuse shows the latest revision with what stands in the way, and the layer
// and quantile fields as they were typed.
func (s *server) refuse(w http.ResponseWriter, r *http.Request, last *storage.Revision, problem string) error {
	p, err := s.pageOf(r, last)
	if err != nil {
		return err
	}
	p.Problem = problem
	p.Form.Quantiles = r.FormValue("quantiles")
	for i := range p.Form.Layers {
		if i < len(r.Form["layer_limit"]) && i < len(r.Form["layer_attachment"]) {
			p.Form.Layers[i] = view.LayerField{Limit: r.Form["layer_limit"][i], Attachment: r.Form["layer_attachment"][i]}
		}
	}
	s.render(w, r, http.StatusUnprocessableEntity, view.Study(*p))
	return nil
}

func sentence(err error) string {
	text := err.Error()
	return strings.ToUpper(text[:1]) + text[1:] + "."
}
