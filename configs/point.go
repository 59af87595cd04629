package configs

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// point reads the study with one combination in place. ok is false if anything
// is wrong; the faults are with the decoder.
func (r *reading) point() (p Point, ok bool) {
	l, hasLattice := r.lattice()
	if n, ok := r.section("lattice").find("size"); ok {
		p.SizeAt = r.d.sorted([]placed{{n.at, "lattice.size", ""}})[0]
	}
	var h *hamiltonian
	hasModel := false
	sites := 1 << 30 // any site, if the cell is not known
	if hasLattice {
		if h, hasModel = r.hamiltonian(l); hasModel {
			sites = h.Sites
		}
	}
	beta, operators := r.bath(sites)
	if !hasModel {
		h = nil
	}
	if hasModel {
		p.Disorder, p.Sample = r.disorder(h, operators)
	}
	p.Trajectory = r.trajectory(h)
	p.Covariance = r.covariance(h)
	var list []requested
	if hasModel {
		list = r.observables(h, l, operators)
		p.Pairs = r.pairs(list)
		p.Model, p.Parameters = h.model, h.parameters
		p.Spec = kinetic.Spec{
			Lattice: l, Levels: h.Levels, Sites: h.Sites, Families: h.Families, Tracked: h.Tracked, Absent: h.Absent,
			Bath: operators, Beta: beta,
		}
	}
	p.Trajectory.EngineName = p.engine()
	if !r.failed && len(r.d.faults) == 0 {
		r.compile(&p, h, list)
	}
	if !r.failed && p.Disorder != nil {
		r.checkAverages(&p, list)
	}
	r.times(&p.Trajectory, p.MaxRate)
	if p.Covariance != nil {
		r.snapshots(p.Covariance, p.Trajectory, p.MaxRate)
	}
	if r.failed || len(r.d.faults) > 0 {
		return p, false
	}
	if p.Trajectory.Engine == autoEngine && !p.varies() {
		p.Trajectory.EngineName = r.choose(&p, list)
	}
	for _, o := range list {
		p.Observables = append(p.Observables, o.Observable)
	}
	p.identify(list, h)
	return p, true
}

// maxPlaces bounds the lattice that is compiled to check a point, so that a study
// loads in seconds.
const maxPlaces = 1 << 19

// compile checks the point by compiling it, on a lattice that is no larger than
// needed for every kind of neighbourhood to occur, and finds the largest rate.
func (r *reading) compile(p *Point, h *hamiltonian, list []requested) {
	small := p.nominalSpec()
	if n := small.Lattice.Cells() * small.Sites; n > maxPlaces {
		r.section("hamiltonian").fault("model", "the operators reach too far: %d surroundings of a site would have to be told apart; at most %d are", n, maxPlaces)
		return
	}
	g, err := r.d.compile(small, p.Trajectory.EngineName)
	if err != nil {
		r.refused(err, h, p.Spec.Lattice.Axes)
		return
	}
	if g.refusal != nil && p.Trajectory.Engine != autoEngine {
		r.section("trajectory").fault("engine", "%s cannot run this: %s; engine = \"auto\" finds one that can", p.Trajectory.Engine, oneLine(g.refusal))
		return
	}
	bath := r.section("bath")
	if !g.changes {
		bath.fault("couples", "no bath operator changes any term or tracked operator on this lattice: nothing would ever happen")
		return
	}
	for _, b := range p.Spec.Bath {
		if idle(b, h) {
			r.d.note(bath.at, "bath", "%s changes no term and no tracked operator", b.Name)
		}
	}
	r.checkTerms(g, p.Covariance, list)
	if p.MaxRate = g.maxRate; p.MaxRate == 0 {
		bath.fault("law", "all rates are 0 here: nothing would ever happen")
	}
}

// choose returns the engine that serves the point best. Random signs do not enter:
// they change neither the cost of a jump nor, much, how many there are.
func (r *reading) choose(p *Point, list []requested) string {
	if p.Spec.Lattice.Cells() > math.MaxInt32/p.Spec.Sites {
		return kinetic.ClassEngine // which says that it cannot run so many sites
	}
	use := kinetic.Use{Step: p.Trajectory.Step}
	for _, o := range list {
		use.OneByOne = use.OneByOne || o.Kind == "local" || o.Kind == "operator"
	}
	key := "choose " + fmt.Sprint(use, p.Spec)
	if engine, ok := r.d.chosen[key]; ok {
		return engine
	}
	engine := kinetic.ClassEngine
	if g, err := kinetic.Compile(p.Spec); err == nil {
		if name, _, err := kinetic.Choose(g, autoEngine, use); err == nil {
			engine = name
		}
	}
	r.d.chosen[key] = engine
	return engine
}

// compiled is what the check of a point takes from a generator.
type compiled struct {
	families []kinetic.Family
	lines    []kinetic.Line
	maxRate  float64
	changes  bool  // whether any move changes anything
	refusal  error // why the engine cannot run it
}

// compile compiles a spec, once if several points share it.
func (d *decoder) compile(s kinetic.Spec, engine string) (compiled, error) {
	key := engine + fmt.Sprint(s)
	if c, ok := d.compiled[key]; ok {
		return c, nil
	}
	g, err := kinetic.Compile(s)
	if err != nil {
		return compiled{}, err
	}
	c := compiled{g.Families, g.Lines, g.MaxRate(), len(g.Touch)+len(g.Hits) > 0, kinetic.CheckEngine(engine, g)}
	d.compiled[key] = c
	return c, nil
}

// checkTerms refuses observables that have no term on the lattice, as happens
// where operators are longer than open axes.
func (r *reading) checkTerms(g compiled, c *Covariance, list []requested) {
	terms := func(name string) (n int) {
		for _, f := range g.families {
			if f.Name == name || f.Group == name {
				n += f.Terms
			}
		}
		for _, l := range g.lines {
			if l.Name == name && (l.Exists == nil || slices.Contains(l.Exists, true)) {
				n += l.Positions
			}
		}
		return n
	}
	const none = "%q has no term on this lattice: it does not fit between the open edges"
	for _, o := range list {
		switch {
		case o.Family != "" && terms(o.Family) == 0:
			o.view.fault("family", none, o.Family)
		case o.Tracked != "" && o.at != nowhere && terms(o.Tracked) == 0:
			o.view.fault("tracked", none, o.Tracked)
		}
	}
	if c != nil && terms(c.Of) == 0 {
		r.section("covariance").fault("of", none, c.Of)
	}
}

// idle reports whether a bath operator commutes with everything.
func idle(b kinetic.BathOperator, h *hamiltonian) bool {
	one := []kinetic.BathOperator{b}
	for _, f := range h.Families {
		if f.Coupling != 0 && changedBy(f.Operator, one, h.Levels) {
			return false
		}
	}
	for _, t := range h.Tracked {
		if changedBy(t.Operator, one, h.Levels) {
			return false
		}
	}
	return true
}

// shortened returns a lattice on which the same operators meet in the same ways
// as on that of the spec: long axes are cut to where a site's neighbourhood can
// reach neither itself around the lattice nor both edges, parity kept.
func shortened(s kinetic.Spec) lattice.Lattice {
	l := s.Lattice
	for a, n := range l.Size {
		reach := 0
		for _, f := range s.Families {
			reach = max(reach, length(f.Operator, a))
		}
		for _, t := range s.Tracked {
			reach = max(reach, length(t.Operator, a))
		}
		// A site feels terms one reach away, and at open edges what these lack
		// one reach further, on either side, and the sites absent there.
		enough := 4*reach + 3
		if s.Absent != nil {
			enough += 2
		}
		if n > enough+1 {
			l.Size[a] = enough + (n-enough)%2
		}
	}
	return l
}

// length is how far an operator extends along an axis, its own cell included.
func length(op pauli.Operator, axis int) int {
	low, high := 0, 0
	for _, f := range op.Factors() {
		low, high = min(low, f.Exp[axis]), max(high, f.Exp[axis])
	}
	return high - low
}

// refused reports an error of the compiler at the place that causes it.
func (r *reading) refused(err error, h *hamiltonian, axes int) {
	v := r.section("hamiltonian")
	var commute *kinetic.NotCommuting
	var missing *bath.MissingEnergyError
	switch {
	case errors.As(err, &commute):
		key := "family"
		if commute.Tracked {
			key = "tracked"
		}
		text := h.notCommuting(commute, axes)
		if at, ok := h.places[commute.B]; ok {
			v.faultAt(at, key, "%s", text)
			return
		}
		v.fault("model", "%s", text)
	case errors.As(err, &missing):
		from := r.section("bath")
		for _, o := range from.items("operator") {
			if lawName(o, from) == "table" && o.has("energies") {
				from = o
				break
			}
		}
		from.fault("energies", "%s", err)
	default:
		v.fault("model", "%s", oneLine(err))
	}
}

// oneLine is the text of an error; exact energies can have very many digits.
func oneLine(err error) string {
	const most = 300
	text := strings.ReplaceAll(err.Error(), "\n", "; ")
	if len(text) > most {
		text = text[:most] + "..."
	}
	return text
}

// notCommuting says which operators do not commute, and where.
func (h *hamiltonian) notCommuting(e *kinetic.NotCommuting, axes int) string {
	at := e.Offset
	a, _ := h.named(e.A)
	b, _ := h.named(e.B)
	if nearest, ok := pauli.Commute(a, b, h.Levels); !ok && !e.Boundary {
		at = nearest
	}
	offset := make([]string, axes)
	for i := range offset {
		offset[i] = strconv.Itoa(at[i])
	}
	cut := ""
	if e.Boundary {
		cut = " as cut at an open edge"
	}
	what := "the families " + e.A + " and " + e.B + " do not commute"
	switch {
	case e.A == e.B:
		what = "the translates of " + e.A + " do not all commute"
	case e.Tracked:
		what = "the tracked operator " + e.B + " does not commute with the family " + e.A
	}
	return fmt.Sprintf("%s%s: see %s moved by [%s] from %s", what, cut, e.B, strings.Join(offset, ", "), e.A)
}

// settings are the values of the scanned parameters at a point.
func (r *reading) settings(scanned []string, p *Point) []Setting {
	var out []Setting
	for _, name := range scanned {
		s := r.values[name]
		if name == "lattice.size" {
			var words []string
			for _, n := range p.Spec.Lattice.Lengths() {
				s.Numbers = append(s.Numbers, float64(n))
				words = append(words, strconv.Itoa(n))
			}
			s.Value = "[" + strings.Join(words, ", ") + "]"
		}
		s.Name = name
		out = append(out, s)
	}
	return out
}
