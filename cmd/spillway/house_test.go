package main

import (
	"encoding/json"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// arrows says which rooms a package may import: itself and those named. The
// longest prefix that fits a package is its room.
var arrows = map[string][]string{
	"spillway/cmd":                      {"spillway/web", "spillway/storage", "spillway/severity"},
	"spillway/web":                      {"spillway/storage", "spillway/severity"},
	"spillway/web/view":                 {"spillway/web/chart", "spillway/web/assets", "spillway/storage/extract", "spillway/severity"},
	"spillway/web/chart":                {"spillway/severity"},
	"spillway/web/assets":               {},
	"spillway/web/report":               {"spillway/storage/extract", "spillway/severity"},
	"spillway/storage":                  {"spillway/storage/extract", "spillway/severity", "spillway/migrations"},
	"spillway/storage/extract":          {"spillway/severity"},
	"spillway/storage/extract/invented": {"spillway/severity/claims", "spillway/severity"},
	"spillway/migrations":               {},
	"spillway/severity":                 {"spillway/severity/special"},
	"spillway/severity/special":         {},
	"spillway/severity/claims":          {"spillway/severity"},
	"spillway/severity/layer":           {"spillway/severity", "spillway/severity/special"},
	"spillway/severity/evidence":        {"spillway/severity", "spillway/severity/special", "spillway/severity/layer"},
	"spillway/severity/study":           {"spillway/severity"},
}

// unclean are the packages that would let the engine read a clock, a file, a
// network or a database.
var unclean = []string{"os", "io/ioutil", "net", "net/http", "database/sql", "log", "log/slog", "time", "os/exec", "math/rand"}

type listed struct {
	ImportPath                         string
	Dir                                string
	Imports, TestImports, XTestImports []string
}

func list(t *testing.T) []listed {
	t.Helper()
	command := exec.Command("go", "list", "-json=ImportPath,Dir,Imports,TestImports,XTestImports", "./...")
	command.Dir = "../.."
	command.Stderr = os.Stderr
	out, err := command.Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	var packages []listed
	for decoder := json.NewDecoder(strings.NewReader(string(out))); ; {
		var p listed
		if err := decoder.Decode(&p); err == io.EOF {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		packages = append(packages, p)
	}
	if len(packages) < 8 {
		t.Fatalf("go list names %d packages: the house has more rooms than that", len(packages))
	}
	return packages
}

func room(path string) string {
	best := ""
	for name := range arrows {
		if (path == name || strings.HasPrefix(path, name+"/")) && len(name) > len(best) {
			best = name
		}
	}
	return best
}

// allowed tells whether a package may import another one of this module. A
// room named by its parent admits all its own sub-rooms.
func allowed(from, to string) bool {
	home := room(from)
	if room(to) == home && !strings.HasPrefix(from, to+"/") {
		return true
	}
	if home == "spillway/web" && strings.HasPrefix(to, "spillway/web/") {
		return true
	}
	if home == "spillway/severity/study" && strings.HasPrefix(to, "spillway/severity/") {
		return true
	}
	for _, target := range arrows[home] {
		outside := !strings.HasPrefix(home, "spillway/severity")
		if to == target || outside && strings.HasPrefix(to, target+"/") {
			return true
		}
	}
	return false
}

func TestArrowsPointOneWay(t *testing.T) {
	for _, p := range list(t) {
		if room(p.ImportPath) == "" {
			t.Errorf("%s stands in no room of the house", p.ImportPath)
		}
		for _, imported := range slices.Concat(p.Imports, p.TestImports, p.XTestImports) {
			if strings.HasPrefix(imported, "spillway/") && imported != p.ImportPath && !allowed(p.ImportPath, imported) {
				t.Errorf("%s imports %s: no arrow points that way", p.ImportPath, imported)
			}
		}
	}
}

func TestEngineIsPure(t *testing.T) {
	for _, p := range list(t) {
		if !strings.HasPrefix(p.ImportPath, "spillway/severity") {
			continue
		}
		for _, imported := range p.Imports {
			standard := !strings.Contains(strings.SplitN(imported, "/", 2)[0], ".")
			switch {
			case slices.Contains(unclean, imported):
				t.Errorf("%s imports %s: the engine reads no clock, file, network or database", p.ImportPath, imported)
			case !standard && !strings.HasPrefix(imported, "gonum.org/v1/gonum/"):
				t.Errorf("%s imports %s: the engine rests on the standard library and gonum", p.ImportPath, imported)
			}
		}
	}
}

func TestTopLevel(t *testing.T) {
	want := []string{"cmd", "web", "severity", "storage", "migrations", "testdata", "go.mod", "go.sum", "README.md", "DEVELOPERS.md", "Dockerfile"}
	command := exec.Command("git", "ls-files")
	command.Dir = "../.."
	out, err := command.Output()
	if err != nil {
		t.Fatalf("git ls-files: %v", err)
	}
	seen := map[string]bool{}
	for _, path := range strings.Fields(string(out)) {
		top := strings.SplitN(path, "/", 2)[0]
		seen[top] = true
		if !strings.HasPrefix(top, ".") && !slices.Contains(want, top) {
			t.Errorf("%s stands at the top level", path)
		}
	}
	for _, name := range want {
		if !seen[name] {
			t.Errorf("%s is missing at the top level", name)
		}
	}
}

func TestMigrationsAreNumberedOnce(t *testing.T) {
	files, err := filepath.Glob("../../migrations/*/*.sql")
	if err != nil || len(files) == 0 {
		t.Fatalf("no migrations found (%v)", err)
	}
	seen := map[string]string{}
	for _, file := range files {
		number := filepath.Dir(file) + strings.SplitN(filepath.Base(file), "_", 2)[0]
		if other, ok := seen[number]; ok {
			t.Errorf("%s and %s carry one number", file, other)
		}
		seen[number] = file
	}
}
