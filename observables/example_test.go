package observables_test

import (
	"context"
	"fmt"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/observables"
)

// A ring of 64 spins is recorded for 1000 units of time after 50 have been
// discarded.
func ExampleRecord() {
	g, err := kinetic.Compile(kinetictest.Ising(kinetictest.Lattice(64), 0.5, kinetictest.HeatBath))
	if err != nil {
		fmt.Println(err)
		return
	}
	obs, err := observables.Bind(g, []observables.Request{
		{Name: "energy", Kind: observables.Energy},
		{Name: "local-spin", Kind: observables.Local, Family: "spin"},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
	if err != nil {
		fmt.Println(err)
		return
	}
	pairs := [][2]int{{0, 0}, {1, 1}}
	plan := observables.Plan{Settle: 50, Span: 1000, Step: 0.5}
	label := observables.Label{Start: "random", Engine: "classes"}
	u, err := observables.Record(context.Background(), e, g, obs, pairs, plan, label, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(u.Trajectories[0].Samples, "samples")
	for _, r := range u.Autocorrelation {
		if r.Segment == 0 && r.F == "local-spin" && r.Lag <= 4 && r.Lag%2 == 0 {
			fmt.Printf("lag %d: %d pairs, mean product %.1f\n", r.Lag, r.Pairs, r.SumFG/float64(r.Pairs))
		}
	}
	// Output:
	// 2000 samples
	// lag 0: 500 pairs, mean product 1.0
	// lag 2: 500 pairs, mean product 0.6
	// lag 4: 500 pairs, mean product 0.4
}

func ExampleBind() {
	g, err := kinetic.Compile(kinetictest.Ising(kinetictest.Lattice(8, 8), 0.4, kinetictest.HeatBath))
	if err != nil {
		fmt.Println(err)
		return
	}
	_, err = observables.Bind(g, []observables.Request{{Name: "stars", Kind: observables.Terms, Family: "star"}})
	fmt.Println(err)
	// Output:
	// observable "stars": no family is named "star"; there are families bond-x, bond-y; groups bond; local tracked operators spin
}

func ExampleLags() {
	fmt.Println(observables.Lags(160))
	// Output:
	// [0 1 2 3 4 5 6 7 8 9 10 11 12 13 14 15 16 18 20 22 24 26 28 30 32 36 40]
}
