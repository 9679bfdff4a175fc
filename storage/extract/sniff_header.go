package extract

import (
	"errors"
	"io"
	"strings"
)

// delimiters in the order in which they are preferred at a tie.
var delimiters = []string{",", ";", "\t", "|"}

// guessDelimiter takes the delimiter under which a header line is found whose
// columns hold the most fields, and which cuts most rows into the same number
// of cells. A first line "sep=;", which some spreadsheets write, decides.
func guessDelimiter(file io.ReaderAt, size int64, f Format) (string, error) {
	size = min(size, 1<<18)
	best, bestScore := ",", 0.0
	for _, d := range delimiters {
		f.Delimiter, f.HeaderLine = d, 1
		rows, _, err := firstRows(io.NewSectionReader(file, 0, size), size, f)
		var broken *FileError // the piece may end within quotes
		if err != nil && !errors.As(err, &broken) {
			return "", err
		}
		if len(rows) == 0 {
			continue
		}
		if mark, ok := strings.CutPrefix(strings.Join(rows[0], d), "sep="); ok && mark == d {
			return d, nil
		}
		counts := map[int]int{}
		for _, r := range rows {
			counts[len(r)]++
		}
		score := 0.0
		for cells, n := range counts {
			if cells > 1 {
				score = max(score, float64(n)/float64(len(rows))*(1+float64(min(cells, 50))/100))
			}
		}
		if at := headerAt(rows); at >= 0 {
			score += float64(min(len(guessColumns(rows[at])), 4))
		}
		if score > bestScore {
			best, bestScore = d, score
		}
	}
	return best, nil
}

// headerRows is how far down a header line is looked for.
const headerRows = 50

// headerAt is the row whose texts name the most fields; where none does, the
// first that is as wide as most rows and holds texts only; else -1.
func headerAt(rows [][]string) int {
	width := usualWidth(rows)
	first, best, most := -1, -1, 0
	for i, r := range rows[:min(len(rows), headerRows)] {
		texts, filled := 0, 0
		for _, cell := range r {
			if cell != "" {
				filled++
				if !startsLikeNumber(cell) {
					texts++
				}
			}
		}
		if texts == 0 || 2*texts < filled {
			continue
		}
		if named := len(guessColumns(r)); named > most && (named > 1 || width == 1 || texts == filled) {
			best, most = i, named
		}
		if first < 0 && texts == filled && 2*filled >= width && 2*len(r) >= width {
			first = i
		}
	}
	// A single field may be named by chance, in a row of data or a title.
	if best >= 0 && (most > 1 || first < 0 || best == first || 2*len(rows[best]) >= width) {
		return best
	}
	return first
}

// usualWidth is the number of cells that most rows have.
func usualWidth(rows [][]string) int {
	counts := map[int]int{}
	width := 0
	for _, r := range rows {
		counts[len(r)]++
		if counts[len(r)] > counts[width] || counts[len(r)] == counts[width] && len(r) > width {
			width = len(r)
		}
	}
	return width
}

func startsLikeNumber(cell string) bool {
	digits := strings.TrimLeft(cell, "-+(.,−")
	return digits != "" && digits[0] >= '0' && digits[0] <= '9'
}

// firstRows reads up to studiedRows rows from line 1, trimmed. With an error
// come the rows before it.
func firstRows(file io.ReaderAt, size int64, f Format) (rows [][]string, lines []int, err error) {
	in, err := open(file, size, f)
	if err != nil {
		return nil, nil, err
	}
	defer in.Close()
	for bytesRead := 0; len(rows) < studiedRows && bytesRead < 8<<20; {
		cells, line, err := in.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return rows, lines, err
		}
		row := make([]string, len(cells))
		for i, c := range cells {
			row[i] = string(trim(c))
			bytesRead += len(c)
		}
		rows = append(rows, row)
		lines = append(lines, line)
	}
	return rows, lines, nil
}
