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
// source), letters and digits only, in lower case. A word that is as often
// the heading of something else (count, state, reported) is left to the user.
var headings = map[Field][]string{
	ClaimID: {"claimid", "claim", "claimno", "claimnumber", "claimnum", "claimnr", "claimref", "claimreference", "claimkey", "claimcode",
		"id", "reference", "referenceno", "referencenumber", "lossno", "lossnumber", "lossid", "lossref", "fileno", "filenumber",
		"schadennummer", "schadennr", "sinistre", "nosinistre", "numerosinistre"},
	LossDate: {"lossdate", "dateofloss", "dol", "dateloss", "accidentdate", "dateofaccident", "occurrencedate", "dateofoccurrence",
		"eventdate", "dateofevent", "incidentdate", "dateofincident", "schadendatum", "datesinistre"},
	ReportDate: {"reportdate", "reporteddate", "datereported", "dateofreport", "notificationdate", "dateofnotification", "notifieddate",
		"datenotified", "reportingdate", "advicedate", "meldedatum"},
	CloseDate: {"closedate", "closeddate", "dateclosed", "closingdate", "closuredate", "dateofclosure", "settlementdate", "settleddate",
		"datesettled", "dateofsettlement", "finalisationdate"},
	Status:   {"status", "claimstatus", "claimstate", "openclosed", "statuscode", "statusofclaim"},
	Business: {"line", "lineofbusiness", "businessline", "lob", "business", "class", "classofbusiness", "businessclass", "product", "branch"},
	Segment:  {"segment", "subline", "subclass", "region", "territory", "portfolio", "segmentname"},
	Paid: {"paid", "paidtodate", "totalpaid", "paidtotal", "paidloss", "paidlosses", "losspaid", "paidamount", "amountpaid", "paidclaims",
		"claimspaid", "cumulativepaid", "cumulativepaidloss", "grosspaid", "paidgross", "payment", "payments", "totalpayments", "claimpayments"},
	Outstanding: {"outstanding", "os", "osreserve", "casereserve", "casereserves", "reserve", "reserves", "lossreserve", "outstandingreserve",
		"reserveoutstanding", "unpaid", "unpaidloss", "outstandingloss", "outstandinglosses", "outstandingamount", "caseoutstanding",
		"grossoutstanding", "totaloutstanding", "caseestimate"},
	Incurred: {"incurred", "totalincurred", "incurredtotal", "incurredloss", "incurredlosses", "lossincurred", "incurredamount",
		"amountincurred", "caseincurred", "reportedincurred", "grossincurred", "incurredgross"},
	Amount: {"amount", "loss", "lossamount", "amountofloss", "claimamount", "amountofclaim", "groundup", "grounduploss", "groundupamount",
		"severity", "size", "claimsize", "losssize", "grossloss"},
	Deductible: {"deductible", "ded", "excess", "deductibleamount", "deductibleapplied", "policydeductible", "policyexcess", "retention",
		"claimdeductible", "excessamount"},
	Limit: {"limit", "policylimit", "paymentlimit", "limitofliability", "limitofindemnity", "suminsured", "limitamount", "maximumpayment",
		"maxpayment", "topofcover", "coverlimit", "coveragelimit", "claimlimit", "occurrencelimit", "limitperclaim"},
	LimitReached:   {"limitreached", "censored", "atlimit", "cappedatlimit", "limitflag", "abovelimit", "limitexhausted"},
	DeductibleType: {"deductibletype", "typeofdeductible", "dedtype", "kindofdeductible"},
	Weight:         {"weight", "weights", "claimweight"},
	Currency:       {"currency", "ccy", "cur", "curr", "currencycode", "originalcurrency", "currencyofclaim"},
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
// first, then the first heading word that fits, no header twice. Where there
// is an amount and its parts too, the one that goes by the field's own name
// stays, else the parts.
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
			if letters(h) == letters(string(f)) {
				claim(f, h)
			}
		}
	}
	byName := letters(columns[Amount]) == string(Amount)
	for _, f := range Fields {
		for _, word := range headings[f] {
			for _, h := range header {
				if letters(h) == word {
					claim(f, h)
				}
			}
		}
	}
	if _, amount := columns[Amount]; amount {
		for _, part := range []Field{Paid, Outstanding, Incurred} {
			if _, ok := columns[part]; ok && byName {
				delete(columns, part)
			} else if ok && part != Outstanding {
				delete(columns, Amount)
			}
		}
	}
	return columns
}
