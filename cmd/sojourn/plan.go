package main

import (
	"context"
	"fmt"
	"io"
	"math"
	"strings"
	"time"

	"sojourn/configs"
	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/observables"

	"sojourn/cmd/sojourn/internal/sharing"
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

// planned is a point with what plan finds out about it.
type planned struct {
	*prepared
	ground          kinetic.Ground
	closed, reached *int // see closedClasses
	load            load
}

// plan checks a study and says what it would do.
func (c *console) plan(o *options, args []string) error {
	study, err := configs.Load(args[0])
	if err != nil {
		return err
	}
	c.notes(study)
	points, err := prepareAll(study, memory())
	if err != nil {
		return err
	}
	list := make([]planned, len(points))
	for i, q := range points {
		p := planned{prepared: q}
		p.closed, p.reached = q.closedClasses()
		if p.ground, err = kinetic.GroundStates(q.config.Spec); err != nil {
			return badRequest("%s: %w", pointText(q.config), err)
		}
		if p.load, err = q.calibrate(); err != nil {
			return fmt.Errorf("%s: %w", pointText(q.config), err)
		}
		list[i] = p
	}
	if o.json {
		return c.writeJSON(jsonOfPlan(study, list))
	}
	_, err = io.WriteString(c.stdout, planText(study, list, sharing.Workers(c.getenv)))
	return err
}

// load is what the trajectories of a point would take.
type load struct {
	jumps, seconds float64
}

// calibrate runs one trajectory for a while and extrapolates. For how long
// depends on jumps alone, so that their expected number is the same every time;
// the seconds are those of this machine at this moment, and decide nothing.
func (q *prepared) calibrate() (load, error) {
	t := &q.config.Trajectory
	rate, err := q.jumpRate()
	if err != nil {
		return load{}, err
	}
	// Record a part of the span, first a short one and then as much as takes
	// long enough to be timed.
	const enough = 50 * time.Millisecond
	short := q.plan
	short.Settle = 0
	for steps := 64.0; ; steps *= 2 {
		short.Span = math.Min(q.plan.Span, steps*t.Step)
		gone, err := q.timed(short)
		if err != nil {
			return load{}, err
		}
		if gone < enough && short.Span < q.plan.Span {
			continue
		}
		// The faster of two is less disturbed by what else the machine does.
		again, err := q.timed(short)
		if err != nil {
			return load{}, err
		}
		whole := (t.Settle + t.Span) * float64(t.Count)
		return load{jumps: rate * whole, seconds: min(gone, again).Seconds() / short.Span * whole}, nil
	}
}

// timed records the first trajectory under a plan and returns how long it took.
func (q *prepared) timed(plan observables.Plan) (time.Duration, error) {
	e, err := q.engine(0)
	if err != nil {
		return 0, err
	}
	label := observables.Label{Start: string(q.start(0)), Engine: q.config.Trajectory.EngineName}
	from := time.Now()
	_, err = observables.Record(context.Background(), e, q.generator, q.observables, q.config.Pairs, plan, label, nil)
	return time.Since(from), err
}

// jumpRate is the number of jumps per unit time at the end of a stretch that is
// long enough to leave the start behind: at least 100 000 jumps, and two on
// every site unless that takes too long.
func (q *prepared) jumpRate() (float64, error) {
	e, err := q.engine(0)
	if err != nil {
		return 0, err
	}
	t := &q.config.Trajectory
	whole := t.Settle + t.Span
	target := uint64(1e5 + math.Min(2*float64(q.sites()), 1e7))
	for at, stretch := 0.0, math.Min(t.Step, whole); ; stretch *= 2 {
		before := e.Jumps()
		stretch = math.Min(stretch, whole-at)
		at += stretch
		e.Advance(at)
		if e.Jumps() >= target || at >= whole {
			return float64(e.Jumps()-before) / stretch, nil
		}
	}
}

// countable is the largest number of states that plan lists to count closed
// classes.
const countable = 1 << 16

// closedClasses counts the sets of states that no jump leaves: among all values
// that terms and tracked operators can have together, and among those that the
// bath operators reach from the reference state. Nil where the lattice is too
// large to enumerate.
func (q *prepared) closedClasses() (all, reached *int) {
	if q.sites() > enumerated {
		return nil, nil
	}
	system, err := exact.NewSystem(q.config.Spec)
	if err != nil {
		return nil, nil
	}
	number := func(scope exact.Scope) *int {
		classes, err := system.ClosedClasses(scope, countable)
		if err != nil {
			return nil
		}
		n := len(classes)
		return &n
	}
	return number(exact.Everything), number(exact.Moved)
}

func (q *prepared) why() string {
	return fmt.Sprintf("%s; jumps are drawn by class of equal rate", plural(len(q.generator.Rates)-1, "distinct rate"))
}

// diskBytes is roughly what the tables of all trajectories take.
func (q *prepared) diskBytes() int64 {
	const perRow = 30 // bytes, compressed, as found on the bundled studies
	lags := len(observables.Lags(q.plan.Samples()))
	rows := len(q.observables)*observables.MomentSegments + len(q.config.Pairs)*observables.PairSegments*(lags+1) +
		len(q.observables)*len(observables.TransientTimes(q.plan.Settle, q.plan.Span, q.plan.Step)) + 1
	if q.plan.Covariance != "" {
		displacements := 1
		for _, n := range q.generator.Lattice.Lengths() {
			displacements *= min(n, 2*q.plan.Limit+1)
			rows += n/2 + 1
		}
		rows += displacements/2 + 1
	}
	return int64(rows) * perRow * int64(q.config.Trajectory.Count)
}

func planText(s *configs.Study, list []planned, workers int) string {
	var b strings.Builder
	head := s.Name
	if s.Title != "" {
		head += ": " + s.Title
	}
	var total load
	units, disk := 0, int64(0)
	for i := range list {
		total.jumps += list[i].load.jumps
		total.seconds += list[i].load.seconds
		units += list[i].config.Trajectory.Count
		disk += list[i].diskBytes()
	}
	fmt.Fprintf(&b, "%s\n%s, %s, about %s jumps; about %s on one processor, %s on %d here; about %s of tables\n\n",
		head, plural(len(list), "point"), plural(units, "trajectory"), count(total.jumps), duration(total.seconds),
		duration(total.seconds/float64(min(workers, units))), workers, bytesOf(disk))
	t := newSheet("point", "beta", "size", "", "sites", "trajectories", "settle", "span", "samples", "lags", "jumps", "time", "memory").text(2, 3)
	for i := range list {
		p := &list[i]
		x := &p.config.Trajectory
		var others []string
		for _, v := range p.config.Scan {
			if furtherPhysics(v.Name) {
				others = append(others, v.Name+" "+v.Value)
			}
		}
		t.add(fmt.Sprint(i), shortest(p.config.Spec.Beta), sizeText(p.generator.Lattice.Lengths()), strings.Join(others, ", "),
			fmt.Sprint(p.sites()), fmt.Sprint(x.Count), shortest(x.Settle), shortest(x.Span), count(float64(p.plan.Samples())),
			fmt.Sprint(len(observables.Lags(p.plan.Samples()))), count(p.load.jumps), duration(p.load.seconds), bytesOf(p.bytes()))
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
	g := &p.ground
	switch {
	case !g.Known:
		return "ground", "states not counted: " + g.Reason
	case g.Classical && g.Satisfied:
		return "ground", fmt.Sprintf("log2 of the number of ground states: %s", shortest(g.Encoded))
	case g.Classical:
		return "ground", fmt.Sprintf("terms compete, so ground states were not counted; log2 of the states per set of term values: %s", shortest(g.Encoded))
	case !g.Satisfied:
		return "ground", fmt.Sprintf("terms compete; each set of term values encodes %s qubits", shortest(g.Encoded))
	}
	return "ground", fmt.Sprintf("%s encoded qubits", shortest(g.Encoded))
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
			Bytes: p.bytes(), DiskBytes: p.diskBytes(), Jumps: math.Round(p.load.jumps), Seconds: p.load.seconds,
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
