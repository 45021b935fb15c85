// Command peers runs this program's integrator against CVODE and SciPy on the
// same right-hand sides and writes what it found as Markdown. run.sh builds the
// peers and starts it; it fails if a peer's right-hand side differs.
package main

import (
	"flag"
	"fmt"
	"io"
	"math"
	"os"
	"runtime"
	"strings"
	"time"

	"tidekiln/evolve"
)

const megayear = evolve.Megayear

func main() {
	cvode := flag.String("cvode", "", "the CVODE program built from cvode/")
	python := flag.String("python", "", "a Python with the packages of scipy/requirements.txt")
	script := flag.String("script", "", "scipy/main.py")
	dir := flag.String("dir", "", "directory for the constants of the cases")
	out := flag.String("out", "", "file for the results")
	flag.Parse()
	c := &port{name: "C", command: []string{*cvode}}
	p := &port{name: "Python", command: []string{*python, "-B", *script}}
	if err := compare(c, p, *dir, *out); err != nil {
		fmt.Fprintln(os.Stderr, "peers:", err)
		os.Exit(1)
	}
}

func compare(cvode, scipy *port, dir, out string) error {
	begin := time.Now()
	cases, err := problems()
	if err != nil {
		return err
	}
	if err := constantsIn(dir, cases, cvode, scipy); err != nil {
		return err
	}
	var b strings.Builder
	w := io.MultiWriter(os.Stdout, &b)
	if err := head(w, cvode, scipy); err != nil {
		return err
	}
	if err := agreements(w, cases, cvode, scipy); err != nil {
		return err
	}
	if err := costs(w, cases[0], cvode, scipy); err != nil {
		return err
	}
	for _, c := range cases {
		r, err := contest(c, entrants(cvode, scipy))
		if err != nil {
			return err
		}
		r.write(w)
	}
	fmt.Fprintf(os.Stderr, "peers: %.0f s\n", time.Since(begin).Seconds())
	return os.WriteFile(out, []byte(b.String()), 0o644)
}

// head names the machine and every version.
func head(w io.Writer, cvode, scipy *port) error {
	c, err := cvode.ask("", "version")
	if err != nil {
		return err
	}
	s, err := scipy.ask("", "version")
	if err != nil {
		return err
	}
	fmt.Fprintf(w, `# This program's integrator against CVODE and SciPy

%s; %s, %d CPUs, one used; %s, %s, %s.

`, time.Now().UTC().Format("2006-01-02"), processor(), runtime.NumCPU(), runtime.Version(), strings.TrimSpace(c), strings.TrimSpace(s))
	fmt.Fprintf(w, `All integrate the same 11 equations in SI from the same constants. Times are CPU
time of one integration, set-up included: the median of samples that integrators
took in turns (%d turns; one for runs of more than %g s and SciPy). An end error is
the largest relative one of Λ and e of three moons and the enthalpy. Times and
ratios at an error are interpolated between runs at tolerances half a decade
apart (SciPy: a decade). A run is given up after %g s (SciPy: %g s).

"This program" is its integrator with the options of a history, on the bare
equations as the peers have them; "with ledger and kinks" adds what a history
needs. "Every help" for CVODE (C, -O3 -march=native): analytic Jacobian, start
projected onto the slow manifold, tolerance of the odd components off, limits on
failures raised; "best coefficient" takes the best NonlinConvCoef of 0.1, 0.01 and
0.001 run by run. "Helped" for SciPy is the same without the limits. "As called"
is the tolerances alone.

`, visits, longest, cvodeLimit, scipyLimit)
	return nil
}

func processor() string {
	info, _ := os.ReadFile("/proc/cpuinfo")
	for line := range strings.Lines(string(info)) {
		if name, value, ok := strings.Cut(line, ":"); ok && strings.TrimSpace(name) == "model name" {
			return strings.TrimSpace(value)
		}
	}
	return runtime.GOARCH
}

// agreements checks every port at every case.
func agreements(w io.Writer, cases []*problem, ports ...*port) error {
	fmt.Fprintf(w, "## Agreement of the ports\n\nLargest difference from this program, as a part of the largest term of the row (bound %.0e).\n\n", agreement)
	fmt.Fprint(w, "| port | case | states | right-hand side | Jacobian |\n|---|---|---|---|---|\n")
	for _, p := range ports {
		for _, c := range cases {
			rhs, jac, states, err := p.agree(c)
			if err != nil {
				return err
			}
			fmt.Fprintf(w, "| %s | %s | %d | %.1e | %.1e |\n", p.name, c.name, states, rhs, jac)
			if !(rhs <= agreement) || !(jac <= agreement) {
				return fmt.Errorf("case %s: the %s port differs by %.2g in the right-hand side and %.2g in the Jacobian", c.name, p.name, rhs, jac)
			}
		}
	}
	fmt.Fprintln(w)
	return nil
}

// costs writes the times of the pieces.
func costs(w io.Writer, c *problem, ports ...*port) error {
	rhs, jac := c.seconds()
	fmt.Fprint(w, "## Pieces\n\nLeast times of many.\n\n| | right-hand side, µs | with Jacobian, µs |\n|---|---|---|\n")
	fmt.Fprintf(w, "| Go | %.3f | %.3f |\n", rhs*1e6, jac*1e6)
	for _, p := range ports {
		rhs, jac, err := p.seconds(c)
		if err != nil {
			return err
		}
		fmt.Fprintf(w, "| %s | %.3f | %.3f |\n", p.name, rhs*1e6, jac*1e6)
	}
	fmt.Fprint(w, "\n| one step of this program, osc, rtol 1e-8 | µs | right-hand sides | of the time, % |\n|---|---|---|---|\n")
	for _, stages := range []int{3, 5} {
		o := c.at(1e-8)
		o.Stages = stages
		least := math.Inf(1)
		var m measurement
		for range visits {
			var err error
			if m, err = c.follow(frozen{c.system}, o, c.start); err != nil {
				return err
			}
			least = min(least, m.times[0])
		}
		n := float64(m.steps)
		evaluations := (float64(m.rhs)*rhs + float64(m.jacs)*jac) / least
		fmt.Fprintf(w, "| %d stages | %.2f | %.1f | %.0f |\n", stages, least/n*1e6, float64(m.rhs)/n, 100*evaluations)
	}
	fmt.Fprintln(w)
	return nil
}
