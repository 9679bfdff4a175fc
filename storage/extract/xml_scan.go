package extract

import (
	"bytes"
	"errors"
	"io"
	"strconv"
	"unicode/utf8"
)

// xmlScan cuts the XML of a workbook's part into tags and texts as it streams
// by. It knows as much of XML as these parts use and refuses the rest: there
// are no document types, hence no entities but the five of XML itself and
// character numbers, and nothing that could grow.
type xmlScan struct {
	in       io.Reader
	buffer   []byte
	from, to int
	ended    bool

	name      []byte // of a tag, without a prefix
	attrs     []byte // of a start tag, raw
	text      []byte // raw, of a text
	verbatim  bool   // the text came as CDATA: no entities in it
	selfClose bool
}

type xmlToken uint8

const (
	xmlEnd xmlToken = iota // of the part
	startTag
	endTag
	textToken
)

// maxToken bounds one tag or text.
const maxToken = 1 << 20

func newXMLScan(in io.Reader) *xmlScan { return &xmlScan{in: in, buffer: make([]byte, 1<<16)} }

var (
	errXMLCut  = errors.New("it breaks off in the middle")
	errXMLLong = errors.New("a tag or text of more than 1 MiB")
	errXMLType = errors.New("a document type, which no workbook has")
	errXMLText = errors.New("characters that are no UTF-8")
	errXMLTag  = errors.New("a tag that is none")
)

func (x *xmlScan) fill() error {
	if x.ended {
		return errXMLCut
	}
	if x.from > 0 {
		copy(x.buffer, x.buffer[x.from:x.to])
		x.from, x.to = 0, x.to-x.from
	}
	if x.to == len(x.buffer) {
		if x.to >= maxToken {
			return errXMLLong
		}
		x.buffer = append(x.buffer, make([]byte, len(x.buffer))...)
	}
	n, err := x.in.Read(x.buffer[x.to:])
	x.to += n
	if err == io.EOF {
		x.ended = true
		return nil
	}
	return err
}

// until returns the unread bytes through the mark, which it wants in them.
func (x *xmlScan) until(mark string) ([]byte, error) {
	for searched := 0; ; {
		part := x.buffer[x.from:x.to]
		if i := bytes.Index(part[searched:], []byte(mark)); i >= 0 {
			end := searched + i + len(mark)
			x.from += end
			return part[:end], nil
		}
		searched = max(0, len(part)-len(mark)+1)
		if err := x.fill(); err != nil {
			return nil, err
		}
	}
}

// next reads one token. Name, attrs and text are valid until the next call.
func (x *xmlScan) next() (xmlToken, error) {
	for {
		for x.from == x.to {
			if x.ended {
				return xmlEnd, nil
			}
			if err := x.fill(); err != nil {
				return xmlEnd, err
			}
		}
		if x.buffer[x.from] != '<' {
			return x.plainText()
		}
		for x.to-x.from < len("<![CDATA[") && !x.ended {
			if err := x.fill(); err != nil {
				return xmlEnd, err
			}
		}
		part := x.buffer[x.from:x.to]
		switch {
		case bytes.HasPrefix(part, []byte("<!--")):
			if _, err := x.until("-->"); err != nil {
				return xmlEnd, err
			}
		case bytes.HasPrefix(part, []byte("<?")):
			if _, err := x.until("?>"); err != nil {
				return xmlEnd, err
			}
		case bytes.HasPrefix(part, []byte("<![CDATA[")):
			whole, err := x.until("]]>")
			if err != nil {
				return xmlEnd, err
			}
			x.text, x.verbatim = whole[len("<![CDATA["):len(whole)-len("]]>")], true
			if !utf8.Valid(x.text) {
				return xmlEnd, errXMLText
			}
			return textToken, nil
		case bytes.HasPrefix(part, []byte("<!")):
			return xmlEnd, errXMLType
		default:
			return x.tag()
		}
	}
}

// plainText is a text up to the next tag or the end of the part.
func (x *xmlScan) plainText() (xmlToken, error) {
	for searched := 0; ; {
		part := x.buffer[x.from:x.to]
		i := bytes.IndexByte(part[searched:], '<')
		if i < 0 && !x.ended {
			searched = len(part)
			if err := x.fill(); err != nil {
				return xmlEnd, err
			}
			continue
		}
		end := len(part)
		if i >= 0 {
			end = searched + i
		}
		x.from += end
		x.text, x.verbatim = part[:end], false
		if !utf8.Valid(x.text) {
			return xmlEnd, errXMLText
		}
		return textToken, nil
	}
}

// tag reads a start or end tag; a > inside quotes does not end it.
func (x *xmlScan) tag() (xmlToken, error) {
	var within byte
	for i := 1; ; i++ {
		for x.from+i >= x.to {
			if err := x.fill(); err != nil {
				return xmlEnd, err
			}
		}
		switch c := x.buffer[x.from+i]; {
		case within != 0:
			if c == within {
				within = 0
			}
		case c == '"' || c == '\'':
			within = c
		case c == '<':
			return xmlEnd, errXMLTag
		case c == '>':
			body := x.buffer[x.from+1 : x.from+i]
			x.from += i + 1
			return x.splitTag(body)
		}
	}
}

func (x *xmlScan) splitTag(body []byte) (xmlToken, error) {
	token := startTag
	if len(body) > 0 && body[0] == '/' {
		token, body = endTag, body[1:]
	}
	x.selfClose = len(body) > 0 && body[len(body)-1] == '/'
	if x.selfClose {
		body = body[:len(body)-1]
	}
	x.name, x.attrs = body, nil
	if i := bytes.IndexAny(body, " \t\r\n"); i >= 0 {
		x.name, x.attrs = body[:i], body[i+1:]
	}
	if i := bytes.IndexByte(x.name, ':'); i >= 0 {
		x.name = x.name[i+1:]
	}
	if len(x.name) == 0 || x.selfClose && token == endTag {
		return xmlEnd, errXMLTag
	}
	return token, nil
}

// attr is the raw value of an attribute that has no prefix; nil without it.
func (x *xmlScan) attr(name string) []byte {
	rest := x.attrs
	for {
		rest = bytes.TrimLeft(rest, " \t\r\n")
		i := bytes.IndexByte(rest, '=')
		if i < 0 {
			return nil
		}
		found := bytes.TrimRight(rest[:i], " \t\r\n")
		rest = bytes.TrimLeft(rest[i+1:], " \t\r\n")
		if len(rest) == 0 || rest[0] != '"' && rest[0] != '\'' {
			return nil
		}
		end := bytes.IndexByte(rest[1:], rest[0])
		if end < 0 {
			return nil
		}
		if string(found) == name {
			return rest[1 : 1+end]
		}
		rest = rest[end+2:]
	}
}

// appendText appends the text with its entities as characters.
func (x *xmlScan) appendText(to []byte) []byte {
	if x.verbatim {
		return append(to, x.text...)
	}
	return appendUnescaped(to, x.text)
}

func appendUnescaped(to, text []byte) []byte {
	for {
		i := bytes.IndexByte(text, '&')
		if i < 0 {
			return append(to, text...)
		}
		to = append(to, text[:i]...)
		text = text[i:]
		end := bytes.IndexByte(text, ';')
		c, ok := rune(0), false
		if end > 0 && end < 12 {
			c, ok = entity(string(text[1:end]))
		}
		if !ok { // kept as it stands
			to = append(to, '&')
			text = text[1:]
			continue
		}
		to = utf8.AppendRune(to, c)
		text = text[end+1:]
	}
}

func entity(name string) (rune, bool) {
	switch name {
	case "lt":
		return '<', true
	case "gt":
		return '>', true
	case "amp":
		return '&', true
	case "quot":
		return '"', true
	case "apos":
		return '\'', true
	}
	if len(name) < 2 || name[0] != '#' {
		return 0, false
	}
	number, base := name[1:], 10
	if number[0] == 'x' {
		number, base = number[1:], 16
	}
	n, err := strconv.ParseUint(number, base, 31)
	return rune(n), err == nil && utf8.ValidRune(rune(n)) && n != 0
}
