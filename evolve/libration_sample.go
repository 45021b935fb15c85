package evolve

import (
	"fmt"
	"math"
	"slices"
)

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
		for k := range l.chains[i].to.size {
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
		now := c.at(t)
		for k := range c.to.size {
			o := &out[next]
			next++
			o.t, o.grid = myr, grid
			if c.lost {
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
			case c.lost:
				o.width = math.NaN()
			case r == 0:
				o.width = math.Max(now.total(0), now.total(1))
			default:
				o.width = now.total(n + r - 1)
			}
		}
	}
}

// The values that a continued history takes up: of each chain the first least
// ω², whether a fold has been told, whether it is lost, and of each mode ω,
// ln √I and whether it has been told to be overstable.
const (
	perLibratingChain = 3
	perLibration      = 3
)

// pack lists them at t, s.
func (l *carrier) pack(t float64) []float64 {
	list := []float64{}
	for i := range l.chains {
		c := &l.chains[i]
		now := c.at(t)
		list = append(list, c.first, number(c.saidFold), number(c.lost))
		for k := range c.to.size {
			list = append(list, now.frequency(k), now.size(k), number(c.saidWide[k]))
		}
	}
	return list
}

func number(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

// unpack takes them up: every mode those of the frequency nearest to its own.
// Modes that have crossed get the places back that they had.
func (l *carrier) unpack(list []float64) error {
	want := 0
	for i := range l.chains {
		want += perLibratingChain + perLibration*len(l.chains[i].to.size)
	}
	if len(list) != want {
		return fmt.Errorf("the dataset ends with %d values of librations, the scenario has %d: its chains differ", len(list), want)
	}
	for i := range l.chains {
		c := &l.chains[i]
		modes := c.to.modes.Modes
		head, rows := list[:perLibratingChain], list[perLibratingChain:perLibratingChain+perLibration*len(modes)]
		list = list[perLibratingChain+len(rows):]
		c.first, c.saidFold = head[0], head[1] != 0
		if head[2] != 0 {
			c.lost, c.saidLost = true, true
		}
		if c.lost {
			continue
		}
		for k := range modes {
			row := rows[perLibration*k:]
			near := k
			for j := k; j < len(modes); j++ {
				if math.Abs(modes[j].Frequency-row[0]) < math.Abs(modes[near].Frequency-row[0]) {
					near = j
				}
			}
			modes[k], modes[near] = modes[near], modes[k]
			c.to.width[k], c.to.width[near] = c.to.width[near], c.to.width[k]
			c.to.size[k], c.saidWide[k] = math.Min(row[1], math.Log(math.Pi/slices.Max(c.to.width[k]))), row[2] != 0
		}
	}
	return nil
}
