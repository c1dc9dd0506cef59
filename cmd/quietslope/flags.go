package main

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"strings"

	"github.com/urfave/cli/v2"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/fault"
)

// Names of options.
const (
	flagFormat    = "format"
	flagOut       = "out"
	flagAgainst   = "against"
	flagOption    = "option"
	flagClimate   = "climate"
	flagCondition = "condition"
	flagFrom      = "from"
	flagTo        = "to"
	flagVary      = "vary"
	flagBetween   = "between"
	flagDrains    = "drains"
)

// format is a way to write a result.
type format struct {
	name, says string
	// write writes a result, which lay lays out for people.
	write func(w io.Writer, result any, lay func() *render.Page) error
}

// formats are the values of --format. The first is the default.
var formats = []format{
	{"text", "for people, laid out for 100 columns (the default)",
		func(w io.Writer, _ any, lay func() *render.Page) error { return lay().Text(w) }},
	{"markdown", "the same for a report, with tables (CommonMark and pipe tables)",
		func(w io.Writer, _ any, lay func() *render.Page) error { return lay().Markdown(w) }},
	{"csv", "a row for every figure, at full precision",
		func(w io.Writer, result any, _ func() *render.Page) error { return render.CSV(w, result) }},
	{"json", "everything, at full precision",
		func(w io.Writer, result any, _ func() *render.Page) error { return render.JSON(w, result) }},
}

// formatNames are the values of --format, in the order in which they are named.
func formatNames() []string {
	var names []string
	for _, f := range formats {
		names = append(names, f.name)
	}
	return names
}

// The usage of an option is "WORD: what it does", with further lines below it; that of one without a value, what it does.
// WORD stands for the value and is FILE, FORMAT, KEY, NAME, RANGE, TIME or VALUE: shells complete by it.

// usageOf parts the usage of an option.
func usageOf(flag cli.Flag) (value, does string) {
	usage := flag.(cli.DocGenerationFlag).GetUsage()
	if !takesValue(flag) {
		return "", usage
	}
	value, does, _ = strings.Cut(usage, ": ")
	return value, does
}

func formatFlag() cli.Flag {
	usage := "FORMAT: how to write the result:"
	for _, f := range formats {
		usage += fmt.Sprintf("\n  %-10s%s", f.name, f.says)
	}
	return &cli.StringFlag{Name: flagFormat, Value: formats[0].name, Usage: usage}
}

func outFlag() cli.Flag {
	return &cli.StringFlag{Name: flagOut, Usage: "FILE: write the result to FILE instead of standard output. FILE is written\nwhole or not at all; an earlier result is replaced"}
}

// output is where a result goes, and in what format.
type output struct {
	format format
	file   *outFile // nil for standard output
	stdout io.Writer
}

// outputFrom reads --format, where the command has it, and --out.
func outputFrom(c *cli.Context) (*output, error) {
	o := &output{stdout: c.App.Writer}
	var err error
	if o.format, err = formatNamed(c); err != nil {
		return nil, err
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

// formatNamed is the format that --format names.
func formatNamed(c *cli.Context) (format, error) {
	name := c.String(flagFormat)
	for _, f := range formats {
		if f.name == name {
			return f, nil
		}
	}
	switch near := fault.Nearest(name, formatNames()); {
	case !c.IsSet(flagFormat): // a command without the option
		return formats[0], nil
	case name == "":
		return format{}, usagef(c.Command.Name, "--format needs a value; use %s", fault.Words(formatNames(), "or"))
	case near != "":
		return format{}, usagef(c.Command.Name, "unknown format %q; did you mean %s?", name, near)
	}
	return format{}, usagef(c.Command.Name, "unknown format %q; use %s", name, fault.Words(formatNames(), "or"))
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
// the format asked for. The study is nil where the command line names none, which arrange lets pass for those commands
// only that can do without.
func answer[R any](c *cli.Context, find func(context.Context, *scenario.Study) (*R, error), lay func(*R) *render.Page) error {
	ctx := c.Context
	o, err := outputFrom(c)
	if err != nil {
		return err
	}
	var s *scenario.Study
	if c.Args().Present() {
		if s, err = loadStudy(ctx, c.Args().First(), o); err != nil {
			return err
		}
	}
	found, err := await(ctx, func() (*R, error) { return find(ctx, s) })
	if err != nil {
		return err
	}
	// Laid out in memory first, since layout does not look for Ctrl-C and a file is begun only when it can be finished.
	content, err := await(ctx, func() ([]byte, error) {
		var b bytes.Buffer
		err := o.format.write(&b, found, func() *render.Page { return lay(found) })
		return b.Bytes(), err
	})
	if err != nil {
		return err
	}
	return o.write(ctx, func(w io.Writer) error {
		_, err := w.Write(content)
		return err
	})
}
