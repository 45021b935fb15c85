package evolve

import (
	"fmt"
	"math"
	"strings"

	"tidekiln/evolve/ode"
	"tidekiln/scenarios"
)

// observation is a measured value to be met at a time.
type observation struct {
	scenarios.Observed
	value func(*bodySample) float64
	index int // of the body
	model float64
}

// observations looks up the columns the scenario's observations name.
func observations(s *scenarios.Scenario) ([]observation, error) {
	var list []observation
	for _, o := range s.Observed {
		seen := observation{Observed: o, index: -1, model: math.NaN()}
		var names []string
		for i := range bodiesTable.columns {
			c := &bodiesTable.columns[i]
			if c.float == nil || c.Name == "time_Myr" {
				continue
			}
			names = append(names, c.Name)
			if c.Name == o.Column {
				seen.value = c.float
			}
		}
		if seen.value == nil {
			return nil, fmt.Errorf("observed value of %s: there is no column %q in bodies; it has %s", o.Body, o.Column, strings.Join(names, ", "))
		}
		for i := range s.Orbiters {
			if s.Orbiters[i].Name == o.Body {
				seen.index = i
			}
		}
		if seen.index < 0 {
			return nil, fmt.Errorf("observed value of %s: there is no such orbiter", o.Body)
		}
		list = append(list, seen)
	}
	return list, nil
}

// observeStep takes the model's values that fall on a step up to end.
func (r *run) observeStep(seg *ode.Segment, end float64) {
	for i := range r.seen {
		if o := &r.seen[i]; o.At > seg.T0 && o.At <= end {
			seg.Eval(o.At, r.track.y)
			o.model = r.modelValue(o, o.At, r.track.y)
		}
	}
}

// observe takes those that fall on the present time.
func (r *run) observe(t float64) {
	for i := range r.seen {
		if o := &r.seen[i]; o.At == t {
			o.model = r.modelValue(o, t, r.y)
		}
	}
}

func (r *run) modelValue(o *observation, t float64, y []float64) float64 {
	r.rec.sampler.take(t, y, r.rec.books, r.ledger.sums, t/Megayear, false)
	return o.value(&r.rec.sampler.bodies[o.index])
}

// met lists the observations that have been met, each by its place in the
// scenario and the model's value, for a history that continues this one.
func (r *run) met() []float64 {
	list := []float64{}
	for i := range r.seen {
		if o := &r.seen[i]; o.At >= 0 && !math.IsNaN(o.model) {
			list = append(list, float64(i), o.model)
		}
	}
	return list
}

// meet takes such a list up.
func (r *run) meet(list []float64) error {
	for k := 0; k+1 < len(list); k += 2 {
		i := int(list[k])
		if i < 0 || i >= len(r.seen) {
			return fmt.Errorf("the dataset has met observation %d, which the scenario does not have: its observations differ", i+1)
		}
		r.seen[i].model = list[k+1]
	}
	return nil
}

// misfits returns the root mean square of (model − observed)/error of all
// observations and of each body's, NaN where there is none.
func (r *run) misfits() (all float64, each []float64) {
	each = make([]float64, len(r.p.bodies))
	count := make([]float64, len(r.p.bodies))
	total, n := 0.0, 0.0
	for i := range r.seen {
		o := &r.seen[i]
		if o.At < 0 {
			o.model = r.modelValue(o, r.t, r.y)
		}
		if math.IsNaN(o.model) || !(o.Error > 0) {
			continue
		}
		d := (o.model - o.Value) / o.Error
		each[o.index] += d * d
		count[o.index]++
		total, n = total+d*d, n+1
	}
	for i := range each {
		each[i] = math.Sqrt(ratio(each[i], count[i]))
	}
	return math.Sqrt(ratio(total, n)), each
}
