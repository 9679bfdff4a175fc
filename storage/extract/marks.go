package extract

import (
	"fmt"
	"strconv"
	"strings"
)

// guessMarks tells the decimal mark and the mark of thousands from the cells
// of the money columns.
func (g *Guess) guessMarks(data [][]string) {
	var votes markVotes
	for _, f := range Fields {
		if f.isMoney() {
			for _, cell := range g.columnOf(f, data) {
				// The numbers of a workbook have no marks of their own; its texts do.
				if g.Format.Kind == Delimited || !bareNumber(cell) {
					votes.cast(cell)
				}
			}
		}
	}
	f := &g.Format
	switch {
	case votes.comma > votes.point:
		f.Decimal = ","
	case votes.point > 0 || votes.comma == 0 && votes.either == "":
		f.Decimal = "."
	default:
		// Only forms such as 1,234 or 1.234 occur. Between commas the point is
		// the decimal mark; elsewhere nothing proves either reading.
		f.Decimal = "."
		if f.Delimiter != "," {
			if strings.Contains(votes.either, ".") {
				f.Decimal = ","
			}
			g.Doubts = append(g.Doubts, Doubt{About: "decimal",
				Question: fmt.Sprintf("Every amount with a mark looks like %s: is the mark between thousands or before the decimals? Choose the decimal mark.", votes.either),
				Choices:  []string{".", ","}})
		}
	}
	if votes.comma > 0 && votes.point > 0 {
		g.Doubts = append(g.Doubts, Doubt{About: "decimal",
			Question: fmt.Sprintf("Two number styles in one file: %s and %s. One style must be chosen; rows in the other become findings.", votes.commaCell, votes.pointCell),
			Choices:  []string{",", "."}})
	}
	f.Thousands = ""
	most := 0
	for _, m := range [...]struct {
		mark  string
		votes int
	}{{" ", votes.space}, {"'", votes.apostrophe}, {",", votes.commaGroups}, {".", votes.pointGroups}} {
		if m.mark != f.Decimal && m.votes > most {
			f.Thousands, most = m.mark, m.votes
		}
	}
}

// markVotes count what the cells say of their marks.
type markVotes struct {
	comma, point             int // as decimal mark
	commaCell, pointCell     string
	commaGroups, pointGroups int // as mark of thousands
	space, apostrophe        int
	either                   string // a cell that leaves it open
}

func (v *markVotes) cast(cell string) {
	body, _, _ := unsigned([]byte(cell))
	text := strings.Map(plainMark, string(body))
	if i := strings.IndexAny(text, "eE"); i > 0 { // the digits of scientific notation are not grouped
		text = text[:i]
		if strings.Count(text, ".")+strings.Count(text, ",") == 1 {
			v.decimal(text[strings.IndexAny(text, ".,")], cell)
		}
		return
	}
	if text == "" || strings.Trim(text, "0123456789., '") != "" {
		return // no number in any style
	}
	if strings.Contains(text, " ") {
		v.space++
	}
	if strings.Contains(text, "'") {
		v.apostrophe++
	}
	commas, points := strings.Count(text, ","), strings.Count(text, ".")
	last := strings.LastIndexAny(text, ",.")
	if last < 0 {
		return
	}
	behind := len(text) - last - 1
	switch {
	case commas > 0 && points > 0:
		v.decimal(text[last], cell)
		if text[last] == '.' {
			v.commaGroups++
		} else {
			v.pointGroups++
		}
	case commas > 1:
		v.commaGroups++
		v.decimal('.', "")
	case points > 1:
		v.pointGroups++
		v.decimal(',', "")
	case behind != 3 || last > 3 || last == 0 || text[0] == '0' || strings.ContainsAny(text, " '"):
		v.decimal(text[last], cell)
	default:
		v.either = cell
		if commas == 1 {
			v.commaGroups++
		} else {
			v.pointGroups++
		}
	}
}

// bareNumber tells that a cell may be a number as a workbook keeps it.
func bareNumber(cell string) bool {
	_, err := strconv.ParseFloat(cell, 64)
	return err == nil
}

// plainMark is a mark of typography as the plain one.
func plainMark(r rune) rune {
	switch r {
	case '\u00a0', '\u202f', '\u2009':
		return ' '
	case '\u2019':
		return '\''
	}
	return r
}

// decimal counts a vote; a form such as 1.234.567 rules the point out as a
// decimal mark without showing a comma, and counts for it.
func (v *markVotes) decimal(mark byte, cell string) {
	if mark == ',' {
		v.comma++
		if cell != "" {
			v.commaCell = cell
		}
	} else {
		v.point++
		if cell != "" {
			v.pointCell = cell
		}
	}
}
