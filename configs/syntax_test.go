package configs

import (
	"strings"
	"testing"
)

// TestFormsOfTOML writes one study in the ways that the format allows.
func TestFormsOfTOML(t *testing.T) {
	want := only(t, base).Key
	for name, text := range map[string]string{
		"inline tables": `title = "x"
lattice = { size = [8, 8] }
hamiltonian = { model = "ising" }
bath = { beta = 0.4 }
trajectory = { settle = 10.0, span = 1_00.0, step = 5e-1 }
`,
		"dotted keys": `lattice.size = [
  8, # along x
  8,
]
hamiltonian."model" = 'ising'
bath.beta = 0.4
trajectory.settle = 0xA
"trajectory"."span" = 100
trajectory . step = 0.5
`,
		"line ends of another system": strings.ReplaceAll(base, "\n", "\r\n"),
		"byte order mark":             "\ufeff" + base,
		"long strings":                swap(base, `"ising"`, "\"\"\"\nising\"\"\""),
		"escapes":                     swap(base, `"ising"`, `"\u0069s\U00000069ng"`),
		"no newline at the end":       strings.TrimRight(base, "\n"),
	} {
		if got := only(t, text).Key; got != want {
			t.Errorf("%s: key %s, want %s", name, got, want)
		}
	}
}

func TestPlacesSurviveAByteOrderMark(t *testing.T) {
	_, err := Decode("shelf", "", []byte("\ufeff"+swap(base, "beta = 0.4", "beta = -1")))
	f := err.(Faults)[0]
	if f.Line != 7 || f.Column != 8 {
		t.Errorf("%v", f)
	}
}

func TestTablesOfTablesInPlace(t *testing.T) {
	s := decoded(t, "observable = [{kind = \"energy\"}, {kind = \"terms\", family = \"bond\"}]\n"+base)
	if len(s.Points[0].Observables) != 2 {
		t.Errorf("%v", s.Points[0].Observables)
	}
	_, err := Decode("shelf", "", []byte("observable = [{kind = \"energy\"}, {kind = \"terms\",\n   family = \"bonds\"}]\n"+base))
	if f := err.(Faults)[0]; f.Line != 2 || f.Column != 13 {
		t.Errorf("%v", err)
	}
}

func TestInsideString(t *testing.T) {
	for _, c := range []struct {
		raw  string
		i    int // byte of the value
		want int // byte of raw
	}{
		{`"abc"`, 0, 1},
		{`"abc"`, 3, 4},
		{`'a\c'`, 2, 3},
		{`"\u0061b"`, 1, 7},
		{`"\u00e4b"`, 2, 7},
		{`"\U0001F600b"`, 4, 11},
		{`"\\\"b"`, 2, 5},
		{"\"\"\"\nab\"\"\"", 1, 5},
		{"\"\"\"\r\nab\"\"\"", 0, 5},
		{"\"\"\"a\\\n   b\"\"\"", 1, 9},
		{"'''\nab'''", 0, 4},
		{`""`, 0, 1},
		{`"a"`, 9, 2},
		{``, 3, 0},
	} {
		if got := insideString([]byte(c.raw), 0, c.i); got != c.want {
			t.Errorf("%q: byte %d is at %d, want %d", c.raw, c.i, got, c.want)
		}
	}
}

func TestNearest(t *testing.T) {
	words := []string{"beta", "settle", "heat-bath", "X", "sites_per_cell"}
	for in, want := range map[string]string{
		"Beta": "beta", "bta": "beta", "btea": "beta", "betas": "beta", "gamma": "", "x": "X", "Y": "",
		"heatbath": "heat-bath", "heat_bath": "heat-bath", "sitesPerCell": "sites_per_cell", "settel": "settle", "sites_per_cel1s": "sites_per_cell",
	} {
		if got := nearest(in, words); got != want {
			t.Errorf("%s: %q, want %q", in, got, want)
		}
	}
}
