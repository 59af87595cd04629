package configs

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func TestLoad(t *testing.T) {
	dir := t.TempDir()
	t.Chdir(dir)
	if err := os.WriteFile("shelf.toml", []byte(base), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile("broken.toml", []byte("[lattice"), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir("folder.toml", 0o777); err != nil {
		t.Fatal(err)
	}
	for _, ref := range []string{"shelf.toml", "./shelf.toml", filepath.Join(dir, "shelf.toml")} {
		s, err := Load(ref)
		if err != nil {
			t.Fatal(err)
		}
		if s.Name != "shelf" || s.Path != ref || s.Title != "Coldest shelf" || string(s.Source) != base {
			t.Errorf("%s: name %q, path %q, title %q", ref, s.Name, s.Path, s.Title)
		}
	}
	for ref, want := range map[string]string{
		"shelf":         "shelf: no bundled study has this name; for the file here write shelf.toml",
		"nothing":       "nothing: no bundled study has this name; bundled are cold-buffer, ",
		"nothing.toml":  "nothing.toml: there is no such study file",
		"no/where":      "no/where: there is no such study file",
		"broken.toml":   "broken.toml:1:8: the file is not valid TOML",
		"folder.toml":   "folder.toml: the study cannot be read: is a directory",
		"":              ": no bundled study has this name",
		"../etc/passwd": "../etc/passwd: there is no such study file",
	} {
		_, err := Load(ref)
		if err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("%q: %v, want %s", ref, err, want)
		}
		if _, ok := err.(Faults); !ok {
			t.Errorf("%q: %T is not Faults", ref, err)
		}
	}
}

func TestBundled(t *testing.T) {
	var names []string
	for _, b := range Bundled() {
		names = append(names, b.Name)
		s, err := Load(b.Name)
		if err != nil {
			t.Errorf("%v", err)
			continue
		}
		if b.Title == "" || s.Title != b.Title || s.Name != b.Name || s.Path != "" {
			t.Errorf("%s: titles %q and %q", b.Name, b.Title, s.Title)
		}
		if len(s.Notes) > 0 {
			t.Errorf("%s: %v", b.Name, s.Notes)
		}
		for i := range s.Points {
			if _, err := s.Points[i].Generator(); err != nil {
				t.Errorf("%s, point %d: %v", b.Name, i, err)
			}
		}
	}
	if !slices.Contains(names, "cold-buffer") {
		t.Errorf("no cold-buffer in %v", names)
	}
}

// The study that spells the toric code out has the points of the one that asks
// for the built-in model.
func TestBundledCustomToric(t *testing.T) {
	spelt, err1 := Load("custom-toric")
	built, err2 := Load("toric-memory")
	if err1 != nil || err2 != nil {
		t.Fatal(err1, err2)
	}
	if len(spelt.Points) != len(built.Points) {
		t.Fatalf("%d and %d points", len(spelt.Points), len(built.Points))
	}
	for i := range spelt.Points {
		if spelt.Points[i].Key != built.Points[i].Key || spelt.Points[i].Stream != built.Points[i].Stream {
			t.Errorf("point %d: keys %s and %s", i, spelt.Points[i].Key, built.Points[i].Key)
		}
	}
}
