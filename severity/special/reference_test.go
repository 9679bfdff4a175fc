package special

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
)

// table is a reference table of testdata/special; see the README there.
type table struct {
	name string
	head []string
	rows [][]string
}

func readTable(t testing.TB, name string, atLeast int) table {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "testdata", "special", name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(all)-1 < atLeast {
		t.Fatalf("%s holds %d rows, expected at least %d", name, len(all)-1, atLeast)
	}
	return table{name, all[0], all[1:]}
}

func (tb table) has(column string) bool { return slices.Contains(tb.head, column) }

func (tb table) text(t testing.TB, row int, column string) string {
	t.Helper()
	i := slices.Index(tb.head, column)
	if i < 0 {
		t.Fatalf("%s has no column %s", tb.name, column)
	}
	return tb.rows[row][i]
}

func (tb table) number(t testing.TB, row int, column string) float64 {
	t.Helper()
	s := tb.text(t, row, column)
	x, err := strconv.ParseFloat(s, 64)
	if err != nil && !math.IsInf(x, 0) {
		t.Fatalf("%s, row %d, %s: %v", tb.name, row+2, column, err)
	}
	return x
}

// errors collects the worst relative error of each column, and complains of
// those above a tolerance.
type errors struct {
	worst map[string]float64
	where map[string]string
}

func newErrors() *errors {
	return &errors{map[string]float64{}, map[string]string{}}
}

// smallest: below it a float64 is subnormal, or a product of one, and has no
// relative precision; such values are compared with it as an absolute error.
const smallest = 1e-304

func (e *errors) compare(t testing.TB, column, where string, got, want, tolerance float64) {
	t.Helper()
	difference := math.Abs(got - want)
	relative := difference / math.Abs(want)
	switch {
	case got == want:
		relative = 0
	case math.Abs(want) < smallest:
		relative = 0
		if !(difference < smallest*1e-6) {
			relative = math.Inf(1)
		}
	}
	if !(relative <= tolerance) {
		t.Errorf("%s at %s: %.17g, reference %.17g: relative error %.2g, allowed %.2g",
			column, where, got, want, relative, tolerance)
	}
	if !(relative <= e.worst[column]) {
		e.worst[column], e.where[column] = relative, where
	}
}

func (e *errors) report(t testing.TB) {
	t.Helper()
	names := make([]string, 0, len(e.worst))
	for n := range e.worst {
		names = append(names, n)
	}
	slices.Sort(names)
	for _, n := range names {
		t.Logf("worst relative error of %-19s %.1e at %s", n, e.worst[n], e.where[n])
	}
}
