package web

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	. "github.com/chromedp/chromedp"

	"spillway/storage/extract/invented"
)

// browse starts Chromium on a blank page. Where none is installed the test is
// passed over, except under CI.
func browse(t *testing.T) context.Context {
	t.Helper()
	path, err := exec.LookPath("chromium")
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatal("no Chromium: .ci/run installs it")
		}
		t.Skip("no Chromium on this machine")
	}
	allocator, stop := NewExecAllocator(context.Background(),
		ExecPath(path), Headless, NoSandbox, DisableGPU, NoFirstRun, UserDataDir(t.TempDir()),
		Flag("disable-quic", true), Flag("disable-background-networking", true), Flag("disable-component-update", true),
		Flag("disable-sync", true), Flag("disable-dev-shm-usage", true), Flag("hide-scrollbars", true))
	t.Cleanup(stop)
	ctx, stop := NewContext(allocator)
	t.Cleanup(stop)
	if err := Do(ctx); err != nil { // the first one has no time limit: it starts the browser
		t.Fatal(err)
	}
	ctx, stop = context.WithTimeout(ctx, 4*time.Minute)
	t.Cleanup(stop)
	return ctx
}

func do(t *testing.T, ctx context.Context, steps ...Action[Void]) {
	t.Helper()
	for i, step := range steps {
		if err := Do(ctx, step); err != nil {
			text, _ := Run(ctx, Evaluate[string]("location.href + '\\n' + document.body.innerText.slice(0, 1500)"))
			t.Fatalf("step %d: %v\nat %s", i+1, err, text)
		}
	}
}

func ask(t *testing.T, ctx context.Context, expression string) string {
	t.Helper()
	text, err := Run(ctx, Evaluate[string](expression))
	if err != nil {
		t.Fatalf("%s: %v", expression, err)
	}
	return text
}

// until waits for a condition in the page.
func until(condition string) Action[Void] {
	return Func(func(ctx context.Context, _ *Target) error {
		for range 400 {
			if ok, err := Run(ctx, Evaluate[bool](condition)); err == nil && ok {
				return nil
			}
			time.Sleep(50 * time.Millisecond)
		}
		return fmt.Errorf("waited for %s", condition)
	})
}

// axe runs axe-core over the page in both colour schemes; any violation fails
// the test.
func axe(t *testing.T, ctx context.Context, where string) {
	t.Helper()
	source, err := os.ReadFile("../testdata/axe/axe.min.js")
	if err != nil {
		t.Fatal(err)
	}
	for _, scheme := range []string{"light", "dark"} {
		do(t, ctx, emulateScheme(scheme))
		// Evaluated by the debugger, so that the page's content policy does not bar it.
		if _, err := Run(ctx, Evaluate[any](string(source)+";0")); err != nil {
			t.Fatalf("axe: %v", err)
		}
		result, err := Run(ctx, Evaluate[string](`axe.run(document, {resultTypes: ["violations"]}).then(r => JSON.stringify(
			r.violations.map(v => ({id: v.id, impact: v.impact, nodes: v.nodes.map(n => n.target.join(" ") + ": " + n.failureSummary).slice(0, 3)}))))`, EvalAwaitPromise))
		if err != nil {
			t.Fatalf("axe on %s: %v", where, err)
		}
		var violations []struct {
			ID, Impact string
			Nodes      []string
		}
		if err := json.Unmarshal([]byte(result), &violations); err != nil {
			t.Fatal(err)
		}
		for _, v := range violations {
			t.Errorf("%s, %s: %s (%s)\n%s", where, scheme, v.ID, v.Impact, strings.Join(v.Nodes, "\n"))
		}
	}
}

// TestMainJobInTheBrowser uploads a file, maps, accepts, fits, edits a layer,
// reads a figure and takes a report away.
func TestMainJobInTheBrowser(t *testing.T) {
	ctx := browse(t)
	site := newSite(t)
	file := invented.Book(3)[0]
	path := filepath.Join(t.TempDir(), file.Name)
	if err := os.WriteFile(path, file.Content, 0o600); err != nil {
		t.Fatal(err)
	}
	visit := func(address string) Action[Void] { return Navigate(site.URL + address) }

	do(t, ctx, visit("/"))
	axe(t, ctx, "empty home")
	do(t, ctx, Click("main .button"), WaitVisible("#source"))
	axe(t, ctx, "upload")
	do(t, ctx,
		SendKeys("#source", "harbour and locks office"),
		SetUploadFiles("#file", []string{path}),
		Click("main button[type=submit]"),
		WaitVisible("#field-paid"))
	axe(t, ctx, "columns")
	if column := ask(t, ctx, `document.querySelector("#field-paid").value`); column != "paid" {
		t.Errorf("paid is guessed to be in column %q", column)
	}
	do(t, ctx, Click(`button[value=next]`), WaitVisible("#currency"))
	axe(t, ctx, "basis")
	do(t, ctx,
		evaluate(`document.querySelector("#amounts").value = "net_of_deductible"`),
		SendKeys("#currency", "EUR"),
		evaluate(`document.querySelector("#valuation").value = "2024-09-30"`),
		Click(`button[value=next]`), WaitVisible("#name"))
	axe(t, ctx, "findings")
	do(t, ctx, evaluate(`document.querySelector("details.finding summary").click()`))
	axe(t, ctx, "findings, opened")
	do(t, ctx, Click(`form[action$=accept] button`), WaitVisible("#claims-head"))
	axe(t, ctx, "batch")
	do(t, ctx, Click("tbody th a"), until(`document.querySelector("h1").innerText.startsWith("Claim ")`))
	axe(t, ctx, "claim")
	do(t, ctx, visit("/studies/new"), WaitVisible("#purpose"))
	axe(t, ctx, "new study")
	do(t, ctx, SendKeys("#name", "Layers of the renewal"), Click("main form button"), WaitVisible("#curve-head"))
	axe(t, ctx, "study")

	// A moved field answers in place and records a revision.
	before := ask(t, ctx, `document.querySelector("table.layers tbody tr td.main").innerText`)
	do(t, ctx,
		evaluate(`document.querySelector("#limit-0").select()`),
		SendKeys("#limit-0", "1234"),
		evaluate(`document.activeElement.blur()`),
		until(`location.pathname.endsWith("/revisions/2") && document.querySelector("#revision-bar").innerText.includes("Revision 2 of 2")`))
	after := ask(t, ctx, `document.querySelector("table.layers tbody tr td.main").innerText`)
	if before == after || after == "" {
		t.Errorf("the expected loss stays at %q when the layer moves", after)
	}
	if seen := ask(t, ctx, `document.querySelector("#seen").value`); seen != "2" {
		t.Errorf("the form has seen revision %q, want 2", seen)
	}
	if status := ask(t, ctx, `document.querySelector("#notice").innerText`); !strings.Contains(status, "recorded") {
		t.Errorf("status says %q", status)
	}
	// Nonsense is refused with a message, and recorded nowhere.
	do(t, ctx,
		evaluate(`document.querySelector("#limit-0").value = "many"; document.querySelector("#limit-0").dispatchEvent(new Event("change", {bubbles: true}))`),
		WaitVisible(".problem"))
	if text := ask(t, ctx, `document.querySelector(".problem").innerText`); !strings.Contains(text, "many") {
		t.Errorf("problem says %q", text)
	}
	axe(t, ctx, "study with a problem")
	do(t, ctx, NavigateBack(), until(`location.pathname.endsWith("/revisions/1") && document.querySelector("#revision-bar").innerText.includes("Revision 1 of 2")`))
	axe(t, ctx, "older revision")

	do(t, ctx, visit("/studies/1/revisions/2/report"), WaitVisible(".report"))
	axe(t, ctx, "report")
	for _, address := range []string{"/", "/batches", "/studies", "/glossary", "/no-such-page"} {
		do(t, ctx, visit(address))
		axe(t, ctx, address)
	}
	// The report is taken away by the links of the study page.
	do(t, ctx, visit("/studies/1/revisions/2"), WaitVisible("#revision-bar"))
	for form, mark := range map[string]string{"XLSX": "PK\u0003\u0004", "CSV": "section,item,field,value,unit", "JSON": `"schema": "spillway-report/1"`} {
		head, err := Run(ctx, Evaluate[string](`fetch([...document.querySelectorAll(".exports a")].find(a => a.innerText === "`+form+`").href)
			.then(r => r.ok ? r.text() : "status " + r.status).then(text => text.slice(0, 200))`, EvalAwaitPromise))
		if err != nil || !strings.Contains(head, mark) {
			t.Errorf("%s begins with %q, %v", form, head, err)
		}
	}
}

func emulateScheme(scheme string) Action[Void] {
	return Func(func(ctx context.Context, _ *Target) error {
		_, err := Call(ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
			Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}}})
		return err
	})
}

// evaluate runs an expression for its effect.
func evaluate(expression string) Action[Void] {
	return Func(func(ctx context.Context, _ *Target) error {
		_, err := Run(ctx, Evaluate[any](expression+";0"))
		return err
	})
}
