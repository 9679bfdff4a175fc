package claims

// Reconciliation follows claims and money from the batches to the curve. In
// every line rows and amounts are exact, and Read = Used + sum of Excluded.
// Rows is a count of claims; Amount is in minor units, in the amount field of
// the study (paid or incurred) and as the extract states it.
type Reconciliation struct {
	Read     Line
	Excluded []Exclusion // in the order in which they are applied
	Used     Line
}

// Line is one line of a reconciliation.
type Line struct {
	Rows   int
	Amount int64
}

// Exclusion is one reason for leaving claims out.
type Exclusion struct {
	Reason string // in the trade's words
	Line
}
