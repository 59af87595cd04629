package archive

import (
	"fmt"
	"testing"

	"sojourn/observables"
)

// benchmarkUnits returns units of 4 observables, with 10 pairs and 60 lags.
func benchmarkUnits(n int) []observables.Unit {
	units := testUnits(0, n)
	for i := range units {
		u := &units[i]
		x := u.Moments[0].Sum1
		for f := range 4 {
			for s := range int32(16) {
				u.Moments = append(u.Moments, observables.MomentRow{Segment: s, Observable: fmt.Sprint("observable-", f), Count: 1000, Sum1: x, Sum2: x * x, Sum3: x * 3, Sum4: x * 4})
			}
			for g := f; g < 4; g++ {
				for s := range int32(4) {
					u.Dirichlet = append(u.Dirichlet, observables.DirichletRow{Segment: s, F: fmt.Sprint("observable-", f), G: fmt.Sprint("observable-", g), Count: 100, Sum: x})
					for lag := range int64(60) {
						x = x*1.37 + 1
						for x > 1e9 {
							x /= 1e9
						}
						u.Autocorrelation = append(u.Autocorrelation, observables.AutocorrelationRow{Segment: s,
							F: fmt.Sprint("observable-", f), G: fmt.Sprint("observable-", g), Lag: lag * lag, Pairs: 10000 - lag, SumF: x, SumG: x / 3, SumFG: x * x})
					}
				}
			}
		}
	}
	return units
}

// BenchmarkWritePart writes a part of 64 units: 4 observables, 10 pairs, 60
// lags, 4 segments.
func BenchmarkWritePart(b *testing.B) {
	d := prepare(b, 64)
	units := benchmarkUnits(64)
	for b.Loop() {
		if err := d.DropPart(testKey(0), 0); err != nil {
			b.Fatal(err)
		}
		if err := d.WritePart(testKey(0), 0, units, Receipt{}); err != nil {
			b.Fatal(err)
		}
	}
	r, err := d.Receipt(testKey(0), 0)
	if err != nil {
		b.Fatal(err)
	}
	var size int64
	for _, f := range r.Files {
		size += f.Size
	}
	b.ReportMetric(float64(size), "bytes")
}

// BenchmarkReadUnits reads the part of BenchmarkWritePart.
func BenchmarkReadUnits(b *testing.B) {
	d := prepare(b, 64)
	if err := d.WritePart(testKey(0), 0, benchmarkUnits(64), Receipt{}); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		units, err := d.ReadUnits(testKey(0), 0)
		if err != nil || len(units) != 64 {
			b.Fatal(err)
		}
	}
}

// BenchmarkSaveUnit keeps one such unit.
func BenchmarkSaveUnit(b *testing.B) {
	d := prepare(b, 64)
	unit := benchmarkUnits(1)[0]
	for b.Loop() {
		if err := d.SaveUnit(testKey(0), unit, 1); err != nil {
			b.Fatal(err)
		}
	}
}
