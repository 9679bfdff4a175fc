package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"spillway/severity"
	"spillway/severity/claims"
	"spillway/severity/study"
)

// document runs a study on a small book made by hand: losses in cents,
// deductible 100, limit 50,000 as maximum payment, net of the deductible.
func document(t *testing.T, paid []int64) Document {
	t.Helper()
	b := &claims.Book{Currency: "EUR", Decimals: 2, Businesses: []string{"cargo"}, Segments: []string{"=north"},
		Batches: []claims.BookBatch{{ID: 1, Name: "=1+1 quarter", Digest: strings.Repeat("ab", 32),
			Basis: claims.Basis{Amounts: claims.NetOfDeductible, Currency: "EUR"}}}}
	for i, p := range paid {
		b.Batch, b.Line = append(b.Batch, 0), append(b.Line, int32(i+2))
		b.Paid, b.Outstanding = append(b.Paid, p), append(b.Outstanding, 0)
		b.Deductible, b.Limit = append(b.Deductible, 10000), append(b.Limit, 5000000)
		b.LossDate, b.Status = append(b.LossDate, 0), append(b.Status, claims.StatusClosed)
		b.Terms = append(b.Terms, claims.PackTerms(claims.Ordinary, claims.ReachedNotStated))
		b.Business, b.Segment = append(b.Business, 0), append(b.Segment, 0)
	}
	a := study.Default([]study.BatchRef{{ID: 1, Name: "=1+1 quarter"}}, 50000)
	r, err := study.Run(b, a)
	if err != nil {
		t.Fatal(err)
	}
	return Document{Study: "=SUM(A1)", Purpose: "prices", Revision: 3, Author: "an analyst", Created: "2026-01-31T10:00:00Z", ProgramVersion: "test", Results: r}
}

// Paid amounts in cents; one reaches the limit, one is nil.
var usual = []int64{12345, 250000, 98765, 5000000, 43210, 777777, 1234567, 65432, 0, 333333, 150000, 2222222}

func TestTheThreeFormsAgree(t *testing.T) {
	d := document(t, usual)
	var j, c, x bytes.Buffer
	for _, err := range []error{JSON(&j, d), CSV(&c, d), XLSX(&x, d)} {
		if err != nil {
			t.Fatal(err)
		}
	}
	for name, text := range map[string]string{"json": j.String(), "csv": c.String()} {
		for _, bad := range []string{"NaN", "Inf"} {
			if strings.Contains(text, bad) {
				t.Errorf("%s holds %s", name, bad)
			}
		}
	}
	var got struct {
		Schema, Caution string
		Fit             struct {
			Figures map[string]struct {
				Value    float64
				Interval struct{ Lower, Upper float64 }
			}
		}
		Reconciliation struct {
			Read, Used struct {
				Rows   int
				Amount string
			}
		}
		Layers []struct{ Limit *float64 }
	}
	if err := json.Unmarshal(j.Bytes(), &got); err != nil {
		t.Fatal(err)
	}
	want := d.Results.Fit.Parameters[0]
	if f := got.Fit.Figures["shape"]; f.Value != want.Value || f.Interval.Lower != want.Interval.Lower || f.Interval.Upper != want.Interval.Upper {
		t.Errorf("shape reads back as %+v, want %+v", f, want.Estimate)
	}
	// 101,876.51 by hand; the nil claim is read and not used.
	if r := got.Reconciliation; r.Read.Rows != 12 || r.Used.Rows != 11 || r.Used.Amount != "101876.51" || r.Read.Amount != "101876.51" {
		t.Errorf("reconciliation %+v", r)
	}
	if last := got.Layers[len(got.Layers)-1]; last.Limit != nil {
		t.Errorf("an unlimited layer has limit %v, want null", *last.Limit)
	}
	if got.Caution != Caution || got.Schema != schema {
		t.Error("caution or schema is missing")
	}

	rows, err := csv.NewReader(&c).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var shape, used string
	for _, r := range rows {
		if r[0] == "curve" && r[2] == "shape" {
			shape = r[3]
		}
		if r[0] == "data" && r[1] == "used" && r[2] == "amount as recorded" {
			used = r[3]
		}
		for _, cell := range r {
			if strings.HasPrefix(cell, "=") {
				t.Errorf("a cell of the CSV would run as a formula: %s", cell)
			}
		}
	}
	if v, err := strconv.ParseFloat(shape, 64); err != nil || v != want.Value || used != "101876.51" {
		t.Errorf("CSV: shape %q, used %q", shape, used)
	}

	book, err := excelize.OpenReader(&x)
	if err != nil {
		t.Fatal(err)
	}
	defer book.Close()
	cells, err := book.GetRows("Curve", excelize.Options{RawCellValue: true})
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for _, r := range cells {
		if len(r) > 2 && r[1] == "shape" {
			v, err := strconv.ParseFloat(r[2], 64)
			// The library reads numbers to 15 digits, whatever stands in the file.
			found = err == nil && math.Abs(v/want.Value-1) < 1e-13
		}
	}
	if !found {
		t.Error("XLSX: the sheet Curve does not hold the shape as a number")
	}
	summary, err := book.GetRows("Summary")
	if err != nil || !strings.Contains(strings.Join(summary[3], "|"), "'=SUM(A1)") {
		t.Errorf("XLSX: the study's name is not guarded: %v, %v", summary, err)
	}
}

func TestReportWithoutACurve(t *testing.T) {
	d := document(t, []int64{5000000, 5000000})
	if d.Results.NoFit == nil || d.Results.NoFit.Status != severity.AllCensored {
		t.Fatalf("want all censored, got %+v", d.Results.NoFit)
	}
	var j, c, x bytes.Buffer
	for _, err := range []error{JSON(&j, d), CSV(&c, d), XLSX(&x, d)} {
		if err != nil {
			t.Fatal(err)
		}
	}
	var got struct {
		Fit   any
		NoFit struct{ Status, Reason string } `json:"no_fit"`
	}
	if err := json.Unmarshal(j.Bytes(), &got); err != nil || got.Fit != nil || got.NoFit.Status != "all_censored" || got.NoFit.Reason == "" {
		t.Errorf("%+v, %v", got, err)
	}
	if strings.Contains(c.String(), "shape") || !strings.Contains(c.String(), "all_censored") {
		t.Error("the CSV must hold the verdict and no parameter")
	}
}

func TestSameBytes(t *testing.T) {
	var first, second bytes.Buffer
	for _, b := range []*bytes.Buffer{&first, &second} {
		if err := JSON(b, document(t, usual)); err != nil {
			t.Fatal(err)
		}
		if err := CSV(b, document(t, usual)); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(first.Bytes(), second.Bytes()) {
		t.Error("the same revision gives different bytes")
	}
}
