package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/pflag"
)

// verb is one thing that the command does. Flags, arguments and help are made
// from it.
type verb struct {
	name      string
	arguments []argument
	summary   string // one line, lower case, no full stop
	about     string // paragraphs for the help of the verb
	flags     []string
	examples  []example
	do        func(c *console, o *options, args []string) error
}

type argument struct {
	name     string
	optional bool
}

type example struct {
	command string
	says    string
}

// options holds every flag's value; a verb sees those that it lists.
type options struct {
	out                  string
	task, tasks, workers int
	quiet, audit         bool
	partial              bool
	againstExact         bool
	json                 bool
	changed              func(name string) bool
}

// option is one flag, as it stands in every verb that takes it.
type option struct {
	name, short string
	value       string // what stands for its value in the help; "" for a switch
	doc         string
	target      func(o *options) any // *string, *int or *bool
}

var flags = []option{
	{"out", "o", "DIR", "results directory (default: the study's name, in the working directory)",
		func(o *options) any { return &o.out }},
	{"task", "", "K", "do only share K of N, from 0; needs --tasks (default: what the batch system's array variables say, else everything)",
		func(o *options) any { return &o.task }},
	{"tasks", "", "N", "number of shares; needs --task",
		func(o *options) any { return &o.tasks }},
	{"workers", "", "W", "trajectories at a time (default: the processors that this process may use)",
		func(o *options) any { return &o.workers }},
	{"audit", "", "", "after each unit recompute the whole state and compare it with the one carried along",
		func(o *options) any { return &o.audit }},
	{"partial", "", "", "use the parts that are there although others are missing",
		func(o *options) any { return &o.partial }},
	{"against-exact", "", "", "beside each estimate the exact value, and the deviation in standard errors, of points with at most 2^14 states",
		func(o *options) any { return &o.againstExact }},
	{"quiet", "", "", "no progress",
		func(o *options) any { return &o.quiet }},
	{"json", "", "", "one JSON object on standard output instead of tables",
		func(o *options) any { return &o.json }},
}

// verbs in the order of the help. Filled in by init, since help itself walks it.
var verbs []verb

func init() {
	study := argument{name: "STUDY"}
	verbs = []verb{
		{
			name: "plan", arguments: []argument{study}, flags: []string{"json"},
			summary: "check a study and say what it would do; write nothing",
			about: `STUDY is a path when it ends in .toml or contains a separator, else the name of a study
that comes with sojourn. Each point of its scan is compiled and described: sites, terms, how
many qubits the ground states encode, the engine and why, the lags, the number of samples, and
what it would cost in jumps, seconds and bytes. The seconds come from a short calibration on
this machine, and decide nothing. Every default that was filled in is printed.`,
			examples: []example{{"sojourn plan cold-buffer", "what the bundled study would take"}},
			do:       (*console).plan,
		},
		{
			name: "run", arguments: []argument{study}, flags: []string{"out", "task", "tasks", "workers", "audit", "quiet", "json"},
			summary: "run its trajectories; goes on from what is there",
			about: `Runs whatever trajectories of the study are not yet in the results directory, and when all
are there fits them and prints the result. Any number of processes, on any hosts that see the
directory, may work on it at once: each claims parts that nobody has. A process that is stopped
or killed loses at most the trajectory it was in; the next run goes on. A scan may be extended,
by another beta or a larger count, without touching what is there. The same study and seed give
the same rows, bit for bit, however many processes and workers share it.`,
			examples: []example{
				{"sojourn run cold-buffer", "the bundled study, into ./cold-buffer"},
				{"sojourn run my.toml -o /scratch/my", "a study of your own"},
				{"sojourn run my.toml --task 3 --tasks 16", "the fourth of sixteen shares"},
			},
			do: (*console).run,
		},
		{
			name: "fit", arguments: []argument{{name: "DIR"}}, flags: []string{"partial", "against-exact", "json"},
			summary: "relaxation times, slow mode, spatial decay, trends over the scan",
			about: `Fits what stands in a results directory; needs nothing but the directory. The fits are
written to DIR/fits as Parquet tables, and printed. Where the directory cannot be written they
are printed all the same, with a warning.`,
			examples: []example{
				{"sojourn fit cold-buffer", "the same print as at the end of the run"},
				{"sojourn fit small --against-exact", "with exact values beside it, of a 3 x 3 lattice, say"},
			},
			do: (*console).fit,
		},
		{
			name: "exact", arguments: []argument{study}, flags: []string{"quiet", "json"},
			summary: "the same quantities without sampling, where the lattice is small",
			about: `Enumerates the states that the jumps reach from the reference state and prints, without
sampling, the lowest eigenvalues of the generator on them and what run and fit estimate of each
observable: a check on both. Up to 2^20 states are listed, in some minutes. Beyond, translations
and spin flips may reduce them to 2^20 orbits (5 x 5 Ising spins): each observable is then exact,
but the gap is only bounded. Larger lattices are refused before anything is computed.`,
			examples: []example{{"sojourn exact small.toml", "gap and relaxation times of a 3 x 3 lattice, say"}},
			do:       (*console).exact,
		},
		{
			name: "models", arguments: []argument{{name: "NAME", optional: true}}, flags: []string{"json"},
			summary:  "the built-in Hamiltonians and their parameters",
			about:    `Lists the built-in Hamiltonians, or describes one.`,
			examples: []example{{"sojourn models toric-code", "its terms, ground states and source"}},
			do:       (*console).models,
		},
		{
			name: "version", flags: []string{"json"},
			summary: "the version of the program and of its file formats",
			about: `Prints the version of the program, of the results directory's formats and of the random
streams: two programs with the same stream revision and architecture give the same rows.`,
			do: (*console).version,
		},
	}
}

func findVerb(name string) *verb {
	for i := range verbs {
		if verbs[i].name == name {
			return &verbs[i]
		}
	}
	return nil
}

func verbNames() string {
	names := make([]string, len(verbs))
	for i := range verbs {
		names[i] = verbs[i].name
	}
	return strings.Join(names, ", ")
}

func findFlag(name string) *option {
	for i := range flags {
		if flags[i].name == name {
			return &flags[i]
		}
	}
	panic("sojourn: no flag " + name)
}

func (v *verb) flagSet(o *options) *pflag.FlagSet {
	set := pflag.NewFlagSet(v.name, pflag.ContinueOnError)
	set.SortFlags = false
	set.SetOutput(io.Discard)
	set.Usage = func() {}
	for _, name := range v.flags {
		f := findFlag(name)
		switch p := f.target(o).(type) {
		case *string:
			set.StringVarP(p, f.name, f.short, "", f.doc)
		case *int:
			set.IntVarP(p, f.name, f.short, 0, f.doc)
		case *bool:
			set.BoolVarP(p, f.name, f.short, false, f.doc)
		}
	}
	return set
}

func (v *verb) checkArguments(args []string) error {
	least := 0
	for _, a := range v.arguments {
		if !a.optional {
			least++
		}
	}
	if len(args) < least {
		return badRequest("%s: %s is missing; usage: %s", v.name, v.arguments[len(args)].name, v.usage())
	}
	if len(args) > len(v.arguments) {
		return badRequest("%s: unexpected argument %q; usage: %s", v.name, args[len(v.arguments)], v.usage())
	}
	return nil
}

func (v *verb) usage() string {
	var b strings.Builder
	fmt.Fprintf(&b, "sojourn %s", v.name)
	for _, a := range v.arguments {
		if a.optional {
			fmt.Fprintf(&b, " [%s]", a.name)
		} else {
			fmt.Fprintf(&b, " %s", a.name)
		}
	}
	for _, name := range v.flags {
		f := findFlag(name)
		switch {
		case f.short != "":
			fmt.Fprintf(&b, " [-%s %s]", f.short, f.value)
		case f.value != "":
			fmt.Fprintf(&b, " [--%s %s]", f.name, f.value)
		default:
			fmt.Fprintf(&b, " [--%s]", f.name)
		}
	}
	return b.String()
}
