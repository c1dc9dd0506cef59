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
		Name: "compare", Category: comparing, ArgsUsage: "STUDY.yaml",
		Usage: "replay the weather for every option and set them side by side",
		Description: `What it does:
  Replays the whole weather record of the study for every option, after a warm-up, and counts on
  complete years how the deep level passes each band: events, days, load (metre-days), the share of
  years, the longest and the highest. Events, days, load and years have a range, and so has every
  change. Options are set against the baseline year by year and ranked on one band. The notes name
  what is weak about the figures. The text is laid out for 100 columns.

What it needs:
  A study file (YAML) that names the weather record, the ground as calibrated, the bands and the
  options. Run "quietslope check" on it first.

Examples:
  quietslope compare testdata/demo/study.yaml
  quietslope compare study.yaml --format json --out result.json
`,
		Flags: []cli.Flag{formatFlag(), outFlag()},
		Action: func(c *cli.Context) error {
			compare := func(ctx context.Context, s *scenario.Study) (*result.Comparison, error) {
				return scenario.Compare(ctx, s, scenario.CompareQuery{})
			}
			return answer(c, compare, render.Comparison)
		},
	}
}
