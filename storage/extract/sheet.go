package extract

import (
	"bytes"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// The bounds of a sheet (common practice of spreadsheets, no source).
const (
	mostSheetRows    = 1 << 20
	mostSheetColumns = 1 << 14
	mostSheetCells   = 1 << 28 // ours: a few bytes of a sheet can name a row's last column
)

// workbook yields the rows of one sheet. Numbers come with the decimal mark of
// the plan, dates as day numbers, formulas by their last value, and a formula
// without one as its text.
type workbook struct {
	in       io.ReadCloser
	scan     *xmlScan
	shared   *sharedStrings
	decimal  byte
	from1904 bool
	inRows   bool // behind <sheetData>
	ended    bool
	failed   error
	line     int // of the row last begun
	cells    [][]byte
	passed   int    // cells of all rows so far, gaps included
	texts    []byte // of the cells of the row
	spans    []span // of each cell in texts
	marks    repairs
}

// span is a cell's place in texts, or a text outside, such as a shared string.
type span struct {
	from, to int
	outside  []byte
}

func openWorkbook(file io.ReaderAt, size int64, f Format) (*workbook, error) {
	b, err := openBook(file, size)
	if err != nil {
		return nil, err
	}
	names, part := []string{}, ""
	for _, s := range b.sheets {
		names = append(names, s.name)
		if s.name == f.Sheet {
			part = s.part
		}
	}
	if part == "" {
		return nil, &FileError{Found: fmt.Sprintf("no sheet %q", f.Sheet), Accepted: "the sheets are " + strings.Join(names, ", ")}
	}
	shared, err := b.sharedStrings()
	if err != nil {
		return nil, noBook(err)
	}
	in, err := b.open(part, unpackedLimit)
	if err != nil {
		return nil, noBook(err)
	}
	return &workbook{in: in, scan: newXMLScan(in), shared: shared, decimal: f.Decimal[0], from1904: b.from1904}, nil
}

func (w *workbook) Close() error { return w.in.Close() }

func (w *workbook) repaired() repairs { return w.marks }

// broken is the error of a sheet that cannot be read on.
func (w *workbook) broken(why any) error {
	w.failed = &FileError{Line: w.line, Found: fmt.Sprintf("the sheet cannot be read behind this line (%v)", why), Accepted: "accepted are whole XLSX workbooks"}
	return w.failed
}

func (w *workbook) next() ([][]byte, int, error) {
	for !w.ended && w.failed == nil {
		token, err := w.scan.next()
		switch {
		case err != nil:
			return nil, w.line, w.broken(err)
		case token == xmlEnd:
			return nil, w.line, w.broken("its end is missing")
		case token == textToken:
		case token == startTag && string(w.scan.name) == "sheetData":
			w.inRows = true
			if w.scan.selfClose {
				return nil, w.line, w.end()
			}
		case token == endTag && string(w.scan.name) == "sheetData":
			return nil, w.line, w.end()
		case token == startTag && w.inRows && string(w.scan.name) == "row":
			if err := w.begin(); err != nil {
				return nil, w.line, err
			}
			if !w.scan.selfClose {
				if err := w.row(); err != nil {
					return nil, w.line, w.broken(err)
				}
			}
			return w.collect(), w.line, nil
		}
	}
	if w.failed != nil {
		return nil, w.line, w.failed
	}
	return nil, w.line, io.EOF
}

// end reads to the end of the part, whose checksum proves it whole.
func (w *workbook) end() error {
	w.ended = true
	if _, err := io.Copy(io.Discard, w.in); err != nil {
		return w.broken(err)
	}
	return io.EOF
}

// begin starts a row: its number, and the lines that were left out before it.
func (w *workbook) begin() error {
	line := w.line + 1
	if r := w.scan.attr("r"); r != nil {
		n, err := strconv.Atoi(string(r))
		if err != nil || n < line || n > mostSheetRows {
			return w.broken(fmt.Sprintf("a row with the number %.20q behind that of %d", r, w.line))
		}
		line = n
	}
	w.marks[blankLine] += line - w.line - 1
	w.line = line
	w.texts, w.spans = w.texts[:0], w.spans[:0]
	return nil
}

// row reads the cells of a row.
func (w *workbook) row() error {
	column := 0
	for {
		token, err := w.scan.next()
		switch {
		case err != nil:
			return err
		case token == xmlEnd:
			return errXMLCut
		case token == endTag && string(w.scan.name) == "row":
			return nil
		case token == startTag && string(w.scan.name) == "c":
			if r := w.scan.attr("r"); r != nil {
				n, ok := columnOf(r)
				if !ok {
					return fmt.Errorf("a cell at %.20q", r)
				}
				column = n
			}
			if column >= mostSheetColumns {
				return fmt.Errorf("more than %d columns", mostSheetColumns)
			}
			for len(w.spans) <= column {
				w.spans = append(w.spans, span{})
				w.passed++
			}
			if w.passed > mostSheetCells {
				return fmt.Errorf("more than %d cells", mostSheetCells)
			}
			kind := cellKind(w.scan.attr("t"))
			if !w.scan.selfClose {
				if err := w.cell(kind, &w.spans[column]); err != nil {
					return err
				}
			}
			column++
		}
	}
}

// columnOf reads the letters of a cell's address: A is 0, AB is 27.
func columnOf(address []byte) (int, bool) {
	n, letters := 0, 0
	for _, c := range address {
		if c >= 'a' && c <= 'z' {
			c -= 'a' - 'A'
		}
		if c < 'A' || c > 'Z' {
			break
		}
		n = n*26 + int(c-'A') + 1
		if letters++; letters > 3 {
			return 0, false
		}
	}
	return n - 1, letters > 0 && n <= mostSheetColumns
}

type cellForm uint8

const (
	number cellForm = iota
	sharedText
	inlineText
	plainValue // a formula's text, a truth value, an error, an ISO date
)

func cellKind(t []byte) cellForm {
	switch string(t) {
	case "", "n":
		return number
	case "s":
		return sharedText
	case "inlineStr":
		return inlineText
	}
	return plainValue
}

// cell reads one cell to its end.
func (w *workbook) cell(kind cellForm, at *span) error {
	start := len(w.texts)
	formula := w.texts[:0:0]
	inValue, inFormula, hasValue := false, false, false
	texts := textOf{}
	for {
		token, err := w.scan.next()
		if err != nil {
			return err
		}
		x := w.scan
		switch {
		case token == xmlEnd:
			return errXMLCut
		case token == endTag && string(x.name) == "c":
			if !hasValue && len(formula) > 0 {
				w.texts = append(append(w.texts, '='), formula...)
				kind = plainValue
			}
			return w.keep(kind, start, at)
		case token == textToken && inValue:
			w.texts = x.appendText(w.texts)
		case token == textToken && inFormula:
			formula = x.appendText(formula)
		case kind == inlineText && (token == textToken || string(x.name) != "v" && string(x.name) != "f"):
			w.texts = texts.take(x, token, w.texts)
			hasValue = hasValue || texts.inText
		case token != textToken && string(x.name) == "v" && !x.selfClose:
			inValue = token == startTag
			hasValue = true
		case token != textToken && string(x.name) == "f" && !x.selfClose:
			inFormula = token == startTag
		}
	}
}

// keep enters what was read of a cell.
func (w *workbook) keep(kind cellForm, start int, at *span) error {
	switch kind {
	case sharedText:
		if start == len(w.texts) {
			break
		}
		text, ok := w.shared.at(bytes.TrimSpace(w.texts[start:]))
		if !ok {
			return fmt.Errorf("a reference to the text %.20q, which there is none", w.texts[start:])
		}
		w.texts = w.texts[:start]
		*at = span{outside: text}
		return nil
	case number:
		if w.decimal != '.' {
			if i := bytes.IndexByte(w.texts[start:], '.'); i >= 0 {
				w.texts[start+i] = w.decimal
			}
		}
	default:
		w.texts = w.texts[:start+len(unescapeCells(w.texts[start:]))]
	}
	*at = span{from: start, to: len(w.texts)}
	if len(w.texts) > maxRow {
		return fmt.Errorf("a row of more than %d MiB", maxRow>>20)
	}
	return nil
}

func (w *workbook) collect() [][]byte {
	w.cells = w.cells[:0]
	for _, s := range w.spans {
		if s.outside != nil {
			w.cells = append(w.cells, s.outside)
		} else {
			w.cells = append(w.cells, w.texts[s.from:s.to:s.to])
		}
	}
	return w.cells
}
