package configs

import (
	"regexp"
	"strings"
)

var (
	barePattern = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9_-]*`)
	keyPattern  = regexp.MustCompile(`^[ \t]*([A-Za-z0-9_.-]+)[ \t]*=`)
)

// invalid reports text that is not TOML, in table path. The usual slips get
// words of their own.
func (d *decoder) invalid(at int, path string, err error) {
	line, _ := d.src.position(at)
	start := d.src.lines[line-1]
	before, rest := string(d.src.text[start:at]), string(d.src.text[at:])
	key := ""
	if m := keyPattern.FindStringSubmatch(string(d.src.text[start:])); m != nil {
		key = join(path, m[1])
	}
	open := strings.TrimRight(before, " \t")
	valueDue := strings.HasSuffix(open, "=") || strings.HasSuffix(open, "[") && key != "" || strings.HasSuffix(open, ",")
	word := barePattern.FindString(rest)
	switch {
	case valueDue && strings.EqualFold(word, "true"), valueDue && strings.EqualFold(word, "false"):
		d.fault(at, key, "%s is written %s", word, strings.ToLower(word))
	case valueDue && word != "":
		d.fault(at, key, "a word is written in quotes: \"%s\"", word)
	case valueDue && strings.HasSuffix(open, "=") && (rest == "" || rest[0] == '\n' || rest[0] == '\r' || rest[0] == '#'):
		d.fault(at, key, "has no value")
	default:
		d.fault(at, key, "the file is not valid TOML here: %s", err)
	}
}
