package claims

import "fmt"

// The coded values are written into stored plans, revisions and reports by
// these words, which never change their meaning.
var (
	statusWords     = map[Status]string{StatusUnknown: "not_stated", StatusOpen: "open", StatusClosed: "closed", StatusReopened: "reopened", StatusNil: "closed_without_payment"}
	typeWords       = map[DeductibleType]string{Ordinary: "ordinary", Franchise: "franchise"}
	amountWords     = map[AmountBasis]string{GroundUp: "ground_up", NetOfDeductible: "net_of_deductible"}
	limitWords      = map[LimitBasis]string{MaximumPayment: "maximum_payment", TopOfCover: "top_of_cover"}
	blankTermsWords = map[BlankTerm]string{BlankRefused: "refused", BlankMeansNone: "none"}
)

func wordOf[T ~uint8](words map[T]string, value T) ([]byte, error) {
	if word, ok := words[value]; ok {
		return []byte(word), nil
	}
	return nil, fmt.Errorf("no word for %T %d", value, value)
}

func valueOf[T ~uint8](words map[T]string, text []byte, to *T) error {
	for value, word := range words {
		if word == string(text) {
			*to = value
			return nil
		}
	}
	return fmt.Errorf("%q is no %T", text, *to)
}

// MarshalText writes the stable word.
func (s Status) MarshalText() ([]byte, error) { return wordOf(statusWords, s) }

// UnmarshalText reads the stable word.
func (s *Status) UnmarshalText(text []byte) error { return valueOf(statusWords, text, s) }

// MarshalText writes the stable word.
func (t DeductibleType) MarshalText() ([]byte, error) { return wordOf(typeWords, t) }

// UnmarshalText reads the stable word.
func (t *DeductibleType) UnmarshalText(text []byte) error { return valueOf(typeWords, text, t) }

// MarshalText writes the stable word.
func (b AmountBasis) MarshalText() ([]byte, error) { return wordOf(amountWords, b) }

// UnmarshalText reads the stable word.
func (b *AmountBasis) UnmarshalText(text []byte) error { return valueOf(amountWords, text, b) }

// MarshalText writes the stable word.
func (b LimitBasis) MarshalText() ([]byte, error) { return wordOf(limitWords, b) }

// UnmarshalText reads the stable word.
func (b *LimitBasis) UnmarshalText(text []byte) error { return valueOf(limitWords, text, b) }

// MarshalText writes the stable word.
func (b BlankTerm) MarshalText() ([]byte, error) { return wordOf(blankTermsWords, b) }

// UnmarshalText reads the stable word.
func (b *BlankTerm) UnmarshalText(text []byte) error { return valueOf(blankTermsWords, text, b) }
