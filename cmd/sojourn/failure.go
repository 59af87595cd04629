package main

import (
	"encoding/json"
	"errors"
	"fmt"

	"sojourn/configs"
)

// Exit statuses. A second signal ends the program with 128 + its number.
const (
	exitDone        = 0
	exitFailed      = 1
	exitBadRequest  = 2
	exitInterrupted = 3
)

// exits is the contract of the exit status, for help and README.
var exits = []struct{ status, means string }{
	{"0", "done"},
	{"1", "the work failed, or results are incomplete"},
	{"2", "the request was wrong: study, flags or directory; nothing was written"},
	{"3", "stopped by a signal; the same command goes on"},
	{"128+n", "ended at once by a second signal n"},
}

// failure is an error with the exit status that it deserves.
type failure struct {
	status int
	err    error
}

func (f *failure) Error() string { return f.err.Error() }
func (f *failure) Unwrap() error { return f.err }

// badRequest is an error in what was asked for.
func badRequest(format string, a ...any) error {
	return &failure{exitBadRequest, fmt.Errorf(format, a...)}
}

// statusOf says with which status an error ends the program.
func statusOf(err error) int {
	var f *failure
	var faults configs.Faults
	switch {
	case errors.As(err, &f):
		return f.status
	case errors.As(err, &faults):
		return exitBadRequest
	}
	return exitFailed
}

// faultJSON is an error as programs read it; fields without a value are absent.
type faultJSON struct {
	File    string `json:"file,omitempty"`
	Line    int    `json:"line,omitempty"`
	Column  int    `json:"column,omitempty"`
	Key     string `json:"key,omitempty"`
	Message string `json:"message"`
}

// fail reports an error, for people on standard error and, where asked for, for
// programs on standard output, and returns the exit status.
func (c *console) fail(err error, asJSON bool) int {
	var faults configs.Faults
	list := []faultJSON{}
	if errors.As(err, &faults) {
		for _, f := range faults {
			fmt.Fprintf(c.stderr, "sojourn: %s\n", f.Error())
			list = append(list, faultJSON{f.File, f.Line, f.Column, f.Key, f.Message})
		}
	} else {
		fmt.Fprintf(c.stderr, "sojourn: %v\n", err)
		list = append(list, faultJSON{Message: err.Error()})
	}
	if asJSON {
		// "error" is the first fault, "errors" all of them.
		c.writeJSON(struct {
			Error  faultJSON   `json:"error"`
			Errors []faultJSON `json:"errors"`
		}{list[0], list})
	}
	return statusOf(err)
}

// writeJSON prints one object, indented, to standard output.
func (c *console) writeJSON(v any) error {
	e := json.NewEncoder(c.stdout)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(v)
}
