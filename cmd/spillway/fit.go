package main

import (
	"fmt"

	"spillway/severity"
	"spillway/storage/extract"
)

type fitCommand struct {
	reading
	Level float64 `default:"0.95" help:"Level of the intervals, between 0 and 1."`
	JSON  bool    `name:"json" help:"Print one JSON object."`
}

func (c *fitCommand) Run(io *streams) error {
	if !(c.Level > 0 && c.Level < 1) {
		return usagef("--level %v: want a level between 0 and 1, both ends left out", c.Level)
	}
	in, err := c.open(io)
	if err != nil {
		return err
	}
	defer in.Close()
	observations, read, err := observe(in)
	if read != nil {
		printFindings(io, in.name, read)
	}
	if err != nil {
		return fmt.Errorf("%s: %w", in.name, err)
	}
	if err := c.refuseBlanks(read); err != nil {
		return fmt.Errorf("%s: %w", in.name, err)
	}
	summary, err := severity.Summarize(observations)
	if err != nil {
		return fmt.Errorf("%s: %w", in.name, err)
	}
	fit, none := severity.FitGamma(summary, c.Level)
	report := newFitReport(fit, none, read, in.plan)
	if c.JSON {
		return writeJSON(io, report)
	}
	return report.print(io, in.name)
}

// observe reads the whole file. The report is not nil when reading began.
func observe(in *input) ([]severity.Observation, *extract.Report, error) {
	reader, err := extract.NewReader(in.file, in.size, in.plan)
	if err != nil {
		return nil, nil, err
	}
	defer reader.Close()
	var observations []severity.Observation
	for reader.Next() {
		if row := reader.Row(); !row.Rejected {
			observations = append(observations, row.Observation)
		}
	}
	return observations, reader.Report(), reader.Err()
}

// refuseBlanks stops a run over rows whose terms nobody has decided.
func (c *fitCommand) refuseBlanks(read *extract.Report) error {
	for _, term := range []struct {
		rule            extract.Rule
		choice, flag    string
		word, otherwise string
	}{
		{extract.DeductibleBlank, c.BlankDeductible, "--blank-deductible", "deductible", "zero"},
		{extract.LimitBlank, c.BlankLimit, "--blank-limit", "limit", "unlimited"},
	} {
		if term.choice != "refuse" {
			continue
		}
		for _, g := range read.Groups {
			if g.Rule == term.rule && len(g.First) > 0 {
				return fmt.Errorf("line %d, column %s: the %s is blank in %d rows and is not read as %s; say %s none (there is none), %s exclude (leave these rows out), or fill the cells",
					g.First[0].Line, g.Column, term.word, g.Count, term.otherwise, term.flag, term.flag)
			}
		}
	}
	return nil
}
