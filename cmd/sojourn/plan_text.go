package main

import (
	"fmt"
	"strings"

	"sojourn/configs"
	"sojourn/observables"
)

func planText(s *configs.Study, list []planned, workers int) string {
	var b strings.Builder
	head := s.Name
	if s.Title != "" {
		head += ": " + s.Title
	}
	var total load
	units, trajectories, disk := 0, 0, int64(0)
	for i := range list {
		total.jumps += list[i].load.jumps
		total.seconds += list[i].load.seconds
		units += list[i].config.Trajectory.Count
		trajectories += list[i].config.Trajectory.Count * list[i].lanes
		disk += list[i].diskBytes()
	}
	fmt.Fprintf(&b, "%s\n%s, %s, about %s jumps; about %s on one processor, %s on %d here; about %s of tables\n\n",
		head, plural(len(list), "point"), plural(trajectories, "trajectory"), count(total.jumps), duration(total.seconds),
		duration(total.seconds/float64(min(workers, units))), workers, bytesOf(disk))
	t := newSheet("point", "beta", "size", "", "sites", "trajectories", "settle", "span", "samples", "lags", "jumps", "time", "memory").text(2, 3)
	for i := range list {
		p := &list[i]
		x := &p.config.Trajectory
		var others []string
		for _, v := range p.config.Scan {
			if furtherPhysics(v.Name) {
				others = append(others, setting{v.Name, v.Value}.String())
			}
		}
		t.add(fmt.Sprint(i), shortest(p.config.Spec.Beta), sizeText(p.generator.Lattice.Lengths()), strings.Join(others, ", "),
			fmt.Sprint(p.sites()), fmt.Sprint(x.Count*p.lanes), shortest(x.Settle), shortest(x.Span), count(float64(p.plan.Samples())),
			fmt.Sprint(len(observables.Lags(p.plan.Samples()))), count(p.load.jumps), duration(p.load.seconds), bytesOf(p.bytes))
	}
	t.write(&b, "  ")
	b.WriteString("\n")
	for _, say := range []func(p *planned) (label, text string){
		(*planned).saysModel, (*planned).saysTerms, (*planned).saysGround, (*planned).saysReference, (*planned).saysClasses,
		(*planned).saysFrozen, (*planned).saysEngine, (*planned).saysLags, (*planned).saysObservables,
	} {
		writeShared(&b, list, say)
	}
	if len(s.Defaults) > 0 {
		b.WriteString("\nFilled in, since the study does not say:\n")
		for _, d := range s.Defaults {
			fmt.Fprintf(&b, "  %s = %s\n", d.Name, d.Value)
		}
	}
	return b.String()
}

// writeShared prints what points say of themselves, once for all points that
// say the same.
func writeShared(b *strings.Builder, list []planned, say func(p *planned) (label, text string)) {
	var texts []string
	who := map[string][]int{}
	label := ""
	for i := range list {
		l, text := say(&list[i])
		if text == "" {
			continue
		}
		label = l
		if who[text] == nil {
			texts = append(texts, text)
		}
		who[text] = append(who[text], i)
	}
	for i, text := range texts {
		if len(who[text]) < len(list) {
			text = ranges(who[text]) + ": " + text
		}
		if i > 0 {
			label = ""
		}
		writeNote(b, label, text)
	}
}

// ranges names points: "point 3", "points 0-2, 5".
func ranges(points []int) string {
	var parts []string
	for i := 0; i < len(points); {
		j := i
		for j+1 < len(points) && points[j+1] == points[j]+1 {
			j++
		}
		if j > i {
			parts = append(parts, fmt.Sprintf("%d-%d", points[i], points[j]))
		} else {
			parts = append(parts, fmt.Sprint(points[i]))
		}
		i = j + 1
	}
	if len(points) == 1 {
		return "point " + parts[0]
	}
	return "points " + strings.Join(parts, ", ")
}

func (p *planned) saysModel() (string, string) {
	text := p.config.Model
	for _, x := range p.config.Parameters {
		text += fmt.Sprintf(", %s %s", x.Name, x.Value)
	}
	for _, b := range p.config.Spec.Bath {
		text += fmt.Sprintf("; bath %s: %s, rate %s", b.Name, b.Law.Kind, shortest(b.Law.Rate))
	}
	return "model", text
}

func (p *planned) saysTerms() (string, string) {
	var parts []string
	for _, f := range p.generator.Families {
		if f.Energy != nil {
			parts = append(parts, fmt.Sprintf("%s %d", f.Name, f.Terms))
		}
	}
	return "terms", strings.Join(parts, ", ")
}

func (p *planned) saysGround() (string, string) {
	g, q := &p.ground, p.generator.Levels
	encoded := shortest(g.Encoded) + " encoded qubit"
	if q > 2 {
		encoded = shortest(g.Encoded) + " encoded qudit"
	}
	if g.Encoded != 1 {
		encoded += "s"
	}
	if q > 2 {
		encoded += fmt.Sprintf(" of %d levels", q)
	}
	switch {
	case !g.Known:
		return "ground", "states not counted: " + g.Reason
	case g.Classical && g.Satisfied:
		return "ground", fmt.Sprintf("log%d of the number of ground states: %s", q, shortest(g.Encoded))
	case g.Classical:
		return "ground", fmt.Sprintf("terms compete, so ground states were not counted; log%d of the states per set of term values: %s", q, shortest(g.Encoded))
	case !g.Satisfied:
		return "ground", fmt.Sprintf("terms compete; in each set of term values %s", encoded)
	}
	return "ground", encoded
}

func (p *planned) saysReference() (string, string) {
	switch {
	case !p.ground.Known:
		return "", ""
	case p.ground.Reference:
		return "reference", "the reference state is a ground state"
	}
	return "reference", "the reference state is not a ground state"
}

func (p *planned) saysClasses() (string, string) {
	switch {
	case p.closed != nil && *p.closed == 1:
		return "classes", "the jumps connect all states"
	case p.reached != nil && *p.reached > 1:
		return "classes", fmt.Sprintf("jumps of rate 0 split what the bath reaches into %d closed classes: no trajectory leaves the one that it starts in", *p.reached)
	case p.closed != nil:
		return "classes", fmt.Sprintf("the bath does not connect all values of terms and tracked operators: they fall into %d closed classes", *p.closed)
	}
	return "", ""
}

func (p *planned) saysFrozen() (string, string) {
	var parts []string
	for _, f := range p.generator.Frozen() {
		parts = append(parts, fmt.Sprintf("%s %d of %d", p.config.Spec.Bath[f.Bath].Name, f.Frozen, f.Possible))
	}
	if len(parts) == 0 {
		return "", ""
	}
	return "frozen", "jumps that never happen, by bath operator and surroundings: " + strings.Join(parts, ", ")
}

func (p *planned) saysEngine() (string, string) {
	return "engine", fmt.Sprintf("%s: %s", p.config.Trajectory.EngineName, p.why())
}

func (p *planned) saysLags() (string, string) {
	lags := observables.Lags(p.plan.Samples())
	if len(lags) == 0 {
		return "lags", "none"
	}
	last := lags[len(lags)-1]
	return "lags", fmt.Sprintf("%d, dense near 0 and then 8 per octave, to %d steps of %s: a time of %s",
		len(lags), last, shortest(p.plan.Step), shortest(float64(last)*p.plan.Step))
}

func (p *planned) saysObservables() (string, string) {
	names := make([]string, len(p.observables))
	for i, o := range p.observables {
		names[i] = o.Name
	}
	text := strings.Join(names, ", ")
	if p.plan.Covariance != "" {
		text += fmt.Sprintf("; covariance in space of %s every %s", p.plan.Covariance, shortest(p.plan.Every))
	}
	return "records", text
}
