package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"strings"
	"syscall"
	"unicode"

	"github.com/urfave/cli/v2"

	"quietslope/scenario"
	"quietslope/scenario/fault"
)

// Exit status.
const (
	exitDone        = 0
	exitFault       = 1 // ours or the machine's
	exitInput       = 2 // bad input or usage
	exitInterrupted = 130
)

// debugVariable names the environment variable that asks for the stack of an internal fault.
const debugVariable = "QUIETSLOPE_DEBUG"

// run is the whole program but for the process around it. It returns the exit status.
func run(ctx context.Context, args []string, stdout, stderr io.Writer) (code int) {
	defer func() {
		if r := recover(); r != nil {
			code = report(ctx, stderr, &scenario.Panic{Value: r, Stack: debug.Stack()})
		}
	}()
	out := &firstError{w: stdout}
	app := newApp(out, stderr)
	if len(args) > 0 && args[0] == completeWord {
		complete(ctx, app, args[1:])
		return exitDone
	}
	args, err := arrange(app, args)
	if err == nil {
		err = app.RunContext(ctx, append([]string{app.Name}, args...))
	}
	if err == nil && out.err != nil { // of help, whose printer drops it
		err = &outputError{"standard output", out.err}
	}
	return report(ctx, stderr, err)
}

// newApp builds the program's commands.
func newApp(stdout, stderr io.Writer) *cli.App {
	app := &cli.App{
		Name:                      "quietslope",
		Version:                   scenario.Version,
		Writer:                    stdout,
		ErrWriter:                 stderr,
		DisableSliceFlagSeparator: true, // an option's name may hold a comma
		OnUsageError:              onUsage,
		ExitErrHandler:            func(*cli.Context, error) {}, // run returns the status
		Commands:                  []*cli.Command{newCommand(), schemaCommand(), checkCommand(), drainsCommand(), compareCommand(), sizeCommand(), levelsCommand(), completionCommand()},
	}
	app.CustomAppHelpTemplate = appHelp(app)
	for _, c := range app.Commands {
		c.OnUsageError = onUsage
		c.HideHelpCommand = true
		c.CustomHelpTemplate = commandHelp(app, c)
	}
	return app
}

func onUsage(_ *cli.Context, err error, _ bool) error { return usagef("", "%s", err) }

// usageError is a command line that cannot be understood.
type usageError struct{ command, text string }

// usagef makes a usage error about a command; "" for the program as a whole.
func usagef(command, format string, args ...any) error {
	return &usageError{command, fmt.Sprintf(format, args...)}
}

func (e *usageError) Error() string {
	if e.command == "" {
		return e.text + "\nRun \"quietslope help\" to see what there is."
	}
	return e.command + ": " + e.text + "\nRun \"quietslope help " + e.command + "\" for its options and examples."
}

// internalFault says what a user can do about a panic.
func internalFault(p *scenario.Panic) string {
	text := fmt.Sprintf("internal fault, nothing can be trusted of this run: %v; please report it with the study, or set %s=1 to see where", p.Value, debugVariable)
	if os.Getenv(debugVariable) != "" {
		text += "\n" + string(p.Stack)
	}
	return text
}

// outputError is a result that could not be written.
type outputError struct {
	where string
	err   error
}

func (e *outputError) Error() string {
	var p *os.PathError
	var l *os.LinkError
	cause := e.err
	switch { // the place is named already
	case errors.As(e.err, &p):
		cause = p.Err
	case errors.As(e.err, &l):
		cause = l.Err
	}
	return fmt.Sprintf("%s: the result could not be written: %v", fault.Name(e.where), cause)
}

func (e *outputError) Unwrap() error { return e.err }

// report prints an error once and returns the exit status that belongs to it.
func report(ctx context.Context, stderr io.Writer, err error) int {
	var usage *usageError
	var input *fault.Error
	var inside *scenario.Panic
	switch {
	case err == nil:
		return exitDone
	case errors.Is(err, context.Canceled) && ctx.Err() != nil:
		fmt.Fprintln(stderr, "quietslope: interrupted before the result was complete")
		return exitInterrupted
	case errors.Is(err, syscall.EPIPE): // whoever read the output has seen enough
		return exitFault
	case errors.As(err, &inside):
		printError(stderr, errors.New(internalFault(inside)))
		return exitFault
	}
	printError(stderr, err)
	if errors.As(err, &usage) || errors.As(err, &input) {
		return exitInput
	}
	return exitFault
}

// printError prints every problem of a list with the program's name before it. Names are shown as fault.Name does; whatever
// else came from outside must not steer the terminal either.
func printError(w io.Writer, err error) {
	if list, ok := err.(interface{ Unwrap() []error }); ok {
		for _, e := range list.Unwrap() {
			printError(w, e)
		}
		return
	}
	text := strings.Map(func(r rune) rune {
		if unicode.IsGraphic(r) || r == '\n' || r == '\t' {
			return r
		}
		return unicode.ReplacementChar
	}, err.Error())
	fmt.Fprintf(w, "quietslope: %s\n", strings.TrimRight(text, "\n"))
}

// await runs f, and gives up on it as soon as ctx ends: f may hang in a read that knows no context. A panic of f comes
// back as an error.
func await[T any](ctx context.Context, f func() (T, error)) (T, error) {
	type outcome struct {
		value T
		err   error
	}
	var zero T
	if err := ctx.Err(); err != nil {
		return zero, err
	}
	done := make(chan outcome, 1)
	go func() {
		var o outcome
		defer func() {
			if r := recover(); r != nil {
				o.err = &scenario.Panic{Value: r, Stack: debug.Stack()}
			}
			done <- o
		}()
		o.value, o.err = f()
	}()
	select {
	case o := <-done:
		return o.value, o.err
	case <-ctx.Done():
		return zero, ctx.Err()
	}
}

// firstError passes writes on and keeps the first error.
type firstError struct {
	w   io.Writer
	err error
}

func (f *firstError) Write(b []byte) (int, error) {
	n, err := f.w.Write(b)
	if err != nil && f.err == nil {
		f.err = err
	}
	return n, err
}
