package extract

import (
	"io"
)

// source yields the rows of a file. Cells are valid until the next call.
type source interface {
	// next returns the cells and the line of the file on which the row begins;
	// io.EOF after the last row.
	next() (cells [][]byte, line int, err error)
	Close() error
}

// open starts reading at line 1.
func open(file io.ReaderAt, size int64, f Format) (source, error) {
	if err := f.Validate(); err != nil {
		return nil, err
	}
	if f.Kind == Workbook {
		return openWorkbook(file, size, f.Sheet)
	}
	return newSplitter(decode(io.NewSectionReader(file, 0, size), f.Encoding), f.Delimiter[0]), nil
}
