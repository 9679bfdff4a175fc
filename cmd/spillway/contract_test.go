package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// program is the built binary that the contract tests run.
var program string

func TestMain(m *testing.M) {
	folder, err := os.MkdirTemp("", "spillway-test-")
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	program = filepath.Join(folder, "spillway")
	build := exec.Command("go", "build", "-o", program, ".")
	build.Stderr = os.Stderr
	code := 1
	if err := build.Run(); err != nil {
		fmt.Fprintf(os.Stderr, "build: %v\n", err)
	} else {
		code = m.Run()
	}
	os.RemoveAll(folder)
	os.Exit(code)
}

// outcome is what one run of the program left behind.
type outcome struct {
	code        int
	out, errors string
}

// spillway runs the program with a text on its standard input.
func spillway(t *testing.T, input string, args ...string) outcome {
	t.Helper()
	command := exec.Command(program, args...)
	command.Stdin = strings.NewReader(input)
	var out, errs bytes.Buffer
	command.Stdout, command.Stderr = &out, &errs
	err := command.Run()
	var exit *exec.ExitError
	if err != nil && !errors.As(err, &exit) {
		t.Fatalf("spillway %q: %v", args, err)
	}
	return outcome{command.ProcessState.ExitCode(), out.String(), errs.String()}
}

// answer runs the program, wants exit status 0 and one JSON object on standard
// output, and returns it.
func answer(t *testing.T, input string, args ...string) object {
	t.Helper()
	o := spillway(t, input, args...)
	if o.code != 0 {
		t.Fatalf("spillway %q: exit status %d\n%s", args, o.code, o.errors)
	}
	decoder := json.NewDecoder(strings.NewReader(o.out))
	var result object
	if err := decoder.Decode(&result); err != nil {
		t.Fatalf("spillway %q: %v\n%s", args, err, o.out)
	}
	if decoder.More() {
		t.Fatalf("spillway %q: more than one value on standard output", args)
	}
	return result
}

// object is a decoded JSON object, asked by path.
type object map[string]any

// at follows keys and indices; a step that is not there fails the test.
func (o object) at(t *testing.T, path ...any) any {
	t.Helper()
	var value any = map[string]any(o)
	for i, step := range path {
		switch key := step.(type) {
		case string:
			inner, ok := value.(map[string]any)
			if !ok {
				t.Fatalf("%v is no object", path[:i])
			}
			if value, ok = inner[key]; !ok {
				t.Fatalf("%v is missing", path[:i+1])
			}
		case int:
			inner, ok := value.([]any)
			if !ok || key >= len(inner) {
				t.Fatalf("%v is no array of more than %d", path[:i], key)
			}
			value = inner[key]
		}
	}
	return value
}

// number is the finite number at a path.
func (o object) number(t *testing.T, path ...any) float64 {
	t.Helper()
	f, ok := o.at(t, path...).(float64)
	if !ok {
		t.Fatalf("%v is %v, want a number", path, o.at(t, path...))
	}
	return f
}

// near checks the number at a path to a relative tolerance.
func (o object) near(t *testing.T, want, tolerance float64, path ...any) {
	t.Helper()
	if got := o.number(t, path...); !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%v = %.17g, want %.17g, relative error %.2g above %.2g", path, got, want, math.Abs(got-want)/math.Abs(want), tolerance)
	}
}

// is checks the value at a path for equality.
func (o object) is(t *testing.T, want any, path ...any) {
	t.Helper()
	if n, ok := want.(int); ok {
		want = float64(n)
	}
	if got := o.at(t, path...); got != want {
		t.Errorf("%v = %v, want %v", path, got, want)
	}
}
