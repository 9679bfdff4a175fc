package extract

import (
	"io"
)

// source yields the rows of a file. Cells are valid until the next call.
type source interface {
	// next returns the cells and the line of the file on which the row begins;
	// io.EOF after the last row.
	next() (cells [][]byte, line int, err error)
	// repaired counts what the source itself has put right so far.
	repaired() repairs
	Close() error
}

// open starts reading at line 1.
func open(file io.ReaderAt, size int64, f Format) (source, error) {
	if err := f.Validate(); err != nil {
		return nil, err
	}
	if f.Kind == Workbook {
		return openWorkbook(file, size, f)
	}
	return newSplitter(decode(io.NewSectionReader(file, 0, size), f.Encoding), f.Delimiter[0]), nil
}

// looked is a source whose first rows have been looked at and are yielded
// again.
type looked struct {
	source
	rows []lookedRow
	err  error // that came after rows
}

type lookedRow struct {
	cells [][]byte
	line  int
}

// lookAhead copies the next rows, up to a number and up to a mebibyte.
func lookAhead(in source, rows int) *looked {
	l := &looked{source: in}
	for bytes := 0; len(l.rows) < rows && bytes < 1<<20; {
		cells, line, err := in.next()
		if err != nil {
			l.err = err
			break
		}
		kept := make([][]byte, len(cells))
		for i, c := range cells {
			kept[i] = append([]byte(nil), c...)
			bytes += len(c)
		}
		l.rows = append(l.rows, lookedRow{kept, line})
	}
	return l
}

func (l *looked) next() ([][]byte, int, error) {
	if len(l.rows) > 0 {
		row := l.rows[0]
		l.rows = l.rows[1:]
		return row.cells, row.line, nil
	}
	if l.err != nil {
		return nil, 0, l.err
	}
	return l.source.next()
}
