package extract

import (
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/xuri/excelize/v2"
)

// unpackedLimit bounds what a workbook may unpack to, against archives made
// to fill the memory or the disk.
const unpackedLimit = 2 << 30

// unpackedInMemory is how much of one part is unpacked in memory before it
// goes to a temporary file.
const unpackedInMemory = 16 << 20

type workbook struct {
	file  *excelize.File
	rows  *excelize.Rows
	line  int
	cells [][]byte

	from1904 bool // day numbers count from 1904-01-01
}

func (w *workbook) repaired() repairs { return repairs{} }

func openFile(file io.ReaderAt, size int64) (*excelize.File, error) {
	f, err := excelize.OpenReader(io.NewSectionReader(file, 0, size), excelize.Options{
		RawCellValue: true, UnzipSizeLimit: unpackedLimit, UnzipXMLSizeLimit: unpackedInMemory,
	})
	if err != nil {
		return nil, &FileError{Found: fmt.Sprintf("an archive that is no readable workbook (%v)", err),
			Accepted: "accepted are XLSX workbooks without a password, up to 2 GiB unpacked"}
	}
	return f, nil
}

// visibleSheets lists the sheets that are not hidden, and how many are.
func visibleSheets(f *excelize.File) (names []string, hidden int) {
	for _, name := range f.GetSheetList() {
		if visible, err := f.GetSheetVisible(name); err == nil && visible {
			names = append(names, name)
		} else {
			hidden++
		}
	}
	return names, hidden
}

func openWorkbook(file io.ReaderAt, size int64, sheet string) (*workbook, error) {
	f, err := openFile(file, size)
	if err != nil {
		return nil, err
	}
	rows, err := f.Rows(sheet)
	if err != nil {
		f.Close()
		var missing excelize.ErrSheetNotExist
		if errors.As(err, &missing) {
			return nil, &FileError{Found: fmt.Sprintf("no sheet %q", sheet), Accepted: "the sheets are " + strings.Join(f.GetSheetList(), ", ")}
		}
		return nil, &FileError{Found: fmt.Sprintf("sheet %q cannot be read (%v)", sheet, err), Accepted: "accepted are XLSX workbooks"}
	}
	properties, err := f.GetWorkbookProps()
	if err != nil {
		return nil, errors.Join(err, rows.Close(), f.Close())
	}
	return &workbook{file: f, rows: rows, from1904: properties.Date1904 != nil && *properties.Date1904}, nil
}

func (w *workbook) next() ([][]byte, int, error) {
	if !w.rows.Next() {
		if err := w.rows.Error(); err != nil {
			return nil, w.line, &FileError{Line: w.line + 1, Found: fmt.Sprintf("the sheet breaks off (%v)", err), Accepted: "accepted are whole XLSX workbooks"}
		}
		return nil, w.line, io.EOF
	}
	w.line++
	values, err := w.rows.Columns()
	if err != nil {
		return nil, w.line, &FileError{Line: w.line, Found: fmt.Sprintf("a row that cannot be read (%v)", err), Accepted: "accepted are XLSX workbooks"}
	}
	w.cells = w.cells[:0]
	for _, v := range values {
		w.cells = append(w.cells, []byte(v))
	}
	return w.cells, w.line, nil
}

func (w *workbook) Close() error {
	return errors.Join(w.rows.Close(), w.file.Close())
}
