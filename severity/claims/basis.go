package claims

// Basis says what the amounts, deductibles and limits of a batch mean. It is
// stated once for a batch and printed wherever its figures are.
type Basis struct {
	Amounts     AmountBasis    `json:"amounts"`
	Deductible  DeductibleType `json:"deductible_type"`
	Limit       LimitBasis     `json:"limit_basis"`
	Currency    string         `json:"currency"` // ISO 4217 code
	Valuation   Date           `json:"valuation_date"`
	NoDeduct    BlankTerm      `json:"blank_deductible"`
	NoLimit     BlankTerm      `json:"blank_limit"`
	MissingTerm MissingColumns `json:"missing_columns"`
}

// MissingColumns records which term columns the extract does not have at all:
// its claims then carry no such term.
type MissingColumns struct {
	Deductible bool `json:"deductible"`
	Limit      bool `json:"limit"`
}

// AmountBasis says whether amounts are before or after the deductible.
type AmountBasis uint8

const (
	// GroundUp amounts are the full loss before any deductible.
	GroundUp AmountBasis = iota
	// NetOfDeductible amounts are payments after the deductible.
	NetOfDeductible
)

func (b AmountBasis) String() string {
	if b == NetOfDeductible {
		return "net of deductible"
	}
	return "ground-up"
}

// LimitBasis says what a stated limit limits.
type LimitBasis uint8

const (
	// MaximumPayment is the most the insurer pays on the claim.
	MaximumPayment LimitBasis = iota
	// TopOfCover is the ground-up amount at which the payment stops growing.
	TopOfCover
)

func (b LimitBasis) String() string {
	if b == TopOfCover {
		return "top of cover"
	}
	return "maximum payment"
}

// BlankTerm is the user's recorded decision about rows whose deductible or
// limit is blank though the extract has the column.
type BlankTerm uint8

const (
	// BlankRefused: the rows are rejected, one by one, with a finding.
	BlankRefused BlankTerm = iota
	// BlankMeansNone: a blank deductible is no deductible, a blank limit no limit.
	BlankMeansNone
)

func (b BlankTerm) String() string {
	if b == BlankMeansNone {
		return "blank means none"
	}
	return "blank is refused"
}
