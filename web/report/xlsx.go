package report

import (
	"io"
	"math"
	"strings"

	"github.com/xuri/excelize/v2"

	"spillway/storage/extract"
)

// XLSX writes the revision as a workbook, one sheet a topic, with real numbers.
func XLSX(w io.Writer, d Document) (err error) {
	book := excelize.NewFile()
	defer func() {
		if closeErr := book.Close(); err == nil {
			err = closeErr
		}
	}()
	b := &workbook{file: book}
	if b.head, err = book.NewStyle(&excelize.Style{Font: &excelize.Font{Bold: true}, Border: []excelize.Border{{Type: "bottom", Style: 1, Color: "555D61"}}}); err != nil {
		return err
	}
	topics := sections(d)
	for i, topic := range []string{"Summary", "Assumptions", "Data", "Curve", "Layers", "Quantiles", "QQ", "Survival"} {
		if err := b.sheet(topic, tableOf(topics[i])); err != nil {
			return err
		}
	}
	if err := book.DeleteSheet("Sheet1"); err != nil {
		return err
	}
	if err := book.SetDocProps(&excelize.DocProperties{Title: guard(d.Study), Creator: "Spillway " + d.ProgramVersion, Description: Caution}); err != nil {
		return err
	}
	_, err = book.WriteTo(w)
	return err
}

// table is a sheet: a header row and rows of cells.
type table struct {
	head []string
	rows [][]any
}

// tableOf spreads rows of one topic: where every item has the same fields the
// fields become columns, otherwise the tidy form is kept.
func tableOf(rows []row) table {
	var items, fields []string
	seenItem, seenField := map[string]int{}, map[string]int{}
	for _, r := range rows {
		if _, ok := seenItem[r.item]; !ok {
			seenItem[r.item] = len(items)
			items = append(items, r.item)
		}
		if name := heading(r); seenField[name] == 0 {
			fields = append(fields, name)
			seenField[name] = len(fields)
		}
	}
	if len(items) < 2 || len(rows) != len(items)*len(fields) {
		t := table{head: []string{"item", "field", "value", "unit"}}
		for _, r := range rows {
			t.rows = append(t.rows, []any{guard(r.item), guard(r.field), cell(r), guard(r.unit)})
		}
		return t
	}
	t := table{head: append([]string{"item"}, fields...)}
	for _, item := range items {
		t.rows = append(t.rows, append([]any{guard(item)}, make([]any, len(fields))...))
	}
	for _, r := range rows {
		t.rows[seenItem[r.item]][seenField[heading(r)]] = cell(r)
	}
	return t
}

func heading(r row) string {
	if r.unit == "" {
		return r.field
	}
	return r.field + ", " + r.unit
}

// cell is a number as a number, a text as a text; nothing where there is no
// finite number.
func cell(r row) any {
	if !r.isNumber {
		return guard(r.text)
	}
	if math.IsNaN(r.value) || math.IsInf(r.value, 0) {
		return nil
	}
	return r.value
}

func guard(text string) string { return extract.Guard(text) }

type workbook struct {
	file *excelize.File
	head int
}

func (b *workbook) sheet(name string, t table) error {
	if _, err := b.file.NewSheet(name); err != nil {
		return err
	}
	out, err := b.file.NewStreamWriter(name)
	if err != nil {
		return err
	}
	for i, head := range t.head {
		width := 14.0
		if i == 0 {
			width = 30
		}
		if strings.HasPrefix(head, "value") && len(t.head) == 4 || head == "field" {
			width = 46
		}
		if err := out.SetColWidth(i+1, i+1, width); err != nil {
			return err
		}
	}
	if err := out.SetPanes(&excelize.Panes{Freeze: true, YSplit: 1, TopLeftCell: "A2", ActivePane: "bottomLeft"}); err != nil {
		return err
	}
	head := make([]any, len(t.head))
	for i, h := range t.head {
		head[i] = excelize.Cell{Value: h, StyleID: b.head}
	}
	if err := out.SetRow("A1", head); err != nil {
		return err
	}
	for i, cells := range t.rows {
		at, err := excelize.CoordinatesToCellName(1, i+2)
		if err != nil {
			return err
		}
		if err := out.SetRow(at, cells); err != nil {
			return err
		}
	}
	if err := out.Flush(); err != nil {
		return err
	}
	landscape, a4, fit, pages := "landscape", 9, true, 0
	one := 1
	if err := b.file.SetPageLayout(name, &excelize.PageLayoutOptions{Orientation: &landscape, Size: &a4, FitToWidth: &one, FitToHeight: &pages}); err != nil {
		return err
	}
	if err := b.file.SetSheetProps(name, &excelize.SheetPropsOptions{FitToPage: &fit}); err != nil {
		return err
	}
	return b.file.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Titles", RefersTo: "'" + name + "'!$1:$1", Scope: name})
}
