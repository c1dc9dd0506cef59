package main

import (
	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
)

// checkCommand says what a study means, before anything is replayed but the baseline.
func checkCommand() *cli.Command {
	return &cli.Command{
		Name: "check", Category: lookFirst, ArgsUsage: studyArgument,
		Usage: "say what a study means and what its weather record looks like",
		Description: `What it does:
  Lists every key of the study with the value in force and marks the defaults, the rates of every
  option and how each drain's rate came about, the bands in every datum, the years that will be
  counted, the start, and what looks odd about the weather record. Of the options only the baseline
  is replayed, to find the month and the start that "auto" stands for.

What it needs:
  A study file (YAML) and the weather record that it names.

Examples:
  quietslope check testdata/demo/study.yaml
  quietslope check --format json study.yaml

The format csv:
  A row for every figure and every text, with the columns that "quietslope help compare" explains.
  Rows understood.KEY.value and understood.KEY.default stand for the keys of the study, in which
  options[0] is the first option, the A of the text. Other lists are counted from 1: audit.years.1.
`,
		Flags:  []cli.Flag{formatFlag(), outFlag()},
		Action: func(c *cli.Context) error { return answer(c, scenario.Check, render.Check) },
	}
}
