package observables

import "strings"

// ColumnType is the type of a column's values.
type ColumnType string

// The column types. Ints is a list of int32.
const (
	Double ColumnType = "double"
	Int64  ColumnType = "int64"
	Int32  ColumnType = "int32"
	Text   ColumnType = "string"
	Ints   ColumnType = "list<int32>"
)

// Column describes one column of a table.
type Column struct {
	Name string
	Type ColumnType
	Unit string // "" for a pure number or a name
	Doc  string
}

// Table describes one table of recorded sums. Its columns beyond the leading
// ones are the fields of the row type, in their order.
type Table struct {
	Name    string
	Doc     string // what a row is
	Columns []Column
}

// Units of the columns. Products carry the product of the observables' units.
const (
	unitTime   = "1/rate"   // inverse of the bath's base rate
	unitSteps  = "steps"    // times between samples
	unitCells  = "cells"    // lattice constants
	unitValue  = "f"        // unit of the observable: 1, or energy
	unitEnergy = "1/energy" // inverse of the study's energy unit
)

// Leading returns the columns that every table begins with. scanned holds the
// dotted names of the study's scanned parameters; each gets a column whose name
// has underscores for dots, unless a leading column already says the same.
func Leading(scanned []string) []Column {
	cols := []Column{
		{"point_key", Text, "", "identifies the physical parameters, times and observables of the point"},
		{"beta", Double, unitEnergy, "inverse temperature"},
		{"length", Int32, unitCells, "cells along the first axis"},
		{"unit", Int32, "", "number of the trajectory or bundle of lanes, from 0"},
	}
	for _, name := range scanned {
		c := Column{strings.ReplaceAll(name, ".", "_"), Double, "", "scanned parameter " + name}
		if name == "lattice.size" {
			c.Type, c.Unit, c.Doc = Ints, unitCells, "cells along each axis"
		}
		cols = append(cols, c)
	}
	return cols
}

// Tables returns the recorded tables with all their columns.
func Tables(scanned []string) []Table {
	tables := recorded()
	for i := range tables {
		tables[i].Columns = append(Leading(scanned), tables[i].Columns...)
	}
	return tables
}

// recorded returns the tables without their leading columns.
func recorded() []Table {
	const raw = " (raw sum)"
	observable := Column{"observable", Text, "", "name of the observable"}
	f := Column{"f", Text, "", "name of the first observable"}
	g := Column{"g", Text, "", "name of the second observable; f <= g in the order of the study"}
	return []Table{
		{"trajectories", "one lane of a unit", []Column{
			{"lane", Int32, "", "lane within the unit, 0 for a single trajectory"},
			{"start", Text, "", "state in which it began"},
			{"engine", Text, "", "engine that ran it"},
			{"samples", Int64, "", "samples taken after settling"},
			{"jumps", Int64, "", "executed jumps since the start; those of all lanes stand with lane 0"},
		}},
		{"moments", "one observable in one of 16 segments of the span, lanes pooled", []Column{
			{"segment", Int32, "", "sixteenth of the span, from 0"},
			observable,
			{"count", Int64, "", "samples times lanes"},
			{"sum1", Double, unitValue, "sum of f (components: sum over them, divided by the norm)"},
			{"sum2", Double, unitValue + "^2", "sum of f^2, likewise"},
			{"sum3", Double, unitValue + "^3", "sum of f^3, likewise"},
			{"sum4", Double, unitValue + "^4", "sum of f^4, likewise"},
		}},
		{"autocorrelation", "one pair of observables at one lag in one of 4 segments, lanes pooled", []Column{
			{"segment", Int32, "", "quarter of the span that holds the first time of the pair, from 0"},
			f, g,
			{"lag", Int64, unitSteps, "time between the members of a pair"},
			{"pairs", Int64, "", "pairs of samples; for f != g both time orders are counted"},
			{"sum_f", Double, "f", "sum of f over the pairs: for f = g its first member" + raw},
			{"sum_g", Double, "g", "sum of g over the pairs: for f = g its second member" + raw},
			{"sum_fg", Double, "f g", "sum of the products" + raw},
		}},
		{"dirichlet", "the Dirichlet form of one pair of observables in one of 4 segments, lanes pooled", []Column{
			{"segment", Int32, "", "quarter of the span, from 0"},
			f, g,
			{"count", Int64, "", "states summed over: times at which it was taken, times lanes"},
			{"sum", Double, "f g rate", "sum of 1/2 sum_a r_a (Delta_a f)(Delta_a g)" + raw},
		}},
		{"covariance", "pairs of terms, or of plane sums, at one displacement", []Column{
			{"of", Text, "", "family or local tracked operator"},
			{"axis", Int32, "", "-1 for pairs of terms; else pairs of plane sums, planes apart along this axis"},
			{"displacement", Ints, unitCells, "from the first term to the second, by axis; for plane sums one number, the distance"},
			{"snapshots", Int64, "", "snapshots of the lattice"},
			{"pairs", Int64, "", "pairs over all snapshots"},
			{"sum_f", Double, "", "sum of the first member" + raw},
			{"sum_g", Double, "", "sum of the second member" + raw},
			{"sum_fg", Double, "", "sum of the products" + raw},
		}},
		{"transients", "one observable at one time since the start, summed over lanes", []Column{
			observable,
			{"time", Double, unitTime, "time since the start, settling included"},
			{"count", Int64, "", "lanes"},
			{"sum1", Double, unitValue, "sum of f (components: sum over them, divided by the norm)"},
			{"sum2", Double, unitValue + "^2", "sum of its square"},
		}},
		{"flips", "the magnetization at one hysteresis, summed over lanes", []Column{
			observable,
			{"level", Double, unitValue, "a flip leads from beyond +level to beyond -level, or back"},
			{"flips", Int64, "", "flips seen at the samples"},
			{"time", Double, unitTime, "recorded time"},
		}},
	}
}
