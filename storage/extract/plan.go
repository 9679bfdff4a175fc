package extract

import (
	"fmt"
	"strings"

	"spillway/severity/claims"
)

// Kind is the form of a file.
type Kind string

const (
	Delimited Kind = "csv"
	Workbook  Kind = "xlsx"
)

// Encoding is the character encoding of delimited text.
type Encoding string

const (
	UTF8        Encoding = "utf-8"
	UTF16LE     Encoding = "utf-16le"
	UTF16BE     Encoding = "utf-16be"
	Windows1252 Encoding = "windows-1252"
)

// DateOrder says which comes first in a date such as 03/04/2025. Dates that
// begin with the year need none.
type DateOrder string

const (
	OrderUndecided DateOrder = ""
	DayFirst       DateOrder = "day_first"
	MonthFirst     DateOrder = "month_first"
)

// Format is how the file is written.
type Format struct {
	Kind       Kind      `json:"kind"`
	Encoding   Encoding  `json:"encoding,omitempty"`  // of delimited text
	Delimiter  string    `json:"delimiter,omitempty"` // one of , ; tab |
	Decimal    string    `json:"decimal"`             // "." or ","
	Thousands  string    `json:"thousands"`           // "", ",", ".", " " or "'"; spaces of every kind count as " "
	DateOrder  DateOrder `json:"date_order"`
	HeaderLine int       `json:"header_line"` // line of the file, from 1
	Sheet      string    `json:"sheet,omitempty"`
}

// Plan is everything that decides how a file is read and what its columns
// mean. It is remembered for each source.
type Plan struct {
	Format  Format       `json:"format"`
	Columns ColumnMap    `json:"columns"`
	Basis   claims.Basis `json:"basis"`
}

// FileError is a problem of the file as a whole: nothing of it can be read.
type FileError struct {
	Line     int    // 0 where no line is to blame
	Found    string // what was found
	Accepted string // what is accepted
}

func (e *FileError) Error() string {
	where := "the file"
	if e.Line > 0 {
		where = fmt.Sprintf("line %d", e.Line)
	}
	return where + ": " + e.Found + "; " + e.Accepted
}

// Validate refuses a format that no file can have.
func (f Format) Validate() error {
	bad := func(what, value, accepted string) error {
		return &FileError{Found: fmt.Sprintf("%s %q", what, value), Accepted: "accepted are " + accepted}
	}
	if f.Kind != Delimited && f.Kind != Workbook {
		return bad("kind of file", string(f.Kind), "csv and xlsx")
	}
	if f.Kind == Delimited {
		switch f.Encoding {
		case UTF8, UTF16LE, UTF16BE, Windows1252:
		default:
			return bad("encoding", string(f.Encoding), "utf-8, utf-16le, utf-16be and windows-1252")
		}
		switch f.Delimiter {
		case ",", ";", "\t", "|":
		default:
			return bad("delimiter", f.Delimiter, "comma, semicolon, tab and |")
		}
	}
	switch f.Decimal {
	case ".", ",":
	default:
		return bad("decimal mark", f.Decimal, "the point and the comma")
	}
	switch f.Thousands {
	case "", ",", ".", " ", "'":
	default:
		return bad("mark of thousands", f.Thousands, "none, comma, point, space and apostrophe")
	}
	if f.Thousands == f.Decimal {
		return bad("mark of thousands", f.Thousands, "marks other than the decimal mark")
	}
	switch f.DateOrder {
	case OrderUndecided, DayFirst, MonthFirst:
	default:
		return bad("order of dates", string(f.DateOrder), "day_first and month_first")
	}
	if f.HeaderLine < 1 {
		return bad("header line", fmt.Sprint(f.HeaderLine), "lines from 1")
	}
	return nil
}

// resolve finds the columns of a plan in the header.
func (p Plan) resolve(header []string) (map[Field]int, error) {
	at := map[Field]int{}
	for _, f := range Fields {
		name, mapped := p.Columns[f]
		if !mapped || name == "" {
			continue
		}
		found := -1
		for i, h := range header {
			if strings.TrimSpace(h) != strings.TrimSpace(name) {
				continue
			}
			if found >= 0 {
				return nil, &FileError{Line: p.Format.HeaderLine,
					Found:    fmt.Sprintf("two columns with the header %q, which is to hold %s", name, f),
					Accepted: "every mapped column needs a header of its own"}
			}
			found = i
		}
		if found < 0 {
			return nil, &FileError{Line: p.Format.HeaderLine,
				Found:    fmt.Sprintf("no column with the header %q, which is to hold %s; the headers are %s", name, f, strings.Join(header, ", ")),
				Accepted: "map the field to one of these, or to none"}
		}
		for other, column := range at {
			if column == found {
				return nil, &FileError{Line: p.Format.HeaderLine,
					Found:    fmt.Sprintf("the column %q is to hold both %s and %s", name, other, f),
					Accepted: "a column holds one field"}
			}
		}
		at[f] = found
	}
	if _, amount := at[Amount]; amount {
		for _, part := range []Field{Paid, Outstanding, Incurred} {
			if _, ok := at[part]; ok {
				return nil, &FileError{Line: p.Format.HeaderLine,
					Found:    fmt.Sprintf("the loss is mapped to amount (%q) and to %s (%q) too", p.Columns[Amount], part, p.Columns[part]),
					Accepted: "map amount alone, or paid, outstanding and incurred"}
			}
		}
	}
	for _, f := range []Field{Amount, Paid, Incurred} {
		if _, ok := at[f]; ok {
			return at, nil
		}
	}
	return nil, &FileError{Line: p.Format.HeaderLine,
		Found:    "no column with amounts is mapped; the headers are " + strings.Join(header, ", "),
		Accepted: "map amount, paid or incurred"}
}
