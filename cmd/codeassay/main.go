// Command codeassay measures how many bits per second an ensemble of spiking
// cells carries about the streams that drove it, code by code, and ranks the
// codes.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	// A reader that leaves (as in "codeassay rank | head") is not a failure:
	// the write then fails, and run is quiet about it.
	signal.Ignore(syscall.SIGPIPE)
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	go func() {
		<-ctx.Done()
		stop() // a second signal ends the program at once
	}()
	os.Exit(run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
