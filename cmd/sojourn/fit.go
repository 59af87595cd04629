package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"

	"sojourn/observables/archive"
)

// fit infers from a results directory alone.
func (c *console) fit(o *options, args []string) error {
	if _, err := os.Stat(args[0]); errors.Is(err, fs.ErrNotExist) {
		return badRequest("%s: there is no such directory; sojourn run STUDY -o DIR makes one", args[0])
	}
	d, err := archive.Open(args[0])
	if err != nil {
		return directoryError(err)
	}
	f, err := infer(d, o.partial)
	if err != nil {
		return err
	}
	c.keepFits(d, f)
	if o.againstExact {
		if err := c.compareExactly(d, f); err != nil {
			return err
		}
	}
	if o.json {
		return c.writeJSON(jsonOfFindings(f))
	}
	return writeReport(c.stdout, f)
}

// keepFits writes fits/ and says so if it cannot: what was found is printed all
// the same.
func (c *console) keepFits(d *archive.Dir, f *findings) {
	if err := writeFits(d, f); err != nil {
		c.warn("the fits could not be written: %v", err)
	}
}

// warn tells of something that does not stop the work.
func (c *console) warn(format string, a ...any) {
	fmt.Fprintf(c.stderr, "sojourn: warning: %s\n", fmt.Sprintf(format, a...))
}

// directoryError gives errors that say that the directory is not the one meant
// the status of a wrong request.
func directoryError(err error) error {
	for _, wrong := range []error{archive.ErrOtherStudy, archive.ErrNotResults, archive.ErrFormat} {
		if errors.Is(err, wrong) {
			return &failure{exitBadRequest, err}
		}
	}
	return err
}
