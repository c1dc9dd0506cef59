// Quietslope compares ways of quietening a slow, deep landslide by drainage: it replays a weather record for every
// option of a study and says how the deep water level passes each critical band.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	ends := []os.Signal{os.Interrupt, syscall.SIGTERM}
	if !signal.Ignored(syscall.SIGHUP) { // as under nohup
		ends = append(ends, syscall.SIGHUP)
	}
	ctx, stop := signal.NotifyContext(context.Background(), ends...)
	context.AfterFunc(ctx, stop) // a second one ends the program without ceremony
	code := run(ctx, os.Args[1:], os.Stdout, os.Stderr)
	stop()
	os.Exit(code)
}
