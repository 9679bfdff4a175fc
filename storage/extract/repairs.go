package extract

// repair is something that is put right in reading without a finding.
type repair uint8

const (
	blankLine repair = iota
	outerSpace
	noBreakSpace
	quotedNewline
	strayQuote
	shortRow
	spreadsheetRounding
	currencyCase
	repairKinds
)

// repairWords say what was done.
var repairWords = [repairKinds]string{
	blankLine:           "blank line passed over",
	outerSpace:          "white space around a value left out",
	noBreakSpace:        "no-break space inside a value read as a space",
	quotedNewline:       "row with a line break inside quotes kept as one row",
	strayQuote:          "quote inside a value kept as it stands",
	shortRow:            "row shorter than the header: the columns that it lacks, none of which is read, count as blank",
	spreadsheetRounding: "amount with the rounding of a spreadsheet's arithmetic read to its 15 digits",
	currencyCase:        "currency code read in capital letters",
}

// repairs counts each kind.
type repairs [repairKinds]int

// Repair is something that was put right in reading without a finding.
type Repair struct {
	What  string `json:"what"`
	Count int    `json:"count"`
}

// list names those that occurred, in the order of their kinds.
func (r *repairs) list() []Repair {
	var all []Repair
	for kind, count := range r {
		if count > 0 {
			all = append(all, Repair{What: repairWords[kind], Count: count})
		}
	}
	return all
}
