package extract

import (
	"bytes"
	"errors"
	"io"
)

// kind is what the bytes of a file say before any row is cut.
type kind struct {
	format Format
	sheets []string // that are not hidden
	hidden int      // sheets that are
	mixed  bool     // encodings in one text
}

// sniffKind tells workbooks from text by their first bytes, and text's
// encoding, and names what is neither.
func sniffKind(file io.ReaderAt, size int64) (k kind, err error) {
	const accepted = "accepted are delimited text (CSV) and XLSX workbooks"
	if size == 0 {
		return k, &FileError{Found: "nothing: it is empty", Accepted: accepted}
	}
	head := make([]byte, min(size, 8))
	if _, err := file.ReadAt(head, 0); err != nil && !errors.Is(err, io.EOF) {
		return k, err
	}
	for _, known := range []struct{ mark, what, advice string }{
		{"\xD0\xCF\x11\xE0", "an old XLS workbook or another OLE file", "save it as XLSX or CSV; " + accepted},
		{"%PDF", "a PDF document", accepted},
		{"\x1F\x8B", "a gzip archive", "unpack it first; " + accepted},
		{"{\\rtf", "a word processor's document", accepted},
		{"PK\x05\x06", "an empty archive", accepted},
		{"7z\xBC\xAF", "a 7z archive", "unpack it first; " + accepted},
		{"Rar!", "a RAR archive", "unpack it first; " + accepted},
		{"\xFD7zXZ", "an XZ archive", "unpack it first; " + accepted},
		{"\x28\xB5\x2F\xFD", "a zstd archive", "unpack it first; " + accepted},
		{"\xFF\xFE\x00\x00", "text in UTF-32", "save it as UTF-8; " + accepted},
		{"\x00\x00\xFE\xFF", "text in UTF-32", "save it as UTF-8; " + accepted},
		{"PAR1", "a Parquet file", accepted},
	} {
		if bytes.HasPrefix(head, []byte(known.mark)) {
			return k, &FileError{Found: known.what, Accepted: known.advice}
		}
	}
	if bytes.HasPrefix(head, []byte("PK\x03\x04")) {
		b, err := openBook(file, size)
		if err != nil {
			return k, err
		}
		sheets, hidden := b.visible()
		if len(sheets) == 0 {
			return k, &FileError{Found: "a workbook without a visible sheet", Accepted: accepted}
		}
		return kind{format: Format{Kind: Workbook, Sheet: sheets[0]}, sheets: sheets, hidden: hidden}, nil
	}
	switch first := bytes.TrimLeft(bytes.TrimPrefix(head, utf8Mark), " \t\r\n"); {
	case len(first) > 0 && first[0] == '<':
		return k, &FileError{Found: "a page of markup (HTML or XML), whatever its name says", Accepted: "open it in a spreadsheet and save it as XLSX or CSV; " + accepted}
	case len(first) > 0 && (first[0] == '{' || first[0] == '['):
		return k, &FileError{Found: "structured text (JSON or the like)", Accepted: accepted}
	}
	encoding, mixed, err := guessEncoding(file, size)
	return kind{format: Format{Kind: Delimited, Encoding: encoding}, mixed: mixed}, err
}
