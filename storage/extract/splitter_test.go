package extract

import (
	"bytes"
	"encoding/csv"
	"io"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"pgregory.net/rapid"
)

// TestSplitterReadsWhatCSVWrites holds the splitter against the standard
// library's writer and reader, over buffers cut anywhere.
func TestSplitterReadsWhatCSVWrites(t *testing.T) {
	cell := rapid.OneOf(rapid.StringMatching(`[ab",;\n\r| \t']{0,6}`), rapid.StringMatching(`[a-zäß0-9.]{0,40}`))
	rapid.Check(t, func(t *rapid.T) {
		delimiter := rapid.SampledFrom([]rune{',', ';', '\t', '|'}).Draw(t, "delimiter")
		rows := rapid.SliceOfN(rapid.SliceOfN(cell, 1, 5), 1, 20).Draw(t, "rows")
		var b bytes.Buffer
		out := csv.NewWriter(&b)
		out.Comma = delimiter
		out.UseCRLF = rapid.Bool().Draw(t, "crlf")
		if err := out.WriteAll(rows); err != nil {
			t.Fatal(err)
		}
		// The library drops empty lines and reads \r\n inside quotes as \n.
		want := csv.NewReader(bytes.NewReader(b.Bytes()))
		want.Comma, want.FieldsPerRecord = delimiter, -1
		in := newSplitter(iotest.OneByteReader(bytes.NewReader(b.Bytes())), byte(delimiter))
		in.buffer, in.settled = make([]byte, rapid.IntRange(1, 64).Draw(t, "buffer")), true
		last := 0
		for {
			cells, line, err := in.next()
			if err == io.EOF {
				break
			}
			if err != nil {
				t.Fatal(err)
			}
			if len(cells) == 1 && len(cells[0]) == 0 {
				continue
			}
			got := make([]string, len(cells))
			for i, c := range cells {
				got[i] = strings.ReplaceAll(string(c), "\r\n", "\n")
			}
			record, err := want.Read()
			for err == nil && len(record) == 1 && record[0] == "" {
				record, err = want.Read()
			}
			if err != nil {
				t.Fatalf("%q is a row more than the library reads (%v)", got, err)
			}
			if !slices.Equal(got, record) {
				t.Fatalf("%q, by the library %q", got, record)
			}
			if at, _ := want.FieldPos(0); at != line || line <= last {
				t.Fatalf("row on line %d, by the library %d", line, at)
			}
			last = line
		}
		rest, err := want.Read()
		for err == nil && len(rest) == 1 && rest[0] == "" {
			rest, err = want.Read()
		}
		if err != io.EOF {
			t.Fatalf("the library reads on: %q, %v", rest, err)
		}
	})
}

// TestLongRows: a row beyond the bound is an error at its line, not memory.
func TestLongRows(t *testing.T) {
	in := newSplitter(io.MultiReader(strings.NewReader("a,b\n1,2\n\"never"), io.LimitReader(zeros{}, 1<<30)), ',')
	for range 2 {
		if _, _, err := in.next(); err != nil {
			t.Fatal(err)
		}
	}
	if _, line, err := in.next(); err == nil || line != 3 || !strings.Contains(err.Error(), "line 3: a row of more than 4 MiB") {
		t.Errorf("line %d: %v", line, err)
	}
	if len(in.buffer) > 2*maxRow {
		t.Errorf("%d bytes are held", len(in.buffer))
	}
}
