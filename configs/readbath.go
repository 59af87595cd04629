package configs

import (
	"fmt"
	"slices"
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
)

// lawTakes lists the keys of each law besides its name.
var lawTakes = map[string][]string{
	"heat-bath":  {"rate"},
	"metropolis": {"rate"},
	"power":      {"rate", "exponent", "cutoff"},
	"ohmic":      {"rate", "cutoff"},
	"symmetric":  {"rate"},
	"table":      {"energies", "rates"},
}

var lawParameters = []string{"rate", "exponent", "cutoff", "energies", "rates"}

// letters are the powers of X and Z in each bath operator.
var letters = map[string][2]int{"X": {1, 0}, "Y": {1, 1}, "Z": {0, 1}}

// bath reads [bath] and its operators.
func (r *reading) bath(sites int) (beta float64, operators []kinetic.BathOperator) {
	v := r.section("bath")
	beta, ok := v.number("beta")
	if !ok && !v.has("beta") {
		v.need("beta", "write the inverse temperature, such as beta = 0.4, or scan it")
	}
	beta += 0 // -0 is 0
	own := v.items("operator")
	if len(own) == 0 {
		return beta, v.couples(beta)
	}
	if v.has("couples") {
		v.refuse("couples", "stands beside [[bath.operator]] tables, which say it one by one: leave it out")
	}
	var taken []string
	for _, o := range own {
		name, ok := o.word("on")
		if !ok && !o.has("on") {
			o.need("on", "write X, Y or Z")
		}
		o.label += "." + name
		op := kinetic.BathOperator{Name: name, X: letters[name][0], Z: letters[name][1], Sites: o.sites(sites)}
		powers, right := o.powers(v)
		if op.Law, ok = o.law(v, beta); ok && right {
			operators = append(operators, op.Powers(powers, r.levels())...)
		}
		taken = append(taken, lawTakes[lawName(o, v)]...)
	}
	if !slices.ContainsFunc(own, func(o view) bool { return lawName(o, v) == "" }) {
		v.refuseForeign(taken, "no bath operator here has such a law")
	}
	return beta, operators
}

// couples reads the bath operators that share the law of [bath].
func (v view) couples(beta float64) []kinetic.BathOperator {
	law, ok := v.law(v, beta)
	words := []string{"X"}
	if n, found := v.find("couples"); found {
		words = nil
		for _, item := range v.list("couples") {
			if slices.Contains(words, item.text) {
				v.faultAt(item.at, "couples", "names %s twice", item.text)
			}
			words = append(words, item.text)
		}
		ok = ok && !n.bad
	} else {
		v.fill("couples", `["X"]`)
	}
	powers, right := v.powers(v)
	if !ok || !right {
		return nil
	}
	var out []kinetic.BathOperator
	for _, w := range words {
		op := kinetic.BathOperator{Name: w, X: letters[w][0], Z: letters[w][1], Law: law}
		out = append(out, op.Powers(powers, v.r.levels())...)
	}
	return out
}

// levels is q; 2 if the Hamiltonian is not known.
func (r *reading) levels() int {
	if r.model == nil {
		return 2
	}
	return r.model.Levels
}

// powers reads the powers of a bath operator; what it leaves out is that of
// base, else of the model.
func (v view) powers(base view) (out []int, ok bool) {
	levels := v.r.levels()
	from := v.or(base, "powers")
	n, found := from.find("powers")
	switch {
	case v.r.model == nil:
		return nil, true // reported elsewhere
	case !found:
		out = v.r.model.Powers
		if out == nil {
			out = []int{1}
		}
		if levels > 2 {
			base.fillOnce("powers", strings.ReplaceAll(fmt.Sprint(out), " ", ", "))
		}
		return out, true
	case n.bad:
		return nil, false
	case levels == 2:
		from.refuse("powers", "are for more than 2 levels; with 2, X, Y and Z have no others")
		return nil, false
	}
	ok = true
	for _, item := range from.list("powers") {
		k := int(min(item.integer, 1<<31))
		switch {
		case k >= levels:
			from.faultAt(item.at, "powers", "%s is not below the number of levels, %d", item.shown(), levels)
			ok = false
		case slices.Contains(out, k):
			from.faultAt(item.at, "powers", "names %d twice", k)
			ok = false
		default:
			out = append(out, k)
		}
	}
	return out, ok
}

// sites reads the sites of the cell that an operator acts on.
func (v view) sites(perCell int) []int {
	var out []int
	for _, item := range v.list("sites") {
		switch site := int(min(item.integer, 1<<31)); {
		case site >= perCell:
			v.faultAt(item.at, "sites", "the cell has no site %s; its sites are 0 to %d", item.shown(), perCell-1)
		case slices.Contains(out, site):
			v.faultAt(item.at, "sites", "names site %d twice", site)
		default:
			out = append(out, site)
		}
	}
	slices.Sort(out)
	return out
}

// lawName is the law of an operator: its own, or that of [bath]; "" if that
// is wrong.
func lawName(v, base view) string {
	for _, from := range []view{v, base} {
		if n, found := from.find("law"); found {
			if n.bad {
				return ""
			}
			return n.text
		}
	}
	return string(bath.HeatBath)
}

// law reads the law of an operator; what it leaves out is that of base.
func (v view) law(base view, beta float64) (bath.Law, bool) {
	name := lawName(v, base)
	if name == "" {
		return bath.Law{}, false
	}
	if !v.has("law") && !base.has("law") {
		base.fillOnce("law", `"heat-bath"`)
	}
	v.refuseForeign(lawTakes[name], "the law here is "+name)
	law := bath.Law{Kind: bath.Kind(name)}
	ok := true
	switch name {
	case "table":
		ok = v.readTable(v.or(base, "energies"), v.or(base, "rates"), &law)
	case "ohmic":
		law.Kind, law.Exponent = bath.Power, 1
		ok = v.positiveBeta()
	case "power":
		ok = v.positiveBeta()
		if !v.or(base, "exponent").has("exponent") {
			v.need("exponent", "a power law needs its p, at least 1 (law = \"ohmic\" for p = 1)")
			ok = false
		}
	}
	ok = v.lawNumbers(base, name, &law) && ok
	if err := law.Validate(beta); ok && err != nil && !v.r.failed {
		v.or(base, "law").fault("law", "%s", strings.ReplaceAll(err.Error(), "\n", "; "))
		ok = false
	}
	return law, ok
}

// or is the table that a key is taken from: v, or base if only that has it.
func (v view) or(base view, key string) view {
	if v.has(key) || !base.has(key) {
		return v
	}
	return base
}

// lawNumbers reads the single numbers that a law takes.
func (v view) lawNumbers(base view, name string, law *bath.Law) bool {
	ok := true
	for _, x := range []struct {
		key  string
		into *float64
	}{{"rate", &law.Rate}, {"exponent", &law.Exponent}, {"cutoff", &law.Cutoff}} {
		if !slices.Contains(lawTakes[name], x.key) {
			continue
		}
		from := v.or(base, x.key)
		n, found := from.find(x.key)
		switch {
		case found:
			*x.into = n.number
			ok = ok && !n.bad
		case x.key == "rate":
			*x.into = 1
			base.fillOnce("rate", "1")
			from = base
		default:
			continue
		}
		v.took(x.key, *x.into)
		from.took(x.key, *x.into)
	}
	return ok
}

// positiveBeta refuses a power law at infinite temperature.
func (v view) positiveBeta() bool {
	b := v.r.section("bath")
	n, found := b.find("beta")
	if !found || n.bad || n.number != 0 {
		return true
	}
	b.fault("beta", "is 0, where a power law has no finite rates: it must be positive")
	return false
}

// readTable reads the energies and rates of a table.
func (v view) readTable(energies, rates view, law *bath.Law) bool {
	ok := true
	for _, x := range []struct {
		from   view
		key    string
		remedy string
		into   *[]float64
	}{
		{energies, "energies", "a table needs the energies w >= 0 that occur", &law.Energies},
		{rates, "rates", "a table needs one rate for each of its energies", &law.Rates},
	} {
		if !x.from.has(x.key) {
			v.need(x.key, x.remedy)
			ok = false
		}
		for _, item := range x.from.list(x.key) {
			*x.into = append(*x.into, item.number)
		}
		ok = ok && len(*x.into) > 0
	}
	if !ok {
		return false
	}
	for i, item := range energies.list("energies") {
		if i > 0 && item.number <= law.Energies[i-1] {
			energies.faultAt(item.at, "energies", "%s does not follow %s: they must increase", item.shown(), formatNumber(law.Energies[i-1]))
			ok = false
		}
	}
	if len(law.Energies) != len(law.Rates) {
		rates.fault("rates", "has %d rates for %d energies: give one for each", len(law.Rates), len(law.Energies))
		ok = false
	}
	return ok
}

// refuseForeign reports keys of laws other than those in use.
func (v view) refuseForeign(takes []string, why string) {
	for _, key := range lawParameters {
		if v.has(key) && !slices.Contains(takes, key) {
			var owners []string
			for _, name := range laws {
				if slices.Contains(lawTakes[name], key) {
					owners = append(owners, name)
				}
			}
			v.refuse(key, "is a key of %s; %s", listed(owners, "and"), why)
		}
	}
}

// fillOnce records a default that several operators share.
func (v view) fillOnce(key, value string) {
	s := Setting{Name: join(v.label, key), Value: value}
	if !slices.ContainsFunc(v.r.defaults, func(t Setting) bool { return t.Name == s.Name }) {
		v.r.defaults = append(v.r.defaults, s)
	}
}
