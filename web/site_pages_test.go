package web

import (
	"bytes"
	"io"
	"net/http"
	"net/url"
	"strings"
	"testing"
)

func fetch(t *testing.T, method, address string, form url.Values, header ...string) (*http.Response, string) {
	t.Helper()
	var body io.Reader
	if form != nil {
		body = strings.NewReader(form.Encode())
	}
	r, err := http.NewRequest(method, address, body)
	if err != nil {
		t.Fatal(err)
	}
	if form != nil {
		r.Header.Set("Content-Type", "application/x-www-form-urlencoded")
	}
	for i := 0; i+1 < len(header); i += 2 {
		r.Header.Set(header[i], header[i+1])
	}
	client := &http.Client{CheckRedirect: func(*http.Request, []*http.Request) error { return http.ErrUseLastResponse }}
	answer, err := client.Do(r)
	if err != nil {
		t.Fatal(err)
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil {
		t.Fatal(err)
	}
	return answer, string(text)
}

func TestEveryAnswerIsGuarded(t *testing.T) {
	site := newSite(t)
	for _, address := range []string{"/", "/batches/new", "/no-such-page", "/batches/99", "/healthz", "/studies/x"} {
		answer, _ := fetch(t, http.MethodGet, site.URL+address, nil)
		policy := answer.Header.Get("Content-Security-Policy")
		if !strings.Contains(policy, "default-src 'none'") || strings.Contains(policy, "unsafe") {
			t.Errorf("%s: content policy %q", address, policy)
		}
		if answer.Header.Get("X-Content-Type-Options") != "nosniff" {
			t.Errorf("%s: content type may be guessed", address)
		}
	}
}

func TestRequestsFromOtherSitesAreRefused(t *testing.T) {
	site := newSite(t)
	answer, _ := fetch(t, http.MethodPost, site.URL+"/studies", url.Values{"name": {"x"}}, "Origin", "https://elsewhere.example", "Sec-Fetch-Site", "cross-site")
	if answer.StatusCode != http.StatusForbidden {
		t.Errorf("a cross-site post answers %d, want 403", answer.StatusCode)
	}
}

func TestStatusesOfFailures(t *testing.T) {
	site := newSite(t)
	loadBook(t, site)
	for _, c := range []struct {
		method, address string
		form            url.Values
		status          int
		says            string
	}{
		{"GET", "/no-such-page", nil, 404, "nothing under this address"},
		{"GET", "/batches/99", nil, 404, "nothing under this address"},
		{"GET", "/batches/1?after=x", nil, 400, "number of a line"},
		{"GET", "/studies/1/revisions/9", nil, 404, "nothing under this address"},
		{"GET", "/studies/1/revisions/1/report.pdf", nil, 404, "nothing under this address"},
		{"GET", "/uploads/1/columns", nil, 409, "accepted or discarded before"},
		{"POST", "/uploads", url.Values{"source": {"x"}}, 400, "a form with a source and a file"},
		{"POST", "/studies", url.Values{"name": {""}, "batch": {"1"}}, 422, "Name the study"},
		{"POST", "/studies", url.Values{"name": {"x"}}, 422, "at least one batch"},
		{"POST", "/studies/1/revisions", url.Values{"seen": {"7"}}, 400, "seen last"},
		{"POST", "/studies/1/revisions", url.Values{"seen": {"1"}, "batch": {"1"}, "amount": {"incurred"}, "level": {"2"}}, 422, "between 0 and 1"},
		{"POST", "/studies/1/revisions", url.Values{"seen": {"1"}, "batch": {"1"}, "amount": {"incurred"}, "level": {"0.95"}, "layer_limit": {"-5"}, "layer_attachment": {"0"}}, 422, "amount of zero or more"},
		{"POST", "/studies/1/revisions", url.Values{"seen": {"1"}, "batch": {"1"}, "amount": {"incurred"}, "level": {"0.95"}, "quantiles": {"101"}}, 422, "percent between 0 and 100"},
	} {
		answer, text := fetch(t, c.method, site.URL+c.address, c.form)
		if answer.StatusCode != c.status || !strings.Contains(text, c.says) {
			t.Errorf("%s %s: %d, want %d with %q\n%.300s", c.method, c.address, answer.StatusCode, c.status, c.says, text)
		}
	}
}

func TestSameFileAgainIsRecognised(t *testing.T) {
	site := newSite(t)
	loadBook(t, site)
	_, page := fetch(t, http.MethodGet, site.URL+"/batches", nil)
	if n := strings.Count(page, "Latest quarter"); n != 1 {
		t.Fatalf("%d batches of that name", n)
	}
	file := latestFile()
	if path := uploadContent(t, site, "another source", file.Name, file.Content); path != "/batches/1" {
		t.Errorf("the same file again leads to %s, want its batch", path)
	}
}

func TestTwoPeopleLoseNothing(t *testing.T) {
	site := newSite(t)
	loadBook(t, site)
	change := func(seen, level string) (int, string, string) {
		answer, text := fetch(t, http.MethodPost, site.URL+"/studies/1/revisions", url.Values{"seen": {seen}, "batch": {"1"}, "amount": {"incurred"}, "level": {level}})
		return answer.StatusCode, answer.Header.Get("Location"), text
	}
	if status, to, _ := change("1", "0.9"); status != http.StatusSeeOther || !strings.Contains(to, "/revisions/2") {
		t.Fatalf("first change: %d %s", status, to)
	}
	status, _, text := change("1", "0.8") // the second person saw revision 1 too
	if status != http.StatusUnprocessableEntity || !strings.Contains(text, "Revision 2 was recorded by somebody else") {
		t.Fatalf("second change: %d %.200s", status, text)
	}
	if status, to, _ := change("2", "0.8"); status != http.StatusSeeOther || !strings.Contains(to, "/revisions/3") {
		t.Errorf("repeated after seeing it: %d %s", status, to)
	}
	if status, to, _ := change("3", "0.8"); status != http.StatusSeeOther || !strings.Contains(to, "done=same") {
		t.Errorf("no change at all: %d %s", status, to)
	}
	for _, n := range []string{"1", "2", "3"} {
		if answer, _ := fetch(t, http.MethodGet, site.URL+"/studies/1/revisions/"+n, nil); answer.StatusCode != http.StatusOK {
			t.Errorf("revision %s: %d", n, answer.StatusCode)
		}
	}
}

// TestHostileTextIsText follows markup and formulas in headers, file name,
// source and cells through every page of the intake.
func TestHostileTextIsText(t *testing.T) {
	site := newSite(t)
	const evil = `<script>alert(1)</script>`
	content := "claim_id,paid," + evil + "\nA1,100.00," + evil + "\n=A2+1,bad,=1+1\nA3,300.00,x\nA4,520.00,x\n"
	columns := uploadContent(t, site, evil, evil+".csv", []byte(content))
	see := func(address string) {
		t.Helper()
		answer, page := fetch(t, http.MethodGet, site.URL+address, nil)
		if answer.StatusCode != http.StatusOK || strings.Contains(page, evil) {
			t.Errorf("%s: %d, markup unescaped: %v", address, answer.StatusCode, strings.Contains(page, evil))
		}
	}
	see(columns)
	form := formFields(t, site, columns, "next")
	form.Set("field-segment", evil)
	fetch(t, http.MethodPost, site.URL+columns, form)
	basis := strings.Replace(columns, "columns", "basis", 1)
	see(basis)
	fetch(t, http.MethodPost, site.URL+basis, url.Values{"amounts": {"ground_up"}, "currency": {"EUR"}, "valuation": {"2026-01-31"}, "do": {"next"}})
	see(strings.Replace(columns, "columns", "findings", 1))
	_, rejected := fetch(t, http.MethodGet, site.URL+strings.Replace(columns, "columns", "rejected.csv", 1), nil)
	if strings.Contains(rejected, ",=") || !strings.Contains(rejected, "'=A2+1") {
		t.Errorf("rejected rows run as formulas:\n%s", rejected)
	}
	fetch(t, http.MethodPost, site.URL+strings.Replace(columns, "columns", "accept", 1), url.Values{"name": {evil}})
	see("/batches/1")
	see("/batches/1/claims/A1")
	fetch(t, http.MethodPost, site.URL+"/studies", url.Values{"name": {evil}, "purpose": {evil}, "batch": {"1"}, "author": {evil}})
	see("/studies/1/revisions/1")
	see("/studies/1/revisions/1/report")
	see("/")
	_, csv := fetch(t, http.MethodGet, site.URL+"/studies/1/revisions/1/report.csv", nil)
	if strings.Contains(csv, "\n=") || strings.Contains(csv, ",=") {
		t.Error("the CSV report runs as formulas")
	}
}

func TestWrongFiles(t *testing.T) {
	site := newSite(t)
	for name, content := range map[string]string{
		"empty.csv": "", "old.xls": "\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1", "paper.pdf": "%PDF-1.7", "not.xlsx": "PK\x03\x04 and nothing else", "binary.csv": "a\x00\x01\x02",
	} {
		path := uploadContent(t, site, "source", name, []byte(content))
		_ = path
	}
	for i := 1; i <= 5; i++ {
		answer, page := fetch(t, http.MethodGet, site.URL+"/uploads/"+itoa(i)+"/columns", nil)
		if answer.StatusCode != http.StatusUnprocessableEntity || !strings.Contains(page, "accepted are") {
			t.Errorf("upload %d: %d\n%.400s", i, answer.StatusCode, page[bytes.Index([]byte(page), []byte("<main")):])
		}
	}
}

// TestSourceIsRemembered: the second extract of a source is read, and its
// basis stated, as the first was; only the valuation date is asked again.
func TestSourceIsRemembered(t *testing.T) {
	site := newSite(t)
	first := "Ref;Amount so far;Own share\nA1;1.200,50;100\nA2;3.400,00;250\n"
	columns := uploadContent(t, site, "northern office", "first.csv", []byte(first))
	form := formFields(t, site, columns, "next")
	form.Set("field-claim_id", "Ref")
	form.Set("field-paid", "Amount so far")
	form.Set("field-deductible", "Own share")
	// The guess knew of no amounts: with the column named their marks show.
	answer, page := fetch(t, http.MethodPost, site.URL+columns, form)
	if answer.StatusCode != http.StatusUnprocessableEntity || !strings.Contains(page, "other marks") {
		t.Fatalf("%d: amounts such as 1.200,50 would be read with a point before the decimals", answer.StatusCode)
	}
	form.Set("decimal", ",")
	form.Set("thousands", ".")
	fetch(t, http.MethodPost, site.URL+columns, form)
	basis := url.Values{"amounts": {"net_of_deductible"}, "deductible": {"franchise"}, "blank_deductible": {"none"}, "currency": {"SEK"}, "valuation": {"2026-03-31"}, "do": {"next"}}
	fetch(t, http.MethodPost, site.URL+strings.Replace(columns, "columns", "basis", 1), basis)
	fetch(t, http.MethodPost, site.URL+strings.Replace(columns, "columns", "accept", 1), url.Values{"name": {"First"}})

	second := "Ref;Amount so far;Own share\nA1;1.300,50;100\nA3;900,00;250\n"
	columns = uploadContent(t, site, "northern office", "second.csv", []byte(second))
	answer, page = fetch(t, http.MethodGet, site.URL+columns, nil)
	if answer.StatusCode != http.StatusOK || !strings.Contains(page, "Read as the last accepted extract of this source was") {
		t.Fatalf("%d: nothing is said of the remembered plan", answer.StatusCode)
	}
	form = formFields(t, site, columns, "next")
	if form.Get("field-paid") != "Amount so far" || form.Get("decimal") != "," {
		t.Errorf("the columns are forgotten: %v", form)
	}
	fetch(t, http.MethodPost, site.URL+columns, form)
	got := formFields(t, site, strings.Replace(columns, "columns", "basis", 1), "next")
	for name, want := range basis {
		if name == "valuation" {
			want = []string{""}
		}
		if got.Get(name) != want[0] {
			t.Errorf("%s is %q, want %q", name, got.Get(name), want[0])
		}
	}
}
