package analysis

import "math"

// curve pools one covariance in time for plots.
func curve(p *Point, k int, states []integrated) Curve {
	pair := &p.Pairs[k]
	c := Curve{F: p.Observables[pair.F].Name, G: p.Observables[pair.G].Name}
	in := &states[pair.F]
	if in.pool == nil {
		return c
	}
	values, without := in.c, in.without
	if pair.F != pair.G {
		q := in.pool
		values = q.covariance(k, all, nil)
		without = nil
		for b := range q.blocks {
			without = append(without, q.covariance(k, b, nil))
		}
	}
	n := len(values)
	for _, row := range without {
		n = min(n, len(row))
	}
	column := make([]float64, len(without))
	rates := make([]float64, len(without))
	for i := range n {
		c.Times = append(c.Times, float64(pair.Lags[i])*p.Step)
		c.C = append(c.C, values[i])
		c.Pairs = append(c.Pairs, in.pool.pairs[k].total[i].N)
		se := 0.0
		if len(without) > 1 {
			for b := range without {
				column[b] = without[b][i]
			}
			se = jackknife(column)
		}
		c.Err = append(c.Err, se)
		if pair.F != pair.G || i+1 >= n {
			continue
		}
		rate, rateErr := 0.0, -1.0
		dt := float64(pair.Lags[i+1]-pair.Lags[i]) * p.Step
		if values[i] > 0 && values[i+1] > 0 {
			rate = math.Log(values[i]/values[i+1]) / dt
			good := len(without) > 1
			for b := range without {
				good = good && without[b][i] > 0 && without[b][i+1] > 0
				if good {
					rates[b] = math.Log(without[b][i]/without[b][i+1]) / dt
				}
			}
			if good {
				rateErr = jackknife(rates)
			}
		}
		c.Rate = append(c.Rate, rate)
		c.RateErr = append(c.RateErr, rateErr)
	}
	return c
}

func planeCurve(p *Point, of string, plane *Plane) SpatialCurve {
	s := newPlaneSums(p, plane)
	c := SpatialCurve{Of: of, Axis: plane.Axis, K: s.k, Err: s.errors()}
	for r := range s.k {
		c.Displacements = append(c.Displacements, []int{r})
	}
	return c
}

// pointCurve is the covariance of single terms by displacement, for pictures:
// it has a power prefactor and is not fitted.
func pointCurve(spatial *Spatial) SpatialCurve {
	var s planeSums
	c := SpatialCurve{Of: spatial.Of, Axis: -1}
	for i := range spatial.Points {
		d := &spatial.Points[i]
		c.Displacements = append(c.Displacements, d.D)
		for u, v := range d.Sums {
			if i == 0 {
				s.units = append(s.units, nil)
			}
			s.units[u] = append(s.units[u], v)
		}
	}
	s.pool()
	c.K, c.Err = s.k, s.errors()
	c.Displacements = c.Displacements[:len(c.K)]
	return c
}
