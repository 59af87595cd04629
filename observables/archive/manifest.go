package archive

import "sojourn/observables/table"

// Manifest is the resolved study: everything that inference needs besides the
// tables.
type Manifest struct {
	Format  int      `json:"format"`
	Tool    string   `json:"tool"` // version of the program that wrote it
	Study   string   `json:"study"`
	Title   string   `json:"title,omitempty"`
	Scanned []string `json:"scanned"` // dotted names of the scanned parameters
	Points  []Point  `json:"points"`  // by number
}

// Point is one point with its facts.
type Point struct {
	Number int    `json:"point"` // in order of first appearance in the directory, from 0; set by Prepare
	Key    string `json:"key"`
	// Current is whether the study that was given last has this point; set by
	// Prepare. Rows of other points stay.
	Current bool `json:"current"`
	Count   int  `json:"count"` // units asked for by the last study that had the point
	// Extent is the number of units in a part. Prepare keeps the one that the
	// directory has, so that parts never overlap.
	Extent int `json:"extent"`

	Parameters []Parameter `json:"parameters"` // all, resolved, dotted names
	Scan       []Parameter `json:"scan"`       // value of each of Manifest.Scanned
	Facts      Facts       `json:"facts"`
}

// Parameter is a dotted name and its value as in a study file.
type Parameter struct {
	Name  string `json:"name"`
	Value string `json:"value"`
}

// Facts is what is known of a point before it runs. Times are in units of the
// inverse of the study's rates.
type Facts struct {
	Model   string  `json:"model"`
	Beta    float64 `json:"beta"`
	Size    []int   `json:"size"` // cells along each axis
	Open    []bool  `json:"open"` // axes with edges
	Sites   int     `json:"sites"`
	Levels  int     `json:"levels"`
	Engine  string  `json:"engine"`
	Lanes   int     `json:"lanes"` // trajectories in a unit
	Start   string  `json:"start"`
	Seed    int64   `json:"seed"`
	Settle  float64 `json:"settle"`
	Span    float64 `json:"span"`
	Step    float64 `json:"step"` // between samples
	Lags    []int64 `json:"lags"` // in steps
	MaxRate float64 `json:"max_rate"`

	Families      []Family   `json:"families"`
	EnergyLow     float64    `json:"energy_low"`
	EnergyHigh    float64    `json:"energy_high"`
	LnStates      *float64   `json:"ln_states,omitempty"`      // ln of the number of states in the class of the reference
	EncodedQubits *int       `json:"encoded_qubits,omitempty"` // log_q of the number of ground states
	ClosedClasses *int       `json:"closed_classes,omitempty"` // absent where they were not counted
	Bath          []BathFact `json:"bath"`

	Observables []Observable `json:"observables"`
	Pairs       [][2]int     `json:"pairs"` // of Observables, f <= g
	Covariance  *Covariance  `json:"covariance,omitempty"`
}

// Family is a family of terms.
type Family struct {
	Name  string `json:"name"`
	Group string `json:"group,omitempty"`
	Terms int    `json:"terms"`
}

// BathFact is one bath operator.
type BathFact struct {
	Name     string  `json:"name"`
	Law      string  `json:"law"`
	RateZero float64 `json:"rate_zero"` // G(0)
	MaxRate  float64 `json:"max_rate"`
}

// Observable is a recorded observable.
type Observable struct {
	Name   string `json:"name"`
	Kind   string `json:"kind"`
	Scalar bool   `json:"scalar"`
	Single bool   `json:"single,omitempty"` // declared a single exponential
}

// Covariance is the recorded spatial covariance.
type Covariance struct {
	Of    string  `json:"of"`
	Every float64 `json:"every"`
	Limit int     `json:"limit"`
}

// Lead is a leading column of a part's tables, the same value in all its rows:
// float64, int64, int32, string or []int32 as the column's type says.
type Lead struct {
	Column table.Column
	Value  any
}
