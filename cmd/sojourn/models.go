package main

import (
	"fmt"
	"strings"

	"sojourn/kinetic/models"
)

type modelJSON struct {
	Name       string          `json:"name"`
	Summary    string          `json:"summary"`
	Formula    string          `json:"formula"`
	Ground     string          `json:"ground_states"`
	Paper      string          `json:"paper"`
	MinAxes    int             `json:"min_axes"`
	MaxAxes    int             `json:"max_axes"`
	Classical  bool            `json:"classical"`
	Open       bool            `json:"open,omitempty"` // every axis must be
	Parameters []parameterJSON `json:"parameters"`
	Operators  []operatorsJSON `json:"operators"`
}

type parameterJSON struct {
	Name    string   `json:"name"`
	Default *float64 `json:"default,omitempty"`
	Follows string   `json:"follows,omitempty"` // the parameter whose value is the default
	MinAxes int      `json:"min_axes,omitempty"`
	Whole   bool     `json:"whole,omitempty"` // a whole number, from min to max
	Min     int      `json:"min,omitempty"`
	Max     int      `json:"max,omitempty"`
	Doc     string   `json:"doc"`
}

type operatorsJSON struct {
	Axes     int      `json:"axes"`
	Families []string `json:"families"`
	Tracked  []string `json:"tracked"`
}

// models lists the built-in Hamiltonians, or describes one.
func (c *console) models(o *options, args []string) error {
	list := models.All()
	if len(args) > 0 {
		m, ok := models.Find(args[0])
		if !ok {
			names := make([]string, len(list))
			for i := range list {
				names[i] = list[i].Name
			}
			return badRequest("models: unknown model %q; one of %s", args[0], strings.Join(names, ", "))
		}
		list = []models.Model{m}
	}
	if o.json {
		out := struct {
			Models []modelJSON `json:"models"`
		}{make([]modelJSON, len(list))}
		for i, m := range list {
			out.Models[i] = modelJSON{m.Name, m.Summary, m.Formula, m.Ground, m.Paper, m.MinAxes, m.MaxAxes, m.Classical, m.Open, []parameterJSON{}, []operatorsJSON{}}
			for _, p := range m.Parameters {
				json := parameterJSON{Name: p.Name, Follows: p.Follows, MinAxes: p.Axes, Whole: p.Whole, Min: p.Min, Max: p.Max, Doc: p.Doc}
				if p.Follows == "" {
					json.Default = &p.Default
				}
				out.Models[i].Parameters = append(out.Models[i].Parameters, json)
			}
			for axes := m.MinAxes; axes <= m.MaxAxes; axes++ {
				families, tracked := m.Names(axes)
				out.Models[i].Operators = append(out.Models[i].Operators, operatorsJSON{axes, families, tracked})
			}
		}
		return c.writeJSON(out)
	}
	var b strings.Builder
	for i, m := range list {
		if i > 0 {
			b.WriteByte('\n')
		}
		describeModel(&b, m)
	}
	if len(args) == 0 {
		b.WriteString("\nAny other commuting Hamiltonian is written out in the study, as model = \"custom\".\n")
	}
	_, err := fmt.Fprint(c.stdout, b.String())
	return err
}

func describeModel(b *strings.Builder, m models.Model) {
	for _, line := range wrap(m.Name+": "+m.Summary, pageWidth, "  ") {
		fmt.Fprintf(b, "%s\n", line)
	}
	axes := fmt.Sprintf("%d", m.MinAxes)
	if m.MaxAxes > m.MinAxes {
		axes = fmt.Sprintf("%d to %d", m.MinAxes, m.MaxAxes)
	}
	if m.Open {
		axes += ", all open"
	}
	field := func(name, text string) {
		for i, line := range wrap(text, 82, "") {
			if i > 0 {
				name = ""
			}
			fmt.Fprintf(b, "  %-12s %s\n", name, line)
		}
	}
	field("terms", m.Formula)
	field("axes", axes)
	for i, p := range m.Parameters {
		name := "parameters"
		if i > 0 {
			name = ""
		}
		value := shortest(p.Default)
		if p.Follows != "" {
			value = p.Follows
		}
		doc := p.Doc
		if p.Whole {
			doc += fmt.Sprintf(", %d to %d", p.Min, p.Max)
		}
		field(name, fmt.Sprintf("%s = %s  %s", p.Name, value, doc))
	}
	for n := m.MinAxes; n <= m.MaxAxes; n++ {
		families, tracked := m.Names(n)
		name := "families"
		if m.MaxAxes > m.MinAxes {
			name = fmt.Sprintf("on %d axes", n)
			if n == 1 {
				name = "on 1 axis"
			}
		}
		field(name, strings.Join(families, ", ")+"; tracked: "+strings.Join(tracked, ", "))
	}
	field("ground", m.Ground)
	field("source", m.Paper)
}
