package main

import (
	"errors"
	"strings"
)

// The exit codes.
const (
	exitDone       = 0
	exitIncomplete = 1 // not completed, or failed its own checks
	exitUsage      = 2 // wrong usage or bad input
)

// usageError is wrong usage or bad input.
type usageError struct {
	Where  string // flag, argument or file:line:column; may be empty
	What   string // what is wrong
	Remedy string // what to do about it
	Err    error  // cause, if another error is behind it
}

// Error is "where: what; remedy".
func (e *usageError) Error() string {
	s := e.What
	if s == "" && e.Err != nil {
		s = e.Err.Error()
	}
	if e.Where != "" {
		s = e.Where + ": " + s
	}
	if e.Remedy != "" {
		s += "; " + e.Remedy
	}
	return s
}

// Unwrap returns the cause.
func (e *usageError) Unwrap() error { return e.Err }

// badInput marks an error of another room as the input's fault.
func badInput(err error) error {
	if err == nil {
		return nil
	}
	return &usageError{Err: err}
}

// incompleteError says why a result is not whole. The result itself has been
// printed, marked as incomplete.
type incompleteError struct{ Reasons []string }

// Error lists the reasons, one a line.
func (e *incompleteError) Error() string {
	return "incomplete: " + strings.Join(e.Reasons, "\nincomplete: ")
}

// incomplete returns an incompleteError, or nil without reasons.
func incomplete(reasons []string) error {
	if len(reasons) == 0 {
		return nil
	}
	return &incompleteError{reasons}
}

// exitCode is the exit code for what a command returned.
func exitCode(err error) int {
	var usage *usageError
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &usage):
		return exitUsage
	}
	return exitIncomplete
}
