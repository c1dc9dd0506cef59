package main

import (
	"context"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/result"
)

// sizeCommand finds the value of one number of an option that just meets the study's target.
func sizeCommand() *cli.Command {
	return &cli.Command{
		Name: "size", Category: comparing, ArgsUsage: studyArgument,
		Usage: "find the spacing, rate or share that just meets the target",
		Description: `What it does:
  Replays one option with many values of one of its numbers and shows the figure that the target is
  set on for each: the curve, with ranges, metres of drain and cost. The answer is the last value,
  counted from the safe end of the range, before the first that misses the target. It is worked out
  to 0.5 % and is a value that was replayed. Drains that decline count as they do in compare.

What it needs:
  A study with count.target on the band of count.decide_on, such as target: {days: 2}. Without a
  target the curve alone is shown, in the figure of count.decide_by.

Examples:
  quietslope size testdata/demo/study.yaml --option trenches --vary trench_drains.spacing --between "4 m .. 40 m"
  quietslope size study.yaml --option channels --vary surface_water.kept_out --between "0 .. 40 %"
  quietslope size study.yaml --option "bored drains" --vary bored_drains.rate --between "0.001 .. 0.02 /d"
`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: flagOption, Usage: "NAME: the option; that of a list over the number stands for its options"},
			&cli.StringFlag{Name: flagVary, Usage: "KEY: the number in the option, as in the study: trench_drains.spacing"},
			&cli.StringFlag{Name: flagBetween, Usage: "RANGE: the values to look at, such as \"4 m .. 40 m\""},
			&cli.StringFlag{Name: flagCondition, Usage: "NAME: size the works in this condition of the study instead of as built"},
			formatFlag(), outFlag(),
		},
		Action: func(c *cli.Context) error {
			for _, name := range []string{flagOption, flagVary, flagBetween} {
				if c.String(name) == "" {
					return usagef(c.Command.Name, "--%s needs a value", name)
				}
			}
			q := scenario.SizeQuery{
				Option: c.String(flagOption), Vary: c.String(flagVary), Between: c.String(flagBetween), Condition: c.String(flagCondition),
			}
			size := func(ctx context.Context, s *scenario.Study) (*result.Size, error) { return scenario.Size(ctx, s, q) }
			return answer(c, size, render.Size)
		},
	}
}
