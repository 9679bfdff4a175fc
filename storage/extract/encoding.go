package extract

import (
	"bytes"
	"encoding/binary"
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
// anywhere. Mixed tells that the file has characters beyond ASCII in UTF-8 and
// bytes that are none.
func guessEncoding(file io.ReaderAt, size int64) (e Encoding, mixed bool, err error) {
	head := make([]byte, min(size, 4096))
	n, err := file.ReadAt(head, 0)
	if err != nil && err != io.EOF {
		return "", false, err
	}
	head = head[:n]
	switch {
	case bytes.HasPrefix(head, []byte{0xFF, 0xFE}):
		return UTF16LE, false, nil
	case bytes.HasPrefix(head, []byte{0xFE, 0xFF}):
		return UTF16BE, false, nil
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
		return UTF16LE, false, nil
	case even > half/2 && odd == 0:
		return UTF16BE, false, nil
	case even+odd > 0:
		return "", false, &FileError{Found: "bytes that are no text", Accepted: "accepted are delimited text (CSV) and XLSX workbooks"}
	}
	bad, wide, err := countUTF8(io.NewSectionReader(file, 0, size))
	if err != nil {
		return "", false, err
	}
	marked := bytes.HasPrefix(head, utf8Mark)
	switch {
	case bad == 0:
		return UTF8, false, nil
	case marked || wide > 2*bad:
		return UTF8, true, nil
	}
	return Windows1252, wide > bad/8, nil
}

// countUTF8 counts the bytes that belong to no UTF-8 character and the
// characters of several bytes.
func countUTF8(in io.Reader) (bad, wide int, err error) {
	buffer := make([]byte, 1<<18)
	for kept := 0; ; {
		n, err := in.Read(buffer[kept:])
		if err != nil && err != io.EOF {
			return 0, 0, err
		}
		part := buffer[:kept+n]
		ended := err == io.EOF
		kept = 0
		for len(part) > 0 {
			i := beyondASCII(part)
			part = part[i:]
			if len(part) == 0 {
				break
			}
			if !ended && !utf8.FullRune(part) { // cut at the end of the buffer
				kept = copy(buffer, part)
				break
			}
			c, width := utf8.DecodeRune(part)
			if c == utf8.RuneError && width == 1 {
				bad++
			} else {
				wide++
			}
			part = part[width:]
		}
		if ended {
			return bad, wide, nil
		}
	}
}

// beyondASCII is the place of the first byte beyond ASCII, or the length.
func beyondASCII(part []byte) int {
	i := 0
	for ; i+8 <= len(part); i += 8 {
		if binary.NativeEndian.Uint64(part[i:])&0x8080808080808080 != 0 {
			break
		}
	}
	for i < len(part) && part[i] < utf8.RuneSelf {
		i++
	}
	return i
}
