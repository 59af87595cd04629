package configs

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// Load reads the study that ref names. It is a path if it ends in .toml or has
// a path separator, else the name of a bundled study. Its errors are [Faults].
func Load(ref string) (*Study, error) {
	if !isPath(ref) {
		src, err := bundled.ReadFile(bundledPath(ref))
		if err != nil {
			return nil, unknownStudy(ref)
		}
		return Decode(ref, "", src)
	}
	src, err := os.ReadFile(ref)
	if err != nil {
		return nil, Faults{{File: ref, Message: unreadable(err)}}
	}
	return Decode(strings.TrimSuffix(filepath.Base(ref), ".toml"), ref, src)
}

func isPath(ref string) bool {
	return strings.HasSuffix(ref, ".toml") || strings.ContainsRune(ref, '/') || strings.ContainsRune(ref, filepath.Separator)
}

func unreadable(err error) string {
	if errors.Is(err, fs.ErrNotExist) {
		return "there is no such study file"
	}
	var path *fs.PathError
	if errors.As(err, &path) {
		err = path.Err
	}
	return "the study cannot be read: " + err.Error()
}

// unknownStudy says what a name could have meant.
func unknownStudy(ref string) error {
	if _, err := os.Stat(ref + ".toml"); err == nil {
		return Faults{{File: ref, Message: "no bundled study has this name; for the file here write " + ref + ".toml"}}
	}
	var names []string
	for _, b := range Bundled() {
		names = append(names, b.Name)
	}
	return Faults{{File: ref, Message: "no bundled study has this name; bundled are " + strings.Join(names, ", ") +
		"; the path of a study file ends in .toml"}}
}
