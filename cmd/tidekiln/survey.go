package main

import (
	"fmt"
	"io"
	"math"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

func newSurvey() *cobra.Command {
	var e edits
	var displacement string
	c := &cobra.Command{
		Use:   "survey SCENARIO",
		Short: "Say what a scenario means, before any integration",
		Long: `Print the orbits, forced eccentricities, librations, heat, time scales and
quick estimates of a scenario at its start.

The stretch-work bound is the change of the tidal force between pericentre and
apocentre, times the mean displacement of the rock, per half orbit. It counts
all the work that is cycled, most of which returns elastically, so it bounds the
dissipation from above; the share beside it says how lossy the body is.`,
		Example: `  tidekiln survey volcanic-cycle
  tidekiln survey volcanic-cycle --displacement "50 m"`,
		Args:              cobra.ExactArgs(1),
		ValidArgsFunction: completeScenario,
		RunE: func(c *cobra.Command, args []string) error {
			list, err := e.list()
			if err != nil {
				return err
			}
			d := 0.0
			if displacement != "" {
				if d, err = scenarios.ParseQuantity(displacement, "m"); err != nil {
					return request(fmt.Errorf("--displacement %s: %w", displacement, err))
				}
				if !(d > 0) {
					return request(fmt.Errorf("--displacement %s: must be above 0 m", displacement))
				}
			}
			s, err := scenarios.Open(args[0], list...)
			if err != nil {
				return request(err)
			}
			estimates, err := evolve.Survey(s, d)
			if err != nil {
				return request(err)
			}
			printSurvey(c.OutOrStdout(), s, estimates)
			return nil
		},
	}
	e.flags(c)
	c.Flags().StringVar(&displacement, "displacement", "", "mean displacement of the rock over half an orbit, `\"50 m\"` (default: half that of a fluid surface)")
	return c
}

// block is a table with a column for each body.
type block struct {
	w    *tabwriter.Writer
	n    int
	some bool
}

// row prints a line unless no body has a value.
func (b *block) row(label, unit, format string, value func(i int) float64) {
	any := false
	for i := 0; i < b.n; i++ {
		any = any || !math.IsNaN(value(i))
	}
	if !any {
		return
	}
	if unit != "" {
		label += " / " + unit
	}
	fmt.Fprintf(b.w, "  %-*s\t", labelWidth, label)
	for i := 0; i < b.n; i++ {
		if v := value(i); math.IsNaN(v) {
			fmt.Fprint(b.w, "-\t")
		} else {
			fmt.Fprintf(b.w, format+"\t", v)
		}
	}
	fmt.Fprintln(b.w)
}

const (
	perBlock   = 3  // bodies that stand side by side within 80 columns
	labelWidth = 34 // of the left column
)

func printSurvey(w io.Writer, s *scenarios.Scenario, e *evolve.Estimates) {
	if s.Title != "" {
		fmt.Fprintln(w, s.Title)
	}
	for from := 0; from < len(e.Bodies); from += perBlock {
		printBodies(w, e.Bodies[from:min(from+perBlock, len(e.Bodies))])
	}
	for i := range e.Chains {
		printChain(w, &e.Chains[i])
	}
}

func printBodies(w io.Writer, bodies []evolve.BodyEstimate) {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', tabwriter.AlignRight)
	b := &block{w: t, n: len(bodies)}
	fmt.Fprintf(t, "\n%-*s\t", labelWidth+2, "")
	for i := range bodies {
		fmt.Fprintf(t, "%s\t", bodies[i].Name)
	}
	fmt.Fprintln(t)
	of := func(f func(*evolve.BodyEstimate) float64) func(int) float64 {
		return func(i int) float64 { return f(&bodies[i]) }
	}
	const km, myr = 1e3, evolve.Megayear
	type be = evolve.BodyEstimate
	b.row("period", "d", "%.5g", of(func(o *be) float64 { return 2 * math.Pi / o.Orbit.MeanMotion / orbit.Day }))
	b.row("semi-major axis", "km", "%.6g", of(func(o *be) float64 { return o.Orbit.SemimajorAxis / km }))
	b.row("eccentricity", "", "%.4g", of(func(o *be) float64 { return o.Orbit.Eccentricity }))
	b.row("density", "kg/m3", "%.4g", of(func(o *be) float64 { return o.Density }))
	b.row("Roche limit", "km", "%.4g", of(func(o *be) float64 { return o.Roche / km }))
	b.row("Hill radius", "km", "%.4g", of(func(o *be) float64 { return o.Hill / km }))
	b.row("temperature", "K", "%.5g", of(func(o *be) float64 { return value(o.State.Temperature.X, o.State.Temperature.OK) }))
	b.row("melt fraction", "", "%.3g", of(func(o *be) float64 { return value(o.State.MeltFraction.X, o.State.MeltFraction.OK) }))
	b.row("Maxwell time", "yr", "%.3g", of(func(o *be) float64 { return o.Maxwell / orbit.Year }))
	b.row("k2/Q", "", "%.3g", of(func(o *be) float64 { return o.K }))
	b.row("Re k2", "", "%.3g", of(func(o *be) float64 { return o.ReK2 }))
	b.row("tidal heat", "W", "%.3g", of(func(o *be) float64 { return o.TidalHeat }))
	b.row("tidal heat flux", "W/m2", "%.3g", of(func(o *be) float64 { return o.Flux }))
	b.row("surface loss", "W", "%.3g", of(func(o *be) float64 { return o.Loss }))
	b.row("radiogenic heat", "W", "%.3g", of(func(o *be) float64 { return o.Radiogenic }))
	b.row("damping of e", "Myr", "%.3g", of(func(o *be) float64 { return o.Damping / myr }))
	b.row("migration", "Myr", "%.3g", of(func(o *be) float64 { return o.Migration / myr }))
	b.row("cooling", "Myr", "%.3g", of(func(o *be) float64 { return o.Cooling / myr }))
	b.row("tidal force swing", "N", "%.3g", of(func(o *be) float64 { return o.Stretch.ForceSwing }))
	b.row("displacement", "m", "%.3g", of(func(o *be) float64 { return o.Stretch.Displacement }))
	b.row("stretch-work bound", "W", "%.3g", of(func(o *be) float64 { return o.Stretch.Power }))
	b.row("of it dissipated", "%", "%.2g", of(func(o *be) float64 { return 100 * o.TidalHeat / o.Stretch.Power }))
	b.row("(dlambda/dt - dvarpi/dt)/n - 1", "%", "%.2g", of(func(o *be) float64 { return math.Round(1e10*o.ApsidalExcess) / 1e8 }))
	t.Flush()
}

func value(x float64, ok bool) float64 {
	if ok {
		return x
	}
	return math.NaN()
}

func printChain(w io.Writer, c *evolve.ChainEstimate) {
	const perDay = math.Pi / 180 / orbit.Day
	fmt.Fprintf(w, "\nchain %s\n", c.Name)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	for _, r := range c.Resonances {
		fmt.Fprintf(t, "  %s\t%s and %s\toffset %.4g deg/day", r.Ratio, r.Inner, r.Outer, r.Offset/perDay)
		if !math.IsNaN(r.Centre) {
			fmt.Fprintf(t, "\tlibration centre %.0f deg", r.Centre*180/math.Pi)
		}
		fmt.Fprintln(t)
	}
	t.Flush()
	if len(c.Modes) > 0 {
		fmt.Fprintln(w, "  librations, damped at")
	}
	t = tabwriter.NewWriter(w, 0, 0, 2, ' ', tabwriter.AlignRight)
	for _, m := range c.Modes {
		fmt.Fprintf(t, "    %.4g yr\t%.3g /Myr\t\n", m.Period()/orbit.Year, -m.Growth*evolve.Megayear)
	}
	t.Flush()
	fmt.Fprintf(w, "  heat now %.3g W, in the steady state of the resonance %.3g W\n", c.Heat, c.SteadyHeat)
}
