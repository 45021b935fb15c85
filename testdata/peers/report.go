package main

import (
	"fmt"
	"io"
	"math"
	"strings"
)

var targets = []float64{1e-3, 1e-5, 1e-7, 1e-9, 1e-11}

func (r *result) write(w io.Writer) {
	fmt.Fprintf(w, "## %s\n\n%s.\n\n", r.c.name, strings.ToUpper(r.c.title[:1])+r.c.title[1:])
	fmt.Fprintf(w, "Reference: 5 stages at rtol 1e-12; rtol 1e-13 differs by %.1e.", r.self)
	if m := r.confirmed; m.done() {
		fmt.Fprintf(w, " CVODE comes closest at rtol %s, coefficient %g: %.1e, in %s ms and %d steps.", power(m.rtol), m.coef, m.err, ms(m.cpu()), m.steps)
	}
	fmt.Fprint(w, "\n\n### CPU time, ms, to an end error\n\n| integrator |")
	for _, t := range targets {
		fmt.Fprintf(w, " %.0e |", t)
	}
	fmt.Fprintf(w, " best error |\n|---|%s\n", strings.Repeat("---|", len(targets)+1))
	for _, name := range r.order {
		fmt.Fprintf(w, "| %s |", name)
		for _, t := range targets {
			fmt.Fprintf(w, " %s |", orNot(costAt(r.runs[name], t, (*measurement).cpu), ms))
		}
		best := math.Inf(1)
		for _, m := range r.runs[name] {
			best = min(best, m.err)
		}
		fmt.Fprintf(w, " %.1e |\n", best)
	}
	r.ratios(w)
	r.rungs(w)
}

// ratios writes how many times longer each peer takes.
func (r *result) ratios(w io.Writer) {
	fmt.Fprint(w, "\n### Time of the peer over that of this program, at equal error\n\n| peer |")
	for _, t := range targets {
		fmt.Fprintf(w, " %.0e |", t)
	}
	fmt.Fprintf(w, "\n|---|%s\n", strings.Repeat("---|", len(targets)))
	median, least := (*measurement).cpu, (*measurement).least
	for _, row := range []struct {
		peer, own string
		of        cost
		remark    string
	}{
		{cvodeTuned, ours, median, ""}, {cvodeHelped, ours, median, ""}, {cvodeStart, ours, median, ""}, {cvodeCalled, ours, median, ""},
		{scipyRadau, ours, median, ""}, {scipyCalled, ours, median, ""},
		{cvodeTuned, ours, least, " (least times)"}, {cvodeHelped, ours, least, " (least times)"},
		{cvodeTuned, oursWhole, median, " (over this program with ledger and kinks)"},
		{cvodeHelped, oursWhole, median, " (over this program with ledger and kinks)"},
	} {
		fmt.Fprintf(w, "| %s%s |", row.peer, row.remark)
		for _, t := range targets {
			own, peer := costAt(r.runs[row.own], t, row.of), costAt(r.runs[row.peer], t, row.of)
			if math.IsNaN(own) {
				fmt.Fprint(w, " not reached by this program |")
				continue
			}
			fmt.Fprintf(w, " %s |", orNot(peer/own, func(x float64) string { return fmt.Sprintf("%.3g", x) }))
		}
		fmt.Fprintln(w)
	}
}

// rungs writes the runs behind the times: those on the front of each
// integrator, and what did not get to the end.
func (r *result) rungs(w io.Writer) {
	fmt.Fprint(w, "\n### Runs\n\nThose of each integrator that no cheaper one of it beats, and failures.\n\n")
	fmt.Fprint(w, "| integrator | rtol | coef. | end error | CPU ms | steps | rejected | f | Jacobians |\n|---|---|---|---|---|---|---|---|---|\n")
	for _, name := range r.order {
		all := front(r.runs[name], (*measurement).cpu)
		for _, m := range r.runs[name] {
			if !m.done() {
				all = append(all, m)
			}
		}
		for _, m := range all {
			coef, end := "", fmt.Sprintf("%.1e", m.err)
			if m.coef > 0 {
				coef = fmt.Sprint(m.coef)
			}
			if !m.done() {
				end = m.outcome
				if m.reached > 0 {
					end += fmt.Sprintf(" at %.3g Myr", m.reached/megayear)
				}
			}
			fmt.Fprintf(w, "| %s | %s | %s | %s | %s | %d | %d | %d | %d |\n", name, power(m.rtol), coef, end, ms(m.cpu()), m.steps, m.rejected, m.rhs, m.jacs)
		}
	}
	fmt.Fprintln(w)
}

// ms writes a time in milliseconds with three digits.
func ms(s float64) string {
	if !(s > 0) {
		return ""
	}
	s *= 1e3
	digits := max(0, 2-int(math.Floor(math.Log10(s))))
	return fmt.Sprintf("%.*f", digits, s)
}

func orNot(x float64, text func(float64) string) string {
	if math.IsNaN(x) {
		return "not reached"
	}
	return text(x)
}

// power writes a tolerance of the ladder, a whole or half power of ten.
func power(x float64) string {
	e := math.Log10(x)
	if whole := math.Round(e); math.Abs(e-whole) < 1e-6 {
		return fmt.Sprintf("1e%g", whole)
	}
	return fmt.Sprintf("3e%g", math.Floor(e))
}
