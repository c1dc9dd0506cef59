package main

import (
	"context"
	"io"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
)

// Names of options.
const (
	flagFormat    = "format"
	flagOut       = "out"
	flagOption    = "option"
	flagClimate   = "climate"
	flagCondition = "condition"
	flagFrom      = "from"
	flagTo        = "to"
)

// The usage of an option is "VALUE: what it does", with further lines below it.

func formatFlag() cli.Flag {
	return &cli.StringFlag{Name: flagFormat, Value: "text", Usage: "text|json: text, for people (the default), or json, with every figure at full precision"}
}

func outFlag() cli.Flag {
	return &cli.StringFlag{Name: flagOut, Usage: "FILE: write the result to FILE instead of standard output. FILE is written\nwhole or not at all; an earlier result is replaced"}
}

// output is where a result goes, and in what format.
type output struct {
	json   bool
	file   *outFile // nil for standard output
	stdout io.Writer
}

// outputFrom reads --format, where the command has it, and --out.
func outputFrom(c *cli.Context) (*output, error) {
	o := &output{stdout: c.App.Writer}
	switch format := c.String(flagFormat); format {
	case "text", "":
		if c.IsSet(flagFormat) && format == "" {
			return nil, usagef(c.Command.Name, "--format needs a value; use text or json")
		}
	case "json":
		o.json = true
	case "csv", "markdown":
		return nil, usagef(c.Command.Name, "--format %s is not supported yet; use text or json", format)
	default:
		return nil, usagef(c.Command.Name, "unknown format %q; use text or json", format)
	}
	if c.IsSet(flagOut) {
		file, err := openOut(c.Command.Name, c.String(flagOut))
		if err != nil {
			return nil, err
		}
		o.file = file
	}
	return o, nil
}

// loadStudy reads a study and makes sure that the result would replace neither it nor its weather.
func loadStudy(ctx context.Context, path string, o *output) (*scenario.Study, error) {
	if o.file != nil {
		if err := o.file.spare("the study", path); err != nil {
			return nil, err
		}
	}
	s, err := await(ctx, func() (*scenario.Study, error) { return scenario.Load(path) })
	if err != nil {
		return nil, err
	}
	if o.file != nil {
		if err := o.file.spare("the study's weather", s.Weather.Path); err != nil {
			return nil, err
		}
	}
	return s, nil
}

// answer is what a command does that finds a result from a study: it reads the study, finds the result, and writes it in
// the format asked for.
func answer[R any](c *cli.Context, find func(context.Context, *scenario.Study) (*R, error), lay func(*R) *render.Page) error {
	ctx := c.Context
	o, err := outputFrom(c)
	if err != nil {
		return err
	}
	s, err := loadStudy(ctx, c.Args().First(), o)
	if err != nil {
		return err
	}
	found, err := await(ctx, func() (*R, error) { return find(ctx, s) })
	if err != nil {
		return err
	}
	return o.write(ctx, func(w io.Writer) error {
		if o.json {
			return render.JSON(w, found)
		}
		return lay(found).Text(w)
	})
}
