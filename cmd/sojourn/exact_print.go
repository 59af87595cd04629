package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"sojourn/analysis"
	"sojourn/configs"
)

// The JSON of exact. Keys are stable; what could not be had is an absent key,
// with its reason among the warnings.

type exactJSON struct {
	Points []exactPointJSON `json:"points"`
}

type exactPointJSON struct {
	Point       int                   `json:"point"`
	Key         string                `json:"key"`
	Model       string                `json:"model"`
	Beta        float64               `json:"beta"`
	Length      int                   `json:"length"`
	Size        []int                 `json:"size"`
	States      uint64                `json:"states,omitempty"` // in the class of the reference state
	Closed      *int                  `json:"closed_classes,omitempty"`
	Classes     []exactClassJSON      `json:"classes,omitempty"` // that of the reference state first, then by weight
	Gap         float64               `json:"gap,omitempty"`
	GapTime     float64               `json:"tau_gap,omitempty"`       // 1/gap
	GapBound    float64               `json:"tau_gap_bound,omitempty"` // 1/gap is no less, where the gap was not computed
	Levels      []exactLevelJSON      `json:"levels,omitempty"`        // distinct eigenvalues above 0, lowest first
	Eigenvalues []float64             `json:"eigenvalues,omitempty"`   // the same and 0, as often as they occur
	Lags        []float64             `json:"lags"`                    // times of covariance_in_time
	Observables []exactObservableJSON `json:"observables"`
	Covariance  []exactCovarianceJSON `json:"covariance,omitempty"`
	Warnings    []warningJSON         `json:"warnings"`

	rounding float64 // error of the rates
}

type exactClassJSON struct {
	States int     `json:"states"`
	Weight float64 `json:"weight"` // Gibbs weight among all states
}

type exactLevelJSON struct {
	Rate         float64 `json:"rate"`
	Multiplicity int     `json:"multiplicity"`
	AtLeast      bool    `json:"at_least,omitempty"` // the multiplicity is a lower bound
}

type exactObservableJSON struct {
	Name       string    `json:"name"`
	Mean       float64   `json:"mean"`
	Variance   float64   `json:"variance"`
	Dirichlet  float64   `json:"dirichlet"`
	TauInitial float64   `json:"tau_initial,omitempty"`
	TauInt     float64   `json:"tau_int,omitempty"`
	TauSlowest float64   `json:"tau_slowest,omitempty"`    // of any weight
	Tau1       float64   `json:"tau_slowest_1,omitempty"`  // carrying 1 % of the variance with all slower ones
	Tau20      float64   `json:"tau_slowest_20,omitempty"` // carrying 20 %
	Shares     []float64 `json:"shares,omitempty"`         // of the variance, in each of levels
	Covariance []float64 `json:"covariance_in_time"`
}

// exactCovarianceJSON is the covariance in space between terms of one family, by
// distance from 0.
type exactCovarianceJSON struct {
	Of     string      `json:"of"`
	Axes   [][]float64 `json:"axes"`   // by axis: of terms that far apart along it
	Planes [][]float64 `json:"planes"` // by axis: of sums over planes across it, per term of a plane
}

func exactText(s *configs.Study, points []*prepared, x *exactJSON) string {
	var b strings.Builder
	b.WriteString(s.Name)
	if s.Title != "" {
		b.WriteString(": " + s.Title)
	}
	b.WriteString("\nexact values, in the class of the reference state\n")
	bounded := false
	for i := range x.Points {
		p := &x.Points[i]
		head := pointText(points[i].config)
		tail := fmt.Sprintf("point %d", i)
		fmt.Fprintf(&b, "\n%s%s%s\n", head, strings.Repeat(" ", max(2, pageWidth-len(head)-len(tail))), tail)
		fmt.Fprintf(&b, "  %s\n", strings.Join(p.summary(), ", "))
		t := newSheet("observable", "mean", "variance", "tau_initial", "tau_int", "tau_slowest", "of 1 %", "of 20 %")
		for _, o := range p.Observables {
			t.add(o.Name, plain(o.Mean), plain(o.Variance), timeText(o.TauInitial), timeText(o.TauInt), timeText(o.TauSlowest), timeText(o.Tau1), timeText(o.Tau20))
		}
		t.write(&b, "  ")
		p.writeLevels(&b)
		p.writeClasses(&b)
		for _, w := range p.Warnings {
			writeWarning(&b, "point", analysis.Warning{Code: w.Code, Text: w.Text})
		}
		bounded = bounded || p.GapBound > 0
	}
	b.WriteString("\ntau_slowest is the slowest mode of any weight in the observable; beside it, the time beyond which slower\n" +
		"modes together carry less than that share of its variance. 1/gap is that of the commuting observables.\n")
	if bounded {
		b.WriteString("1/gap >= is the slowest mode seen; modes of other symmetry may be slower.\n")
	}
	return b.String()
}

func (p *exactPointJSON) summary() []string {
	line := []string{fmt.Sprintf("%d states", p.States)}
	switch {
	case p.States == 0:
		line[0] = "states beyond counting"
	case p.States == 1:
		line[0] = "1 state"
	}
	if p.Gap > 0 {
		line = append(line, "gap "+plain(p.Gap), "1/gap "+plain(1/p.Gap))
	} else if p.GapBound > 0 {
		line = append(line, "1/gap >= "+plain(p.GapBound))
	}
	if p.Closed != nil && *p.Closed > 1 {
		line = append(line, fmt.Sprintf("one of %d closed classes", *p.Closed))
	}
	return line
}

// writeLevels prints the lowest eigenvalues and what each observable has of
// them.
func (p *exactPointJSON) writeLevels(b *strings.Builder) {
	if len(p.Levels) == 0 {
		return
	}
	head := []string{"eigenvalue", "1/eigenvalue", "times"}
	width := 36
	shown := p.Observables
	for i, o := range shown {
		if width += max(len(o.Name), 6) + 2; width > pageWidth {
			shown = shown[:i]
			break
		}
		head = append(head, o.Name)
	}
	t := newSheet(head...)
	for i, l := range p.Levels {
		times := strconv.Itoa(l.Multiplicity)
		if l.AtLeast {
			times = ">= " + times
		}
		row := []string{plain(l.Rate), plain(1 / l.Rate), times}
		for _, o := range shown {
			row = append(row, shareText(o.Shares[i]))
		}
		t.add(row...)
	}
	t.write(b, "  ")
}

// shareText prints a share of the variance.
func shareText(share float64) string {
	switch {
	case share < 1e-9:
		return "-"
	case share < 1e-4:
		return "< 0.01 %"
	}
	return strconv.FormatFloat(100*share, 'f', 2, 64) + " %"
}

func (p *exactPointJSON) writeClasses(b *strings.Builder) {
	if len(p.Classes) == 0 {
		return
	}
	var parts []string
	for i, c := range p.Classes {
		s := fmt.Sprintf("%s (%s)", plain(c.Weight), plural(c.States, "state"))
		if i == 0 {
			s += ", this one"
		}
		parts = append(parts, s)
	}
	text := "Gibbs weights " + strings.Join(parts, "; ")
	if n := *p.Closed - len(p.Classes); n > 0 {
		text += fmt.Sprintf("; and %d others of less weight", n)
	}
	writeNote(b, "classes", text)
}

// rounded is a mean, or 0 where it differs from it by rounding errors only.
func rounded(mean, variance float64) float64 {
	if math.Abs(mean) < 1e-12*math.Sqrt(variance) {
		return 0
	}
	return mean
}

// timeText prints a relaxation time, which an observable without variance lacks.
func timeText(x float64) string {
	if x == 0 {
		return "-"
	}
	return plain(x)
}
