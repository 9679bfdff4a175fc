package main

import (
	"cmp"
	"fmt"
	"slices"

	"spillway/storage/extract"
)

// shownFindings is how many findings of a kind are printed one by one; the
// groups below them count them all.
const shownFindings = 10

// findingGroup is a kind of finding in JSON output.
type findingGroup struct {
	Rule   string        `json:"rule"`
	Column string        `json:"column"`
	Effect string        `json:"effect"`
	Count  int           `json:"count"`
	First  []findingLine `json:"first"`
}

type findingLine struct {
	Line    int    `json:"line"`
	Value   string `json:"value"`
	Message string `json:"message"`
}

func groupFindings(report *extract.Report) []findingGroup {
	groups := []findingGroup{}
	for _, g := range report.Groups {
		group := findingGroup{string(g.Rule), g.Column, string(g.Effect), g.Count, []findingLine{}}
		for _, f := range g.First[:min(len(g.First), shownFindings)] {
			group.First = append(group.First, findingLine{f.Line, f.Value, f.Message})
		}
		groups = append(groups, group)
	}
	return groups
}

// byLine is the first findings of every group, in order of line.
func byLine(report *extract.Report, most int) []extract.Finding {
	all := []extract.Finding{}
	for _, g := range report.Groups {
		all = append(all, g.First[:min(len(g.First), most)]...)
	}
	slices.SortStableFunc(all, func(a, b extract.Finding) int { return cmp.Compare(a.Line, b.Line) })
	return all
}

// printFindings lists findings in order of line on standard error, and what
// they come to.
func printFindings(io *streams, name string, report *extract.Report) {
	shown, total := byLine(report, shownFindings), 0
	for _, g := range report.Groups {
		total += g.Count
	}
	if total == 0 {
		return
	}
	for _, f := range shown {
		fmt.Fprintf(io.err, "%s: line %d, column %s, %q: %s (%s, %s)\n", name, f.Line, f.Column, f.Value, f.Message, f.Rule, outcomeOf(f.Effect))
	}
	fmt.Fprintf(io.err, "%s: %d findings", name, total)
	if total > len(shown) {
		fmt.Fprintf(io.err, ", the first %d of a kind above", shownFindings)
	}
	fmt.Fprintf(io.err, "; %d of %d rows rejected\n", report.Rejected, report.Read)
	for _, g := range report.Groups {
		fmt.Fprintf(io.err, "  %d × %s in column %s (%s)\n", g.Count, g.Rule, g.Column, outcomeOf(g.Effect))
	}
}

func outcomeOf(e extract.Effect) string {
	if e == extract.Blocks {
		return "row rejected"
	}
	return "warning"
}
