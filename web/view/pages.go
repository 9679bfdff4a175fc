package view

import (
	"spillway/severity/claims"
	"spillway/severity/study"
	"spillway/storage/extract"
)

// Caution is printed with every figure that leaves.
const Caution = "These figures support, and do not replace, a qualified actuary's judgement. Local law, regulation and standards of practice prevail."

// Page is what every page has.
type Page struct {
	Title   string
	Section string // "batches", "studies", "glossary" or ""
	Version string
	Notice  string // one line about what was just done
}

// HomePage is the first page.
type HomePage struct {
	Page
	Batches []BatchRow
	Studies []StudyRow
	Uploads []UploadRow
}

// BatchRow is a batch in a list.
type BatchRow struct {
	ID                               int64
	Name, Source, FileName, Currency string
	Valuation                        claims.Date
	Accepted, Rejected, Later        int
	AcceptedAt                       string
}

// StudyRow is a study in a list.
type StudyRow struct {
	ID             int64
	Name, Purpose  string
	Latest, Claims int
	Status         string
	Currency       string
	Mean, Shape    float64
	Changed        string
}

// UploadRow is an upload that is not finished.
type UploadRow struct {
	ID                int64
	Source, FileName  string
	Bytes             int64
	Created, NextStep string // path of the step that comes next
}

// UploadPage asks for a file.
type UploadPage struct {
	Page
	Sources  []string
	Source   string
	MaxBytes int64
	Problem  string
}

// ColumnsPage shows how the file is read and lets the user correct it.
type ColumnsPage struct {
	Page
	Upload   UploadRow
	Guess    extract.Guess
	Plan     extract.Plan
	Fields   []FieldChoice
	Remember bool // the plan comes from an earlier extract of the source
	Problem  string
}

// FieldChoice is a field with the column that holds it.
type FieldChoice struct {
	Field       extract.Field
	Name, About string
	Column      string // header, "" for none
}

// BasisPage asks what amounts and terms mean.
type BasisPage struct {
	Page
	Upload                          UploadRow
	Basis                           claims.Basis
	HasDeductible, HasLimit, HasRow bool // columns that are mapped; HasRow: a deductible type by row
	Examples                        []WorkedClaim
	Problem                         string
}

// WorkedClaim shows what the terms mean for one claim.
type WorkedClaim struct{ Recorded, Terms, Meaning string }

// FindingsPage is the account of a check.
type FindingsPage struct {
	Page
	Upload    UploadRow
	BasisLine string
	Report    extract.Report
	BatchName string
	Problem   string
}

// BatchPage is one batch.
type BatchPage struct {
	Page
	Batch     BatchRow
	SHA256    string
	Bytes     int64
	BasisLine string
	Report    extract.Report
	Claims    []ClaimRow
	Next      int // line after which the next page of claims begins; 0 for none
	First     bool
}

// ClaimRow is a claim as its extract states it.
type ClaimRow struct {
	BatchID                     int64
	BatchName                   string
	Valuation                   claims.Date
	Line                        int
	ID                          string
	LossDate                    claims.Date
	Status, Business, Segment   string
	Paid, Outstanding, Incurred string
	Deductible, Limit           string
}

// ClaimPage is a claim over its valuations.
type ClaimPage struct {
	Page
	ID         string
	Currency   string
	Valuations []ClaimRow
}

// ListPage lists batches or studies.
type ListPage struct {
	Page
	Batches []BatchRow
	Studies []StudyRow
}

// NewStudyPage asks what a study is to be.
type NewStudyPage struct {
	Page
	Name, Purpose string
	Batches       []BatchRow
	Chosen        map[int64]bool
	Problem       string
}

// StudyPage is one revision of a study, with its assumptions to be moved.
type StudyPage struct {
	Page
	ID             int64
	Name, Purpose  string
	Number, Latest int
	Author, Note   string
	Created        string
	ProgramVersion string
	Results        *study.Results
	Batches        []BatchRow // that may be chosen
	Businesses     []string   // of the chosen batches
	Segments       []string
	Revisions      []RevisionRow
	Form           StudyForm // what the fields show
	Problem        string
}

// StudyForm is the text in the fields of a study.
type StudyForm struct {
	Quantiles string
	Layers    []LayerField
	Note      string
}

// LayerField is a layer as typed.
type LayerField struct{ Limit, Attachment string }

// RevisionRow is a revision in a list, with what it changed.
type RevisionRow struct {
	Number                int
	Author, Note, Created string
	Claims                int
	Mean                  float64
	Changes               []string
}

// FailurePage says what went wrong and what to do.
type FailurePage struct {
	Page
	Status  int
	Message string
	Advice  string
}
