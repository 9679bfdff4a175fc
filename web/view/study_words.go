package view

import (
	"fmt"
	"slices"

	"github.com/a-h/templ"

	"spillway/severity/claims"
	"spillway/severity/study"
)

func revisionPath(p StudyPage, rest string) templ.SafeURL {
	return templ.SafeURL(fmt.Sprintf("/studies/%d/revisions/%d%s", p.ID, p.Number, rest))
}

func selected(list []string, name string) bool { return slices.Contains(list, name) }

func statusSelected(list []claims.Status, s claims.Status) bool { return slices.Contains(list, s) }

func batchSelected(list []study.BatchRef, id int64) bool {
	return slices.ContainsFunc(list, func(b study.BatchRef) bool { return b.ID == id })
}

func usualLevel(l float64) bool { return slices.Contains([]float64{0.8, 0.9, 0.95, 0.99}, l) }

func orBlank(name string) string {
	if name == "" {
		return "(blank)"
	}
	return name
}

func lossDates(from, to claims.Date) string {
	switch {
	case from == 0 && to == 0:
		return "losses of any date"
	case from == 0:
		return "losses up to " + to.String()
	case to == 0:
		return "losses from " + from.String()
	}
	return "losses from " + from.String() + " to " + to.String()
}

// onlyBusiness names the line of business where there is no choice of one.
func onlyBusiness(names []string) string {
	if len(names) == 1 && names[0] != "" {
		return names[0]
	}
	return "every line of business: the extract names none"
}

// NotNamed is the author of a revision that nobody put a name to.
const NotNamed = "not named"

// named is a name for the field that asks for one.
func named(author string) string {
	if author == NotNamed {
		return ""
	}
	return author
}
