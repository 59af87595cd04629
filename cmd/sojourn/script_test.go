package main

import (
	"bytes"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"runtime"
	"strconv"
	"strings"
	"testing"
)

// A script in testdata/script plays commands in an empty directory and holds
// what they must print. It begins with lines
//
//	# a remark
//	$ sojourn VERB ARGUMENTS
//	= STATUS
//
// and goes on with sections under "-- NAME --": files of the directory, and
// "stdout N" and "stderr N" of the Nth command (a missing one is empty). Times
// and speeds, which differ from run to run, stand as <time> and <speed>. A
// command that must end with status 2 must leave the directory as it found it.
// With -update the sections of output are rewritten. Numbers that come from
// trajectories are the same bit for bit on one architecture only: a script that
// prints some says "# golden on amd64", and elsewhere its output is not compared.
type script struct {
	path     string
	head     string
	commands []command
	names    []string // of sections, in order
	sections map[string]string
}

type command struct {
	line   string
	args   []string
	status int
}

var sectionLine = regexp.MustCompile(`^-- (.+) --$`)

func readScript(t *testing.T, path string) *script {
	raw, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	s := &script{path: path, sections: map[string]string{}}
	name := ""
	var head, body strings.Builder
	for _, line := range strings.SplitAfter(string(raw), "\n") {
		if m := sectionLine.FindStringSubmatch(strings.TrimSuffix(line, "\n")); m != nil {
			if name != "" {
				s.sections[name] = body.String()
			}
			name = m[1]
			s.names = append(s.names, name)
			body.Reset()
			continue
		}
		if name != "" {
			body.WriteString(line)
			continue
		}
		head.WriteString(line)
		fields := strings.Fields(line)
		switch {
		case len(fields) > 1 && fields[0] == "$" && fields[1] == "sojourn":
			s.commands = append(s.commands, command{line: strings.TrimSpace(line), args: fields[2:]})
		case len(fields) == 2 && fields[0] == "=" && len(s.commands) > 0:
			n, err := strconv.Atoi(fields[1])
			if err != nil {
				t.Fatalf("%s: %q", path, line)
			}
			s.commands[len(s.commands)-1].status = n
		case len(fields) > 0 && fields[0] != "#":
			t.Fatalf("%s: cannot read %q", path, line)
		}
	}
	if name != "" {
		s.sections[name] = body.String()
	}
	s.head = head.String()
	return s
}

var (
	// holds times, and so wraps as it likes
	advice   = regexp.MustCompile(`(?m)^  to do       .*\n(              .*\n)*`)
	timeHead = regexp.MustCompile(` +time {2,}`)
	padding  = regexp.MustCompile(` +<(time|speed)>`)
	aTime    = regexp.MustCompile(`\b\d+(\.\d+)?(e-?\d+)? (s|min|h|days)\b`)
	memories = regexp.MustCompile(`there are \d+(\.\d+)? [KMGTPE]iB`)
	aSpeed   = regexp.MustCompile(`\b\d+(\.\d+)?(e\d+)?/s\b`)
)

func scrub(text, dir string) string {
	text = strings.ReplaceAll(text, dir, "<dir>")
	text = memories.ReplaceAllString(text, "there are <memory>")
	text = advice.ReplaceAllString(text, "  to do       <advice>\n")
	text = aSpeed.ReplaceAllString(aTime.ReplaceAllString(text, "<time>"), "<speed>")
	text = timeHead.ReplaceAllString(text, " time  ")
	return padding.ReplaceAllString(text, " <$1>") // columns of times have no fixed width
}

func TestScripts(t *testing.T) {
	paths, err := filepath.Glob("testdata/script/*.txt")
	if err != nil || len(paths) == 0 {
		t.Fatal("no scripts", err)
	}
	for _, path := range paths {
		absolute, err := filepath.Abs(path)
		if err != nil {
			t.Fatal(err)
		}
		t.Run(strings.TrimSuffix(filepath.Base(path), ".txt"), func(t *testing.T) {
			playScript(t, readScript(t, absolute))
		})
	}
}

func playScript(t *testing.T, s *script) {
	dir := t.TempDir()
	t.Chdir(dir)
	for _, name := range s.names {
		if isOutput(name) {
			continue
		}
		if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(name, []byte(s.sections[name]), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	outputs := map[string]string{}
	for i, c := range s.commands {
		before := tree(t, dir)
		status, stdout, stderr := sojourn(c.args...)
		if status != c.status {
			t.Errorf("%s: status %d, want %d\n%s%s", c.line, status, c.status, stdout, stderr)
		}
		if c.status == exitBadRequest && tree(t, dir) != before {
			t.Errorf("%s: something was written", c.line)
		}
		outputs[fmt.Sprintf("stdout %d", i+1)] = scrub(stdout, dir)
		outputs[fmt.Sprintf("stderr %d", i+1)] = scrub(stderr, dir)
	}
	if *update {
		rewriteScript(t, s, outputs)
		return
	}
	if strings.Contains(s.head, "# golden on amd64") && runtime.GOARCH != "amd64" {
		return
	}
	for i := range s.commands {
		for _, stream := range []string{"stdout", "stderr"} {
			name := fmt.Sprintf("%s %d", stream, i+1)
			if got, want := outputs[name], s.sections[name]; got != want {
				t.Errorf("%s: %s is\n%s\nwant\n%s", s.commands[i].line, stream, got, want)
			}
		}
	}
}

func isOutput(section string) bool {
	return strings.HasPrefix(section, "stdout ") || strings.HasPrefix(section, "stderr ")
}

func rewriteScript(t *testing.T, s *script, outputs map[string]string) {
	var b strings.Builder
	b.WriteString(s.head)
	for _, name := range s.names {
		if !isOutput(name) {
			fmt.Fprintf(&b, "-- %s --\n%s", name, s.sections[name])
		}
	}
	for i := range s.commands {
		for _, stream := range []string{"stdout", "stderr"} {
			name := fmt.Sprintf("%s %d", stream, i+1)
			if outputs[name] != "" {
				fmt.Fprintf(&b, "-- %s --\n%s", name, outputs[name])
			}
		}
	}
	if err := os.WriteFile(s.path, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
}

// sojourn runs the program in process, without an environment.
func sojourn(args ...string) (status int, stdout, stderr string) {
	var out, errors bytes.Buffer
	status = run(args, func(string) string { return "" }, strings.NewReader(""), &out, &errors)
	return status, out.String(), errors.String()
}

// tree lists every file below a directory with its size and time.
func tree(t *testing.T, dir string) string {
	var b strings.Builder
	err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		info, err := d.Info()
		if err != nil {
			return err
		}
		fmt.Fprintln(&b, path, info.Size(), info.ModTime())
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return b.String()
}
