package observables

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

func TestBind(t *testing.T) {
	ising := compile(t, kinetictest.Ising(kinetictest.Lattice(4, 6), 0.3, kinetictest.HeatBath))
	obs, err := Bind(ising, []Request{
		{Name: "m", Kind: Magnetization},
		{Name: "all bonds", Kind: Terms, Family: "bond"},
		{Name: "y bonds", Kind: Local, Family: "bond-y"},
	})
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range [][]int{{2}, {0, 1}, {1}} {
		if !reflect.DeepEqual(obs[i].Families, want) {
			t.Errorf("%s is families %v, want %v", obs[i].Name, obs[i].Families, want)
		}
	}
	toric := compile(t, kinetictest.ToricCode(kinetictest.Lattice(3, 3), 1, "X", kinetictest.HeatBath, "z"))
	for _, c := range []struct {
		g    *kinetic.Generator
		r    Request
		says string
	}{
		{ising, Request{Kind: Terms, Family: "bnod"}, `no family is named "bnod"; there are families bond-x, bond-y; groups bond; local tracked operators spin`},
		{ising, Request{Kind: Local, Family: "bond"}, "different means on this lattice; ask for one of them: bond-x, bond-y"},
		{ising, Request{Kind: Operator, Tracked: "spin"}, "its kind is terms, local or fourier"},
		{ising, Request{Kind: "magnetisation"}, "unknown kind"},
		{ising, Request{Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{0, 0, 1}}, "along axis 2; the lattice has 2 axes"},
		{toric, Request{Kind: Magnetization}, "no magnetization; it has families star, plaquette; tracked operators across the lattice loop-z-x, loop-z-y"},
		{toric, Request{Kind: Terms, Family: "loop-z-x"}, "its kind is operator"},
		{toric, Request{Kind: Operator, Tracked: "loop"}, `no tracked operator is named "loop"`},
	} {
		c.r.Name = "asked"
		if _, err := Bind(c.g, []Request{c.r}); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%+v: error %v, want one that says %q", c.r, err, c.says)
		}
	}
	_, err = Bind(ising, []Request{{Name: "a", Kind: Energy}, {Name: "a", Kind: Energy}, {Name: "b", Kind: "heat"}, {Kind: Energy}})
	if err == nil || strings.Count(err.Error(), "\n") != 2 {
		t.Errorf("three faults give %v", err)
	}
}

func TestPlanCheck(t *testing.T) {
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(4), 0.3, kinetictest.HeatBath))
	good := Plan{Settle: 0, Span: 10, Step: 0.3, Covariance: "spin", Every: 1}
	if err := good.Check(g); err != nil || good.Samples() != 33 {
		t.Errorf("%v, %d samples", err, good.Samples())
	}
	for says, change := range map[string]func(p *Plan){
		"settle is -1":           func(p *Plan) { p.Settle = -1 },
		"span is NaN":            func(p *Plan) { p.Span = math.NaN() },
		"step is +Inf":           func(p *Plan) { p.Step = math.Inf(1) },
		"step is 0":              func(p *Plan) { p.Step = 0 },
		"longer than span":       func(p *Plan) { p.Step = 11 },
		"too short for settle":   func(p *Plan) { p.Step = 1e-18 },
		`no family is named "x"`: func(p *Plan) { p.Covariance = "x" },
		"every is 0":             func(p *Plan) { p.Every = 0 },
		"limit is -1":            func(p *Plan) { p.Limit = -1 },
	} {
		p := good
		change(&p)
		if err := p.Check(g); err == nil || !strings.Contains(err.Error(), says) {
			t.Errorf("%+v: error %v, want one that says %q", p, err, says)
		}
	}
}

// Tables list the fields of the row types, in order, with their types.
func TestTablesMatchRows(t *testing.T) {
	var u Unit
	rows := map[string]any{
		"trajectories": u.Trajectories, "moments": u.Moments, "autocorrelation": u.Autocorrelation,
		"dirichlet": u.Dirichlet, "covariance": u.Covariance, "transients": u.Transients, "flips": u.Flips,
	}
	types := map[string]ColumnType{"string": Text, "float64": Double, "int32": Int32, "int64": Int64, "[]int32": Ints}
	tables := Tables([]string{"bath.beta", "lattice.size", "hamiltonian.field"})
	if len(tables) != len(rows) {
		t.Errorf("%d tables for %d row types", len(tables), len(rows))
	}
	leading := len(Leading(nil)) + 3
	for _, table := range tables {
		row := reflect.TypeOf(rows[table.Name]).Elem()
		if len(table.Columns) != leading+row.NumField() {
			t.Errorf("%s has %d columns, want %d", table.Name, len(table.Columns), leading+row.NumField())
			continue
		}
		seen := map[string]bool{}
		for i, c := range table.Columns {
			if seen[c.Name] || c.Doc == "" {
				t.Errorf("%s: column %q is doubled or has no doc", table.Name, c.Name)
			}
			seen[c.Name] = true
			if i < leading {
				continue
			}
			f := row.Field(i - leading)
			if strings.ReplaceAll(c.Name, "_", "") != strings.ToLower(f.Name) || c.Type != types[f.Type.String()] {
				t.Errorf("%s: column %s %s for field %s %s", table.Name, c.Name, c.Type, f.Name, f.Type)
			}
		}
	}
	if c := tables[0].Columns[5]; c.Name != "lattice_size" || c.Type != Ints {
		t.Errorf("column of lattice.size: %+v", c)
	}
}
