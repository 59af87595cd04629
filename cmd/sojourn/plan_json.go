package main

import (
	"math"

	"sojourn/configs"
	"sojourn/observables"
)

type planJSON struct {
	Study    string          `json:"study"`
	Title    string          `json:"title,omitempty"`
	Points   []planPointJSON `json:"points"`
	Defaults []settingJSON   `json:"defaults"`
	Jumps    float64         `json:"jumps"`
	Seconds  float64         `json:"seconds"` // of one processor
}

type settingJSON struct {
	Name  string `json:"name"`
	Value string `json:"value"`
}

type planPointJSON struct {
	Point         int            `json:"point"`
	Key           string         `json:"key"`
	Model         string         `json:"model"`
	Beta          float64        `json:"beta"`
	Length        int            `json:"length"`
	Size          []int          `json:"size"`
	Sites         int            `json:"sites"`
	Terms         map[string]int `json:"terms"`
	EncodedQubits *int           `json:"encoded_qubits,omitempty"`
	GroundStates  *float64       `json:"ln_ground_states,omitempty"`
	Classical     *bool          `json:"classical,omitempty"`
	Reference     *bool          `json:"reference_is_ground_state,omitempty"`
	Closed        *int           `json:"closed_classes,omitempty"`         // among all values
	Reached       *int           `json:"closed_classes_reached,omitempty"` // among what the bath reaches
	Frozen        []frozenJSON   `json:"frozen,omitempty"`
	Engine        string         `json:"engine"`
	Why           string         `json:"why"`
	Units         int            `json:"units"`
	Samples       int64          `json:"samples"`
	Lags          []int64        `json:"lags"`
	Step          float64        `json:"step"`
	Bytes         int64          `json:"bytes"`      // of memory, one trajectory
	DiskBytes     int64          `json:"disk_bytes"` // of tables, all trajectories, roughly
	Jumps         float64        `json:"jumps"`
	Seconds       float64        `json:"seconds"` // of one processor
}

type frozenJSON struct {
	Bath     string `json:"bath"`
	Frozen   int    `json:"frozen"`
	Possible int    `json:"possible"`
}

func jsonOfPlan(s *configs.Study, list []planned) planJSON {
	out := planJSON{Study: s.Name, Title: s.Title, Defaults: []settingJSON{}}
	for _, d := range s.Defaults {
		out.Defaults = append(out.Defaults, settingJSON{d.Name, d.Value})
	}
	for i := range list {
		p := &list[i]
		size := p.generator.Lattice.Lengths()
		j := planPointJSON{
			Point: i, Key: p.config.Key, Model: p.config.Model, Beta: p.config.Spec.Beta, Length: size[0], Size: size,
			Sites: p.sites(), Terms: map[string]int{}, Closed: p.closed, Reached: p.reached, Engine: p.config.Trajectory.EngineName, Why: p.why(),
			Units: p.config.Trajectory.Count, Samples: p.plan.Samples(), Lags: observables.Lags(p.plan.Samples()), Step: p.plan.Step,
			Bytes: p.bytes, DiskBytes: p.diskBytes(), Jumps: math.Round(p.load.jumps), Seconds: p.load.seconds,
		}
		for _, f := range p.generator.Families {
			if f.Energy != nil {
				j.Terms[f.Name] = f.Terms
			}
		}
		if g := p.ground; g.Known {
			j.Classical, j.Reference = &g.Classical, &g.Reference
			if n := int(math.Round(g.Encoded)); float64(n) == g.Encoded && !g.Classical {
				j.EncodedQubits = &n
			}
			if g.Satisfied {
				ln := g.Encoded * math.Log(float64(p.generator.Levels))
				j.GroundStates = &ln
			}
		}
		for _, f := range p.generator.Frozen() {
			j.Frozen = append(j.Frozen, frozenJSON{p.config.Spec.Bath[f.Bath].Name, f.Frozen, f.Possible})
		}
		out.Points = append(out.Points, j)
		out.Jumps += j.Jumps
		out.Seconds += j.Seconds
	}
	return out
}
