package evolve

import "math"

// librationSample is one libration at one time, SI.
type librationSample struct {
	moment
	chain            string
	mode             int // from 1
	frequency        float64
	real             float64 // Re λ, 1/s
	widening, growth float64 // of the width and of the action, 1/s; NaN at a start
	width            float64 // rad
	angle            string
	action           float64 // J s
}

// samples makes one for every libration there is.
func (l *carrier) samples(runID string) []librationSample {
	var list []librationSample
	for i := range l.chains {
		for k := range l.chains[i].toldWide {
			list = append(list, librationSample{
				moment: moment{runID: runID}, chain: l.p.groups[l.chains[i].group].name, mode: k + 1,
			})
		}
	}
	return list
}

// sample fills them at t, s, within the last step or at its end, and gives
// every resonance its half-width.
func (l *carrier) sample(t, myr float64, grid bool, out []librationSample, resonances []resonanceSample) {
	next, pair := 0, 0
	for i := range l.chains {
		c := &l.chains[i]
		var now instant
		if c.lost == nil {
			now = c.at(t)
		}
		for k := range c.toldWide {
			o := &out[next]
			next++
			o.t, o.grid = myr, grid
			if c.lost != nil {
				nan := math.NaN()
				o.frequency, o.real, o.widening, o.growth, o.width, o.angle, o.action = nan, nan, nan, nan, nan, "", nan
				continue
			}
			var angle int
			o.width, angle = now.widest(k)
			o.frequency, o.real = now.frequency(k), now.real(k)
			o.widening, o.growth = now.widening(k, angle), 2*now.growth(k)
			o.angle = c.angles[angle]
			o.action = math.Exp(2 * now.size(k))
		}
		g := &l.p.groups[c.group]
		n := g.Members()
		for r := 0; r < n-1; r++ {
			o := &resonances[pair]
			pair++
			switch {
			case c.lost != nil:
				o.width = math.NaN()
			case r == 0:
				o.width = math.Max(now.total(0), now.total(1))
			default:
				o.width = now.total(n + r - 1)
			}
		}
	}
}
