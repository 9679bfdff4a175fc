package extract

import (
	"archive/zip"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"path"
	"strings"
)

// unpackedLimit bounds what one part of a workbook may unpack to. Parts are
// unpacked as they are read, never to memory or disk as a whole.
const unpackedLimit = 4 << 30

// mostStructure bounds the parts that say what the workbook consists of.
const mostStructure = 8 << 20

// book is an opened workbook (ECMA-376 part 1, Office Open XML).
type book struct {
	parts    map[string]*zip.File // by name in lower case
	sheets   []bookSheet
	shared   string // part with the shared strings; "" without
	from1904 bool   // day numbers count from 1904-01-01
}

type bookSheet struct {
	name, part string
	hidden     bool
}

const acceptedBooks = "accepted are XLSX workbooks without a password, and delimited text (CSV)"

func noBook(why any) error {
	return &FileError{Found: fmt.Sprintf("an archive that is no readable workbook (%v)", why), Accepted: acceptedBooks}
}

func openBook(file io.ReaderAt, size int64) (*book, error) {
	archive, err := zip.NewReader(file, size)
	if err != nil {
		return nil, noBook(err)
	}
	b := &book{parts: map[string]*zip.File{}}
	for _, f := range archive.File {
		b.parts[partName(f.Name)] = f
	}
	root, err := b.relations("", "_rels/.rels")
	if err != nil {
		return nil, noBook(err)
	}
	main := ""
	for _, r := range root {
		if strings.HasSuffix(r.Type, "/officeDocument") {
			main = r.Target
		}
	}
	if main == "" {
		return nil, noBook("it has no main part")
	}
	if err := b.readStructure(main); err != nil {
		return nil, noBook(err)
	}
	return b, nil
}

func partName(name string) string {
	return strings.ToLower(strings.TrimPrefix(strings.ReplaceAll(name, `\`, "/"), "/"))
}

type relation struct {
	ID     string `xml:"Id,attr"`
	Type   string `xml:"Type,attr"`
	Target string `xml:"Target,attr"`
}

// relations reads which part is what to the parts of a folder.
func (b *book) relations(folder, part string) ([]relation, error) {
	var all struct {
		Relations []relation `xml:"Relationship"`
	}
	if err := b.parse(part, &all); err != nil {
		return nil, err
	}
	for i, r := range all.Relations {
		if !strings.HasPrefix(r.Target, "/") {
			r.Target = path.Join(folder, r.Target)
		}
		all.Relations[i].Target = partName(r.Target)
	}
	return all.Relations, nil
}

// parse decodes a small part.
func (b *book) parse(part string, to any) error {
	in, err := b.open(part, mostStructure)
	if err != nil {
		return err
	}
	defer in.Close()
	if err := xml.NewDecoder(in).Decode(to); err != nil {
		return fmt.Errorf("%s: %w", part, err)
	}
	return nil
}

func (b *book) readStructure(main string) error {
	var structure struct {
		XMLName    xml.Name
		Properties struct {
			From1904 string `xml:"date1904,attr"`
		} `xml:"workbookPr"`
		Sheets []struct {
			Name  string     `xml:"name,attr"`
			State string     `xml:"state,attr"`
			Attrs []xml.Attr `xml:",any,attr"`
		} `xml:"sheets>sheet"`
	}
	if err := b.parse(main, &structure); err != nil {
		return err
	}
	if structure.XMLName.Local != "workbook" {
		return fmt.Errorf("its main part is a %s", structure.XMLName.Local)
	}
	b.from1904 = structure.Properties.From1904 == "1" || structure.Properties.From1904 == "true"
	relations, err := b.relations(path.Dir(main), partName(path.Join(path.Dir(main), "_rels", path.Base(main)+".rels")))
	if err != nil {
		return err
	}
	byID := map[string]relation{}
	for _, r := range relations {
		byID[r.ID] = r
		if strings.HasSuffix(r.Type, "/sharedStrings") {
			b.shared = r.Target
		}
	}
	for _, s := range structure.Sheets {
		for _, a := range s.Attrs {
			if a.Name.Local == "id" && strings.HasSuffix(byID[a.Value].Type, "/worksheet") {
				b.sheets = append(b.sheets, bookSheet{s.Name, byID[a.Value].Target, s.State == "hidden" || s.State == "veryHidden"})
			}
		}
	}
	return nil
}

// visible lists the sheets that are not hidden, and how many are.
func (b *book) visible() (names []string, hidden int) {
	for _, s := range b.sheets {
		if s.hidden {
			hidden++
		} else {
			names = append(names, s.name)
		}
	}
	return names, hidden
}

// open unpacks a part as it is read, up to a limit.
func (b *book) open(part string, limit int64) (io.ReadCloser, error) {
	f, ok := b.parts[part]
	if !ok {
		return nil, fmt.Errorf("no part %s", part)
	}
	in, err := f.Open()
	if err != nil {
		return nil, fmt.Errorf("%s: %w", part, err)
	}
	return &limited{in: in, left: limit}, nil
}

// limited is an error, not an end, beyond its limit.
type limited struct {
	in   io.ReadCloser
	left int64
}

var errUnpacked = errors.New("it unpacks to more than is accepted")

func (l *limited) Read(p []byte) (int, error) {
	if l.left <= 0 {
		return 0, errUnpacked
	}
	n, err := l.in.Read(p[:min(int64(len(p)), l.left)])
	l.left -= int64(n)
	return n, err
}

func (l *limited) Close() error { return l.in.Close() }

// sharedStrings reads the shared strings, if there are any.
func (b *book) sharedStrings() (*sharedStrings, error) {
	if b.shared == "" {
		return &sharedStrings{}, nil
	}
	in, err := b.open(b.shared, unpackedLimit)
	if err != nil {
		return nil, err
	}
	defer in.Close()
	s, err := readSharedStrings(in)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", b.shared, err)
	}
	return s, nil
}
