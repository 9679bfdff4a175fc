package invented

import (
	"archive/zip"
	"bytes"
	"cmp"
	"fmt"
	"io"
	"slices"

	"github.com/xuri/excelize/v2"
)

// spreadsheet is an XLSX workbook of one sheet, dates and amounts being
// numbers with a format as a spreadsheet keeps them.
type spreadsheet struct{}

func (spreadsheet) ending() string { return ".xlsx" }

func (spreadsheet) write(records []record) []byte {
	content, err := workbook(records)
	if err != nil {
		panic(fmt.Sprintf("the invented book's workbook: %v", err)) // memory only, our own values only
	}
	return content
}

func workbook(records []record) ([]byte, error) {
	file := excelize.NewFile()
	defer file.Close()
	const sheet = "claims"
	if err := file.SetSheetName("Sheet1", sheet); err != nil {
		return nil, err
	}
	iso, plain := "yyyy-mm-dd", "0.00"
	dates, err := file.NewStyle(&excelize.Style{CustomNumFmt: &iso})
	if err != nil {
		return nil, err
	}
	amounts, err := file.NewStyle(&excelize.Style{CustomNumFmt: &plain})
	if err != nil {
		return nil, err
	}
	stream, err := file.NewStreamWriter(sheet)
	if err != nil {
		return nil, err
	}
	row := []any{"Claim ID", "Loss date", "Report date", "Close date", "Status", "Line", "Segment",
		"Paid", "Outstanding", "Deductible", "Limit", "Currency"}
	if err := stream.SetRow("A1", row); err != nil {
		return nil, err
	}
	// Day 1 of a spreadsheet is 1900-01-01 with a leap day that never was.
	epoch := day(1899, 12, 30)
	for i := range records {
		for column, c := range records[i] {
			switch {
			case c.kind == isDate:
				row[column] = excelize.Cell{StyleID: dates, Value: int(c.date - epoch)}
			case c.kind == isMoney:
				row[column] = excelize.Cell{StyleID: amounts, Value: float64(c.cents) / 100}
			case c.text == "":
				row[column] = nil
			default:
				row[column] = c.text
			}
		}
		if err := stream.SetRow(fmt.Sprintf("A%d", i+2), row); err != nil {
			return nil, err
		}
	}
	if err := stream.Flush(); err != nil {
		return nil, err
	}
	buffer, err := file.WriteToBuffer()
	if err != nil {
		return nil, err
	}
	return settle(buffer.Bytes())
}

// settle packs an archive anew with its parts in one order and without times,
// so that equal contents are equal bytes.
func settle(archive []byte) ([]byte, error) {
	in, err := zip.NewReader(bytes.NewReader(archive), int64(len(archive)))
	if err != nil {
		return nil, err
	}
	parts := slices.SortedFunc(slices.Values(in.File), func(a, b *zip.File) int { return cmp.Compare(a.Name, b.Name) })
	var packed bytes.Buffer
	out := zip.NewWriter(&packed)
	for _, part := range parts {
		from, err := part.Open()
		if err != nil {
			return nil, err
		}
		to, err := out.CreateHeader(&zip.FileHeader{Name: part.Name, Method: zip.Deflate})
		if err != nil {
			return nil, err
		}
		if _, err := io.Copy(to, from); err != nil {
			return nil, err
		}
		if err := from.Close(); err != nil {
			return nil, err
		}
	}
	if err := out.Close(); err != nil {
		return nil, err
	}
	return packed.Bytes(), nil
}
