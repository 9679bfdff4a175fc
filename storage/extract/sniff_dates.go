package extract

import "fmt"

// dateVotes count what the dates of a file say of their order.
type dateVotes struct {
	dayFirst, monthFirst         int
	dayCell, monthCell, openCell string // examples; openCell may be read either way
	twoDigits                    int
	twoDigitCell                 string
}

func (v *dateVotes) cast(cell string) {
	p, ok := splitDate([]byte(cell))
	switch {
	case !ok && twoDigitYear([]byte(cell)):
		v.twoDigits++
		v.twoDigitCell = cell
	case !ok || p.yearFirst:
	case p.a > 12 && p.a <= 31 && p.b <= 12:
		v.dayFirst++
		v.dayCell = cell
	case p.b > 12 && p.b <= 31 && p.a <= 12:
		v.monthFirst++
		v.monthCell = cell
	case p.a == p.b: // the same date either way
	case p.a <= 12 && p.b <= 12:
		v.openCell = cell
	}
}

// guessDates decides the order of day and month only where the file proves it.
func (g *Guess) guessDates(data [][]string) {
	var votes dateVotes
	for _, at := range dateFields {
		for _, cell := range g.columnOf(Fields[at], data) {
			votes.cast(cell)
		}
	}
	choices := []string{string(DayFirst), string(MonthFirst)}
	switch {
	case votes.dayFirst > 0 && votes.monthFirst > 0:
		g.Doubts = append(g.Doubts, Doubt{About: "date_order", Choices: choices,
			Question: fmt.Sprintf("Dates in two orders stand in one file: %s and %s. Which of day and month comes first? Dates in the other order become findings where they can be told apart, and are misread where they cannot.", votes.dayCell, votes.monthCell)})
	case votes.dayFirst > 0:
		g.Format.DateOrder = DayFirst
	case votes.monthFirst > 0:
		g.Format.DateOrder = MonthFirst
	case votes.openCell != "":
		g.Doubts = append(g.Doubts, Doubt{About: "date_order", Choices: choices,
			Question: fmt.Sprintf("The order of day and month cannot be told from this file (%s, and no day above 12). Which comes first?", votes.openCell)})
	}
	if votes.twoDigits > 0 {
		g.Doubts = append(g.Doubts, Doubt{About: "dates",
			Question: fmt.Sprintf("Years have two digits (%s, and %d cells more among the first rows), and the century cannot be told. Export the dates with years of four digits; as they are, they cannot be read.", votes.twoDigitCell, votes.twoDigits-1)})
	}
}
