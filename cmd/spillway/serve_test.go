package main

import (
	"bufio"
	"bytes"
	"context"
	"io"
	"net/http"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// server is the program while it serves.
type server struct {
	command *exec.Cmd
	address string // http://host:port
	line    string // what it printed
	mu      sync.Mutex
	errors  bytes.Buffer
}

func (s *server) Write(p []byte) (int, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.errors.Write(p)
}

func (s *server) log() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.errors.String()
}

var printedAddress = regexp.MustCompile(`http://[0-9.:\[\]]+`)

// start runs a command that serves and waits for its one line.
func start(t *testing.T, args ...string) *server {
	t.Helper()
	s := &server{command: exec.Command(program, args...)}
	s.command.Stderr = s
	out, err := s.command.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := s.command.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.command.Process.Kill(); s.command.Wait() })
	lines := make(chan string, 1)
	go func() {
		line, _ := bufio.NewReader(out).ReadString('\n')
		lines <- line
		io.Copy(io.Discard, out)
	}()
	select {
	case s.line = <-lines:
	case <-time.After(90 * time.Second):
		t.Fatalf("spillway %q printed no address\n%s", args, s.log())
	}
	if s.address = printedAddress.FindString(s.line); s.address == "" {
		t.Fatalf("spillway %q printed %q, want an address\n%s", args, s.line, s.log())
	}
	return s
}

// stop interrupts the program and wants it to end in good order.
func (s *server) stop(t *testing.T) {
	t.Helper()
	if err := s.command.Process.Signal(syscall.SIGINT); err != nil {
		t.Fatal(err)
	}
	if err := s.command.Wait(); err != nil {
		t.Errorf("after an interrupt: %v, want exit status 0\n%s", err, s.log())
	}
}

func (s *server) get(t *testing.T, path string) (int, string) {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), 20*time.Second)
	defer cancel()
	request, err := http.NewRequestWithContext(ctx, http.MethodGet, s.address+path, nil)
	if err != nil {
		t.Fatal(err)
	}
	response, err := http.DefaultClient.Do(request)
	if err != nil {
		t.Fatalf("GET %s: %v\n%s", path, err, s.log())
	}
	defer response.Body.Close()
	body, err := io.ReadAll(response.Body)
	if err != nil {
		t.Fatal(err)
	}
	return response.StatusCode, string(body)
}

func TestServe(t *testing.T) {
	folder := t.TempDir()
	s := start(t, "serve", "--data", folder, "--addr", "127.0.0.1:0")
	if !strings.Contains(s.line, "127.0.0.1 only") {
		t.Errorf("printed %q, want that it serves on 127.0.0.1 only", s.line)
	}
	if code, body := s.get(t, "/healthz"); code != http.StatusOK {
		t.Errorf("/healthz: %d %s", code, body)
	}
	s.stop(t)
	again := start(t, "serve", "--database", filepath.Join(folder, databaseName), "--addr", "localhost:0")
	if code, _ := again.get(t, "/healthz"); code != http.StatusOK {
		t.Errorf("/healthz on the same database: %d", code)
	}
	again.stop(t)
}

func TestServeToTheNetworkWarns(t *testing.T) {
	s := start(t, "serve", "--data", t.TempDir(), "--addr", "0.0.0.0:0", "--expose-to-network")
	if code, _ := s.get(t, "/healthz"); code != http.StatusOK {
		t.Errorf("/healthz: %d", code)
	}
	s.stop(t)
	warnings := 0
	for _, line := range strings.Split(s.log(), "\n") {
		if strings.Contains(line, "level=WARN") && strings.Contains(line, "no accounts") {
			warnings++
		}
	}
	if warnings != 1 || strings.Contains(s.line, "only") {
		t.Errorf("printed %q and %d warnings, want one that there are no accounts\n%s", s.line, warnings, s.log())
	}
}

func TestServeRefusesAForeignFile(t *testing.T) {
	got := spillway(t, "", "serve", "--database", "main.go", "--addr", "127.0.0.1:0")
	if got.code != 1 || !strings.Contains(got.errors, "main.go") {
		t.Errorf("exit status %d, want 1\n%s", got.code, got.errors)
	}
}

// TestDemo runs the demonstration twice on one folder: the second time nothing
// is loaded again.
func TestDemo(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "demo")
	first := start(t, "demo", "--data", folder, "--addr", "127.0.0.1:0")
	if !strings.Contains(first.line, "served on 127.0.0.1 only") {
		t.Errorf("printed %q, want that it is served on 127.0.0.1 only", first.line)
	}
	for _, path := range []string{"/", "/batches", "/studies", "/studies/1", "/healthz"} {
		code, page := first.get(t, path)
		if code != http.StatusOK || strings.HasPrefix(path, "/studies") && !strings.Contains(page, demoStudy) {
			t.Errorf("%s: %d, want a page, those of studies with %q", path, code, demoStudy)
		}
	}
	first.stop(t)
	if log := first.log(); strings.Count(log, "rows read") != 4 || !strings.Contains(log, "2 revisions") {
		t.Errorf("loading said\n%s", log)
	}
	second := start(t, "demo", "--data", folder, "--addr", "127.0.0.1:0")
	second.stop(t)
	if log := second.log(); strings.Contains(log, "rows read") || strings.Contains(log, "revisions") {
		t.Errorf("the second time the book was loaded again:\n%s", log)
	}

	store, err := openStore(t.Context(), inFolder(folder))
	if err != nil {
		t.Fatal(err)
	}
	defer store.Close()
	batches, err := store.Batches(t.Context())
	if err != nil || len(batches) != 4 {
		t.Fatalf("%d batches, want 4 (%v)", len(batches), err)
	}
	later := 0
	for _, b := range batches {
		later += b.LaterValuations
	}
	if later < 10000 {
		t.Errorf("%d later valuations of claims: the quarters do not follow one another", later)
	}
	studies, err := store.Studies(t.Context())
	if err != nil || len(studies) != 1 || studies[0].Headline.Status != "converged" || studies[0].Latest != 2 {
		t.Fatalf("studies %+v, want one that has a curve (%v)", studies, err)
	}
	revision, err := store.Revision(t.Context(), studies[0].ID, 2)
	if err != nil {
		t.Fatal(err)
	}
	if r := revision.Results; r.Fit == nil || len(r.Layers) != 4 || len(r.Quantiles) != 7 || revision.ProgramVersion == "" {
		t.Errorf("the latest revision is not finished: %+v", revision.Headline)
	}
}

// TestDemoLeavesOtherClaimsAlone: a folder with other claims in it is refused.
func TestDemoLeavesOtherClaimsAlone(t *testing.T) {
	folder := t.TempDir()
	accept(t, folder, "somebody else", "claim_id,paid\nA,10\nB,20\n")
	got := spillway(t, "", "demo", "--data", folder, "--addr", "127.0.0.1:0")
	if got.code != 1 || !strings.Contains(got.errors, "other claims") {
		t.Errorf("exit status %d, want 1\n%s", got.code, got.errors)
	}
}

// accept brings a small extract into the database of a folder.
func accept(t *testing.T, folder, source, content string) {
	t.Helper()
	store, err := openStore(t.Context(), inFolder(folder))
	if err != nil {
		t.Fatal(err)
	}
	defer store.Close()
	upload, err := store.CreateUpload(t.Context(), "claims.csv", source, strings.NewReader(content), 1<<20)
	if err != nil {
		t.Fatal(err)
	}
	guess, err := extract.Sniff(strings.NewReader(content), int64(len(content)), "claims.csv")
	if err != nil {
		t.Fatal(err)
	}
	valuation, err := claims.ParseDate("2025-06-30")
	if err != nil {
		t.Fatal(err)
	}
	plan := extract.Plan{Format: guess.Format, Columns: guess.Columns, Basis: claims.Basis{Currency: "EUR", Valuation: valuation}}
	if err := store.SavePlan(t.Context(), upload.ID, plan); err != nil {
		t.Fatal(err)
	}
	if _, err := store.Check(t.Context(), upload.ID); err != nil {
		t.Fatal(err)
	}
	if _, err := store.Accept(t.Context(), upload.ID, "other", nil); err != nil {
		t.Fatal(err)
	}
}
