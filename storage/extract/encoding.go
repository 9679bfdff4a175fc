package extract

import (
	"bytes"
	"io"
	"unicode/utf8"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

// decode turns the bytes of a file into UTF-8 without a byte order mark.
func decode(in io.Reader, e Encoding) io.Reader {
	var decoder *encoding.Decoder
	switch e {
	case UTF16LE:
		decoder = unicode.UTF16(unicode.LittleEndian, unicode.UseBOM).NewDecoder()
	case UTF16BE:
		decoder = unicode.UTF16(unicode.BigEndian, unicode.UseBOM).NewDecoder()
	case Windows1252:
		decoder = charmap.Windows1252.NewDecoder()
	default:
		return &skipMark{in: in}
	}
	return transform.NewReader(in, decoder)
}

var utf8Mark = []byte{0xEF, 0xBB, 0xBF}

// skipMark leaves out a UTF-8 byte order mark.
type skipMark struct {
	in     io.Reader
	begun  bool
	buffer []byte
}

func (s *skipMark) Read(p []byte) (int, error) {
	if !s.begun {
		s.begun = true
		head := make([]byte, 3)
		n, err := io.ReadFull(s.in, head)
		if err != nil && err != io.ErrUnexpectedEOF && err != io.EOF {
			return 0, err
		}
		s.buffer = bytes.TrimPrefix(head[:n], utf8Mark)
	}
	if len(s.buffer) > 0 {
		n := copy(p, s.buffer)
		s.buffer = s.buffer[n:]
		return n, nil
	}
	return s.in.Read(p)
}

// guessEncoding reads the whole file: a byte that is no UTF-8 may stand
// anywhere.
func guessEncoding(file io.ReaderAt, size int64) (Encoding, error) {
	head := make([]byte, min(size, 4096))
	n, err := file.ReadAt(head, 0)
	if err != nil && err != io.EOF {
		return "", err
	}
	head = head[:n]
	switch {
	case bytes.HasPrefix(head, utf8Mark):
		return UTF8, nil
	case bytes.HasPrefix(head, []byte{0xFF, 0xFE}):
		return UTF16LE, nil
	case bytes.HasPrefix(head, []byte{0xFE, 0xFF}):
		return UTF16BE, nil
	}
	even, odd := 0, 0
	for i, b := range head {
		if b == 0 && i%2 == 0 {
			even++
		} else if b == 0 {
			odd++
		}
	}
	switch half := len(head) / 2; {
	case odd > half/2 && even == 0:
		return UTF16LE, nil
	case even > half/2 && odd == 0:
		return UTF16BE, nil
	case even+odd > 0:
		return "", &FileError{Found: "bytes that are no text", Accepted: "accepted are delimited text (CSV) and XLSX workbooks"}
	}
	in := io.NewSectionReader(file, 0, size)
	buffer := make([]byte, 1<<18)
	kept := 0
	for {
		n, err := in.Read(buffer[kept:])
		part := buffer[:kept+n]
		if err == io.EOF {
			if utf8.Valid(part) {
				return UTF8, nil
			}
			return Windows1252, nil
		}
		if err != nil {
			return "", err
		}
		// A character may be cut at the end of the part.
		end := len(part)
		for cut := 1; cut < utf8.UTFMax && cut <= len(part); cut++ {
			if utf8.RuneStart(part[len(part)-cut]) {
				if !utf8.FullRune(part[len(part)-cut:]) {
					end = len(part) - cut
				}
				break
			}
		}
		if !utf8.Valid(part[:end]) {
			return Windows1252, nil
		}
		kept = copy(buffer, part[end:])
	}
}
