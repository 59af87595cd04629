package configs

import (
	"strings"
	"testing"
	"time"
)

// patience is how long one study may take, on a machine that is busy.
const patience = 20 * time.Second

// FuzzDecode: whatever stands in the file, the answer is a study whose points
// compile or a list of faults that stand inside the file.
func FuzzDecode(f *testing.F) {
	f.Add(base)
	f.Add(spelt)
	f.Add(crossed)
	f.Add(toric)
	for _, b := range Bundled() {
		src, err := bundled.ReadFile(bundledPath(b.Name))
		if err != nil {
			f.Fatal(err)
		}
		f.Add(string(src))
	}
	for _, table := range [][]wrong{wrongSyntax, wrongKeys, wrongValues, wrongHamiltonians, wrongBaths, wrongObservables, wrongTimes, wrongScans} {
		for _, w := range table {
			from := w.from
			if from == "" {
				from = base
			}
			text, _ := unmark(strings.Replace(from, w.old, w.new, 1))
			f.Add(text)
		}
	}
	f.Add(glass)
	for _, w := range wrongDisorder {
		if w.from == "" {
			w.from = glass
		}
		text, _ := unmark(strings.Replace(w.from, w.old, w.new, 1))
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		watch := time.AfterFunc(patience, func() { panic("decoding takes too long") })
		s, err := Decode("shelf", "shelf.toml", []byte(text))
		watch.Stop()
		if err == nil {
			if len(s.Points) == 0 {
				t.Fatal("a study without points")
			}
			return
		}
		faults := err.(Faults)
		lines := strings.Split(text, "\n")
		for _, f := range faults {
			if f.Line > len(lines) || f.Line > 0 && f.Column < 1 || f.Line > 0 && f.Column > len([]rune(lines[f.Line-1]))+1 {
				t.Errorf("%v stands outside the file", f)
			}
			if f.Message == "" || strings.ContainsRune(f.Message, '\n') {
				t.Errorf("message %q", f.Message)
			}
		}
	})
}
