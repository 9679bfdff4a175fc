package extract

import (
	"fmt"
	"strings"
)

// guessMarks tells the decimal mark and the mark of thousands from the cells
// of the money columns.
func (g *Guess) guessMarks(data [][]string) {
	var votes markVotes
	for _, f := range Fields {
		if f.isMoney() {
			for _, cell := range g.columnOf(f, data) {
				votes.cast(cell)
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
		if f.Delimiter != "," && f.Kind == Delimited {
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
	switch {
	case votes.space > 0:
		f.Thousands = " "
	case votes.apostrophe > 0:
		f.Thousands = "'"
	case f.Decimal == "." && votes.commaGroups > 0:
		f.Thousands = ","
	case f.Decimal == "," && votes.pointGroups > 0:
		f.Thousands = "."
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
	text := string(body)
	if strings.ContainsAny(text, " \u00a0\u202f\u2009") {
		v.space++
	}
	if strings.ContainsAny(text, "'\u2019") {
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
	case behind != 3 || last > 3 || last == 0 || text[0] == '0':
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
