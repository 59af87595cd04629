package kinetic

import "testing"

// Every engine that accepts a generator can be made for it, and one that does
// not is refused.
func TestEnginesByName(t *testing.T) {
	plain := compiled(t, isingSpec(t, 0.4, false, 8, 8))
	varying := compiled(t, gaussian(isingSpec(t, 0.4, false, 8, 8), 1))
	runs := map[string]*Generator{CompositionEngine: varying}
	for _, name := range EngineNames() {
		for _, g := range []*Generator{plain, varying} {
			want := runs[name] == g || runs[name] == nil && g == plain
			err := CheckEngine(name, g)
			if (err == nil) != want {
				t.Errorf("%s: %v", name, err)
			}
			e, makeErr := NewEngine(name, g, [32]byte{}, 0, StartRandom)
			if (makeErr == nil) != want {
				t.Errorf("%s was made: %v", name, makeErr)
			}
			if !want {
				continue
			}
			if e.Lanes() != EngineLanes(name) {
				t.Errorf("%s has %d lanes, not %d", name, e.Lanes(), EngineLanes(name))
			}
			if n := EngineBytes(name, g); n < 64 || n > 1<<20 {
				t.Errorf("%s takes %d bytes", name, n)
			}
		}
	}
}
