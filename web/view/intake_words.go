package view

import (
	"fmt"
	"net/url"
	"slices"
	"strings"

	"github.com/a-h/templ"

	"spillway/storage/extract"
)

var (
	encodings  = [][2]string{{"utf-8", "UTF-8"}, {"windows-1252", "Windows-1252"}, {"utf-16le", "UTF-16 little endian"}, {"utf-16be", "UTF-16 big endian"}}
	delimiters = [][2]string{{",", "comma"}, {";", "semicolon"}, {"\t", "tab"}, {"|", "vertical bar"}}
	decimals   = [][2]string{{".", "point: 1234.50"}, {",", "comma: 1234,50"}}
	thousands  = [][2]string{{"", "nothing"}, {",", "comma"}, {".", "point"}, {" ", "space"}, {"'", "apostrophe"}}
	dateOrders = [][2]string{{"", "not decided"}, {"day_first", "day first: 3 April"}, {"month_first", "month first: 4 March"}}
)

func pairs(names []string) [][2]string {
	list := make([][2]string, len(names))
	for i, n := range names {
		list[i] = [2]string{n, n}
	}
	return list
}

// holds names the field that a column is mapped to.
func holds(columns extract.ColumnMap, header string) string {
	for _, f := range extract.Fields {
		if columns[f] == header && header != "" {
			return " → " + fieldNames[f][0]
		}
	}
	return ""
}

var fieldNames = map[extract.Field][2]string{
	extract.ClaimID:        {"Claim id", "finds a claim's later valuations"},
	extract.LossDate:       {"Loss date", "when the loss happened"},
	extract.ReportDate:     {"Report date", "when the insurer first knew"},
	extract.CloseDate:      {"Close date", "when it was last closed"},
	extract.Status:         {"Status", "open, closed, reopened, ..."},
	extract.Business:       {"Line of business", ""},
	extract.Segment:        {"Segment", ""},
	extract.Paid:           {"Paid to date", "cumulative payments"},
	extract.Outstanding:    {"Outstanding", "case reserve"},
	extract.Incurred:       {"Incurred", "paid + outstanding, as stated"},
	extract.Amount:         {"Amount", "where paid and outstanding are not split"},
	extract.Deductible:     {"Deductible", "of the claim"},
	extract.Limit:          {"Limit", "of the claim"},
	extract.LimitReached:   {"Limit reached", "1 where the loss is only a lower bound"},
	extract.DeductibleType: {"Deductible type", "ordinary or franchise, by row"},
	extract.Weight:         {"Weight", "claims a row stands for"},
	extract.Currency:       {"Currency", "rows in another one are rejected"},
}

// FieldChoices lists every field with the column that holds it.
func FieldChoices(columns extract.ColumnMap) []FieldChoice {
	var list []FieldChoice
	for _, f := range extract.Fields {
		list = append(list, FieldChoice{Field: f, Name: fieldNames[f][0], About: fieldNames[f][1], Column: columns[f]})
	}
	return list
}

func ruleName(r extract.Rule) string { return strings.ReplaceAll(string(r), "_", " ") }

// blocksFirst puts what rejects rows before what only warns.
func blocksFirst(groups []extract.FindingGroup) []extract.FindingGroup {
	sorted := slices.Clone(groups)
	slices.SortStableFunc(sorted, func(a, b extract.FindingGroup) int { return strings.Compare(string(a.Effect), string(b.Effect)) })
	return sorted
}

func firstOf(f []extract.Finding, n int) []extract.Finding { return f[:min(n, len(f))] }

func claimPath(c ClaimRow) templ.SafeURL {
	return templ.SafeURL(fmt.Sprintf("/batches/%d/claims/%s", c.BatchID, url.PathEscape(c.ID)))
}

// word is the stable word of a coded value, as forms send it.
func word(v interface{ MarshalText() ([]byte, error) }) string {
	text, err := v.MarshalText()
	if err != nil {
		return ""
	}
	return string(text)
}
