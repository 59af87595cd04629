package configs

import (
	"slices"
	"strings"
	"testing"

	"sojourn/kinetic/bath"
	"sojourn/observables"
)

// TestSchemaIsWhatTheDecoderReads walks the table of keys: the name of each is
// known to the decoder, another one is not.
func TestSchemaIsWhatTheDecoderReads(t *testing.T) {
	for _, s := range Schema() {
		for _, k := range s.Keys {
			if k.Doc == "" {
				t.Errorf("%s: no doc", join(s.Name, k.Name))
			}
			header := ""
			if s.Name != "" {
				header = s.title() + "\n"
			}
			if strings.HasPrefix(s.Name, "hamiltonian") {
				header = "[hamiltonian]\nmodel = \"custom\"\n" + strings.TrimPrefix(header, "[hamiltonian]\n")
			}
			_, err := Decode("shelf", "", []byte(header+k.Name+" = 1979-05-27\n"))
			faults, _ := err.(Faults)
			path := join(s.Name, k.Name)
			if !slices.ContainsFunc(faults, func(f Fault) bool {
				return f.Key == path && (strings.Contains(f.Message, "takes ") || strings.Contains(f.Message, "set twice"))
			}) {
				t.Errorf("%s is not read: %v", path, err)
			}
			_, err = Decode("shelf", "", []byte(header+"no_"+k.Name+"_at_all = 1\n"))
			if err == nil || !strings.Contains(err.Error(), "is not a key of") {
				t.Errorf("no_%s_at_all is read", k.Name)
			}
		}
	}
}

func TestShortNamesAreUnique(t *testing.T) {
	seen := map[string]bool{}
	for _, s := range Schema() {
		for _, k := range s.Keys {
			if k.Short != "" && seen[k.Short] {
				t.Errorf("%s stands for two keys", k.Short)
			}
			seen[k.Short] = true
			if k.Short != "" && !k.Scan {
				t.Errorf("%s has a short name but cannot be scanned", k.Name)
			}
		}
	}
}

func TestRangesInWords(t *testing.T) {
	for want, r := range map[string]Range{
		"": {}, "above 0": positive, "at least 0": notNegative, "from 1 to 1000000000": countRange, "0 to 2^63 - 1": seedRange,
	} {
		if r.String() != want {
			t.Errorf("%q, want %q", r, want)
		}
	}
}

// The words of a study are those of the rooms that act on them.
func TestWordsAgreeWithTheRoomsBelow(t *testing.T) {
	for _, k := range bath.Kinds() {
		takes, ok := lawTakes[string(k.Kind)]
		if !ok || !slices.Equal(takes, k.Keys) {
			t.Errorf("law %s takes %v here and %v there", k.Kind, takes, k.Keys)
		}
	}
	for _, k := range []observables.Kind{observables.Energy, observables.Magnetization, observables.Terms,
		observables.Local, observables.Fourier, observables.Operator} {
		if !slices.Contains(kinds, string(k)) {
			t.Errorf("kind %s is not known", k)
		}
		if got, want := (Observable{Kind: string(k)}).scalar(), (observables.Observable{Kind: k}).Scalar(); got != want {
			t.Errorf("kind %s is scalar: %v and %v", k, got, want)
		}
	}
}
