package configs

import (
	"embed"
	"strings"
)

//go:embed bundled/*.toml
var bundled embed.FS

// Bundle is a study that comes with the program.
type Bundle struct {
	Name  string // what Load takes
	Title string
}

// Bundled lists the bundled studies by name.
func Bundled() []Bundle {
	entries, err := bundled.ReadDir("bundled")
	if err != nil {
		panic("configs: " + err.Error())
	}
	var out []Bundle
	for _, e := range entries {
		name := strings.TrimSuffix(e.Name(), ".toml")
		src, err := bundled.ReadFile(bundledPath(name))
		if err != nil {
			panic("configs: " + err.Error())
		}
		out = append(out, Bundle{Name: name, Title: titleOf(src)})
	}
	return out
}

func bundledPath(name string) string { return "bundled/" + name + ".toml" }

// titleOf reads the title alone, so that a list of studies costs no compiling.
func titleOf(src []byte) string {
	d := newDecoder(newSource("", src))
	root, _ := d.parse()
	if e := root.get("title"); e != nil {
		return e.value.text
	}
	return ""
}
