package main

import (
	"fmt"
	"strings"

	"github.com/urfave/cli/v2"
)

// Categories group the commands by what a person is doing.
const (
	lookFirst   = "Look before you replay"
	comparing   = "Compare options"
	takeNumbers = "Take the numbers elsewhere"
)

const exitStatus = `Exit status:
  0 done; 2 the study, its weather or the command line is at fault; 1 a fault of the program or the
  machine (disk full, no permission); 130 stopped with Ctrl-C.
`

// appHelp is the text of "quietslope help".
func appHelp(app *cli.App) string {
	var b strings.Builder
	b.WriteString(`quietslope compares ways of quietening a slow, deep landslide by drainage.

You bring a slope with a permeable cover over fissured clay, two reservoirs calibrated for it, a
weather record, and works to choose from, all named in one study file. quietslope replays the whole
record for every option and says how often, how long and by how much the deep water level passes
each critical band. It is no stability analysis and no warning system.

Usage:
  quietslope COMMAND STUDY.yaml [options]      options may stand before or after the study
  quietslope help COMMAND                      what a command does, what it needs, examples
  quietslope --version
`)
	for _, category := range []string{lookFirst, comparing, takeNumbers} {
		fmt.Fprintf(&b, "\n%s:\n", category)
		for _, c := range app.Commands {
			if c.Category == category {
				fmt.Fprintf(&b, "  %-9s%s\n", c.Name, c.Usage)
			}
		}
	}
	b.WriteString(`
To start, look at the demo from a copy of the source:
  quietslope check testdata/demo/study.yaml
  quietslope compare testdata/demo/study.yaml

` + exitStatus)
	return b.String()
}

// commandHelp is the text of "quietslope help COMMAND": the command's description, its options, the exit status.
func commandHelp(app *cli.App, c *cli.Command) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s %s: %s\n\nUsage:\n  %s %s %s [options]\n\n%s\nOptions:\n", app.Name, c.Name, c.Usage, app.Name, c.Name, c.ArgsUsage, c.Description)
	for _, f := range c.Flags {
		d := f.(cli.DocGenerationFlag)
		usage := strings.Split(d.GetUsage(), "\n")
		value, does, _ := strings.Cut(usage[0], ": ")
		fmt.Fprintf(&b, "  %-22s%s\n", "--"+f.Names()[0]+" "+value, does)
		for _, more := range usage[1:] {
			fmt.Fprintf(&b, "  %-22s%s\n", "", more)
		}
	}
	b.WriteString("\n" + exitStatus)
	return b.String()
}
