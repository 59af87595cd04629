package table

import (
	"bytes"
	"testing"
)

// BenchmarkWrite and BenchmarkRead report rows of a table like
// autocorrelation: two names, three numbers, three sums.
var sums = Schema{Name: "sums", Columns: []Column{
	{Name: "unit", Type: Int32},
	{Name: "f", Type: String},
	{Name: "g", Type: String},
	{Name: "lag", Type: Int64},
	{Name: "pairs", Type: Int64},
	{Name: "sum_f", Type: Double},
	{Name: "sum_g", Type: Double},
	{Name: "sum_fg", Type: Double},
}}

func sumsBlock(n int) Block {
	m := mixedBlock(n)
	return Block{m[0], m[1], m[1], m[4], m[4], m[2], m[2], m[2]}
}

func BenchmarkWrite(b *testing.B) {
	const rows = 150000
	block := sumsBlock(rows)
	var size int
	for b.Loop() {
		size = len(encode(b, sums, block))
	}
	b.ReportMetric(float64(b.N)*rows/b.Elapsed().Seconds(), "rows/s")
	b.ReportMetric(float64(size)/rows, "bytes/row")
}

func BenchmarkRead(b *testing.B) {
	const rows = 150000
	data := encode(b, sums, sumsBlock(rows))
	total := 0
	for b.Loop() {
		r, err := NewReader(bytes.NewReader(data), int64(len(data)), "memory")
		if err != nil {
			b.Fatal(err)
		}
		for _, c := range sums.Columns {
			m, err := r.Optional(c.Name)
			if err != nil {
				b.Fatal(err)
			}
			_, n := kindOf(m.Values)
			total += n
		}
	}
	if total == 0 {
		b.Fatal("no rows")
	}
	b.ReportMetric(float64(b.N)*rows/b.Elapsed().Seconds(), "rows/s")
}
