package main

import (
	"context"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
)

// sizeName is the name of the command, which knows a list of values by its own name.
const sizeName = "size"

// sizeCommand finds the value of one number of an option that just meets the study's target.
func sizeCommand() *cli.Command {
	return &cli.Command{
		Name: sizeName, Category: comparing, ArgsUsage: studyArgument,
		Usage: "find the spacing, rate or share that just meets the target",
		Description: `What it does:
  Replays one option with many values of one of its numbers and shows the figure that the target is
  set on for each: the curve, with ranges, metres of drain and cost, and what the next metre buys.
  The answer is the last value, counted from the safe end of the range, before the first that misses
  the target. It is worked out to 0.5 %, and it was replayed itself. More drainage can split one
  long event in two, so a value beyond the first miss that meets the target again is named and not
  chosen. Drains that decline count as in compare; what the answer comes to when every second of
  them stops, or all, is shown too.

What it needs:
  A study with count.target, such as target: {days: 2}, which is set on the band of count.decide_on.
  Without a target the curve alone is shown, in the figure of count.decide_by.

Examples:
  quietslope size study.yaml --option trenches --vary trench_drains.spacing --between "4 m .. 40 m"
  quietslope size study.yaml --option channels --vary surface_water.kept_out --between "0 .. 40 %"
  quietslope size study.yaml --option bores --vary bored_drains.rate --between "0.001 .. 0.02 /d" \
    --drains before_flush

The format csv:
  A row for every figure and every text, with the columns that "quietslope help compare" explains.
  curve.1 is the value at the lower end of the range; the rows answer are about the answer. Values
  are in the unit of the row unit, shares from 0 to 1.
`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: flagOption, Usage: "NAME: the option. The name of a list of values stands for the options that it\nmakes, where that list is over the same number"},
			&cli.StringFlag{Name: flagVary, Usage: "KEY: the number in the option, as in the study: trench_drains.spacing"},
			&cli.StringFlag{Name: flagBetween, Usage: "RANGE: the values to look at, such as \"4 m .. 40 m\" or \"0 .. 40 %\". The answer is\nin the unit given here"},
			&cli.StringFlag{Name: flagCondition, Usage: "NAME: size the works in this condition of the study (default: as built)"},
			&cli.StringFlag{Name: flagDrains, Usage: "VALUE: size drains that age or stop for one state: as_new, before_flush,\nnever_flushed or half_stopped (default: the state that compare takes)"},
			formatFlag(), outFlag(),
		},
		Action: func(c *cli.Context) error {
			var missing []string
			for _, f := range c.Command.Flags {
				name := f.Names()[0]
				needed := name == flagOption || name == flagVary || name == flagBetween
				switch {
				case !c.IsSet(name) && needed:
					value, _ := usageOf(f)
					missing = append(missing, "--"+name+" "+value)
				case c.IsSet(name) && c.String(name) == "" && (needed || name == flagCondition || name == flagDrains):
					return usagef(c.Command.Name, "--%s needs a value", name)
				}
			}
			if missing != nil {
				return usagef(c.Command.Name, "give %s too", fault.Words(missing, "and"))
			}
			q := scenario.SizeQuery{
				Option: c.String(flagOption), Vary: c.String(flagVary), Between: c.String(flagBetween), Condition: c.String(flagCondition),
				Drains: c.String(flagDrains),
			}
			size := func(ctx context.Context, s *scenario.Study) (*result.Size, error) { return scenario.Size(ctx, s, q) }
			return answer(c, size, render.Size)
		},
	}
}
