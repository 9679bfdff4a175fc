// Package extract reads claim extracts, delimited text or workbooks, into
// claims or findings. Nothing is dropped: every row of the file is accepted or
// rejected with its reasons, and counts and totals reconcile.
package extract

import "strings"

// Field is what a column of an extract may hold.
type Field string

// The fields, in the order in which they are shown.
const (
	ClaimID        Field = "claim_id"
	LossDate       Field = "loss_date"
	ReportDate     Field = "report_date"
	CloseDate      Field = "close_date"
	Status         Field = "status"
	Business       Field = "line"
	Segment        Field = "segment"
	Paid           Field = "paid"
	Outstanding    Field = "outstanding"
	Incurred       Field = "incurred"
	Amount         Field = "amount"
	Deductible     Field = "deductible"
	Limit          Field = "limit"
	LimitReached   Field = "limit_reached"
	DeductibleType Field = "deductible_type"
	Weight         Field = "weight"
	Currency       Field = "currency"
)

// Fields lists every field.
var Fields = []Field{ClaimID, LossDate, ReportDate, CloseDate, Status, Business, Segment, Paid, Outstanding, Incurred,
	Amount, Deductible, Limit, LimitReached, DeductibleType, Weight, Currency}

// isDate tells whether the field holds dates.
func (f Field) isDate() bool { return f == LossDate || f == ReportDate || f == CloseDate }

// isMoney tells whether the field holds amounts of money.
func (f Field) isMoney() bool {
	switch f {
	case Paid, Outstanding, Incurred, Amount, Deductible, Limit:
		return true
	}
	return false
}

// ColumnMap says which column, by its header text, holds which field.
type ColumnMap map[Field]string

// headings are the words under which columns go about (common practice, no
// source), letters and digits only, in lower case.
var headings = map[Field][]string{
	ClaimID:        {"claimid", "claim", "claimno", "claimnumber", "claimnr", "claimref", "claimreference", "id", "reference", "lossno", "lossnumber", "schadennummer", "sinistre"},
	LossDate:       {"lossdate", "dateofloss", "accidentdate", "dateofaccident", "occurrencedate", "dateofoccurrence", "eventdate", "incidentdate", "dol"},
	ReportDate:     {"reportdate", "reporteddate", "datereported", "dateofreport", "notificationdate", "notified", "datenotified", "notifieddate"},
	CloseDate:      {"closedate", "closeddate", "dateclosed", "closingdate", "settlementdate", "settleddate", "datesettled"},
	Status:         {"status", "claimstatus", "state", "openclosed"},
	Business:       {"line", "lineofbusiness", "lob", "business", "class", "classofbusiness", "product", "branch"},
	Segment:        {"segment", "subline", "subclass", "region", "territory", "portfolio", "segmentname"},
	Paid:           {"paid", "paidtodate", "totalpaid", "paidloss", "paidamount", "amountpaid", "cumulativepaid", "grosspaid", "payments", "paidlosses"},
	Outstanding:    {"outstanding", "os", "casereserve", "reserve", "outstandingreserve", "casereserves", "unpaid", "outstandingloss", "outstandingamount", "caseoutstanding"},
	Incurred:       {"incurred", "totalincurred", "incurredloss", "incurredamount", "caseincurred", "reported", "grossincurred"},
	Amount:         {"amount", "loss", "lossamount", "claimamount", "groundup", "grounduploss", "groundupamount", "severity", "size", "claimsize"},
	Deductible:     {"deductible", "ded", "excess", "deductibleamount", "retention", "deductibleapplied", "policydeductible"},
	Limit:          {"limit", "policylimit", "paymentlimit", "limitofliability", "suminsured", "limitamount", "maximumpayment", "topofcover", "coverlimit", "maxpayment"},
	LimitReached:   {"limitreached", "censored", "atlimit", "limited", "cappedatlimit", "limitflag"},
	DeductibleType: {"deductibletype", "typeofdeductible", "dedtype"},
	Weight:         {"weight", "count", "claimcount", "frequency"},
	Currency:       {"currency", "ccy", "cur", "currencycode", "originalcurrency"},
}

// letters is a header's letters and digits in lower case.
func letters(header string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9':
			return r
		case r >= 'A' && r <= 'Z':
			return r + 'a' - 'A'
		}
		return -1
	}, header)
}

// guessColumns maps headers to fields: a header that equals a field's name
// first, then the first heading word that fits, no header twice.
func guessColumns(header []string) ColumnMap {
	columns := ColumnMap{}
	taken := map[string]bool{}
	claim := func(f Field, h string) {
		if _, done := columns[f]; !done && !taken[h] && h != "" {
			columns[f] = h
			taken[h] = true
		}
	}
	for _, f := range Fields {
		for _, h := range header {
			if strings.EqualFold(strings.TrimSpace(h), string(f)) {
				claim(f, h)
			}
		}
	}
	for _, f := range Fields {
		for _, word := range headings[f] {
			for _, h := range header {
				if letters(h) == word {
					claim(f, h)
				}
			}
		}
	}
	return columns
}
