// Package web is the browser's door: routes, handlers, and the one place where
// errors become pages. It does no arithmetic.
package web

import (
	"context"
	"io"
	"log/slog"
	"net/http"
	"os"
	"time"

	"github.com/a-h/templ"
	"github.com/go-chi/chi/v5"
	"github.com/go-chi/chi/v5/middleware"

	"spillway/severity/claims"
	"spillway/storage"
	"spillway/storage/extract"
	"spillway/web/assets"
	"spillway/web/view"
)

// books is what handlers need of the storage.
type books interface {
	Health(ctx context.Context) error

	CreateUpload(ctx context.Context, fileName, source string, body io.Reader, max int64) (*storage.Upload, error)
	Upload(ctx context.Context, id storage.UploadID) (*storage.Upload, error)
	OpenUploads(ctx context.Context) ([]storage.Upload, error)
	OpenFile(digest string) (*os.File, int64, error)
	SavePlan(ctx context.Context, id storage.UploadID, plan extract.Plan) error
	Check(ctx context.Context, id storage.UploadID) (*extract.Report, error)
	Accept(ctx context.Context, id storage.UploadID, name string, progress func(rows int)) (storage.BatchID, error)
	DiscardUpload(ctx context.Context, id storage.UploadID) error
	WriteRejected(ctx context.Context, id storage.UploadID, w io.Writer) error
	RememberedPlan(ctx context.Context, source string) (*extract.Plan, error)
	Sources(ctx context.Context) ([]string, error)

	Batches(ctx context.Context) ([]storage.Batch, error)
	BatchCount(ctx context.Context) (int, error)
	Batch(ctx context.Context, id storage.BatchID) (*storage.Batch, error)
	Claims(ctx context.Context, id storage.BatchID, after, limit int) ([]storage.StoredClaim, error)
	ClaimHistory(ctx context.Context, batch storage.BatchID, claimID string) ([]storage.StoredClaim, error)
	WriteBatchRejected(ctx context.Context, id storage.BatchID, w io.Writer) error
	Book(ctx context.Context, ids []storage.BatchID) (*claims.Book, error)

	CreateStudy(ctx context.Context, name, purpose string) (storage.StudyID, error)
	Studies(ctx context.Context) ([]storage.Study, error)
	Study(ctx context.Context, id storage.StudyID) (*storage.Study, error)
	AddRevision(ctx context.Context, id storage.StudyID, seen int, r storage.Revision) (int, error)
	Revision(ctx context.Context, id storage.StudyID, number int) (*storage.Revision, error)
	Revisions(ctx context.Context, id storage.StudyID) ([]storage.Revision, error)
}

// MaxUpload is the largest extract that is taken, in bytes.
const MaxUpload = 4 << 30

// maxForm is the largest body of any other request.
const maxForm = 1 << 20

type server struct {
	books   books
	log     *slog.Logger
	version string
	kept    pageCache
}

// New is the whole site over one database. version is the program's, printed
// on every page and kept with every revision.
func New(store *storage.Store, log *slog.Logger, version string) http.Handler {
	s := &server{books: store, log: log, version: version}
	r := chi.NewRouter()
	r.Use(securityHeaders)
	r.Use(s.logged)
	r.Use(s.recovered)
	r.Use(http.NewCrossOriginProtection().Handler)
	r.Handle("/assets/*", assets.Handler())
	r.Get("/healthz", s.health)

	r.Group(func(r chi.Router) {
		r.Use(middleware.Compress(5, "text/html", "text/css", "application/json"))
		r.Use(limitBody(maxForm))
		s.pages(r)
	})
	// The one request with a large body has a limit of its own.
	r.Post("/uploads", s.action(s.postUpload))
	r.NotFound(func(w http.ResponseWriter, r *http.Request) { s.fail(w, r, errNoPage) })
	r.MethodNotAllowed(func(w http.ResponseWriter, r *http.Request) { s.fail(w, r, errNoPage) })
	return r
}

// pages are the routes, one line each.
func (s *server) pages(r chi.Router) {
	r.Get("/", s.page(s.home))
	r.Get("/glossary", s.page(s.glossary))

	r.Get("/batches", s.page(s.listBatches))
	r.Get("/batches/new", s.page(s.newUpload))
	r.Get("/batches/{batch}", s.page(s.showBatch))
	r.Get("/batches/{batch}/rejected.csv", s.action(s.batchRejected))
	r.Get("/batches/{batch}/claims/{claim}", s.page(s.showClaim))

	r.Get("/uploads/{upload}/columns", s.page(s.showColumns))
	r.Post("/uploads/{upload}/columns", s.action(s.postColumns))
	r.Get("/uploads/{upload}/basis", s.page(s.showBasis))
	r.Post("/uploads/{upload}/basis", s.action(s.postBasis))
	r.Get("/uploads/{upload}/findings", s.page(s.showFindings))
	r.Get("/uploads/{upload}/rejected.csv", s.action(s.uploadRejected))
	r.Post("/uploads/{upload}/accept", s.action(s.postAccept))
	r.Post("/uploads/{upload}/discard", s.action(s.postDiscard))

	r.Get("/studies", s.page(s.listStudies))
	r.Get("/studies/new", s.page(s.newStudy))
	r.Post("/studies", s.action(s.postStudy))
	r.Get("/studies/{study}", s.action(s.latestRevision))
	r.Get("/studies/{study}/revisions", s.action(s.latestRevision))
	r.Post("/studies/{study}/revisions", s.action(s.postRevision))
	r.Get("/studies/{study}/revisions/{revision}", s.action(s.showRevision))
	r.Get("/studies/{study}/revisions/{revision}/report", s.action(s.showReport))
	r.Get("/studies/{study}/revisions/{revision}/report.{form}", s.action(s.exportReport))
}

func (s *server) health(w http.ResponseWriter, r *http.Request) {
	if err := s.books.Health(r.Context()); err != nil {
		s.log.Error("health", "error", err)
		http.Error(w, "the database does not answer", http.StatusServiceUnavailable)
		return
	}
	w.Header().Set("Content-Type", "text/plain; charset=utf-8")
	_, _ = io.WriteString(w, "ok\n") // a client that went away is no error of ours
}

// logged writes one line a request, without what stands in it.
func (s *server) logged(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		begun := time.Now()
		seen := middleware.NewWrapResponseWriter(w, r.ProtoMajor)
		next.ServeHTTP(seen, r)
		route := r.URL.Path
		if c := chi.RouteContext(r.Context()); c != nil && c.RoutePattern() != "" {
			route = c.RoutePattern() // claim ids stand in paths, not in logs
		}
		s.log.Info("request", "method", r.Method, "route", route, "status", seen.Status(), "bytes", seen.BytesWritten(), "took", time.Since(begun))
	})
}

func (s *server) basics(title, section string, r *http.Request) view.Page {
	return view.Page{Title: title, Section: section, Version: s.version, Notice: notices[r.URL.Query().Get("done")]}
}

// notices are what a redirect may say was done.
var notices = map[string]string{
	"accepted":  "The batch is stored.",
	"discarded": "The upload is discarded; nothing of it was stored as claims.",
	"held":      "This very file was accepted before: here is its batch.",
	"recorded":  "Recomputed and recorded.",
	"same":      "Nothing was changed, so no new revision was recorded.",
}

func (s *server) glossary(r *http.Request) (templ.Component, error) {
	return view.Glossary(s.basics("Glossary", "glossary", r)), nil
}
