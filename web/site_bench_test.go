package web

import (
	"io"
	"net/http"
	"net/http/httptest"
	"net/url"
	"strings"
	"testing"

	"spillway/storage/extract/invented"
)

// BenchmarkRequests measures the pages of a study on the invented book's
// latest extract (about 10,000 claims), and a moved assumption.
func BenchmarkRequests(b *testing.B) {
	site := newSite(b)
	loadBook(b, site)
	handler := site.Config.Handler
	request := func(b *testing.B, method, address string, form url.Values) *httptest.ResponseRecorder {
		r := httptest.NewRequest(method, address, strings.NewReader(form.Encode()))
		if form != nil {
			r.Header.Set("Content-Type", "application/x-www-form-urlencoded")
		}
		w := httptest.NewRecorder()
		handler.ServeHTTP(w, r)
		if w.Code >= 400 {
			b.Fatalf("%s %s: %d %s", method, address, w.Code, w.Body)
		}
		return w
	}
	b.Run("study page", func(b *testing.B) {
		b.RunParallel(func(p *testing.PB) {
			for p.Next() {
				request(b, http.MethodGet, "/studies/1/revisions/1", nil)
			}
		})
		b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "pages/s")
	})
	b.Run("batch page", func(b *testing.B) {
		for b.Loop() {
			request(b, http.MethodGet, "/batches/1", nil)
		}
	})
	b.Run("assumption moved and shown", func(b *testing.B) {
		seen := 1
		for i := 0; b.Loop(); i++ {
			w := request(b, http.MethodPost, "/studies/1/revisions", url.Values{
				"seen": {itoa(seen)}, "batch": {"1"}, "amount": {"incurred"}, "level": {"0.95"}, "quantiles": {"50, 99"},
				"layer_limit": {itoa(1000 + i), ""}, "layer_attachment": {"0", "1000"}})
			seen++
			request(b, http.MethodGet, w.Header().Get("Location"), nil)
		}
	})
}

// loadBook takes the latest invented extract through the whole intake and
// opens a study on it.
func loadBook(t testing.TB, site *httptest.Server) {
	t.Helper()
	file := latestFile()
	post := func(address string, form url.Values) {
		t.Helper()
		answer, err := http.PostForm(site.URL+address, form)
		if err != nil {
			t.Fatal(err)
		}
		defer answer.Body.Close()
		body, err := io.ReadAll(answer.Body)
		if err != nil || answer.StatusCode != http.StatusOK {
			t.Fatalf("%s: %d %v\n%s", address, answer.StatusCode, err, body)
		}
	}
	columns := uploadContent(t, site, "harbour and locks office", file.Name, file.Content)
	post(columns, formFields(t, site, columns, "next"))
	basis := strings.Replace(columns, "columns", "basis", 1)
	form := formFields(t, site, basis, "next")
	form.Set("amounts", "net_of_deductible")
	form.Set("currency", "EUR")
	form.Set("valuation", file.Valuation.String())
	post(basis, form)
	post(strings.Replace(columns, "columns", "accept", 1), url.Values{"name": {"Latest quarter"}})
	post("/studies", url.Values{"name": {"Benchmark"}, "batch": {"1"}})
}

func latestFile() invented.File {
	files := invented.Book(2)
	return files[len(files)-1]
}
