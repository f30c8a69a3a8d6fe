// Command lampbook renders look-development work in batches: a Lua scene in, pictures and labelled contact sheets out.
//
// One file a subcommand (render.go, plan.go, check.go, api.go, examples.go) turns options into calls; scene.go makes the plan that
// render, plan and check share; folder.go, pictures.go and record.go are what a run leaves on disk; view.go is what it shows meanwhile.
// May import everything. Start at newRoot.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"
)

// The exit statuses.
const (
	statusDone    = 0
	statusFailed  = 1 // something failed: a frame, a file that could not be written
	statusWrong   = 2 // the command line or the scene is wrong
	statusStopped = 3 // a signal came with work left
)

// errStopped is the cause of a context that a signal has ended.
var errStopped = errors.New("stopped")

func main() {
	os.Exit(execute(os.Args[1:], os.Stdout, os.Stderr))
}

// execute runs one command line and returns its exit status.
func execute(args []string, stdout, stderr io.Writer) int {
	ctx, cancel := context.WithCancelCause(context.Background())
	defer cancel(nil)
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	if !signal.Ignored(syscall.SIGHUP) { // as it is where the run is to outlive its terminal
		signal.Notify(signals, syscall.SIGHUP)
	}
	defer signal.Stop(signals)
	signal.Ignore(syscall.SIGPIPE) // a reader that has gone away is an error of writing, not the end of a run
	go func() {
		<-signals
		cancel(errStopped)
		for s := range signals {
			if s != syscall.SIGHUP { // a terminal that closes may say so twice
				os.Exit(statusStopped)
			}
		}
	}()
	root := newRoot()
	root.SetArgs(args)
	root.SetOut(stdout)
	root.SetErr(stderr)
	err := root.ExecuteContext(ctx)
	endWithoutView(args, stdout, err)
	for _, fault := range faults(err) {
		fmt.Fprintln(stderr, fault)
	}
	return statusOf(err)
}
