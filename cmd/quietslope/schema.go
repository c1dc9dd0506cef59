package main

import (
	"io"
	"strings"

	"github.com/urfave/cli/v2"

	"quietslope/scenario"
)

// schemaCommand prints the schema of the study file.
func schemaCommand() *cli.Command {
	return &cli.Command{
		Name: "schema", Category: beginning,
		Usage: "print the JSON Schema of the study file, for editors",
		Description: `What it does:
  Prints a JSON Schema (draft 2020-12) of the study file. An editor that knows such schemas completes
  the keys of a study while it is written, says what each is, and marks what is wrong in form. What
  a schema cannot see, such as bands that do not rise, "quietslope check" still says.

What it needs:
  Nothing. To use it, save it beside the study, and begin the study with the comment
  # yaml-language-server: $schema=study.schema.json

Examples:
  quietslope schema --out study.schema.json
`,
		Flags: []cli.Flag{outFlag()},
		Action: func(c *cli.Context) error {
			o, err := outputFrom(c)
			if err != nil {
				return err
			}
			if f := o.file; f != nil && f.earlier != nil && (isStudy(f.name) || isStudy(f.path)) {
				return usagef(c.Command.Name, "--out %q is there already and may be a study; name a file that ends in .json", f.name)
			}
			return o.write(c.Context, func(w io.Writer) error {
				_, err := w.Write(scenario.Schema())
				return err
			})
		},
	}
}

// isStudy says whether a file's name is that of a study.
func isStudy(name string) bool {
	name = strings.ToLower(name)
	return strings.HasSuffix(name, ".yaml") || strings.HasSuffix(name, ".yml")
}
