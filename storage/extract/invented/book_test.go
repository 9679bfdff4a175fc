package invented

import (
	"bytes"
	"encoding/csv"
	"io"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
	"golang.org/x/text/encoding/charmap"
)

func TestSameSeedSameBytes(t *testing.T) {
	first, second, other := Book(7), Book(7), Book(8)
	for i := range first {
		if !bytes.Equal(first[i].Content, second[i].Content) {
			t.Errorf("%s: two books of one seed differ", first[i].Name)
		}
		if bytes.Equal(first[i].Content, other[i].Content) {
			t.Errorf("%s: books of two seeds are equal", first[i].Name)
		}
	}
}

// sheet reads a file of the book with general-purpose readers, knowing its
// dress: rows of cells, amounts with decimal points, header first.
func sheet(t *testing.T, f File) [][]string {
	t.Helper()
	if strings.HasSuffix(f.Name, ".xlsx") {
		book, err := excelize.OpenReader(bytes.NewReader(f.Content))
		if err != nil {
			t.Fatal(err)
		}
		defer book.Close()
		rows, err := book.GetRows("claims")
		if err != nil {
			t.Fatal(err)
		}
		for i := range rows {
			for len(rows[i]) < columns {
				rows[i] = append(rows[i], "")
			}
		}
		return rows
	}
	source := io.Reader(bytes.NewReader(bytes.TrimPrefix(f.Content, []byte("\ufeff"))))
	reader := csv.NewReader(source)
	if bytes.Contains(f.Content[:200], []byte(";")) {
		reader = csv.NewReader(charmap.Windows1252.NewDecoder().Reader(source))
		reader.Comma = ';'
	}
	rows, err := reader.ReadAll()
	if err != nil {
		t.Fatalf("%s: %v", f.Name, err)
	}
	if reader.Comma == ';' {
		for i := range rows[1:] {
			for _, column := range []int{columnPaid, columnOutstanding, columnDeductible, columnLimit} {
				rows[i+1][column] = strings.NewReplacer(".", "", ",", ".").Replace(rows[i+1][column])
			}
		}
	}
	return rows
}

// TestBook counts what the book must hold; the numbers are those of the task
// that the demonstration sets itself: at least three quarters, 5,000 to 20,000
// claims, several lines and segments, many deductibles and limits.
func TestBook(t *testing.T) {
	files := Book(1)
	if len(files) != 4 {
		t.Fatalf("%d quarters, want 4", len(files))
	}
	paid := map[string]string{}
	changed, reopened := 0, 0
	ids := map[string]bool{}
	for i, f := range files {
		if i > 0 && f.Valuation <= files[i-1].Valuation {
			t.Errorf("%s is valued on %v, not after %v", f.Name, f.Valuation, files[i-1].Valuation)
		}
		if f.Basis.Valuation != f.Valuation || f.Basis.Currency != "EUR" || f.Source == "" {
			t.Errorf("%s: basis %+v", f.Name, f.Basis)
		}
		rows := sheet(t, f)[1:]
		seen := map[int]map[string]bool{}
		atLimit, padded := 0, 0
		status := map[string]int{}
		for _, row := range rows {
			for _, column := range []int{columnLine, columnSegment, columnDeductible, columnLimit, columnCurrency} {
				if seen[column] == nil {
					seen[column] = map[string]bool{}
				}
				if cell := strings.TrimSpace(row[column]); cell != "" {
					seen[column][cell] = true
				}
			}
			if row[columnID] != strings.TrimSpace(row[columnID]) {
				padded++
			}
			if row[columnStatus] == "closed" && row[columnPaid] == row[columnLimit] {
				atLimit++
			}
			status[row[columnStatus]]++
			id := strings.TrimSpace(row[columnID])
			if old, ok := paid[id]; ok && old != row[columnPaid] {
				changed++
			}
			paid[id] = row[columnPaid]
			ids[id] = true
		}
		reopened += status["reopened"]
		for column, want := range map[int]int{columnLine: 4, columnSegment: 13, columnDeductible: 11, columnLimit: 8, columnCurrency: 2} {
			if len(seen[column]) != want {
				t.Errorf("%s: %d distinct values in column %d, want %d", f.Name, len(seen[column]), column+1, want)
			}
		}
		if len(rows) < 5000 || len(rows) > 20000 || atLimit < 50 || padded < 6 {
			t.Errorf("%s: %d rows, %d closed at their limit, %d with trailing spaces", f.Name, len(rows), atLimit, padded)
		}
		for _, word := range []string{"open", "closed", "reopened", "closed without payment"} {
			if status[word] == 0 {
				t.Errorf("%s: no claim is %s", f.Name, word)
			}
		}
		if last := rows[len(rows)-1]; last[columnID] != "Total" {
			t.Errorf("%s ends with %q, want a totals row", f.Name, last)
		} else if sum, err := strconv.ParseFloat(last[columnPaid], 64); err != nil || sum < 1e7 {
			t.Errorf("%s: total paid %q", f.Name, last[columnPaid])
		}
	}
	if len(ids) < 5000 || len(ids) > 20000 {
		t.Errorf("%d claims in the book, want 5,000 to 20,000", len(ids))
	}
	if changed < 1000 || reopened < 30 {
		t.Errorf("%d claims develop between quarters and %d are found reopened: too few", changed, reopened)
	}
}
