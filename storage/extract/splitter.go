package extract

import (
	"bytes"
	"fmt"
	"io"
)

// maxRow bounds one row, quoted newlines included: a missing closing quote
// must not swallow a file of any size into memory.
const maxRow = 4 << 20

// splitter cuts delimited text (RFC 4180, any single-byte delimiter) into
// rows without copying what needs no unquoting.
type splitter struct {
	in        io.Reader
	delimiter byte
	buffer    []byte
	from, to  int // unread part of buffer
	ended     bool
	line      int // of the row to come
	cells     [][]byte
	unquoted  []byte
}

func newSplitter(in io.Reader, delimiter byte) *splitter {
	return &splitter{in: in, delimiter: delimiter, buffer: make([]byte, 1<<18), line: 1}
}

func (s *splitter) Close() error { return nil }

// fill reads more behind the unread part.
func (s *splitter) fill() error {
	if s.ended {
		return io.EOF
	}
	if s.from > 0 {
		copy(s.buffer, s.buffer[s.from:s.to])
		s.from, s.to = 0, s.to-s.from
	}
	if s.to == len(s.buffer) {
		if len(s.buffer) >= maxRow {
			return &FileError{Line: s.line, Found: fmt.Sprintf("a row of more than %d MiB", maxRow>>20),
				Accepted: "a quote that is never closed can cause this; every opening quote needs a closing one"}
		}
		s.buffer = append(s.buffer, make([]byte, len(s.buffer))...)
	}
	n, err := s.in.Read(s.buffer[s.to:])
	s.to += n
	if err == io.EOF {
		s.ended = true
		err = nil
	}
	return err
}

func (s *splitter) next() ([][]byte, int, error) {
	line := s.line
	scanned := 0 // bytes of the unread part known to hold no end of row
	inQuotes := false
	for {
		part := s.buffer[s.from:s.to]
		// A newline ends the row unless an odd number of quotes precedes it.
		for {
			i := bytes.IndexByte(part[scanned:], '\n')
			if i < 0 {
				break
			}
			inQuotes = inQuotes != (bytes.Count(part[scanned:scanned+i], quote)%2 == 1)
			scanned += i + 1
			s.line++
			if !inQuotes {
				row := part[:scanned-1]
				s.from += scanned
				return s.split(row), line, nil
			}
		}
		if s.ended {
			if len(part) == 0 {
				return nil, line, io.EOF
			}
			inQuotes = inQuotes != (bytes.Count(part[scanned:], quote)%2 == 1)
			if inQuotes {
				return nil, line, &FileError{Line: line, Found: "a quote that is opened and never closed", Accepted: "every opening quote needs a closing one"}
			}
			s.from = s.to
			s.line++
			return s.split(part), line, nil
		}
		if inQuotes = inQuotes != (bytes.Count(part[scanned:], quote)%2 == 1); len(part) > scanned {
			scanned = len(part)
		}
		if err := s.fill(); err != nil {
			return nil, line, err
		}
	}
}

var quote = []byte{'"'}

// split cuts one row, without its newline, into cells.
func (s *splitter) split(row []byte) [][]byte {
	row = bytes.TrimSuffix(row, []byte{'\r'})
	s.cells = s.cells[:0]
	if bytes.IndexByte(row, '"') < 0 {
		for {
			i := bytes.IndexByte(row, s.delimiter)
			if i < 0 {
				s.cells = append(s.cells, row)
				return s.cells
			}
			s.cells = append(s.cells, row[:i])
			row = row[i+1:]
		}
	}
	s.unquoted = s.unquoted[:0]
	for {
		start := len(s.unquoted)
		i := 0
		if trimmed := bytes.TrimLeft(row, " "); len(trimmed) > 0 && trimmed[0] == '"' {
			i = len(row) - len(trimmed) + 1
			for i < len(row) {
				if row[i] == '"' {
					if i+1 < len(row) && row[i+1] == '"' {
						i++
					} else {
						i++
						break
					}
				}
				s.unquoted = append(s.unquoted, row[i])
				i++
			}
		}
		// Whatever follows a closing quote up to the delimiter is kept.
		for i < len(row) && row[i] != s.delimiter {
			s.unquoted = append(s.unquoted, row[i])
			i++
		}
		s.cells = append(s.cells, s.unquoted[start:len(s.unquoted):len(s.unquoted)])
		if i >= len(row) {
			return s.cells
		}
		row = row[i+1:]
	}
}
