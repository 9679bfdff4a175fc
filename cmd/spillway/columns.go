package main

import (
	"encoding/csv"
	"fmt"
	"io"
	"slices"
	"strings"

	"spillway/storage/extract"
)

// parseColumns reads "field=header,...". An item with a comma in its header is
// quoted as in a CSV file: "paid=Paid, total". A field without a header is not
// read at all, whatever the headers are.
func parseColumns(texts []string) (extract.ColumnMap, error) {
	columns := extract.ColumnMap{}
	for _, text := range texts {
		reader := csv.NewReader(strings.NewReader(text))
		reader.LazyQuotes = true
		items, err := reader.Read()
		if err != nil && err != io.EOF {
			return nil, usagef("--columns %q: %v", text, err)
		}
		for _, item := range items {
			name, header, ok := strings.Cut(item, "=")
			field := extract.Field(strings.TrimSpace(name))
			header = strings.TrimSpace(header)
			switch {
			case !ok:
				return nil, usagef("--columns: %q: want field=header", item)
			case !slices.Contains(extract.Fields, field):
				return nil, usagef("--columns: no field %q; the fields are %s", field, join(extract.Fields))
			}
			if other, twice := columns[field]; twice {
				return nil, usagef("--columns: %s is both %q and %q", field, other, header)
			}
			columns[field] = header
		}
	}
	return columns, nil
}

func join(fields []extract.Field) string {
	words := make([]string, len(fields))
	for i, f := range fields {
		words[i] = string(f)
	}
	return strings.Join(words, ", ")
}

// chooseColumns decides which header is which field: as asked, else a header
// equal to the field's name. Only when no column holds an amount by these
// rules is the guess from the headers taken, and every part of it said.
func chooseColumns(header []string, asked, guessed extract.ColumnMap) (columns extract.ColumnMap, notes []string, err error) {
	columns = extract.ColumnMap{}
	taken := map[string]bool{}
	for field, name := range asked {
		if name == "" {
			continue
		}
		if !slices.ContainsFunc(header, func(h string) bool { return strings.TrimSpace(h) == name }) {
			return nil, nil, usagef("--columns %s=%s: there is no such header; the headers are %s", field, name, quoted(header))
		}
		columns[field] = name
		taken[name] = true
	}
	for _, field := range extract.Fields {
		if _, settled := asked[field]; settled {
			continue
		}
		for _, h := range header {
			if name := strings.TrimSpace(h); sameName(name, field) && !taken[name] {
				columns[field] = name
				taken[name] = true
				break
			}
		}
	}
	adopt := !hasAmount(columns)
	for _, field := range extract.Fields {
		name, ok := guessed[field]
		_, have := columns[field]
		if _, settled := asked[field]; !ok || have || settled || taken[name] {
			continue
		}
		if adopt {
			columns[field] = name
			taken[name] = true
			notes = append(notes, fmt.Sprintf("column %q is read as %s; say --columns %s=HEADER for another", name, field, field))
		} else if slices.Contains(terms, field) {
			notes = append(notes, fmt.Sprintf("column %q looks like %s and is not read; --columns %s=%s reads it", name, field, field, name))
		}
	}
	notes = append(notes, settleAmount(columns, asked)...)
	if !hasAmount(columns) {
		return nil, nil, fmt.Errorf("no column holds an amount; the headers are %s; name one with --columns amount=HEADER", quoted(header))
	}
	return columns, notes, nil
}

// settleAmount decides between the amount of a loss and its parts where the
// file has both: what was asked for counts, else the amount.
func settleAmount(columns, asked extract.ColumnMap) (notes []string) {
	amount, ok := columns[extract.Amount]
	if !ok {
		return nil
	}
	_, wanted := asked[extract.Amount]
	parts := []extract.Field{extract.Paid, extract.Outstanding, extract.Incurred}
	for _, part := range parts {
		if _, other := asked[part]; other && asked[part] != "" && !wanted {
			delete(columns, extract.Amount)
			return []string{fmt.Sprintf("column %q is not read: %s was asked for", amount, part)}
		}
	}
	for _, part := range parts {
		if name, ok := columns[part]; ok {
			delete(columns, part)
			notes = append(notes, fmt.Sprintf("column %q is not read: the loss is in column %q", name, amount))
		}
	}
	return notes
}

// sameName tells that a header is a field's name, whatever its case and with
// spaces or hyphens for underscores: "Claim ID" is claim_id.
func sameName(header string, field extract.Field) bool {
	return strings.EqualFold(strings.NewReplacer(" ", "_", "-", "_").Replace(header), string(field))
}

// terms are the fields that change what an amount means.
var terms = []extract.Field{"deductible", "limit", "limit_reached", "deductible_type", "weight", "currency"}

func hasAmount(columns extract.ColumnMap) bool {
	for _, field := range []extract.Field{"amount", "incurred", "paid"} {
		if _, ok := columns[field]; ok {
			return true
		}
	}
	return false
}

func quoted(words []string) string {
	shown := make([]string, len(words))
	for i, w := range words {
		shown[i] = fmt.Sprintf("%q", strings.TrimSpace(w))
	}
	return strings.Join(shown, ", ")
}
