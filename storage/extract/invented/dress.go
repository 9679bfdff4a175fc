package invented

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"

	"golang.org/x/text/encoding/charmap"
)

// dress is a way of writing an extract.
type dress interface {
	ending() string
	write([]record) []byte
}

// plain is comma-separated UTF-8 with decimal points and ISO 8601 dates, with
// or without a byte order mark.
type plain struct{ mark bool }

func (plain) ending() string { return ".csv" }

func (p plain) write(records []record) []byte {
	var b bytes.Buffer
	if p.mark {
		b.WriteString("\ufeff")
	}
	b.WriteString("claim_id,loss_date,report_date,close_date,status,line,segment,paid,outstanding,deductible,limit,currency\n")
	for i := range records {
		for column, c := range records[i] {
			if column > 0 {
				b.WriteByte(',')
			}
			switch c.kind {
			case isDate:
				b.WriteString(c.date.String())
			case isMoney:
				b.WriteString(decimal(c.cents, ".", ""))
			default:
				b.WriteString(c.text)
			}
		}
		b.WriteByte('\n')
	}
	return b.Bytes()
}

// continental is semicolon-separated Windows-1252 with decimal commas, points
// between thousands, days first, and the line ends of its system.
type continental struct{}

func (continental) ending() string { return ".csv" }

func (continental) write(records []record) []byte {
	var b strings.Builder
	b.WriteString("Claim number;Date of loss;Date reported;Date closed;Status;Line of business;Segment;" +
		"Paid to date;Case reserve;Deductible;Payment limit;Currency\r\n")
	for i := range records {
		for column, c := range records[i] {
			if column > 0 {
				b.WriteByte(';')
			}
			switch c.kind {
			case isDate:
				year, month, day := c.date.Civil()
				fmt.Fprintf(&b, "%02d.%02d.%04d", day, month, year)
			case isMoney:
				b.WriteString(decimal(c.cents, ",", "."))
			default:
				b.WriteString(c.text)
			}
		}
		b.WriteString("\r\n")
	}
	encoded, err := charmap.Windows1252.NewEncoder().String(b.String())
	if err != nil {
		panic(fmt.Sprintf("the invented book has a character that Windows-1252 lacks: %v", err)) // only our own words come here
	}
	return []byte(encoded)
}

// decimal writes cents as units with two decimals.
func decimal(cents int64, point, thousands string) string {
	sign := ""
	if cents < 0 {
		sign, cents = "-", -cents
	}
	whole := strconv.FormatInt(cents/100, 10)
	if thousands != "" {
		for at := len(whole) - 3; at > 0; at -= 3 {
			whole = whole[:at] + thousands + whole[at:]
		}
	}
	return fmt.Sprintf("%s%s%s%02d", sign, whole, point, cents%100)
}
