package observables

import (
	"runtime"
	"testing"

	"sojourn/kinetic/kinetictest"
)

// Bytes is what a unit takes, or up to a half more.
func TestBytes(t *testing.T) {
	heap := func() int64 {
		runtime.GC()
		var m runtime.MemStats
		runtime.ReadMemStats(&m)
		return int64(m.HeapAlloc)
	}
	for _, c := range []struct {
		name     string
		requests []Request
		lanes    int
		plan     Plan
	}{
		{"scalars", []Request{{Kind: Energy}, {Kind: Magnetization}}, 8, Plan{Span: 700, Step: 0.25}},
		{"local", []Request{{Kind: Local, Family: "spin"}}, 2, Plan{Span: 700, Step: 0.25}},
		{"fourier", []Request{{Kind: Fourier, Family: "spin"}}, 1, Plan{Span: 700, Step: 0.25}},
		{"covariance", []Request{{Kind: Local, Family: "bond-x"}}, 1, Plan{Span: 400, Step: 1, Covariance: "spin", Every: 100, Limit: 20}},
	} {
		g := compile(t, kinetictest.Ising(kinetictest.Lattice(200, 210), 0.3, kinetictest.HeatBath))
		for i := range c.requests {
			c.requests[i].Name = string(rune('a' + i))
		}
		obs, err := Bind(g, c.requests)
		if err != nil {
			t.Fatal(err)
		}
		e := newBundle(t, g, c.lanes, 1)
		before := heap()
		r, err := newRecorder(e, g, obs, allPairs(obs), c.plan)
		if err != nil {
			t.Fatal(err)
		}
		r.stride = 1
		r.take()
		for k := range min(c.plan.Samples(), 3000) {
			r.tl.next()
			r.correlator.add(r.reading)
			r.moments.add(int(k%MomentSegments), r.reading)
		}
		for s := range PairSegments {
			r.dirichlet.add(s)
		}
		if r.spatial != nil {
			r.spatial.add()
		}
		u := r.unit(Label{})
		took := heap() - before
		runtime.KeepAlive(r)
		runtime.KeepAlive(u)
		if got := Bytes(g, obs, allPairs(obs), c.plan, c.lanes); got < took || 2*got > 3*took {
			t.Errorf("%s: Bytes says %d, the unit took %d", c.name, got, took)
		}
	}
}
