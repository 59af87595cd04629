package main

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"runtime"
	"strings"
	"sync"
	"testing"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/observables"
)

// The tests in the files outside_*_test.go take studies from their text to
// their fits, through the same functions as the command, and hold what comes out
// against values from outside: formulas of the papers named beside them, and the
// numbers in testdata/published.json. A value must lie within 4 of its own
// standard errors, and the error must be small enough for that to mean
// something: 1 % of the value, 3 % for relaxation times, unless a test asks for
// more. Seeds are fixed, so that a test that passed once passes again. Errors
// rest on some 32 units, so that a right value lies beyond 4 of them once in 2700
// (Student's t): whenever the random streams change, one of the several hundred
// comparisons fails by chance about once in six. Another seed then tells chance
// from a defect.

// The largest relative errors that count as data.
const (
	onePercent   = 0.01
	threePercent = 0.03 // of relaxation times
)

// publishedValue is a number from outside, where it comes from, and whether it
// was recalled rather than looked up or computed.
type publishedValue struct {
	Name   string  `json:"name"`
	Value  float64 `json:"value"`
	Source string  `json:"source"`
	Memory bool    `json:"from_memory"`
}

var readPublished = sync.OnceValues(func() (map[string]publishedValue, error) {
	text, err := os.ReadFile("../../testdata/published.json")
	if err != nil {
		return nil, err
	}
	var list []publishedValue
	if err := json.Unmarshal(text, &list); err != nil {
		return nil, err
	}
	out := map[string]publishedValue{}
	for _, v := range list {
		if _, twice := out[v.Name]; twice || v.Name == "" || v.Source == "" {
			return nil, fmt.Errorf("%q needs a name of its own and a source", v.Name)
		}
		out[v.Name] = v
	}
	return out, nil
})

// published returns the number of that name.
func published(t *testing.T, format string, args ...any) float64 {
	t.Helper()
	name := fmt.Sprintf(format, args...)
	all, err := readPublished()
	if err != nil {
		t.Fatalf("testdata/published.json: %v", err)
	}
	v, ok := all[name]
	if !ok {
		t.Fatalf("testdata/published.json has no %q", name)
	}
	return v.Value
}

// measured is one point of a study from text to fit.
type measured struct {
	*prepared
	data   analysis.Point
	result analysis.Result
}

// measure runs every point of a study, with the engine named, or the one that the
// study gets by itself if that is "".
func measure(t *testing.T, engine, text string) []measured {
	t.Helper()
	if engine != "" {
		text = strings.Replace(text, "[trajectory]\n", fmt.Sprintf("[trajectory]\nengine = %q\n", engine), 1)
	}
	s, err := configs.Decode("study", "study.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	points, err := prepareAll(s, 0)
	if err != nil {
		t.Fatal(err)
	}
	m, err := manifest(s, points)
	if err != nil {
		t.Fatal(err)
	}
	out := make([]measured, len(points))
	for i, q := range points {
		units := make([]observables.Unit, q.config.Trajectory.Count)
		faults := make([]error, len(units))
		inTurns(len(units), runtime.GOMAXPROCS(0), func(unit int) {
			units[unit], faults[unit] = q.record(context.Background(), unit, true, nil)
		})
		g := newGathering(&m.Points[i], groupOf(m.Points[i].Scan))
		for unit := range units {
			if faults[unit] != nil {
				t.Fatal(faults[unit])
			}
			if err := g.add(&units[unit]); err != nil {
				t.Fatal(err)
			}
		}
		if e := q.config.Trajectory.EngineName; engine != "" && e != engine {
			t.Fatalf("the engine is %s, not %s", e, engine)
		}
		out[i] = measured{prepared: q, data: g.finish(1)}
		out[i].result = analysis.Infer(out[i].data, analysis.Options{})
	}
	return out
}

// label names a point in messages.
func (m *measured) label() string {
	return pointText(m.config) + ", " + m.config.Trajectory.EngineName
}

// observable returns what was inferred of the observable of that name.
func (m *measured) observable(t *testing.T, name string) analysis.ObservableResult {
	t.Helper()
	for _, o := range m.result.Observables {
		if o.Name == name {
			return o
		}
	}
	t.Fatalf("%s: no observable %q", m.label(), name)
	return analysis.ObservableResult{}
}

// curve returns the pooled autocorrelation of the observable of that name.
func (m *measured) curve(t *testing.T, name string) analysis.Curve {
	t.Helper()
	for _, c := range m.result.Curves {
		if c.F == name && c.G == name {
			return c
		}
	}
	t.Fatalf("%s: no autocorrelation of %q", m.label(), name)
	return analysis.Curve{}
}

// off says how an estimate fails to be a given value: missing, less precise
// than most times the value (or scale, if that is larger), or more than 4 of its
// standard errors away. "" says that it holds.
func off(x analysis.Estimate, want, scale, most float64) string {
	scale = math.Max(math.Abs(want), scale)
	switch {
	case !x.OK:
		return "missing: " + x.Reason
	case !(x.Err > 0):
		return fmt.Sprintf("%v has no error", x.Value)
	case x.Err > most*scale:
		return fmt.Sprintf("%.6g +- %.2g is not known to %.3g %%", x.Value, x.Err, 100*most)
	case !(math.Abs(x.Value-want) <= 4*x.Err):
		return fmt.Sprintf("%.8g +- %.2g, want %.8g: off by %.1f standard errors", x.Value, x.Err, want, (x.Value-want)/x.Err)
	}
	return ""
}

// hold checks an estimate against a value that it should have, known to the
// relative error most.
func (m *measured) hold(t *testing.T, what string, x analysis.Estimate, want, most float64) {
	t.Helper()
	if s := off(x, want, 0, most); s != "" {
		t.Errorf("%s: %s: %s", m.label(), what, s)
		return
	}
	t.Logf("%s: %s: %.6g +- %.2g (%.2g %%), want %.6g (%+.1f errors)",
		m.label(), what, x.Value, x.Err, 100*x.Err/math.Abs(x.Value), want, (x.Value-want)/x.Err)
}

// holdCurve checks an autocorrelation against C(t) at some ten of its lags,
// among them the shortest and those over which C(t) falls to a twentieth. Errors
// must be below 1 % of C(0).
func (m *measured) holdCurve(t *testing.T, name string, want func(t float64) float64) {
	t.Helper()
	c := m.curve(t, name)
	end := 0
	for end < len(c.Times)-1 && want(c.Times[end]) > want(0)/20 {
		end++
	}
	if end < 3 {
		t.Errorf("%s: the autocorrelation of %s is lost after %d lags", m.label(), name, end)
	}
	worst := 0.0
	for i := 0; i <= end; i += max(1, end/10) {
		x := analysis.Estimate{Value: c.C[i], Err: c.Err[i], OK: true}
		w := want(c.Times[i])
		if c.Err[i] == 0 && math.Abs(x.Value-w) < 1e-12*want(0) {
			continue // the square of a single term at lag 0
		}
		if s := off(x, w, want(0), onePercent); s != "" {
			t.Errorf("%s: C(%.4g) of %s: %s", m.label(), c.Times[i], name, s)
			return
		}
		if d := (x.Value - w) / x.Err; math.Abs(d) > math.Abs(worst) {
			worst = d
		}
	}
	t.Logf("%s: C(t) of %s up to %.4g: worst %+.1f errors", m.label(), name, c.Times[end], worst)
}

// Every way in which an estimate can fail to be a value is seen.
func TestOff(t *testing.T) {
	good := analysis.Estimate{Value: 10.3, Err: 0.09, OK: true}
	if s := off(good, 10, 0, 0.01); s != "" {
		t.Errorf("a good estimate: %s", s)
	}
	for _, c := range []struct {
		x    analysis.Estimate
		want float64
		say  string
	}{
		{analysis.Estimate{Reason: "noise"}, 10, "missing: noise"},
		{analysis.Estimate{Value: 10, OK: true}, 10, "no error"},
		{analysis.Estimate{Value: 10, Err: math.NaN(), OK: true}, 10, "no error"},
		{analysis.Estimate{Value: 10, Err: 0.2, OK: true}, 10, "not known"},
		{analysis.Estimate{Value: math.NaN(), Err: 0.09, OK: true}, 10, "off by"},
		{good, good.Value + 4.1*good.Err, "off by"},
		{good, good.Value - 4.1*good.Err, "off by"},
	} {
		if s := off(c.x, c.want, 0, 0.01); !strings.Contains(s, c.say) {
			t.Errorf("%+v held against %v: %q, want %q", c.x, c.want, s, c.say)
		}
	}
}
