package claims

import (
	"math"
	"strconv"
	"testing"

	"spillway/severity"
)

// parse is an amount for the tables below.
func parse(t *testing.T, text string) Amount {
	t.Helper()
	a, err := ParseAmount(text)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// TestGroundUp works the reconstruction out by hand, row by row of the table
// of terms that the trade uses (common practice, no source): d is the
// deductible, L the limit as stated, y the amount.
func TestGroundUp(t *testing.T) {
	const none = -1
	for _, c := range []struct {
		name        string
		amounts     AmountBasis
		kind        DeductibleType
		limit       LimitBasis
		y, d, l     float64 // none: no such term
		reached     Reached
		loss        float64
		censored    bool
		remark      Remark
		wantProblem Problem
	}{
		// Ordinary deductible, net: x = y + d; limited at d + L, or at L as top of cover.
		{"ordinary net below limit", NetOfDeductible, Ordinary, MaximumPayment, 3100.77, 500, 25000, 0, 3600.77, false, 0, 0},
		{"ordinary net at limit", NetOfDeductible, Ordinary, MaximumPayment, 10000, 500, 10000, 0, 10500, true, 0, 0},
		{"ordinary net above limit", NetOfDeductible, Ordinary, MaximumPayment, 10000.01, 500, 10000, 0, 0, false, 0, AboveMaximum},
		{"ordinary net, top of cover, below", NetOfDeductible, Ordinary, TopOfCover, 9499.99, 500, 10000, 0, 9999.99, false, 0, 0},
		{"ordinary net, top of cover, at", NetOfDeductible, Ordinary, TopOfCover, 9500, 500, 10000, 0, 10000, true, 0, 0},
		{"ordinary net, top of cover, above", NetOfDeductible, Ordinary, TopOfCover, 9501, 500, 10000, 0, 0, false, 0, AboveMaximum},
		{"ordinary net, no limit", NetOfDeductible, Ordinary, MaximumPayment, 800, 500, none, 0, 1300, false, 0, 0},
		{"no deductible, no limit", NetOfDeductible, Ordinary, MaximumPayment, 800, none, none, 0, 800, false, 0, 0},
		// Ordinary deductible, ground-up: x = y.
		{"ordinary ground-up below", GroundUp, Ordinary, MaximumPayment, 10499, 500, 10000, 0, 10499, false, 0, 0},
		{"ordinary ground-up at the top", GroundUp, Ordinary, MaximumPayment, 10500, 500, 10000, 0, 10500, true, 0, 0},
		{"ordinary ground-up above the top", GroundUp, Ordinary, MaximumPayment, 12000, 500, 10000, 0, 10500, true, AboveCover, 0},
		{"ordinary ground-up, top of cover", GroundUp, Ordinary, TopOfCover, 12000, 500, 10000, 0, 10000, true, AboveCover, 0},
		{"ground-up equal to deductible", GroundUp, Ordinary, MaximumPayment, 500, 500, none, 0, 500, false, EqualsDeductible, 0},
		{"ground-up below deductible", GroundUp, Ordinary, MaximumPayment, 499.99, 500, none, 0, 0, false, 0, BelowDeductible},
		// Franchise deductible: x = y either way; limited at L either way.
		{"franchise net", NetOfDeductible, Franchise, MaximumPayment, 1714.19, 500, 25000, 0, 1714.19, false, 0, 0},
		{"franchise net at limit", NetOfDeductible, Franchise, MaximumPayment, 25000, 500, 25000, 0, 25000, true, 0, 0},
		{"franchise net above limit", NetOfDeductible, Franchise, MaximumPayment, 25001, 500, 25000, 0, 0, false, 0, AboveMaximum},
		{"franchise net below deductible", NetOfDeductible, Franchise, MaximumPayment, 499, 500, 25000, 0, 0, false, 0, BelowDeductible},
		{"franchise net equal to deductible", NetOfDeductible, Franchise, TopOfCover, 500, 500, 25000, 0, 500, false, EqualsDeductible, 0},
		{"franchise ground-up above", GroundUp, Franchise, TopOfCover, 26000, 500, 25000, 0, 25000, true, AboveCover, 0},
		// The file's own flag decides.
		{"flag: reached", NetOfDeductible, Ordinary, MaximumPayment, 10000, 500, none, ReachedYes, 10500, true, 0, 0},
		{"flag: reached far below the limit", GroundUp, Ordinary, MaximumPayment, 800, 500, 10000, ReachedYes, 800, true, FlagContradicts, 0},
		{"flag: not reached at the limit", NetOfDeductible, Ordinary, MaximumPayment, 10000, 500, 10000, ReachedNo, 10500, false, FlagContradicts, 0},
		{"flag: not reached below", GroundUp, Ordinary, MaximumPayment, 800, 500, 10000, ReachedNo, 800, false, 0, 0},
		// What gives no observation.
		{"nil", NetOfDeductible, Ordinary, MaximumPayment, 0, 500, 10000, 0, 0, false, 0, NilClaim},
		{"negative", NetOfDeductible, Ordinary, MaximumPayment, -1200, 500, 10000, 0, 0, false, 0, NegativeAmount},
		{"not a number", GroundUp, Ordinary, MaximumPayment, math.NaN(), 0, none, 0, 0, false, 0, NegativeAmount},
		{"deductible below zero", GroundUp, Ordinary, MaximumPayment, 100, -5, none, 0, 0, false, 0, BadDeductible},
		{"limit of zero", GroundUp, Ordinary, MaximumPayment, 100, 0, 0, 0, 0, false, 0, BadLimit},
		{"limit of zero with a flag", GroundUp, Ordinary, MaximumPayment, 100, 0, 0, ReachedYes, 0, false, 0, BadLimit},
		{"top of cover below deductible", GroundUp, Ordinary, TopOfCover, 600, 500, 400, 0, 0, false, 0, BadLimit},
		{"franchise limit below deductible", GroundUp, Franchise, MaximumPayment, 600, 500, 500, 0, 0, false, 0, BadLimit},
	} {
		basis := Basis{Amounts: c.amounts, Limit: c.limit, NoDeduct: BlankMeansNone, NoLimit: BlankMeansNone}
		terms := Terms{Type: c.kind, Reached: c.reached}
		if c.d != none {
			terms.Deductible, terms.HasDeductible = c.d, true
		}
		if c.l != none {
			terms.Limit, terms.HasLimit = c.l, true
		}
		o, remark, problem := basis.GroundUp(c.y, terms)
		if problem != c.wantProblem || remark != c.remark {
			t.Errorf("%s: problem %v, remark %v; want %v, %v", c.name, problem, remark, c.wantProblem, c.remark)
		}
		if problem != NoProblem {
			continue
		}
		want := severity.Observation{Loss: c.loss, Censored: c.censored, Threshold: max(c.d, 0), Weight: 1}
		if math.Abs(o.Loss-want.Loss) > 1e-12*want.Loss {
			t.Errorf("%s: loss %v, want %v", c.name, o.Loss, want.Loss)
		}
		o.Loss = want.Loss
		if o != want {
			t.Errorf("%s: %+v, want %+v", c.name, o, want)
		}
	}
}

// TestBlankTerms: a blank is refused unless it was decided that it means none,
// or the extract has no such column at all.
func TestBlankTerms(t *testing.T) {
	for _, c := range []struct {
		name  string
		basis Basis
		flag  Reached
		want  []Problem
	}{
		{"nothing decided", Basis{}, 0, []Problem{DeductibleBlank, LimitBlank}},
		{"a flag needs no limit", Basis{}, ReachedNo, []Problem{DeductibleBlank}},
		{"no deductible decided", Basis{NoDeduct: BlankMeansNone}, 0, []Problem{LimitBlank}},
		{"no limit decided", Basis{NoLimit: BlankMeansNone}, 0, []Problem{DeductibleBlank}},
		{"no columns", Basis{MissingTerm: MissingColumns{Deductible: true, Limit: true}}, 0, nil},
	} {
		got := c.basis.TermProblems(Terms{Reached: c.flag})
		if len(got) != len(c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
			continue
		}
		for i := range got {
			if got[i] != c.want[i] {
				t.Errorf("%s: %v, want %v", c.name, got, c.want)
			}
		}
		_, _, problem := c.basis.GroundUp(100, Terms{Reached: c.flag})
		if len(got) == 0 && problem != NoProblem || len(got) > 0 && problem != got[0] {
			t.Errorf("%s: GroundUp stops at %v, the terms say %v", c.name, problem, got)
		}
	}
}

// TestObserveNearestDouble: a plain ground-up loss is the double nearest to
// its text, as strconv rounds it, and the incurred amount is the sum.
func TestObserveNearestDouble(t *testing.T) {
	basis := Basis{MissingTerm: MissingColumns{Deductible: true, Limit: true}}
	for _, text := range []string{"1234.5678901234567", "3.2e-06", "0.1", "1e12", "422.3704188125298", "123456789012345678", "5e-324"} {
		o, _, problem := basis.Observe(&Claim{Paid: parse(t, text), Weight: 1})
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatal(err)
		}
		if problem != NoProblem || o.Loss != want {
			t.Errorf("%s: %v (%v), want %v", text, o.Loss, problem, want)
		}
	}
	for _, c := range []struct {
		paid, outstanding string
		want              float64
	}{
		{"0.1", "0.2", 0.3}, // the sum of the doubles would be 0.30000000000000004
		{"100.00", "-40.00", 60},
		{"1234.5678901234567", "1000000", 1001234.5678901234567}, // more digits than an Amount has
	} {
		o, _, problem := basis.Observe(&Claim{Paid: parse(t, c.paid), Outstanding: parse(t, c.outstanding), Weight: 1})
		if problem != NoProblem || o.Loss != c.want {
			t.Errorf("%s + %s: %v (%v), want %v", c.paid, c.outstanding, o.Loss, problem, c.want)
		}
	}
	for _, weight := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, _, problem := basis.Observe(&Claim{Paid: parse(t, "1"), Weight: weight}); problem != BadWeight {
			t.Errorf("weight %v: %v", weight, problem)
		}
	}
}

// TestWords: the words of stored values are fixed for good; a change here
// makes old databases unreadable.
func TestWords(t *testing.T) {
	type worded interface{ MarshalText() ([]byte, error) }
	for want, value := range map[string]worded{
		"not_stated": StatusUnknown, "open": StatusOpen, "closed": StatusClosed, "reopened": StatusReopened,
		"closed_without_payment": StatusNil, "ordinary": Ordinary, "franchise": Franchise, "ground_up": GroundUp,
		"net_of_deductible": NetOfDeductible, "maximum_payment": MaximumPayment, "top_of_cover": TopOfCover,
		"refused": BlankRefused, "none": BlankMeansNone,
	} {
		if got, err := value.MarshalText(); err != nil || string(got) != want {
			t.Errorf("%v is written %q (%v), want %q", value, got, err, want)
		}
	}
	var s Status
	if err := s.UnmarshalText([]byte("reopened")); err != nil || s != StatusReopened {
		t.Errorf("%v, %v", s, err)
	}
	if err := s.UnmarshalText([]byte("gone")); err == nil {
		t.Error("an unknown word is read")
	}
	if _, err := Status(9).MarshalText(); err == nil {
		t.Error("a status that does not exist is written")
	}
}
