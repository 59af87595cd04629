package main

import (
	"flag"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/observables"
	"sojourn/observables/table"
)

var update = flag.Bool("update", false, "rewrite the generated parts of README.md and the golden files")

const readmePath = "../../README.md"

// generated are the parts of the README that are made from the tables of the
// program, by the name in their marker.
var generated = map[string]func() string{
	"verbs":      readmeVerbs,
	"exits":      readmeExits,
	"study keys": readmeKeys,
	"parts":      readmeParts,
	"fits":       readmeFits,
	"warnings":   readmeWarnings,
}

// A part of the README that is made from tables must say what the tables say;
// go test ./cmd/sojourn -run README -update rewrites it.
func TestREADMEFollowsTables(t *testing.T) {
	raw, err := os.ReadFile(readmePath)
	if err != nil {
		t.Fatal(err)
	}
	marker := regexp.MustCompile(`(?s)<!-- generated: ([a-z ]+) -->\n.*?<!-- end -->`)
	seen := map[string]bool{}
	text := marker.ReplaceAllStringFunc(string(raw), func(part string) string {
		name := marker.FindStringSubmatch(part)[1]
		generate := generated[name]
		if generate == nil {
			t.Errorf("README.md has an unknown generated part %q", name)
			return part
		}
		seen[name] = true
		return fmt.Sprintf("<!-- generated: %s -->\n\n%s\n<!-- end -->", name, generate())
	})
	for name := range generated {
		if !seen[name] {
			t.Errorf("README.md lacks the generated part %q", name)
		}
	}
	if text == string(raw) {
		return
	}
	if !*update {
		t.Fatal("README.md does not say what the tables of the program say; go test ./cmd/sojourn -run README -update rewrites it")
	}
	if err := os.WriteFile(readmePath, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

func markdown(head []string, rows [][]string) string {
	var b strings.Builder
	line := func(cells []string) {
		for i := range cells {
			cells[i] = strings.ReplaceAll(cells[i], "|", `\|`)
		}
		b.WriteString("| " + strings.Join(cells, " | ") + " |\n")
	}
	line(head)
	b.WriteString(strings.Repeat("|---", len(head)) + "|\n")
	for _, r := range rows {
		line(r)
	}
	return b.String()
}

func readmeVerbs() string {
	var b strings.Builder
	b.WriteString("```\n")
	for i := range verbs {
		for _, line := range wrap(verbs[i].usage(), 94, "    ") {
			b.WriteString(line + "\n")
		}
	}
	b.WriteString("```\n")
	return b.String()
}

func readmeExits() string {
	var rows [][]string
	for _, e := range exits {
		rows = append(rows, []string{e.status, e.means})
	}
	return markdown([]string{"status", "meaning"}, rows)
}

func readmeKeys() string {
	var b strings.Builder
	for _, s := range configs.Schema() {
		name := "Top of the file"
		switch {
		case s.Repeated:
			name = "`[[" + s.Name + "]]`"
		case s.Name != "":
			name = "`[" + s.Name + "]`"
		}
		fmt.Fprintf(&b, "%s. %s\n\n", name, s.Doc)
		var rows [][]string
		for _, k := range s.Keys {
			what := k.Type.String()
			if len(k.Words) > 0 {
				what += ": " + strings.Join(k.Words, ", ")
			} else if r := k.Range.String(); r != "" {
				what += ", " + r
			}
			rows = append(rows, []string{"`" + k.Name + "`", what, k.Default, k.Needs, k.Doc})
		}
		if len(rows) > 0 {
			b.WriteString(markdown([]string{"key", "type", "default", "when", "meaning"}, rows) + "\n")
		}
	}
	return b.String()
}

func readmeParts() string {
	var b strings.Builder
	var lead [][]string
	for _, c := range observables.Leading(nil) {
		lead = append(lead, []string{"`" + c.Name + "`", string(c.Type), c.Unit, c.Doc})
	}
	b.WriteString("Every table begins with\n\n" + markdown(columnHead, lead) +
		"\nand has one column for each scanned parameter, its dotted name with underscores (`bath_beta`).\n")
	for _, t := range observables.Tables(nil) {
		var rows [][]string
		for _, c := range t.Columns[len(lead):] {
			rows = append(rows, []string{"`" + c.Name + "`", string(c.Type), c.Unit, c.Doc})
		}
		fmt.Fprintf(&b, "\n`parts/%s`: %s.\n\n%s", t.Name, t.Doc, markdown(columnHead, rows))
	}
	return b.String()
}

var columnHead = []string{"column", "type", "unit", "meaning"}

func readmeFits() string {
	var b strings.Builder
	rowsOf := func(columns []table.Column) [][]string {
		var rows [][]string
		for _, c := range columns {
			rows = append(rows, []string{"`" + c.Name + "`", string(c.Type), c.Unit, c.Meaning})
		}
		return rows
	}
	b.WriteString("Tables about points begin with\n\n" + markdown(columnHead, rowsOf(fitLeading)) +
		"\nand the scanned parameters; a value that could not be had is missing (null).\n")
	for _, t := range fitTables {
		fmt.Fprintf(&b, "\n`fits/%s.parquet`: %s.\n\n%s", t.name, t.doc, markdown(columnHead, rowsOf(t.columns)))
	}
	return b.String()
}

func readmeWarnings() string {
	var rows [][]string
	for _, k := range analysis.WarningKinds {
		rows = append(rows, []string{"`" + k.Code + "`", k.Meaning, k.Threshold})
	}
	return markdown([]string{"code", "meaning", "threshold"}, rows)
}
