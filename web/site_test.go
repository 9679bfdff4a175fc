package web

import (
	"bytes"
	"mime/multipart"
	"net/http"
	"net/url"
	"strconv"

	"golang.org/x/net/html"

	"context"
	"io"
	"log/slog"
	"net/http/httptest"
	"path/filepath"
	"testing"
	"time"

	"spillway/storage"
)

// newSite serves the real router over a real database in a temporary folder.
func newSite(t testing.TB) *httptest.Server {
	t.Helper()
	clock := func() time.Time { return time.Date(2026, 2, 3, 10, 15, 0, 0, time.UTC) }
	store, err := storage.Open(context.Background(), filepath.Join(t.TempDir(), "site.db"), clock)
	if err != nil {
		t.Fatal(err)
	}
	site := httptest.NewServer(New(store, slog.New(slog.NewTextHandler(io.Discard, nil)), "test"))
	t.Cleanup(func() {
		site.Close()
		if err := store.Close(); err != nil {
			t.Error(err)
		}
	})
	return site
}

func itoa(n int) string { return strconv.Itoa(n) }

// uploadContent posts a file as the upload form does and returns the path of
// the columns page that follows.
func uploadContent(t testing.TB, site *httptest.Server, source, name string, content []byte) string {
	t.Helper()
	var body bytes.Buffer
	form := multipart.NewWriter(&body)
	if err := form.WriteField("source", source); err != nil {
		t.Fatal(err)
	}
	part, err := form.CreateFormFile("file", name)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := part.Write(content); err != nil {
		t.Fatal(err)
	}
	if err := form.Close(); err != nil {
		t.Fatal(err)
	}
	answer, err := http.Post(site.URL+"/uploads", form.FormDataContentType(), &body)
	if err != nil {
		t.Fatal(err)
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	// A file that cannot be read is answered on the page that would show it.
	if err != nil || answer.StatusCode != http.StatusOK && answer.StatusCode != http.StatusUnprocessableEntity {
		t.Fatalf("upload of %s: %d, %v\n%s", name, answer.StatusCode, err, text)
	}
	return answer.Request.URL.Path
}

// formFields reads the fields of the page's form as a browser would send them,
// with the button pressed.
func formFields(t testing.TB, site *httptest.Server, address, button string) url.Values {
	t.Helper()
	answer, err := http.Get(site.URL + address)
	if err != nil {
		t.Fatal(err)
	}
	defer answer.Body.Close()
	if answer.StatusCode != http.StatusOK {
		t.Fatalf("%s: %d", address, answer.StatusCode)
	}
	page, err := html.Parse(answer.Body)
	if err != nil {
		t.Fatal(err)
	}
	form := url.Values{"do": {button}}
	attribute := func(n *html.Node, name string) (string, bool) {
		for _, a := range n.Attr {
			if a.Key == name {
				return a.Val, true
			}
		}
		return "", false
	}
	for n := range page.Descendants() {
		name, named := attribute(n, "name")
		if n.Type != html.ElementNode || !named {
			continue
		}
		switch n.Data {
		case "input":
			kind, _ := attribute(n, "type")
			_, ticked := attribute(n, "checked")
			if value, _ := attribute(n, "value"); kind != "checkbox" || ticked {
				form.Add(name, value)
			}
		case "select":
			for o := range n.Descendants() {
				if _, chosen := attribute(o, "selected"); o.Data == "option" && chosen {
					value, _ := attribute(o, "value")
					form.Set(name, value)
				}
			}
		}
	}
	return form
}
