package main

import (
	"fmt"
	"runtime"
	"runtime/debug"

	"sojourn/kinetic"
)

// release is the version of the program.
const release = "0.1.0"

type versionJSON struct {
	Version  string `json:"version"`
	Revision string `json:"revision,omitempty"` // of the sources, if the build knows it
	Go       string `json:"go"`
	Platform string `json:"platform"`
	Streams  int    `json:"stream_revision"`
	Fits     int    `json:"fits_format"`
}

func (c *console) version(o *options, _ []string) error {
	v := versionJSON{Version: release, Revision: revision(), Go: runtime.Version(), Platform: runtime.GOOS + "/" + runtime.GOARCH,
		Streams: kinetic.StreamRevision, Fits: fitFormat}
	if o.json {
		return c.writeJSON(v)
	}
	s := "sojourn " + v.Version
	if v.Revision != "" {
		s += " (" + v.Revision + ")"
	}
	_, err := fmt.Fprintf(c.stdout, "%s\n%s, %s\nrandom streams revision %d; format of fits %d\n", s, v.Go, v.Platform, v.Streams, v.Fits)
	return err
}

// revision is what the build recorded of the sources' version control.
func revision() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return ""
	}
	rev, dirty := "", ""
	for _, s := range info.Settings {
		switch s.Key {
		case "vcs.revision":
			rev = s.Value
		case "vcs.modified":
			if s.Value == "true" {
				dirty = "+"
			}
		}
	}
	return rev[:min(len(rev), 12)] + dirty
}
