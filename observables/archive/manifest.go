package archive

// Manifest is the resolved study: everything that inference needs besides the
// tables.
type Manifest struct {
	Format  int      `json:"format"` // set by Prepare
	Tool    string   `json:"tool"`   // version of the program that wrote it
	Study   string   `json:"study"`  // its name
	Title   string   `json:"title,omitempty"`
	Scanned []string `json:"scanned"` // dotted names of the scanned parameters
	Points  []Point  `json:"points"`  // by number
}

// Point is one point with its facts.
type Point struct {
	// Number counts points in order of first appearance in the directory, from
	// 0. Prepare sets it.
	Number int    `json:"point"`
	Key    string `json:"key"`
	// Current says that the study given last has this point. Prepare sets it.
	// Rows of other points stay where they are.
	Current bool `json:"current"`
	// Count is the number of units asked for by the last study that had the
	// point.
	Count int `json:"count"`
	// Extent is the number of units in a part. Prepare keeps the one that the
	// directory has, so that parts never overlap.
	Extent int `json:"extent"`

	Parameters []Parameter `json:"parameters"` // all, resolved, dotted names
	Scan       []Parameter `json:"scan"`       // the scanned ones, in the order of Manifest.Scanned
	Facts      Facts       `json:"facts"`
}

// Parameter is a dotted name and its value as in a study file.
type Parameter struct {
	Name    string    `json:"name"`
	Value   string    `json:"value"`
	Numbers []float64 `json:"numbers,omitempty"` // of a scanned parameter: one, or one per axis for lattice.size
}

// Facts is what is known of a point before it runs. Times are in the inverse
// of the bath's base rate.
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

// Point returns the point with a key, or nil.
func (m *Manifest) Point(key string) *Point {
	for i := range m.Points {
		if m.Points[i].Key == key {
			return &m.Points[i]
		}
	}
	return nil
}

// merge returns the manifest of a directory that held old (nil if nothing) and
// is given m. Points of old keep their numbers and extents and come first; ok
// is false if old has points but none of m's.
func merge(old *Manifest, m Manifest) (merged Manifest, ok bool) {
	merged = m
	merged.Format = Format
	merged.Points = nil
	place := map[string]int{}
	if old != nil {
		for _, p := range old.Points {
			p.Current = false
			place[p.Key] = len(merged.Points)
			merged.Points = append(merged.Points, p)
		}
	}
	kept := len(merged.Points)
	ok = kept == 0
	for _, p := range m.Points {
		i, known := place[p.Key]
		if !known {
			i = len(merged.Points)
			place[p.Key] = i
			merged.Points = append(merged.Points, p)
		}
		before := merged.Points[i]
		if i < kept {
			ok = true
			p.Extent = before.Extent
		} else if known {
			p.Count = max(p.Count, before.Count) // given twice by one study
		}
		p.Number, p.Current = i, true
		merged.Points[i] = p
	}
	return merged, ok
}
