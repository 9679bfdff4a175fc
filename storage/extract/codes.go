package extract

import (
	"strings"

	"spillway/severity/claims"
)

// statusCodes are usual words and codes for the state of a claim (common
// practice, no source), letters only, in lower case.
var statusCodes = map[string]claims.Status{
	"open": claims.StatusOpen, "o": claims.StatusOpen, "op": claims.StatusOpen, "pending": claims.StatusOpen,
	"outstanding": claims.StatusOpen, "active": claims.StatusOpen, "notified": claims.StatusOpen,
	"closed": claims.StatusClosed, "c": claims.StatusClosed, "cl": claims.StatusClosed, "settled": claims.StatusClosed,
	"final": claims.StatusClosed, "finalised": claims.StatusClosed, "finalized": claims.StatusClosed,
	"closedwithpayment": claims.StatusClosed, "cwp": claims.StatusUnknown, // both readings occur
	"reopened": claims.StatusReopened, "reopen": claims.StatusReopened, "r": claims.StatusReopened, "ro": claims.StatusReopened,
	"closedwithoutpayment": claims.StatusNil, "nil": claims.StatusNil, "closednopayment": claims.StatusNil,
	"cnp": claims.StatusNil, "withdrawn": claims.StatusNil, "nilsettled": claims.StatusNil, "declined": claims.StatusNil,
	"repudiated": claims.StatusNil, "closednil": claims.StatusNil,
}

// readStatus is the status that a cell names; the spellings of a file recur
// and are looked up once.
func (r *Reader) readStatus(cell []byte) (claims.Status, bool) {
	s, seen := r.statuses[string(cell)]
	if !seen {
		s = statusCodes[letters(string(cell))]
		if len(r.statuses) < 256 {
			r.statuses[string(cell)] = s
		}
	}
	return s, s != claims.StatusUnknown
}

var flagWords = map[string]claims.Reached{
	"1": claims.ReachedYes, "yes": claims.ReachedYes, "y": claims.ReachedYes, "true": claims.ReachedYes, "t": claims.ReachedYes,
	"0": claims.ReachedNo, "no": claims.ReachedNo, "n": claims.ReachedNo, "false": claims.ReachedNo, "f": claims.ReachedNo,
	"1.0": claims.ReachedYes, "0.0": claims.ReachedNo,
}

func readFlag(cell []byte) (claims.Reached, bool) {
	r, ok := flagWords[strings.ToLower(string(cell))]
	return r, ok
}

func readType(cell []byte) (claims.DeductibleType, bool) {
	switch letters(string(cell)) {
	case "ordinary", "straight", "o", "ord":
		return claims.Ordinary, true
	case "franchise", "f", "fr":
		return claims.Franchise, true
	}
	return claims.Ordinary, false
}
