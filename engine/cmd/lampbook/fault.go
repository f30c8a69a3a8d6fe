package main

import (
	"context"
	"errors"
	"fmt"
)

// fault is an error with the exit status that it leads to. A nil Err says nothing more: what is to be said has been.
type fault struct {
	status int
	err    error
	told   bool // in JSON, too, with the end
}

func (f fault) Error() string {
	if f.err == nil {
		return fmt.Sprintf("exit status %d", f.status)
	}
	return f.err.Error()
}

func (f fault) Unwrap() error { return f.err }

// wrong is a mistake on the command line or in the scene.
func wrong(err error) error {
	if errors.Is(err, errStopped) || errors.Is(err, context.Canceled) {
		return fault{status: statusStopped, err: errors.New("lampbook: stopped")}
	}
	return fault{status: statusWrong, err: err}
}

// wrongf is wrong for a mistake on the command line itself.
func wrongf(format string, args ...any) error {
	return fault{status: statusWrong, err: fmt.Errorf("lampbook: "+format, args...)}
}

// failed is something that went wrong in the doing, unless the error says better itself.
func failed(err error) error {
	if f, ok := err.(fault); ok {
		return f
	}
	return fault{status: statusFailed, err: err}
}

// told marks an error as told in JSON.
func told(err error) error {
	if err == nil {
		return nil
	}
	f, ok := err.(fault)
	if !ok {
		f = fault{status: statusOf(err), err: err}
	}
	f.told = true
	return f
}

// isTold reports whether an error has been told in JSON.
func isTold(err error) bool {
	var f fault
	return errors.As(err, &f) && f.told
}

// statusOf returns the exit status of an error that a command returned.
func statusOf(err error) int {
	var f fault
	switch {
	case err == nil:
		return statusDone
	case errors.As(err, &f):
		return f.status
	default:
		return statusFailed
	}
}

// faults lists the separate faults in an error, one line of text each.
func faults(err error) []string {
	var f fault
	if err == nil || errors.As(err, &f) && f.err == nil {
		return nil
	}
	if errors.As(err, &f) {
		err = f.err
	}
	if many, ok := err.(interface{ Unwrap() []error }); ok {
		var out []string
		for _, e := range many.Unwrap() {
			out = append(out, faults(e)...)
		}
		return out
	}
	return []string{err.Error()}
}
