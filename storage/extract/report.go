package extract

import (
	"fmt"

	"spillway/severity/claims"
)

// Report is the account of a file: what was read, accepted and rejected, and
// why. In every line Read = Accepted + Rejected, to the last digit.
type Report struct {
	Read     int `json:"read"` // data rows, totals rows included
	Accepted int `json:"accepted"`
	Rejected int `json:"rejected"`

	Uncensored int `json:"uncensored"` // of the accepted, by their incurred amount
	Censored   int `json:"censored"`
	Nil        int `json:"nil"` // accepted and valued at nothing

	// Totals of the money columns. Rows of totals are rejected and stand
	// apart: their amounts are in no total.
	Totals    []Total `json:"totals"`
	TotalRows int     `json:"totals_rows"`

	Groups    []FindingGroup `json:"groups"`
	Repairs   []Repair       `json:"repairs"`
	FirstLoss claims.Date    `json:"first_loss"`
	LastLoss  claims.Date    `json:"last_loss"`
}

// Total is the exact sum of one money column, as decimal text.
type Total struct {
	Field      Field  `json:"field"`
	Column     string `json:"column"`
	Read       string `json:"read"`
	Accepted   string `json:"accepted"`
	Rejected   string `json:"rejected"`
	Unreadable int    `json:"unreadable"` // cells that hold no amount and are in no sum
}

// FindingGroup counts the findings of one rule in one column.
type FindingGroup struct {
	Rule   Rule      `json:"rule"`
	Column string    `json:"column"`
	Effect Effect    `json:"effect"`
	Count  int       `json:"count"`
	First  []Finding `json:"first"` // at most FindingsKept
}

// FindingsKept bounds the findings of a group that are kept one by one; Count
// counts all.
const FindingsKept = 200

// tallies are a report in the making.
type tallies struct {
	report  Report
	groups  map[groupKey]int
	money   []moneyTotals
	repairs repairs
}

type groupKey struct {
	rule   Rule
	column string
	effect Effect
}

type moneyTotals struct {
	field                    Field
	index                    int // of field
	column                   string
	read, accepted, rejected claims.Total
	unreadable               int
}

func (t *tallies) finding(f Finding) {
	key := groupKey{f.Rule, f.Column, f.Effect}
	i, ok := t.groups[key]
	if !ok {
		i = len(t.report.Groups)
		t.groups[key] = i
		t.report.Groups = append(t.report.Groups, FindingGroup{Rule: f.Rule, Column: f.Column, Effect: f.Effect})
	}
	g := &t.report.Groups[i]
	g.Count++
	if len(g.First) < FindingsKept {
		g.First = append(g.First, f)
	}
}

// Findings counts all findings with the given effect.
func (r *Report) Findings(e Effect) int {
	n := 0
	for _, g := range r.Groups {
		if g.Effect == e {
			n += g.Count
		}
	}
	return n
}

// Reconciles checks that rows and money read are those accepted and rejected.
func (r *Report) Reconciles() error {
	if r.Read != r.Accepted+r.Rejected {
		return fmt.Errorf("%d rows read, %d accepted and %d rejected do not add up", r.Read, r.Accepted, r.Rejected)
	}
	for _, t := range r.Totals {
		var sum claims.Total
		for _, text := range []string{t.Accepted, t.Rejected} {
			part, err := claims.ParseTotal(text)
			if err != nil {
				return err
			}
			sum.AddTotal(part)
		}
		if sum.String() != t.Read {
			return fmt.Errorf("%s: %s read, %s accepted and %s rejected do not add up", t.Column, t.Read, t.Accepted, t.Rejected)
		}
	}
	return nil
}
