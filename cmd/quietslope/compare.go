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
