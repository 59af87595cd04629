package main

import (
	"fmt"
	"strings"
)

const tagline = `sojourn: how long a lattice remembers.

Draws exact continuous-time trajectories of the thermal (Davies) dynamics of a commuting
lattice Hamiltonian, records autocorrelations, and fits relaxation times and the decay of
covariances in space, with errors.
`

// overview is the help of the whole command.
func overview() string {
	var b strings.Builder
	b.WriteString(tagline)
	b.WriteString("\nStart here:\n\n  sojourn run cold-buffer        a bundled study, about a minute on two cores\n\nVerbs:\n\n")
	for i := range verbs {
		v := &verbs[i]
		head := v.name
		for _, a := range v.arguments {
			if a.optional {
				head += " [" + a.name + "]"
			} else {
				head += " " + a.name
			}
		}
		fmt.Fprintf(&b, "  %-16s %s\n", head, v.summary)
	}
	b.WriteString("  help [VERB]      this text, or that of a verb\n")
	b.WriteString("\nExit status:\n\n")
	for _, e := range exits {
		fmt.Fprintf(&b, "  %-7s %s\n", e.status, e.means)
	}
	b.WriteString(`
Results go to standard output, progress and warnings to standard error. Numbers with an error
print as 12.41(7), which is 12.41 +- 0.07. Energies are in the unit of the study's couplings,
times in the inverse of the bath's rate: one attempt per site, bath operator and unit time.
`)
	return b.String()
}

// help is the help of one verb.
func (v *verb) help() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\n%s\n", strings.Join(wrap(v.usage(), 96, "    "), "\n"), v.about)
	b.WriteString("\nFlags:\n\n")
	for _, name := range v.flags {
		f := findFlag(name)
		head := "--" + f.name
		if f.short != "" {
			head = "-" + f.short + ", " + head
		}
		if f.value != "" {
			head += " " + f.value
		}
		for i, line := range wrap(f.doc, 74, "") {
			if i > 0 {
				head = ""
			}
			fmt.Fprintf(&b, "  %-18s %s\n", head, line)
		}
	}
	fmt.Fprintf(&b, "  %-18s %s\n", "-h, --help", "this text")
	if len(v.examples) > 0 {
		b.WriteString("\nExamples:\n\n")
		for _, e := range v.examples {
			fmt.Fprintf(&b, "  %-42s %s\n", e.command, e.says)
		}
	}
	return b.String()
}

// wrap breaks text into lines of at most width characters at spaces; lines
// after the first begin with the indent.
func wrap(text string, width int, indent string) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		switch {
		case line == "":
			line = word
		case len(line)+1+len(word) > width:
			lines = append(lines, line)
			line = indent + word
		default:
			line += " " + word
		}
	}
	return append(lines, line)
}
