package extract

import (
	"bytes"
	"fmt"
	"io"
	"unicode/utf8"
)

// maxRow bounds one row, quoted newlines included: a missing closing quote
// must not swallow a file of any size into memory.
const maxRow = 4 << 20

// splitter cuts delimited text (RFC 4180, any single-byte delimiter) into
// rows without copying what needs no unquoting. A quote counts only at the
// beginning of a cell; elsewhere it is part of the value.
type splitter struct {
	in        io.Reader
	delimiter byte
	newline   byte // \n, or \r in files that have no \n
	settled   bool // newline is proven
	buffer    []byte
	from, to  int // unread part of buffer
	ended     bool
	line      int // of the row to come
	cells     [][]byte
	unquoted  []byte
	scan      quoteScan
	marks     repairs
}

func newSplitter(in io.Reader, delimiter byte) *splitter {
	return &splitter{in: in, delimiter: delimiter, newline: '\n', buffer: make([]byte, 1<<16), line: 1}
}

func (s *splitter) Close() error { return nil }

func (s *splitter) repaired() repairs { return s.marks }

// fill reads more behind the unread part.
func (s *splitter) fill() error {
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
	s.scan = quoteScan{delimiter: s.delimiter}
	lines := 0 // newlines inside quotes
	done := 0  // bytes of the row that scan has seen; a newline precedes
	for searched := 0; ; {
		part := s.buffer[s.from:s.to]
		i := bytes.IndexByte(part[searched:], s.newline)
		if i < 0 && s.crOnly(part) {
			searched = done
			continue
		}
		if i >= 0 {
			s.settled = true
			end := searched + i
			if s.scan.over(part[done:end]) {
				lines++
				done, searched = end+1, end+1
				continue
			}
			s.from += end + 1
			return s.row(part[:end], lines)
		}
		searched = len(part)
		if !s.ended {
			if err := s.fill(); err != nil {
				return nil, s.line, err
			}
			continue
		}
		if len(part) == 0 {
			return nil, s.line, io.EOF
		}
		if s.scan.over(part[done:]) {
			return nil, s.line, &FileError{Line: s.line, Found: "a quote that is opened and never closed", Accepted: "every opening quote needs a closing one"}
		}
		s.from = s.to
		return s.row(part, lines)
	}
}

// crOnly settles, where a whole buffer shows no newline, that lines end in a
// carriage return alone.
func (s *splitter) crOnly(part []byte) bool {
	if s.settled || !s.ended && len(part) < len(s.buffer) || bytes.IndexByte(part, '\r') < 0 {
		return false
	}
	s.settled, s.newline = true, '\r'
	return true
}

// row accounts for a whole row and cuts it.
func (s *splitter) row(row []byte, quotedLines int) ([][]byte, int, error) {
	line := s.line
	s.line += 1 + quotedLines
	if quotedLines > 0 {
		s.marks[quotedNewline]++
	}
	if bytes.IndexByte(row, 0) >= 0 {
		return nil, line, &FileError{Line: line, Found: "a byte of zero, which no text has", Accepted: "choose the encoding in which the file is written: utf-8, utf-16le, utf-16be or windows-1252"}
	}
	if !utf8.Valid(row) {
		return nil, line, &FileError{Line: line, Found: "bytes that are no UTF-8 text", Accepted: "choose the encoding in which the file is written: utf-8, utf-16le, utf-16be or windows-1252"}
	}
	return s.split(row), line, nil
}

// split cuts one row, without its newline, into cells.
func (s *splitter) split(row []byte) [][]byte {
	row = bytes.TrimSuffix(row, []byte{'\r'})
	s.cells = s.cells[:0]
	quoted := bytes.IndexByte(row, '"') >= 0
	s.unquoted = s.unquoted[:0]
	for {
		if quoted {
			if opening := openingQuote(row); opening >= 0 {
				cell, rest, more := s.unquote(row[opening+1:])
				s.cells = append(s.cells, cell)
				if !more {
					return s.cells
				}
				row = rest
				continue
			}
		}
		i := bytes.IndexByte(row, s.delimiter)
		cell := row
		if i >= 0 {
			cell = row[:i]
		}
		if quoted && bytes.IndexByte(cell, '"') >= 0 {
			s.marks[strayQuote]++
		}
		s.cells = append(s.cells, cell)
		if i < 0 {
			return s.cells
		}
		row = row[i+1:]
	}
}

// openingQuote is the place of the quote that opens a cell, or -1.
func openingQuote(cell []byte) int {
	for i, c := range cell {
		if c == '"' {
			return i
		}
		if c != ' ' {
			break
		}
	}
	return -1
}

// unquote reads a cell behind its opening quote. What follows the closing
// quote up to the delimiter is kept.
func (s *splitter) unquote(row []byte) (cell, rest []byte, more bool) {
	start := len(s.unquoted)
	for {
		i := bytes.IndexByte(row, '"') // there is one: the row is whole
		if i < 0 {
			i = len(row)
		}
		s.unquoted = append(s.unquoted, row[:i]...)
		row = row[min(i+1, len(row)):]
		if len(row) == 0 || row[0] != '"' {
			break
		}
		s.unquoted = append(s.unquoted, '"')
		row = row[1:]
	}
	i := bytes.IndexByte(row, s.delimiter)
	tail := row
	if i >= 0 {
		tail, rest, more = row[:i], row[i+1:], true
	}
	if len(bytes.TrimRight(tail, " ")) > 0 {
		s.marks[strayQuote]++
		s.unquoted = append(s.unquoted, tail...)
	}
	return s.unquoted[start:len(s.unquoted):len(s.unquoted)], rest, more
}

// quoteScan follows quotes through a row, piece by piece.
type quoteScan struct {
	delimiter byte
	state     quoteState
}

type quoteState uint8

const (
	atCell   quoteState = iota // at the beginning of a cell
	inPlain                    // in or behind a value, to the delimiter
	inQuotes                   // behind an opening quote
	atQuote                    // behind a quote that closes, unless another follows
)

// over goes over one more piece of the row and tells whether it ends inside
// quotes, so that a newline there belongs to the value.
func (q *quoteScan) over(piece []byte) bool {
	if q.state != inQuotes && bytes.IndexByte(piece, '"') < 0 {
		q.state = inPlain
		return false
	}
	for len(piece) > 0 {
		switch q.state {
		case inPlain:
			i := bytes.IndexByte(piece, q.delimiter)
			if i < 0 {
				return false
			}
			piece = piece[i+1:]
			q.state = atCell
			continue
		case inQuotes:
			i := bytes.IndexByte(piece, '"')
			if i < 0 {
				return true
			}
			piece = piece[i+1:]
			q.state = atQuote
			continue
		case atCell:
			switch {
			case piece[0] == '"':
				q.state = inQuotes
			case piece[0] == q.delimiter:
			case piece[0] != ' ':
				q.state = inPlain
			}
		case atQuote:
			switch piece[0] {
			case '"':
				q.state = inQuotes
			case q.delimiter:
				q.state = atCell
			default:
				q.state = inPlain
			}
		}
		piece = piece[1:]
	}
	return q.state == inQuotes
}
