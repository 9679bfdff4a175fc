package web

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"net/http"
	"runtime/debug"
	"strconv"

	"github.com/a-h/templ"
	"github.com/go-chi/chi/v5"

	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/view"
)

// page adapts a handler that answers a GET with a page.
func (s *server) page(handler func(*http.Request) (templ.Component, error)) http.HandlerFunc {
	return func(w http.ResponseWriter, r *http.Request) {
		component, err := handler(r)
		if err != nil {
			s.fail(w, r, err)
			return
		}
		s.render(w, r, http.StatusOK, component)
	}
}

// action adapts a handler that answers by itself unless it fails.
func (s *server) action(handler func(http.ResponseWriter, *http.Request) error) http.HandlerFunc {
	return func(w http.ResponseWriter, r *http.Request) {
		if err := handler(w, r); err != nil {
			s.fail(w, r, err)
		}
	}
}

// render writes a page only once it is whole: no half page is ever sent under
// a good status.
func (s *server) render(w http.ResponseWriter, r *http.Request, status int, component templ.Component) {
	var page bytes.Buffer
	if err := component.Render(r.Context(), &page); err != nil {
		s.log.Error("render", "error", err)
		http.Error(w, "the page could not be made", http.StatusInternalServerError)
		return
	}
	h := w.Header()
	h.Set("Content-Type", "text/html; charset=utf-8")
	h.Set("Cache-Control", "no-store") // claims are not for shared caches
	if status != http.StatusOK {
		h.Set("HX-Push-Url", "false")
	}
	w.WriteHeader(status)
	_, _ = page.WriteTo(w) // a client that went away is no error of ours
}

var (
	errNoPage = errors.New("no such page")
	errBadID  = errors.New("no such number in the address")
)

// usageError is a request that no form of ours sends.
type usageError struct{ message string }

func (e *usageError) Error() string { return e.message }

// fail is the one place where errors become pages.
func (s *server) fail(w http.ResponseWriter, r *http.Request, err error) {
	status, title, message, advice := http.StatusInternalServerError, "Something went wrong", "The request could not be carried out. Nothing was changed by it.", "Try again; if it stays so, the program's log says more."
	var (
		duplicate *storage.DuplicateBatch
		conflict  *storage.Conflict
		file      *extract.FileError
		tooLarge  *http.MaxBytesError
		usage     *usageError
	)
	switch {
	case errors.Is(err, context.Canceled):
		return // nobody waits for the answer
	case errors.Is(err, storage.ErrNotFound), errors.Is(err, errNoPage), errors.Is(err, errBadID):
		status, title, message, advice = http.StatusNotFound, "Not here", "There is nothing under this address.", "It may have been mistyped, or belong to another database."
	case errors.As(err, &duplicate):
		http.Redirect(w, r, fmt.Sprintf("/batches/%d?done=held", duplicate.Existing), http.StatusSeeOther)
		return
	case errors.As(err, &conflict):
		status, title, message, advice = http.StatusConflict, "Changed in the meantime", conflict.Error()+".", "Open the study again to see it; nothing of it is lost."
	case errors.As(err, &tooLarge), errors.Is(err, storage.ErrTooLarge):
		status, title, message, advice = http.StatusRequestEntityTooLarge, "Too large", "The file or form exceeds what is accepted.", fmt.Sprintf("Extracts may have up to %s.", view.Bytes(MaxUpload))
	case errors.As(err, &file):
		status, title, message, advice = http.StatusUnprocessableEntity, "The file cannot be read", file.Error()+".", ""
	case errors.Is(err, storage.ErrClosed):
		status, title, message, advice = http.StatusConflict, "Already done", "This upload was accepted or discarded before.", "The list of batches shows what is stored."
	case errors.Is(err, storage.ErrNothingAccepted):
		status, title, message, advice = http.StatusUnprocessableEntity, "Nothing to accept", "Every row of the file is rejected.", "Go back to its columns or its basis: the findings say why."
	case errors.Is(err, storage.ErrMixedCurrencies):
		status, title, message, advice = http.StatusUnprocessableEntity, "Several currencies", "Batches in several currencies cannot be studied together.", "Choose batches in one currency."
	case errors.As(err, &usage):
		status, title, message, advice = http.StatusBadRequest, "Not understood", usage.message, ""
	}
	if status >= 500 {
		s.log.Error("request failed", "method", r.Method, "error", err)
	}
	p := s.basics(title, "", r)
	p.Notice = ""
	s.render(w, r, status, view.Failure(view.FailurePage{Page: p, Status: status, Message: message, Advice: advice}))
}

// recovered turns a panic into a page and a line in the log.
func (s *server) recovered(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		defer func() {
			if v := recover(); v != nil {
				if v == http.ErrAbortHandler {
					panic(v)
				}
				s.fail(w, r, fmt.Errorf("panic: %v\n%s", v, debug.Stack()))
			}
		}()
		next.ServeHTTP(w, r)
	})
}

// number reads an id from the address.
func number(r *http.Request, name string) (int64, error) {
	n, err := strconv.ParseInt(chi.URLParam(r, name), 10, 64)
	if err != nil || n < 1 {
		return 0, errBadID
	}
	return n, nil
}
