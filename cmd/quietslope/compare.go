package main

import (
	"context"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/result"
)

// compareCommand replays every option of a study on the same weather and sets the results side by side.
func compareCommand() *cli.Command {
	return &cli.Command{
		Name: "compare", Category: comparing, ArgsUsage: studyArgument,
		Usage: "replay the weather for every option and set them side by side",
		Description: `What it does:
  Replays the whole weather record of the study for every option, after a warm-up, and counts on
  complete years how the deep level rises above each band: events, days, load (metre-days), the
  share of years, the longest and the highest. Events, days, load and years have a range, and so has
  every change. Options are set against the baseline year by year and ranked on one band. The works
  as built are one case, each of the study's conditions another. The notes name what is weak about
  the figures.

What it needs:
  A study file (YAML) that names the weather record, the ground as calibrated, the bands and the
  options. Run "quietslope check" on it first.

Examples:
  quietslope compare testdata/demo/study.yaml
  quietslope compare study.yaml --format markdown --out report.md
  quietslope compare study.yaml --against "trenches 24 m apart"

The format csv:
  A header line, then a row for every figure and every text of the JSON, in its order:
    climate, condition   the case; empty where a row, such as a warning, is about every case
    option, band         what the row is about; rows without an option are about the study
    quantity             its name, such as load_m_days_per_year or water_balance.deep.in_mm
    value, lower, upper  the figure, and the ends of its range where it has one
    text                 words, and yes or no
  The end of a quantity is its unit: load_m_days_per_year is m·d a year, peak_excess_m is m. Without
  one it is a count, a ratio or a share from 0 to 1, such as annual_probability; a difference, as in
  change.days_per_year.difference, has the unit before it. Figures are those of the counted years,
  but water_balance is mm over the whole record.
  Entries of a list are counted from 1: days_by_month.1 is January. The states of drains go by their
  names, such as states.half_stopped.value. Only in keys of the study the first has the number 0:
  defaults.options[0] is about the option that the text calls A.
  What the text leaves out because too few events stand behind it is there. Look for a row
  warning.few_events with the same option and band before you use a rate.
  For a table, keep the rows of one quantity and one band, such as load_m_days_per_year, and pivot
  them: options down, conditions across, value in the cells.
`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: flagAgainst, Usage: "NAME: measure every change against this option instead of the baseline. The years\nand the start stay those of the baseline"},
			formatFlag(), outFlag(),
		},
		Action: func(c *cli.Context) error {
			q := scenario.CompareQuery{Against: c.String(flagAgainst)}
			if c.IsSet(flagAgainst) && q.Against == "" {
				return usagef(c.Command.Name, "--%s needs a value", flagAgainst)
			}
			compare := func(ctx context.Context, s *scenario.Study) (*result.Comparison, error) {
				return scenario.Compare(ctx, s, q)
			}
			return answer(c, compare, render.Comparison)
		},
	}
}
