package extract

import (
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
	About    string   `json:"about"` // "date_order", "decimal", "columns", "sheet", "dates", "encoding"
	Question string   `json:"question"`
	Choices  []string `json:"choices"` // none where only a better file helps
}

const (
	sampleRows  = 12
	studiedRows = 2000
)

// Sniff guesses how a file is written and what its columns hold. It reads all
// of a text file for its encoding, and the first rows for the rest. The name
// is not believed: the bytes tell what the file is.
func Sniff(file io.ReaderAt, size int64, name string) (Guess, error) {
	return SniffAs(file, size, Format{}, nil)
}

// SniffAs is Sniff with what the user says of the file in place of the guess:
// encoding, delimiter, header line, sheet and single columns are taken as
// given where set, and marks and dates guessed from the columns so mapped.
func SniffAs(file io.ReaderAt, size int64, given Format, columns ColumnMap) (Guess, error) {
	k, err := sniffKind(file, size)
	if err != nil {
		return Guess{}, err
	}
	if given.Encoding != "" && k.format.Kind == Delimited {
		k.format.Encoding, k.mixed = given.Encoding, false
	}
	if given.Sheet != "" {
		k.format.Sheet = given.Sheet
	}
	k.format.Delimiter, k.format.HeaderLine = given.Delimiter, given.HeaderLine
	return sniffRows(file, size, k, given.Sheet != "", columns)
}

func sniffRows(file io.ReaderAt, size int64, k kind, sheetStated bool, columns ColumnMap) (Guess, error) {
	format := k.format
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
	g := Guess{Format: format, Sheets: k.sheets, Hidden: k.hidden, Header: rows[at]}
	data := rows[at+1:]
	g.Sample = data[:min(len(data), sampleRows)]
	g.Columns = guessColumns(g.Header)
	g.adopt(columns)
	g.guessMarks(data)
	g.guessDates(data)
	g.doubtColumns()
	if len(k.sheets) > 1 && !sheetStated {
		g.Doubts = append(g.Doubts, Doubt{About: "sheet",
			Question: fmt.Sprintf("The workbook has %d sheets, and one is read: %q. Which one holds the claims?", len(k.sheets), format.Sheet),
			Choices:  k.sheets})
	}
	if k.mixed {
		g.Doubts = append(g.Doubts, Doubt{About: "encoding",
			Question: fmt.Sprintf("The file has texts in UTF-8 and bytes that are none: two encodings in one file. Read as %s, texts of the other look wrong or end the reading at their line. Which one is it?", format.Encoding),
			Choices:  []string{string(UTF8), string(Windows1252)}})
	}
	return g, nil
}

// doubtColumns asks for what no plan can do without.
func (g *Guess) doubtColumns() {
	counts := map[string]int{}
	for _, h := range g.Header {
		counts[h]++
	}
	for _, f := range Fields {
		if name, ok := g.Columns[f]; ok && counts[name] > 1 {
			g.Doubts = append(g.Doubts, Doubt{About: "columns",
				Question: fmt.Sprintf("%d columns have the header %q, which may hold %s. A column that is read needs a header of its own: rename the others in the file.", counts[name], name, f)})
		}
	}
	for _, f := range []Field{Amount, Paid, Incurred} {
		if _, ok := g.Columns[f]; ok {
			return
		}
	}
	g.Doubts = append(g.Doubts, Doubt{About: "columns",
		Question: "No column looks like an amount. Which column holds paid, incurred or the amount of the claim?", Choices: g.Header})
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
	// An amount and its parts exclude each other: what was stated stays.
	parts := []Field{Paid, Outstanding, Incurred}
	if columns[Amount] != "" {
		for _, part := range parts {
			if columns[part] == "" {
				delete(g.Columns, part)
			}
		}
	} else if slices.ContainsFunc(parts, func(part Field) bool { return columns[part] != "" }) {
		delete(g.Columns, Amount)
	}
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
