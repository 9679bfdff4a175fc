package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// reading are the arguments of every command that reads an extract: where it
// is, how it is written, and what its columns mean.
type reading struct {
	File    string   `arg:"" help:"Claim extract, CSV or XLSX; - for standard input."`
	Columns []string `sep:"none" placeholder:"FIELD=HEADER,..." help:"Which header holds which field: ${fields}. A header equal to a field's name needs no mapping; FIELD= leaves a field unread."`

	Basis          string `enum:"ground-up,net" default:"ground-up" help:"Amounts are ground-up, or net of the deductible."`
	DeductibleType string `enum:"ordinary,franchise" default:"ordinary" help:"Deductibles are ordinary or franchise, where no column says."`
	LimitBasis     string `enum:"payment,top" default:"payment" help:"Limits are the maximum payment, or the ground-up top of cover."`

	BlankDeductible string `enum:"refuse,exclude,none" default:"refuse" help:"What a blank deductible does: refuse stops the run, exclude leaves its row out, none means that there is no deductible."`
	BlankLimit      string `enum:"refuse,exclude,none" default:"refuse" help:"What a blank limit does: likewise."`
	Currency        string `placeholder:"CODE" help:"Currency of the amounts, ISO 4217; rows of a currency column with another are rejected."`
	Valuation       string `placeholder:"DATE" help:"Valuation date of the extract, such as 2025-06-30."`

	Encoding  string `enum:"auto,utf-8,utf-16le,utf-16be,windows-1252" default:"auto" help:"Character encoding: auto, utf-8, utf-16le, utf-16be or windows-1252."`
	Delimiter string `placeholder:"MARK" help:"What parts the cells: , ; | or tab."`
	Decimal   string `placeholder:"MARK" help:"Decimal mark: . or ,"`
	Thousands string `placeholder:"MARK" help:"Mark between thousands: , . ' space or none."`
	DateOrder string `enum:"auto,day-first,month-first" default:"auto" help:"What a date such as 03/04/2025 begins with: auto, day-first or month-first."`
	Header    int    `placeholder:"LINE" help:"Line of the headers, from 1."`
	Sheet     string `placeholder:"NAME" help:"Sheet of a workbook."`
}

// input is an opened extract with all that decides how it is read.
type input struct {
	name string // for messages
	file io.ReaderAt
	size int64
	plan extract.Plan
	io.Closer
}

// open reads the head of the file and settles the plan.
func (r *reading) open(streams *streams) (*input, error) {
	asked, err := parseColumns(r.Columns)
	if err != nil {
		return nil, err
	}
	basis, err := r.basis()
	if err != nil {
		return nil, err
	}
	in, err := r.bytes(streams)
	if err != nil {
		return nil, err
	}
	if err := in.settle(r, asked, basis, streams); err != nil {
		in.Close()
		var wrong usage
		if errors.As(err, &wrong) {
			return nil, err
		}
		return nil, fmt.Errorf("%s: %w", in.name, err)
	}
	return in, nil
}

func (r *reading) bytes(streams *streams) (*input, error) {
	if r.File == "-" {
		return buffered("standard input", streams.in, io.NopCloser(nil))
	}
	file, err := os.Open(r.File)
	if err != nil {
		return nil, err
	}
	about, err := file.Stat()
	if err == nil && about.IsDir() {
		err = fmt.Errorf("%s is a folder, not a file", r.File)
	}
	if err != nil {
		return nil, errors.Join(err, file.Close())
	}
	if !about.Mode().IsRegular() { // a pipe
		return buffered(r.File, file, file)
	}
	return &input{name: r.File, file: file, size: about.Size(), Closer: file}, nil
}

// buffered holds in memory what can be read only once.
func buffered(name string, from io.Reader, closer io.Closer) (*input, error) {
	content, err := io.ReadAll(from)
	if err != nil {
		return nil, errors.Join(fmt.Errorf("%s: %w", name, err), closer.Close())
	}
	return &input{name: name, file: bytes.NewReader(content), size: int64(len(content)), Closer: closer}, nil
}

// settle guesses how the file is written, puts what was asked above the guess,
// and refuses to go on where neither decides.
func (in *input) settle(r *reading, asked extract.ColumnMap, basis claims.Basis, streams *streams) error {
	guess, err := extract.SniffAs(in.file, in.size, r.given(), asked)
	if err != nil {
		return err
	}
	columns, notes, err := chooseColumns(guess.Header, asked, guess.Columns)
	if err != nil {
		return err
	}
	in.plan = extract.Plan{Format: guess.Format, Columns: columns, Basis: basis}
	if err := r.override(&in.plan.Format); err != nil {
		return err
	}
	if err := r.refuseDoubts(guess.Doubts, columns); err != nil {
		return err
	}
	for _, d := range guess.Doubts {
		if d.About == "sheet" || d.About == "dates" && hasDate(columns) {
			notes = append(notes, d.Question)
		}
	}
	if code := currencyOf(guess, columns); basis.Currency == "" && code != "" {
		in.plan.Basis.Currency = code
		notes = append(notes, fmt.Sprintf("currency %s, as in the first row; say --currency for another", code))
	}
	for _, note := range notes {
		fmt.Fprintf(streams.err, "%s: %s\n", in.name, note)
	}
	return nil
}

// given is what was said of the file's form; the rest is guessed.
func (r *reading) given() extract.Format {
	f := extract.Format{Delimiter: r.Delimiter, HeaderLine: r.Header, Sheet: r.Sheet}
	if r.Delimiter == "tab" {
		f.Delimiter = "\t"
	}
	if r.Encoding != "auto" {
		f.Encoding = extract.Encoding(r.Encoding)
	}
	return f
}

// refuseDoubts stops where the file cannot tell and nobody has said.
func (r *reading) refuseDoubts(doubts []extract.Doubt, columns extract.ColumnMap) error {
	for _, d := range doubts {
		switch {
		case d.About == "decimal" && r.Decimal == "":
			return fmt.Errorf("%s Say --decimal . or --decimal ,", d.Question)
		case d.About == "date_order" && r.DateOrder == "auto" && hasDate(columns):
			return fmt.Errorf("%s Say --date-order day-first or month-first", d.Question)
		case d.About == "dates" && hasDate(columns):
			return fmt.Errorf("%s Or leave them unread: --columns loss_date=,report_date=,close_date=", d.Question)
		case d.About == "sheet":
			return fmt.Errorf("%s Say --sheet NAME", d.Question)
		case d.About == "encoding":
			return fmt.Errorf("%s Say --encoding utf-8 or --encoding windows-1252", d.Question)
		}
	}
	return nil
}

func hasDate(columns extract.ColumnMap) bool {
	for _, field := range []extract.Field{extract.LossDate, extract.ReportDate, extract.CloseDate} {
		if _, ok := columns[field]; ok {
			return true
		}
	}
	return false
}

// currencyOf is the first row's currency: amounts of several are never mixed.
func currencyOf(guess extract.Guess, columns extract.ColumnMap) string {
	at := slices.Index(guess.Header, columns[extract.Currency])
	if at < 0 || len(guess.Sample) == 0 || at >= len(guess.Sample[0]) {
		return ""
	}
	return guess.Sample[0][at]
}

func (r *reading) override(f *extract.Format) error {
	if r.Decimal != "" {
		f.Decimal = r.Decimal
		if f.Thousands == f.Decimal {
			f.Thousands = ""
		}
	}
	switch r.Thousands {
	case "":
	case "none":
		f.Thousands = ""
	case "space":
		f.Thousands = " "
	default:
		f.Thousands = r.Thousands
	}
	if r.DateOrder != "auto" {
		f.DateOrder = extract.DateOrder(strings.ReplaceAll(r.DateOrder, "-", "_"))
	}
	if err := f.Validate(); err != nil {
		return usage{err}
	}
	return nil
}

func (r *reading) basis() (claims.Basis, error) {
	b := claims.Basis{Currency: strings.ToUpper(r.Currency)}
	if r.Basis == "net" {
		b.Amounts = claims.NetOfDeductible
	}
	if r.DeductibleType == "franchise" {
		b.Deductible = claims.Franchise
	}
	if r.LimitBasis == "top" {
		b.Limit = claims.TopOfCover
	}
	if r.BlankDeductible == "none" {
		b.NoDeduct = claims.BlankMeansNone
	}
	if r.BlankLimit == "none" {
		b.NoLimit = claims.BlankMeansNone
	}
	if r.Valuation != "" {
		date, err := claims.ParseDate(r.Valuation)
		if err != nil {
			return b, usagef("--valuation: %w", err)
		}
		b.Valuation = date
	}
	return b, nil
}
