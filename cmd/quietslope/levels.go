package main

import (
	"context"
	"io"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
)

// levelsCommand writes the replayed series themselves.
func levelsCommand() *cli.Command {
	return &cli.Command{
		Name: "levels", Category: takeNumbers, ArgsUsage: studyArgument,
		Usage: "write the replayed levels of every step as CSV",
		Description: `What it does:
  Replays the options and writes one line per step of the record: time, rain_mm, and for every
  option OPTION/recharge_mm, OPTION/cover_m and OPTION/deep_m. Levels are those at the end of the
  step, above the base of their layer, at full precision. The warm-up is left out. Drains that
  decline stand as new; the figures of compare are means over their ages.

What it needs:
  A study file (YAML) and the weather record that it names.

Examples:
  quietslope levels testdata/demo/study.yaml --out levels.csv
  quietslope levels study.yaml --option "as it stands" --from 1998-10 --to 1999-04
`,
		Flags: []cli.Flag{
			&cli.StringSliceFlag{Name: flagOption, Usage: "NAME: only this option; may be given several times. The study's order is kept"},
			&cli.StringFlag{Name: flagClimate, Usage: "NAME: the weather of this climate (default: as recorded)"},
			&cli.StringFlag{Name: flagCondition, Usage: "NAME: the works in this condition (default: as built)"},
			&cli.StringFlag{Name: flagFrom, Usage: "TIME: first time to write: 1998, 1998-11, 1998-11-30 or 1998-11-30T06:00"},
			&cli.StringFlag{Name: flagTo, Usage: "TIME: last time to write, the whole of the year, month or day named. --from and\n--to cut what is written, never what is replayed"},
			outFlag(),
		},
		Action: func(c *cli.Context) error {
			o, err := outputFrom(c)
			if err != nil {
				return err
			}
			q := scenario.LevelsQuery{
				Options: c.StringSlice(flagOption), Climate: c.String(flagClimate), Condition: c.String(flagCondition),
				From: c.String(flagFrom), To: c.String(flagTo),
			}
			for _, name := range []string{flagClimate, flagCondition, flagFrom, flagTo} {
				if c.IsSet(name) && c.String(name) == "" {
					return usagef(c.Command.Name, "--%s needs a value", name)
				}
			}
			return levels(c.Context, c.Args().First(), q, o)
		},
	}
}

func levels(ctx context.Context, path string, q scenario.LevelsQuery, o *output) error {
	s, err := loadStudy(ctx, path, o)
	if err != nil {
		return err
	}
	series, err := await(ctx, func() (*scenario.LevelSeries, error) { return scenario.Levels(ctx, s, q) })
	if err != nil {
		return err
	}
	return o.write(ctx, func(w io.Writer) error { return render.Levels(w, series) })
}
