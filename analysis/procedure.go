package analysis

func (o Options) withDefaults() Options {
	if o.WeightFloor == 0 {
		o.WeightFloor = 0.2
	}
	if o.Precision == 0 {
		o.Precision = 0.03
	}
	if o.Epsilon == 0 {
		o.Epsilon = 0.05
	}
	return o
}

// Infer makes the whole inference of one point. Results that cannot be had are
// missing with a reason; it never fails. It panics only if the arrays of p
// contradict each other.
func Infer(p Point, opt Options) Result {
	opt = opt.withDefaults()
	r := Result{Beta: p.Beta, Size: p.Size, Open: p.Open, Group: p.Group}
	cache := map[int]*pool{}
	pools := func(split int) *pool {
		if cache[split] == nil {
			cache[split] = newPool(&p, split)
		}
		return cache[split]
	}
	states := make([]integrated, len(p.Observables))
	for o := range p.Observables {
		var res ObservableResult
		states[o], res = inferObservable(&p, o, opt, pools)
		r.Observables = append(r.Observables, res)
		r.Tests = append(r.Tests, stationarity(&p, o)...)
		if p.Observables[o].Kind == "energy" && p.Sites > 0 {
			r.EnergyPerSite = scaled(res.Mean, 1/float64(p.Sites))
		}
	}
	r.SlowMode = slowMode(&p, states, r.Observables, pools)
	for k := range p.Pairs {
		r.Curves = append(r.Curves, curve(&p, k, states))
	}
	for i := range p.Spatial {
		for j := range p.Spatial[i].Planes {
			plane := &p.Spatial[i].Planes[j]
			r.Decay = append(r.Decay, decay(&p, p.Spatial[i].Of, plane))
			r.Spatial = append(r.Spatial, planeCurve(&p, p.Spatial[i].Of, plane))
		}
		if len(p.Spatial[i].Points) > 0 {
			r.Spatial = append(r.Spatial, pointCurve(&p.Spatial[i]))
		}
	}
	r.Approach = approaches(&p, r.Observables, opt)
	r.Mixing = mixing(&p, &r)
	r.Advice = advise(&p, states, r.Observables, opt)
	conclude([]*Result{&r})
	return r
}

// Compare looks at all points of a study together. It corrects the tests of
// results for their number (Holm), sets Equilibrated and the warnings that
// follow from them in place, and fits trends.
func Compare(results []Result) Comparison {
	all := make([]*Result, len(results))
	for i := range results {
		all[i] = &results[i]
	}
	conclude(all)
	return Comparison{Trends: trends(results)}
}

func scaled(e Estimate, by float64) Estimate {
	e.Value *= by
	e.Err *= by
	e.Low *= by
	e.High *= by
	return e
}
