package claims

// Selection says which claims of a book are used and which amount is their
// loss. An empty list selects all.
type Selection struct {
	Businesses []string    `json:"lines"`    // lines of business
	Segments   []string    `json:"segments"` //
	LossFrom   Date        `json:"loss_from"`
	LossTo     Date        `json:"loss_to"` // inclusive
	Statuses   []Status    `json:"statuses"`
	Amount     AmountField `json:"amount"`
}

// AmountField says which amount of a claim is its loss.
type AmountField string

const (
	PaidAmount     AmountField = "paid"
	IncurredAmount AmountField = "incurred" // paid plus outstanding
)
