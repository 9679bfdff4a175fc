package extract

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"slices"
)

// Guess is what a file looks like. Doubts are what cannot be told from it.
type Guess struct {
	Format  Format     `json:"format"`
	Columns ColumnMap  `json:"columns"`
	Header  []string   `json:"header"`
	Sample  [][]string `json:"sample"` // the first data rows
	Sheets  []string   `json:"sheets,omitempty"`
	Hidden  int        `json:"hidden_sheets,omitempty"`
	Doubts  []Doubt    `json:"doubts"`
}

// Doubt is a question that the file does not answer.
type Doubt struct {
	About    string   `json:"about"` // "date_order", "decimal", "columns"
	Question string   `json:"question"`
	Choices  []string `json:"choices"`
}

const (
	sampleRows  = 12
	studiedRows = 2000
)

// Sniff guesses how a file is written and what its columns hold. It reads all
// of a text file for its encoding, and the first rows for the rest.
func Sniff(file io.ReaderAt, size int64, name string) (Guess, error) {
	format, sheets, hidden, err := sniffKind(file, size)
	if err != nil {
		return Guess{}, err
	}
	return sniffRows(file, size, format, sheets, hidden, nil)
}

// SniffAs is Sniff with what the user says of the file in place of the guess:
// encoding, delimiter, header line, sheet and single columns are taken as
// given where set, and marks and dates guessed from the columns so mapped.
func SniffAs(file io.ReaderAt, size int64, given Format, columns ColumnMap) (Guess, error) {
	format, sheets, hidden, err := sniffKind(file, size)
	if err != nil {
		return Guess{}, err
	}
	if given.Encoding != "" && format.Kind == Delimited {
		format.Encoding = given.Encoding
	}
	if given.Sheet != "" {
		format.Sheet = given.Sheet
	}
	format.Delimiter, format.HeaderLine = given.Delimiter, given.HeaderLine
	return sniffRows(file, size, format, sheets, hidden, columns)
}

func sniffKind(file io.ReaderAt, size int64) (f Format, sheets []string, hidden int, err error) {
	const accepted = "accepted are delimited text (CSV) and XLSX workbooks"
	if size == 0 {
		return f, nil, 0, &FileError{Found: "nothing: it is empty", Accepted: accepted}
	}
	head := make([]byte, min(size, 8))
	if _, err := file.ReadAt(head, 0); err != nil && !errors.Is(err, io.EOF) {
		return f, nil, 0, err
	}
	for _, known := range []struct{ mark, what, advice string }{
		{"\xD0\xCF\x11\xE0", "an old XLS workbook or another OLE file", "save it as XLSX or CSV; " + accepted},
		{"%PDF", "a PDF document", accepted},
		{"\x1F\x8B", "a gzip archive", "unpack it first; " + accepted},
		{"{\\rtf", "a word processor's document", accepted},
	} {
		if bytes.HasPrefix(head, []byte(known.mark)) {
			return f, nil, 0, &FileError{Found: known.what, Accepted: known.advice}
		}
	}
	if bytes.HasPrefix(head, []byte("PK\x03\x04")) {
		book, err := openFile(file, size)
		if err != nil {
			return f, nil, 0, err
		}
		defer book.Close()
		sheets, hidden = visibleSheets(book)
		if len(sheets) == 0 {
			return f, nil, 0, &FileError{Found: "a workbook without a visible sheet", Accepted: accepted}
		}
		return Format{Kind: Workbook, Sheet: sheets[0]}, sheets, hidden, nil
	}
	encoding, err := guessEncoding(file, size)
	return Format{Kind: Delimited, Encoding: encoding}, nil, 0, err
}

func sniffRows(file io.ReaderAt, size int64, format Format, sheets []string, hidden int, columns ColumnMap) (Guess, error) {
	format.Decimal, format.Thousands = ".", ""
	if format.Kind == Delimited && format.Delimiter == "" {
		d, err := guessDelimiter(file, size, format)
		if err != nil {
			return Guess{}, err
		}
		format.Delimiter = d
	}
	asked := format.HeaderLine
	format.HeaderLine = max(asked, 1)
	rows, lines, err := firstRows(file, size, format)
	if err != nil {
		return Guess{}, err
	}
	at := 0
	if asked == 0 {
		at = headerAt(rows)
	} else {
		at = slices.IndexFunc(lines, func(line int) bool { return line >= asked })
	}
	if at < 0 || at >= len(rows) {
		return Guess{}, &FileError{Found: "no header line", Accepted: "a line with a text over each column, and data rows below it"}
	}
	format.HeaderLine = lines[at]
	g := Guess{Format: format, Sheets: sheets, Hidden: hidden, Header: rows[at]}
	data := rows[at+1:]
	g.Sample = data[:min(len(data), sampleRows)]
	g.Columns = guessColumns(g.Header)
	g.adopt(columns)
	g.guessMarks(data)
	g.guessDates(data)
	if err := (Plan{Format: format, Columns: g.Columns}).missing(g.Header); err != nil {
		g.Doubts = append(g.Doubts, Doubt{About: "columns", Question: "No column looks like an amount. Which column holds paid, incurred or the amount of the claim?", Choices: g.Header})
	}
	return g, nil
}

// adopt puts columns that were stated above those guessed; a header that the
// file does not have is left to the reader to refuse.
func (g *Guess) adopt(columns ColumnMap) {
	for field, name := range columns {
		for guessed, other := range g.Columns {
			if other == name && guessed != field {
				delete(g.Columns, guessed)
			}
		}
		if slices.Contains(g.Header, name) {
			g.Columns[field] = name
		}
	}
}

// missing tells whether no amount column is mapped.
func (p Plan) missing(header []string) error {
	_, err := p.resolve(header)
	return err
}

// firstRows reads up to studiedRows rows from line 1, trimmed.
func firstRows(file io.ReaderAt, size int64, f Format) (rows [][]string, lines []int, err error) {
	in, err := open(file, size, f)
	if err != nil {
		return nil, nil, err
	}
	defer in.Close()
	for len(rows) < studiedRows {
		cells, line, err := in.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, nil, err
		}
		row := make([]string, len(cells))
		for i, c := range cells {
			row[i] = string(trim(c))
		}
		rows = append(rows, row)
		lines = append(lines, line)
	}
	return rows, lines, nil
}

// guessDelimiter takes the delimiter that cuts most rows into the same number
// of cells, the larger number at a tie.
func guessDelimiter(file io.ReaderAt, size int64, f Format) (string, error) {
	best, bestScore := ",", 0.0
	for _, d := range []string{",", ";", "\t", "|"} {
		f.Delimiter, f.HeaderLine = d, 1
		rows, _, err := firstRows(io.NewSectionReader(file, 0, min(size, 1<<18)), min(size, 1<<18), f)
		var broken *FileError
		if err != nil && !errors.As(err, &broken) {
			return "", err
		}
		counts := map[int]int{}
		for _, r := range rows {
			counts[len(r)]++
		}
		for cells, n := range counts {
			if score := float64(n) / float64(len(rows)) * (1 + float64(min(cells, 50))/100); cells > 1 && score > bestScore {
				best, bestScore = d, score
			}
		}
	}
	return best, nil
}

// headerAt is the first row that is as wide as most rows and holds texts only.
func headerAt(rows [][]string) int {
	counts := map[int]int{}
	width := 0
	for _, r := range rows {
		counts[len(r)]++
		if counts[len(r)] > counts[width] || counts[len(r)] == counts[width] && len(r) > width {
			width = len(r)
		}
	}
	for i, r := range rows[:min(len(rows), 50)] {
		if len(r) < (width+1)/2 {
			continue
		}
		texts, filled := 0, 0
		for _, cell := range r {
			if cell == "" {
				continue
			}
			filled++
			if !startsLikeNumber(cell) {
				texts++
			}
		}
		if filled > 0 && texts == filled && filled >= min(len(r), (width+1)/2) {
			return i
		}
	}
	return -1
}

func startsLikeNumber(cell string) bool {
	c := cell[0]
	return c >= '0' && c <= '9' || (c == '-' || c == '+' || c == '(' || c == '.' || c == ',') && len(cell) > 1 && (cell[1] >= '0' && cell[1] <= '9')
}

// columnOf lists the non-empty cells of a mapped column.
func (g *Guess) columnOf(f Field, data [][]string) []string {
	name, ok := g.Columns[f]
	at := slices.Index(g.Header, name)
	if !ok || at < 0 {
		return nil
	}
	var cells []string
	for _, r := range data {
		if at < len(r) && r[at] != "" {
			cells = append(cells, r[at])
		}
	}
	return cells
}

func (g *Guess) guessDates(data [][]string) {
	if g.Format.Kind == Workbook {
		// Dates of workbooks are day numbers; texts among them are looked at too.
		data = data[:min(len(data), studiedRows)]
	}
	first, second, either := 0, 0, ""
	for _, f := range Fields {
		if !f.isDate() {
			continue
		}
		for _, cell := range g.columnOf(f, data) {
			p, ok := splitDate([]byte(cell))
			if !ok || p.yearFirst {
				continue
			}
			switch {
			case p.a > 12 && p.b <= 12:
				first++
			case p.b > 12 && p.a <= 12:
				second++
			default:
				either = cell
			}
		}
	}
	switch {
	case first > second:
		g.Format.DateOrder = DayFirst
	case second > first:
		g.Format.DateOrder = MonthFirst
	case either != "" || first > 0:
		g.Doubts = append(g.Doubts, Doubt{About: "date_order",
			Question: fmt.Sprintf("The order of day and month cannot be told from this file (%s, and no day above 12). Which comes first?", either),
			Choices:  []string{string(DayFirst), string(MonthFirst)}})
	}
}
