package web

import (
	"fmt"
	"io"
	"mime/multipart"
	"net/http"
	"path"
	"strings"

	"github.com/a-h/templ"

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
