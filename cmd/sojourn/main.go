package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"

	"github.com/spf13/pflag"
)

func main() {
	os.Exit(run(os.Args[1:], os.Getenv, os.Stdin, os.Stdout, os.Stderr))
}

// console is what a verb reads from and writes to.
type console struct {
	getenv func(string) string
	stdin  io.Reader
	stdout io.Writer // results
	stderr io.Writer // progress, warnings, errors
}

// run is the whole program: it returns the exit status and ends nothing itself,
// so that tests call it in process.
func run(args []string, getenv func(string) string, stdin io.Reader, stdout, stderr io.Writer) (status int) {
	c := &console{getenv: getenv, stdin: stdin, stdout: stdout, stderr: stderr}
	asJSON := asksForJSON(args)
	defer func() {
		if p := recover(); p != nil {
			// Go's own crash would exit with 2, which here means that the
			// request was wrong.
			fmt.Fprintf(stderr, "%s", debug.Stack())
			status = c.fail(fmt.Errorf("a defect of sojourn itself, please report it with the lines above: %v", p), asJSON)
		}
	}()
	if err := c.dispatch(args); err != nil {
		return c.fail(err, asJSON)
	}
	return exitDone
}

// dispatch finds the verb, parses its flags and does it.
func (c *console) dispatch(args []string) error {
	top := pflag.NewFlagSet("sojourn", pflag.ContinueOnError)
	top.SetInterspersed(false) // what follows the verb is the verb's own
	top.SetOutput(io.Discard)
	top.Usage = func() {}
	help := top.BoolP("help", "h", false, "")
	showVersion := top.Bool("version", false, "")
	if err := top.Parse(args); err != nil {
		return badRequest("%v; flags follow the verb: `sojourn run STUDY --quiet`", err)
	}
	rest := top.Args()
	switch {
	case *showVersion:
		rest = []string{"version"}
	case *help || len(rest) == 0:
		_, err := io.WriteString(c.stdout, overview())
		if len(args) == 0 && err == nil {
			return badRequest("no verb given; one of %s", verbNames())
		}
		return err
	}
	if rest[0] == "help" {
		return c.help(rest[1:])
	}
	v := findVerb(rest[0])
	if v == nil {
		return badRequest("unknown verb %q; one of %s", rest[0], verbNames())
	}
	return c.verb(v, rest[1:])
}

func (c *console) verb(v *verb, args []string) error {
	o := options{}
	set := v.flagSet(&o)
	switch err := set.Parse(args); {
	case errors.Is(err, pflag.ErrHelp):
		_, err := io.WriteString(c.stdout, v.help())
		return err
	case err != nil:
		return badRequest("%s: %v; see `sojourn help %s`", v.name, err, v.name)
	}
	if err := v.checkArguments(set.Args()); err != nil {
		return err
	}
	o.changed = set.Changed
	return v.do(c, &o, set.Args())
}

func (c *console) help(names []string) error {
	text := overview()
	if len(names) > 0 {
		v := findVerb(names[0])
		if v == nil {
			return badRequest("no help on %q; one of %s", names[0], verbNames())
		}
		text = v.help()
	}
	_, err := io.WriteString(c.stdout, text)
	return err
}

// asksForJSON looks for --json before the flags are parsed, so that a fault in
// them is reported in the form that was asked for.
func asksForJSON(args []string) bool {
	for _, a := range args {
		switch a {
		case "--":
			return false
		case "--json", "--json=true":
			return true
		}
	}
	return false
}
