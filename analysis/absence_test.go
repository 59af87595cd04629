package analysis

import (
	"math"
	"math/rand/v2"
	"reflect"
	"strings"
	"testing"
)

// Data that cannot answer must give no number, and a reason.
func TestNoAnswer(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	series := func(units, samples int, value func(i int) float64) [][][]float64 {
		x := make([][][]float64, units)
		for u := range x {
			x[u] = [][]float64{make([]float64, samples)}
			for i := range x[u][0] {
				x[u][0][i] = value(i)
			}
		}
		return x
	}
	noise := func(int) float64 { return rng.NormFloat64() }
	slow := ou("slow", exponential{1, 0.01})
	slower := slow.point(9, 16, 50, 0.5) // half a relaxation time per unit
	single := pureOU.point(9, 1, 20, 0.1)
	for _, test := range []struct {
		name, code string
		point      Point
	}{
		{"noise", codeCoarseStep, record(series(16, 1000, noise), 1, nil)},
		{"noise with a Dirichlet form", codeCoarseStep, record(series(16, 1000, noise), 1, [][]float64{{5}})},
		{"constant", codeConstant, record(series(16, 1000, func(int) float64 { return 3 }), 1, [][]float64{{0}})},
		{"one sample", codeNoData, record(series(16, 1, noise), 1, nil)},
		{"one unit", codeFewUnits, single},
		{"three units", codeFewUnits, pureOU.point(9, 3, 30, 0.1)},
		{"span of half a relaxation time", codeShortSpan, slower},
		{"no units", codeNoData, Point{Observables: []Observable{{Name: "a", Scalar: true}}, Pairs: []Pair{{Lags: []int64{0, 1}}}}},
	} {
		r := Infer(test.point, Options{})
		o := r.Observables[0]
		if o.Integrated.OK || o.Slowest.OK || o.SlowestInterval.OK || r.SlowMode.Tau.OK {
			t.Errorf("%s: tau_int %v, tau_slowest %v, slow mode %v", test.name, o.Integrated, o.Slowest, r.SlowMode.Tau)
			continue
		}
		// Only a lower bound survives a short span.
		if short := test.code == codeShortSpan; o.SlowestBound.OK != short || r.SlowMode.Bound.OK != short {
			t.Errorf("%s: bounds %+v, %+v", test.name, o.SlowestBound, r.SlowMode.Bound)
		}
		if o.Integrated.Code != test.code {
			t.Errorf("%s: code %s (%s), want %s", test.name, o.Integrated.Code, o.Integrated.Reason, test.code)
		}
		if o.Integrated.Reason == "" || len(o.Warnings) == 0 {
			t.Errorf("%s: no reason", test.name)
		}
		if o.Integrated.Value != 0 || o.Integrated.Err != 0 {
			t.Errorf("%s: a missing estimate carries numbers", test.name)
		}
		finiteOrInf(t, test.name, reflect.ValueOf(r))
	}
}

// finiteOrInf fails on any NaN in a result, wherever it stands.
func finiteOrInf(t *testing.T, where string, v reflect.Value) {
	t.Helper()
	switch v.Kind() {
	case reflect.Float64:
		if math.IsNaN(v.Float()) {
			t.Errorf("%s is not a number", where)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			finiteOrInf(t, where+"."+v.Type().Field(i).Name, v.Field(i))
		}
	case reflect.Slice:
		for i := range v.Len() {
			finiteOrInf(t, where+"[]", v.Index(i))
		}
	}
}

// The same numbers give the same result, bit for bit.
func TestDeterministic(t *testing.T) {
	a := Infer(twoOfThree.point(4, 8, 30, 0.1), Options{})
	b := Infer(twoOfThree.point(4, 8, 30, 0.1), Options{})
	if !reflect.DeepEqual(a, b) {
		t.Error("two inferences of the same data differ")
	}
}

// Every code that the sources name is listed with a meaning.
func TestWarningKinds(t *testing.T) {
	for _, k := range WarningKinds {
		if k.Code == "" || k.Meaning == "" || strings.ToLower(k.Code) != k.Code || strings.Contains(k.Code, " ") {
			t.Errorf("bad warning kind %+v", k)
		}
	}
	defer func() {
		if recover() == nil {
			t.Error("an unlisted code passed")
		}
	}()
	warn("no such code", "")
}
