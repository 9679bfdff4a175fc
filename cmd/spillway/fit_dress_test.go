package main

import (
	"fmt"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

// TestFitInEveryDress: encoding, delimiter, marks and file kind move no digit
// of the fit of one set of claims. The oracle is O1 of fit_oracle_test.go.
func TestFitInEveryDress(t *testing.T) {
	plain := rows("claim_id,segment,amount", setB, func(x float64) string { return fmt.Sprintf("C%v,entrepôt,%v.00", x, x) })
	encoded := func(e encoding.Encoding, text string) string {
		t.Helper()
		out, err := e.NewEncoder().String(text)
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	workbook := func() string {
		t.Helper()
		file := excelize.NewFile()
		defer file.Close()
		for i, x := range setB {
			if i == 0 {
				file.SetSheetRow("Sheet1", "A1", &[]any{"claim_id", "segment", "amount"})
			}
			if err := file.SetSheetRow("Sheet1", fmt.Sprintf("A%d", i+2), &[]any{fmt.Sprintf("C%v", x), "entrepôt", x}); err != nil {
				t.Fatal(err)
			}
		}
		buffer, err := file.WriteToBuffer()
		if err != nil {
			t.Fatal(err)
		}
		return buffer.String()
	}
	thousands := rows("claim_id;segment;amount", setB, func(x float64) string {
		text := fmt.Sprintf("%v,00", x)
		if x >= 1000 {
			text = fmt.Sprintf("%d.%03d,00", int(x)/1000, int(x)%1000)
		}
		return fmt.Sprintf("C%v;entrepôt;%s", x, text)
	})
	for name, file := range map[string]string{
		"UTF-8":                        plain,
		"UTF-8 with a byte order mark": "\ufeff" + plain,
		"carriage returns":             strings.ReplaceAll(plain, "\n", "\r\n"),
		"Windows-1252":                 encoded(charmap.Windows1252, plain),
		"UTF-16, little end first":     encoded(unicode.UTF16(unicode.LittleEndian, unicode.UseBOM), plain),
		"UTF-16, big end first":        encoded(unicode.UTF16(unicode.BigEndian, unicode.UseBOM), plain),
		"tabs":                         strings.ReplaceAll(plain, ",", "\t"),
		"continental":                  encoded(charmap.Windows1252, thousands),
		"quoted":                       strings.ReplaceAll(plain, "entrepôt", "\"entre\npôt, \"\"A\"\"\""),
		"workbook":                     workbook(),
		"lines above the header":       "Claims at 2025-06-30\n\n" + plain,
	} {
		t.Run(name, func(t *testing.T) {
			got := answer(t, file, "fit", "-", "--json")
			got.is(t, 20, "claims", "used")
			got.near(t, 0.556157797371492, 1e-9, "parameters", "shape")
			got.near(t, 2561.14362997694, 1e-9, "parameters", "scale")
		})
	}
}
