package extract

import (
	"encoding/csv"
	"io"
	"strconv"
	"strings"
)

// WriteRejected reads the rest of a file and writes its rejected rows as CSV:
// line number, reasons, then the cells as they came, guarded.
func WriteRejected(w io.Writer, r *Reader) error {
	out := csv.NewWriter(w)
	if err := WriteRejectedHeader(out, r.Header()); err != nil {
		return err
	}
	for r.Next() {
		if row := r.Row(); row.Rejected {
			if err := WriteRejectedRow(out, row.Line, Reasons(row.Findings), row.Cells()); err != nil {
				return err
			}
		}
	}
	if err := r.Err(); err != nil {
		return err
	}
	out.Flush()
	return out.Error()
}

// WriteRejectedHeader writes the header of a file of rejected rows.
func WriteRejectedHeader(out *csv.Writer, header []string) error {
	return out.Write(append([]string{"line", "reasons"}, guardAll(header)...))
}

// WriteRejectedRow writes one rejected row.
func WriteRejectedRow(out *csv.Writer, line int, reasons string, cells []string) error {
	return out.Write(append([]string{strconv.Itoa(line), Guard(reasons)}, guardAll(cells)...))
}

// Reasons joins the findings that block a row.
func Reasons(findings []Finding) string {
	var reasons []string
	for _, f := range findings {
		if f.Effect == Blocks {
			reasons = append(reasons, string(f.Rule)+" ("+f.Column+"): "+f.Message)
		}
	}
	return strings.Join(reasons, "; ")
}

// Guard keeps a spreadsheet from running a text as a formula: it is prefixed
// with ' when it begins with = @ tab or a line end, or with + or - and is no
// number in any style.
func Guard(text string) string {
	if text == "" {
		return text
	}
	switch text[0] {
	case '=', '@', '\t', '\r', '\n':
		return "'" + text
	case '+', '-':
		if !harmless(text[1:]) {
			return "'" + text
		}
	}
	return text
}

// harmless tells that what follows a sign holds digits and marks only, or is
// the rest of a number in scientific notation, so that nothing can be run.
func harmless(text string) bool {
	mantissa, exponent, scientific := strings.Cut(strings.ToUpper(text), "E")
	if scientific {
		if _, err := strconv.Atoi(exponent); err != nil || mantissa == "" {
			return false
		}
	}
	return strings.Trim(mantissa, "0123456789., '\u00a0\u202f") == ""
}

func guardAll(texts []string) []string {
	guarded := make([]string, len(texts))
	for i, t := range texts {
		guarded[i] = Guard(t)
	}
	return guarded
}
