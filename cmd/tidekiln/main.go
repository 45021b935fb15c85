// Command tidekiln steps orbits and interiors of tidally heated moons and
// planets together and leaves their histories as tables.
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

// Exit codes.
const (
	exitDone        = 0
	exitStopped     = 1   // no result; everything up to there is kept
	exitRequest     = 2   // the request was wrong
	exitInterrupted = 75  // by a scheduler; can be continued
	exitCtrlC       = 130 // by the user
)

func main() { os.Exit(run(os.Args[1:])) }

// exit is an error with a code of its own.
type exit struct {
	code int
	err  error // nil: the command has said what there is to say
}

func (e *exit) Error() string {
	if e.err == nil {
		return fmt.Sprintf("exit %d", e.code)
	}
	return e.err.Error()
}

func (e *exit) Unwrap() error { return e.err }

// request marks an error as a wrong request.
func request(err error) error {
	if err == nil {
		return nil
	}
	return &exit{exitRequest, err}
}

var (
	errCtrlC     = errors.New("interrupted by Ctrl-C")
	errScheduler = errors.New("asked to stop by a signal")
)

func run(args []string) int {
	ctx, cancel := context.WithCancelCause(context.Background())
	defer cancel(nil)
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM, syscall.SIGUSR1, syscall.SIGHUP)
	defer signal.Stop(signals)
	go func() {
		s := <-signals
		signal.Stop(signals) // a second one ends the program at once
		if s == os.Interrupt {
			cancel(errCtrlC)
		} else {
			cancel(errScheduler)
		}
	}()
	root := newRoot()
	root.SetArgs(args)
	stdout := &printer{w: os.Stdout}
	root.SetOut(stdout)
	err := root.ExecuteContext(ctx)
	if err == nil && stdout.err != nil {
		err = &exit{exitStopped, fmt.Errorf("printing: %w", stdout.err)}
	}
	if err == nil {
		return exitDone
	}
	var e *exit
	if !errors.As(err, &e) {
		// What cobra itself refuses is a wrong request.
		e = &exit{exitRequest, err}
	}
	if e.err != nil {
		complain(os.Stderr, e.err)
	}
	return e.code
}

// printer remembers the first failure to write, which a command's many prints
// need not look at.
type printer struct {
	w   io.Writer
	err error
}

func (p *printer) Write(b []byte) (int, error) {
	n, err := p.w.Write(b)
	if p.err == nil {
		p.err = err
	}
	return n, err
}
