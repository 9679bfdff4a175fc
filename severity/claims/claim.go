// Package claims turns claims as an insurer records them into observations of
// the ground-up loss: amounts and their basis, coverage terms, selection, and
// the reconciliation of what was used and what was left out.
package claims

// Claim is one row of an extract as it came: amounts on the basis of its
// batch, nothing converted. Optional fields say so with a Has flag or a zero
// value; a blank deductible or limit is not zero and not unlimited.
type Claim struct {
	Line       int // line in the file, the header line being 1
	ID         string
	LossDate   Date
	ReportDate Date
	CloseDate  Date
	Status     Status
	Business   string // line of business
	Segment    string

	Paid           Amount
	Outstanding    Amount // case reserve
	Deductible     Amount
	Limit          Amount
	HasDeductible  bool // false: blank or no such column
	HasLimit       bool
	LimitReached   Reached
	DeductibleType DeductibleType // of this row, or of the batch's basis
	Weight         float64        // > 0; 1 for a claim
}

// Incurred is paid plus outstanding, exact for every claim of a batch, whose
// amounts are bounded so that they add up; see Amount.Plus for others.
func (c *Claim) Incurred() Amount {
	sum, _ := c.Paid.Plus(c.Outstanding)
	return sum
}

// Status is the claim's state at the valuation date.
type Status uint8

const (
	StatusUnknown  Status = iota // not stated, or a code that was not recognised
	StatusOpen                   // not settled; the amount is not final
	StatusClosed                 // settled with a payment
	StatusReopened               // settled once and open again
	StatusNil                    // closed without payment
)

// Statuses lists every status in order of its code.
var Statuses = []Status{StatusUnknown, StatusOpen, StatusClosed, StatusReopened, StatusNil}

// String is the trade's word for the status.
func (s Status) String() string {
	switch s {
	case StatusOpen:
		return "open"
	case StatusClosed:
		return "closed"
	case StatusReopened:
		return "reopened"
	case StatusNil:
		return "closed without payment"
	}
	return "not stated"
}

// Reached says what the extract's own flag tells of the limit.
type Reached uint8

const (
	ReachedNotStated Reached = iota // no flag: the amount is compared with the limit
	ReachedNo                       // the amount is the loss
	ReachedYes                      // the loss is only known to be at least the amount
)

// DeductibleType says what a deductible does to a payment.
type DeductibleType uint8

const (
	// Ordinary pays the part of the loss above the deductible.
	Ordinary DeductibleType = iota
	// Franchise pays the whole loss once it exceeds the deductible.
	Franchise
)

func (t DeductibleType) String() string {
	if t == Franchise {
		return "franchise"
	}
	return "ordinary"
}
