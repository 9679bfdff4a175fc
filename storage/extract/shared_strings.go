package extract

import (
	"errors"
	"io"
	"strconv"
)

// sharedStrings are the texts that the cells of a workbook refer to by number,
// one behind the other.
type sharedStrings struct {
	texts []byte
	ends  []uint32
}

// mostShared bounds the texts, which a reader must hold all.
const mostShared = 64 << 20

var errShared = errors.New("more than 64 MiB of different texts")

func (s *sharedStrings) at(number []byte) ([]byte, bool) {
	n, err := strconv.ParseUint(string(number), 10, 32)
	if err != nil || n >= uint64(len(s.ends)) {
		return nil, false
	}
	start := uint32(0)
	if n > 0 {
		start = s.ends[n-1]
	}
	return s.texts[start:s.ends[n]:s.ends[n]], true
}

// readSharedStrings reads the part of that name (ECMA-376 part 1, 18.4).
func readSharedStrings(in io.Reader) (*sharedStrings, error) {
	s := &sharedStrings{}
	x := newXMLScan(in)
	texts := textOf{}
	for {
		token, err := x.next()
		if err != nil {
			return nil, err
		}
		if token == xmlEnd {
			return s, nil
		}
		if token == startTag && string(x.name) == "si" {
			texts = textOf{start: len(s.texts)}
			if x.selfClose {
				s.ends = append(s.ends, uint32(len(s.texts)))
			}
			continue
		}
		if token == endTag && string(x.name) == "si" {
			s.texts = append(s.texts[:texts.start], unescapeCells(s.texts[texts.start:])...)
			s.ends = append(s.ends, uint32(len(s.texts)))
			if len(s.texts)+4*len(s.ends) > mostShared {
				return nil, errShared
			}
			continue
		}
		s.texts = texts.take(x, token, s.texts)
	}
}

// textOf collects the text of a rich or plain text: its <t> elements, without
// those that tell how to pronounce it.
type textOf struct {
	start    int
	inText   bool
	phonetic bool
}

func (t *textOf) take(x *xmlScan, token xmlToken, to []byte) []byte {
	switch {
	case token == textToken:
		if t.inText && !t.phonetic {
			to = x.appendText(to)
		}
	case x.selfClose:
	case string(x.name) == "t":
		t.inText = token == startTag
	case string(x.name) == "rPh":
		t.phonetic = token == startTag
	}
	return to
}

// unescapeCells reads _x000D_ and the like, as which workbooks keep characters
// that XML does not (ECMA-376 part 1, 22.4.2.4), in place.
func unescapeCells(text []byte) []byte {
	out := text[:0]
	for i := 0; i < len(text); i++ {
		if text[i] == '_' && i+7 <= len(text) && text[i+1] == 'x' && text[i+6] == '_' {
			if n, err := strconv.ParseUint(string(text[i+2:i+6]), 16, 16); err == nil && n < 0x80 && n != 0 {
				out = append(out, byte(n))
				i += 6
				continue
			}
		}
		out = append(out, text[i])
	}
	return out
}
