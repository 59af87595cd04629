package main

import (
	"context"
	"math"
	"testing"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/observables"
	"sojourn/observables/archive"
)

const gatheredStudy = `
[lattice]
size = [4, 6]

[hamiltonian]
model = "ising"

[bath]
beta = 0.3

[trajectory]
count  = 3
start  = "both"
settle = 10.0
span   = 100.0

[[observable]]
kind = "magnetization"

[[observable]]
kind = "energy"

[[observable]]
kind = "fourier"
family = "spin"
wavevector = [0, 1]

[covariance]
of = "spin"
every = 5.0
limit = 2
`

func gathered(t *testing.T) (*archive.Point, []observables.Unit) {
	t.Helper()
	s, err := configs.Decode("test", "test.toml", []byte(gatheredStudy))
	if err != nil {
		t.Fatal(err)
	}
	q, err := prepare(&s.Points[0], 0)
	if err != nil {
		t.Fatal(err)
	}
	m, err := manifest(s, []*prepared{q})
	if err != nil {
		t.Fatal(err)
	}
	var units []observables.Unit
	for k := range 3 {
		u, err := q.record(context.Background(), k, true, nil)
		if err != nil {
			t.Fatal(err)
		}
		units = append(units, u)
	}
	return &m.Points[0], units
}

// Every number in the rows arrives where analysis looks for it, once.
func TestGatherKeepsEverySum(t *testing.T) {
	p, units := gathered(t)
	g := newGathering(p, "")
	for i := range units {
		if err := g.add(&units[i]); err != nil {
			t.Fatal(err)
		}
	}
	point := g.finish(1)
	var want, got struct{ moments, pairs, dirichlet, planes, points, transients, jumps float64 }
	for _, u := range units {
		for _, r := range u.Trajectories {
			want.jumps += float64(r.Jumps)
		}
		for _, r := range u.Moments {
			want.moments += float64(r.Count) + r.Sum1 + r.Sum2 + r.Sum3 + r.Sum4
		}
		for _, r := range u.Autocorrelation {
			want.pairs += float64(r.Pairs) + r.SumF + r.SumG + r.SumFG
		}
		for _, r := range u.Dirichlet {
			want.dirichlet += float64(r.Count) + r.Sum
		}
		for _, r := range u.Covariance {
			if x := float64(r.Pairs) + r.SumF + r.SumG + r.SumFG; r.Axis >= 0 {
				want.planes += x
			} else {
				want.points += x
			}
		}
		for _, r := range u.Transients {
			want.transients += float64(r.Count) + r.Sum1 + r.Sum2
		}
	}
	got.jumps = point.Jumps
	for _, o := range point.Observables {
		for _, unit := range o.Moments {
			for _, m := range unit {
				got.moments += float64(m.N) + m.S1 + m.S2 + m.S3 + m.S4
			}
		}
	}
	lagged := func(x analysis.Lagged) float64 { return float64(x.N) + x.SF + x.SG + x.SFG }
	for _, pair := range point.Pairs {
		for u := range pair.Sums {
			for s := range pair.Sums[u] {
				for _, x := range pair.Sums[u][s] {
					got.pairs += lagged(x)
				}
			}
		}
		for _, unit := range pair.Dirichlet {
			for _, x := range unit {
				got.dirichlet += float64(x.N) + x.S
			}
		}
	}
	for _, s := range point.Spatial {
		for _, plane := range s.Planes {
			for _, unit := range plane.Sums {
				for _, x := range unit {
					got.planes += lagged(x)
				}
			}
		}
		for _, d := range s.Points {
			for _, x := range d.Sums {
				got.points += lagged(x)
			}
		}
	}
	for _, tr := range point.Transients {
		for _, unit := range tr.Sums {
			for _, m := range unit {
				got.transients += float64(m.N) + m.S1 + m.S2
			}
		}
	}
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"jumps", got.jumps, want.jumps}, {"moments", got.moments, want.moments}, {"pairs", got.pairs, want.pairs},
		{"Dirichlet forms", got.dirichlet, want.dirichlet}, {"plane sums", got.planes, want.planes},
		{"displacements", got.points, want.points}, {"transients", got.transients, want.transients},
	} {
		// Sums of the same numbers in another order agree to rounding.
		if c.want == 0 || math.Abs(c.got-c.want) > 1e-9*math.Abs(c.want) {
			t.Errorf("%s: %v gathered of %v", c.what, c.got, c.want)
		}
	}
	if want := []string{"up", "down", "up"}; len(point.Starts) != 3 || point.Starts[0] != want[0] || point.Starts[1] != want[1] || point.Starts[2] != want[2] {
		t.Errorf("starts %v, want %v", point.Starts, want)
	}
	if n := len(point.Spatial); n != 1 || len(point.Spatial[0].Planes) != 2 ||
		len(point.Spatial[0].Planes[0].Sums[0]) != 4/2+1 || len(point.Spatial[0].Planes[1].Sums[0]) != 6/2+1 {
		t.Errorf("planes of %d families, not one with distances 0..2 and 0..3", n)
	}
}

// Rows that do not belong to the point are refused, not dropped.
func TestGatherRefusesForeignRows(t *testing.T) {
	p, units := gathered(t)
	for what, spoil := range map[string]func(u *observables.Unit){
		"observable": func(u *observables.Unit) { u.Moments[0].Observable = "heat" },
		"segment":    func(u *observables.Unit) { u.Moments[0].Segment = 16 },
		"lag":        func(u *observables.Unit) { u.Autocorrelation[3].Lag = 7777 },
		"pair":       func(u *observables.Unit) { u.Autocorrelation[0].F = "heat" },
		"dirichlet":  func(u *observables.Unit) { u.Dirichlet[0].Segment = -1 },
		"transient":  func(u *observables.Unit) { u.Transients[0].Observable = "heat" },
		"lanes":      func(u *observables.Unit) { u.Trajectories = nil },
	} {
		u := units[0]
		u.Trajectories = append([]observables.TrajectoryRow(nil), u.Trajectories...)
		u.Moments = append([]observables.MomentRow(nil), u.Moments...)
		u.Autocorrelation = append([]observables.AutocorrelationRow(nil), u.Autocorrelation...)
		u.Dirichlet = append([]observables.DirichletRow(nil), u.Dirichlet...)
		u.Transients = append([]observables.TransientRow(nil), u.Transients...)
		spoil(&u)
		if err := newGathering(p, "").add(&u); err == nil {
			t.Errorf("a foreign %s was taken", what)
		}
	}
}
