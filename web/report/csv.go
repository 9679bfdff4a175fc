package report

import (
	"encoding/csv"
	"io"

	"spillway/storage/extract"
)

// CSV writes the revision as one tidy table, the same bytes every time. Texts
// are guarded against being run as formulas; numbers are not touched.
func CSV(w io.Writer, d Document) error {
	out := csv.NewWriter(w)
	if err := out.Write([]string{"section", "item", "field", "value", "unit"}); err != nil {
		return err
	}
	for _, section := range sections(d) {
		for _, r := range section {
			value := extract.Guard(r.text)
			if r.isNumber {
				value = digits(r.value)
			}
			if err := out.Write([]string{r.section, extract.Guard(r.item), extract.Guard(r.field), value, extract.Guard(r.unit)}); err != nil {
				return err
			}
		}
	}
	out.Flush()
	return out.Error()
}
