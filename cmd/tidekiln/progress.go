package main

import (
	"fmt"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"tidekiln/evolve"
)

// progress shows how far a history is: a bar on a terminal, a plain line every
// half minute in a log, nothing when quiet.
type progress struct {
	out   *os.File
	bar   *progressbar.ProgressBar
	quiet bool
	begun time.Time
	last  time.Time
}

const (
	barSteps  = 1000 // parts of the span
	logPeriod = 30 * time.Second
	barPeriod = 100 * time.Millisecond
)

func newProgress(out *os.File, quiet bool) *progress {
	now := time.Now()
	p := &progress{out: out, quiet: quiet, begun: now, last: now}
	if !quiet && term.IsTerminal(int(out.Fd())) {
		p.bar = progressbar.NewOptions(barSteps,
			progressbar.OptionSetWriter(out), progressbar.OptionClearOnFinish(), progressbar.OptionSetPredictTime(false),
			progressbar.OptionSetElapsedTime(false), progressbar.OptionFullWidth(), progressbar.OptionThrottle(barPeriod),
			progressbar.OptionSetTheme(progressbar.Theme{Saucer: "=", SaucerHead: ">", SaucerPadding: " ", BarStart: "[", BarEnd: "]"}))
	}
	return p
}

// show is called after every step.
func (p *progress) show(at evolve.Progress) {
	if p.quiet {
		return
	}
	now := time.Now()
	share := (at.Time - at.Begin) / (at.Span - at.Begin)
	switch {
	case p.bar != nil && now.Sub(p.last) > barPeriod:
		p.last = now
		p.bar.Describe(fmt.Sprintf("%s of %s, %v left", span(at.Time), span(at.Span), p.left(now, share)))
		p.set(share)
	case p.bar == nil && now.Sub(p.last) > logPeriod:
		p.last = now
		fmt.Fprintf(p.out, "at %s of %s (%.0f %%), %d steps, about %v left\n", span(at.Time), span(at.Span), 100*share, at.Steps, p.left(now, share))
	}
}

// set moves the bar. Drawing it is all that can fail, and a history does not
// depend on that.
func (p *progress) set(share float64) { _ = p.bar.Set(int(barSteps * share)) }

func (p *progress) done() {
	if p.bar != nil {
		_ = p.bar.Finish()
	}
}

// left is the time still needed if the rest goes as fast as what is done.
func (p *progress) left(now time.Time, share float64) time.Duration {
	return time.Duration(float64(now.Sub(p.begun)) * (1 - share) / share).Round(time.Second)
}

// span writes a time, s, in Myr or, where those are many, in Gyr.
func span(t float64) string {
	if myr := t / evolve.Megayear; myr < 1e4 {
		return fmt.Sprintf("%.4g Myr", myr)
	}
	return fmt.Sprintf("%.4g Gyr", t/evolve.Megayear/1e3)
}
