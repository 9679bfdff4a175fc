package extract

// Rule names what a finding is about.
type Rule string

// Effect is what a finding does to its row.
type Effect string

const (
	Blocks Effect = "blocks" // the row is rejected
	Warns  Effect = "warns"  // the row is used
)

// Finding is one problem of one row.
type Finding struct {
	Line    int    `json:"line"`
	Column  string `json:"column"` // header text
	Value   string `json:"value"`  // as in the file
	Rule    Rule   `json:"rule"`
	Effect  Effect `json:"effect"`
	Message string `json:"message"` // what was found and what is accepted
}

// The rules.
const (
	RaggedRow            Rule = "ragged_row"
	TotalsRow            Rule = "totals_row"
	ClaimIDBlank         Rule = "claim_id_blank"
	DuplicateClaimID     Rule = "duplicate_claim_id"
	AmountUnreadable     Rule = "amount_unreadable"
	AmountBlank          Rule = "amount_blank"
	PartBlank            Rule = "part_blank"
	AmountTooLarge       Rule = "amount_too_large"
	DigitsRounded        Rule = "digits_rounded"
	ScientificNotation   Rule = "scientific_notation"
	TooManyDecimals      Rule = "too_many_decimals"
	NilClaimRule         Rule = "nil_claim"
	NegativeAmount       Rule = "negative_amount"
	NegativePart         Rule = "negative_part"
	LossBelowDeductible  Rule = "loss_below_deductible"
	LossEqualsDeductible Rule = "loss_equals_deductible"
	PaymentAboveLimit    Rule = "payment_above_limit"
	LossAboveCover       Rule = "loss_above_cover"
	LimitFlagContradicts Rule = "limit_flag_contradicts"
	DeductibleBlank      Rule = "deductible_blank"
	DeductibleNegative   Rule = "deductible_negative"
	LimitBlank           Rule = "limit_blank"
	LimitNotPositive     Rule = "limit_not_positive"
	LimitPlaceholder     Rule = "limit_placeholder"
	FlagUnreadable       Rule = "limit_reached_unreadable"
	TypeUnreadable       Rule = "deductible_type_unreadable"
	WeightUnreadable     Rule = "weight_unreadable"
	DateUnreadable       Rule = "date_unreadable"
	DateBlank            Rule = "loss_date_blank"
	DateImplausible      Rule = "date_implausible"
	DateAfterValuation   Rule = "date_after_valuation"
	DatesOutOfOrder      Rule = "dates_out_of_order"
	StatusUnknown        Rule = "status_unknown"
	ClosedWithReserve    Rule = "closed_with_reserve"
	PaidOnNilClaim       Rule = "payment_on_closed_without_payment"
	SumDiffers           Rule = "sum_differs"
	OtherCurrency        Rule = "other_currency"
	PossibleFormula      Rule = "possible_formula"
)
