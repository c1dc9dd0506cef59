package main

import (
	"context"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/result"
)

// Names of the options of drains. All but the last are quantities.
const (
	flagSpacing           = "spacing"
	flagDepth             = "depth"
	flagThickness         = "thickness"
	flagConductivity      = "conductivity"
	flagConductivityBelow = "conductivity-below"
	flagPorosity          = "porosity"
	flagRadius            = "radius"
	flagWidth             = "width"
	flagWet               = "wet"
	flagEquivalentDepth   = "equivalent-depth"
	flagWorkingHead       = "working-head"
	flagEfficiency        = "efficiency"
	flagRecharge          = "recharge"
	flagConsolidation     = "consolidation"
	flagFall              = "fall"
)

// drainsCommand works out drains by hand formulas.
func drainsCommand() *cli.Command {
	quantity := func(name, usage string) cli.Flag {
		return &cli.StringFlag{Name: name, Usage: "VALUE: " + usage}
	}
	return &cli.Command{
		Name: "drains", Category: lookFirst, ArgsUsage: maybeStudyArgument,
		Usage: "work out the spacing of parallel drains by hand formulas",
		Description: `What it does:
  Works out parallel drains at one spacing or several, with the formulas beside the figures, so that
  the rate of an option can be checked by hand: equivalent depth, reaction factor, reservoir
  coefficient and half-life, the outflow at three heads by the linear law and by Hooghoudt's
  equation, the steady head under a recharge, how long a water table takes to fall, and the time to
  nine tenths of the effect. A head is the height of the water above the drains, midway between two.

What it needs:
  Either spacing, depth, conductivity and porosity on the command line, or a study and one of its
  options with trench drains by spacing; the name of a list of options stands for all its values.
  The weather is not read. Beside --option, what else is given stands in place of the option's
  numbers; depth, thickness and porosity are the study's. Each quantity has its unit, as in a study;
  the blank before it may be left out.

Examples:
  quietslope drains --spacing 8m,12m --depth 3m --thickness 4m --conductivity 0.04m/d --porosity 8%
  quietslope drains study.yaml --option trenches --recharge "2 mm/d" --fall "0.4 m .. 1.0 m"
  quietslope drains study.yaml --option "trenches, spacing 12 m" --spacing "11 m, 12 m, 13 m"

The format csv:
  A row for every figure and every text, with the columns that "quietslope help compare" explains.
  spacings.1 is the first spacing; without a number before them its first figures stand once more.
`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: flagOption, Usage: "NAME: the option of the study, or the list of options, whose drains are meant"},
			&cli.StringSliceFlag{Name: flagSpacing, Usage: "VALUE: distance from drain to drain; several with commas between, or given\nseveral times"},
			quantity(flagDepth, "depth of the drains below ground"),
			quantity(flagThickness, "thickness of the drained layer, from the ground to its impermeable\nbase (default: the drains lie on the base)"),
			quantity(flagConductivity, "hydraulic conductivity of the layer, above the level of the drains"),
			quantity(flagConductivityBelow, "the same below it (default: as above)"),
			quantity(flagPorosity, "drainable porosity of the layer"),
			quantity(flagRadius, "radius of a drain that takes in as much (default: 0.1 m)"),
			quantity(flagWidth, "width of a trench's bed, for a radius from its wetted perimeter"),
			quantity(flagWet, "depth of the water in that trench"),
			quantity(flagEquivalentDepth, "equivalent depth below the drains, after Hooghoudt, or the word\ncomputed (the default)"),
			quantity(flagWorkingHead, "head that the linear rate is worked out for (default: half of the\ndepth)"),
			quantity(flagEfficiency, "share of the rate that is reached (default: 100 %)"),
			quantity(flagRecharge, "recharge of a steady state, such as 2 mm/d"),
			quantity(flagConsolidation, "coefficient of consolidation of clay between the drains"),
			&cli.StringFlag{Name: flagFall, Usage: "RANGE: heads between which a water table falls, such as \"0.4 m .. 1.0 m\""},
			formatFlag(), outFlag(),
		},
		Action: func(c *cli.Context) error {
			for _, f := range c.Command.Flags {
				if name := f.Names()[0]; name != flagFormat && name != flagOut && name != flagSpacing && c.IsSet(name) && c.String(name) == "" {
					return usagef(c.Command.Name, "--%s needs a value", name)
				}
			}
			q := scenario.HandQuery{
				Option: c.String(flagOption), Spacings: c.StringSlice(flagSpacing),
				Depth: c.String(flagDepth), Thickness: c.String(flagThickness),
				Conductivity: c.String(flagConductivity), ConductivityBelow: c.String(flagConductivityBelow), Porosity: c.String(flagPorosity),
				Radius: c.String(flagRadius), Width: c.String(flagWidth), Wet: c.String(flagWet), EquivalentDepth: c.String(flagEquivalentDepth),
				WorkingHead: c.String(flagWorkingHead), Efficiency: c.String(flagEfficiency),
				Recharge: c.String(flagRecharge), Consolidation: c.String(flagConsolidation), Fall: c.String(flagFall),
			}
			check := func(_ context.Context, s *scenario.Study) (*result.Drains, error) {
				return scenario.HandCheck(s, q)
			}
			return answer(c, check, render.Drains)
		},
	}
}
