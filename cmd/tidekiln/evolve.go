package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
	"tidekiln/evolve/figure"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// evolution is one call of evolve.
type evolution struct {
	edits
	span, from, out, picture string
	replace, quiet, recheck  bool
	stdout                   io.Writer
}

func newEvolve() *cobra.Command {
	var e evolution
	c := &cobra.Command{
		Use:   "evolve SCENARIO | --from DATASET",
		Short: "Run one history and leave its tables and a picture",
		Long: `Run the history of a scenario, a file or the name of a shipped one, and leave
its tables in a directory and a picture beside it. Nothing appears before the
history is whole; a history that is stopped, by a signal or because the
integration cannot go on, keeps everything up to there.

With --from a stored history goes on from its last state, up to a longer --span.
Other keys of --set then take effect at that time.`,
		Example: `  tidekiln evolve volcanic-cycle
  tidekiln evolve my.toml --set central.tide.k2_over_Q=4e-5 --out runs/strong
  tidekiln evolve volcanic-cycle --recheck --replace
  tidekiln evolve --from volcanic-cycle --span "3 Gyr"`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: completeScenario,
		RunE: func(c *cobra.Command, args []string) error {
			e.stdout = c.OutOrStdout()
			return e.run(c.Context(), args)
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&e.span, "span", "", "length of the history, `\"500 Myr\"`; the same as --set run.span=…")
	f.StringVar(&e.from, "from", "", "continue the history in this `DATASET`")
	f.StringVarP(&e.out, "out", "o", "", "`DIRECTORY` for the tables (default: the scenario's name, in this directory)")
	f.StringVar(&e.picture, "figure", "", "`FILE` for the picture, .png, .svg or .pdf; \"none\" for no picture (default: DIRECTORY.png)")
	f.BoolVar(&e.replace, "replace", false, "replace a dataset that is already there")
	f.BoolVar(&e.recheck, "recheck", false, "run again at a hundredth of the tolerance, and store and print the differences")
	f.BoolVarP(&e.quiet, "quiet", "q", false, "no progress and no summary")
	return c
}

func (e *evolution) run(ctx context.Context, args []string) error {
	s, from, err := e.scenario(args)
	if err != nil {
		return request(err)
	}
	if e.out == "" {
		e.out = defaultOut(args, e.from)
	}
	if e.picture == "" {
		e.picture = strings.TrimRight(e.out, "/") + ".png"
	}
	parent := ""
	if from != nil {
		parent = from.RunID
	}
	if err := checkPicture(e.picture); err != nil {
		return request(err)
	}
	if !e.replace {
		if there, err := e.already(evolve.RunID(s.ID(), parent)); there || err != nil {
			return err
		}
	}
	if _, err := evolve.Check(s); err != nil {
		return request(err)
	}
	if e.recheck {
		if err := evolve.CanRepeat(s); err != nil {
			return request(err)
		}
	}
	if err := e.checkPicturePlace(); err != nil {
		return request(err)
	}
	undo, err := makeParents(e.out)
	if err != nil {
		return request(fmt.Errorf("%w: choose another --out", err))
	}
	w, err := record.Create(e.out, evolve.Tables(), record.CreateOptions{Replace: e.replace})
	if err != nil {
		undo()
		return refused(err)
	}
	defer undo()    // no effect on directories that hold something
	defer w.Abort() // no effect once committed
	bar := newProgress(os.Stderr, e.quiet)
	begun := time.Now()
	h, err := evolve.Run(ctx, s, evolve.Options{From: from, Progress: bar.show})
	bar.done()
	if err != nil {
		return request(err)
	}
	h.Attempt.Wall = time.Since(begun)
	var unchecked error
	if e.recheck && h.Status != evolve.StatusInterrupted && h.Status != evolve.StatusFailed {
		again := newProgress(os.Stderr, e.quiet)
		err := h.Repeat(ctx, evolve.Options{From: from, Progress: again.show})
		again.done()
		if err != nil {
			fmt.Fprintf(os.Stderr, "tidekiln: the history is kept, the recheck is not: %v\n", err)
		}
		unchecked = err
	}
	if err := h.Write(w); err != nil {
		return &exit{exitStopped, err}
	}
	drawn := e.draw()
	if !e.quiet {
		summarise(e.stdout, h, e.out, drawn)
	}
	if unchecked != nil {
		return &exit{interruption(ctx), nil}
	}
	return ending(ctx, h, e.out)
}

// interruption is the exit code of what a signal stopped.
func interruption(ctx context.Context) int {
	if errors.Is(context.Cause(ctx), errCtrlC) {
		return exitCtrlC
	}
	return exitInterrupted
}

// ending is how the command ends after a history was written.
func ending(ctx context.Context, h *evolve.History, out string) error {
	switch h.Status {
	case evolve.StatusFailed:
		return &exit{exitStopped, fmt.Errorf("%s: %s; the history up to there is in %s", h.Status, h.Reason, out)}
	case evolve.StatusInterrupted:
		return &exit{interruption(ctx), fmt.Errorf("%s at %.6g Myr; the history up to there is in %s: go on with\n  tidekiln evolve --from %s", h.Reason, h.End/evolve.Megayear, out, out)}
	}
	return nil
}

// scenario reads what is asked for; --from takes it from the dataset.
func (e *evolution) scenario(args []string) (*scenarios.Scenario, *evolve.Continuation, error) {
	list, err := e.list()
	if err != nil {
		return nil, nil, err
	}
	if e.span != "" {
		list = append(list, scenarios.Edit{Path: "run.span", Value: e.span})
	}
	switch {
	case e.from == "" && len(args) == 0:
		return nil, nil, errors.New("which scenario? Give a file or a shipped one:\n  tidekiln scenarios list")
	case e.from != "" && len(args) > 0:
		return nil, nil, errors.New("give a scenario or --from, not both: a continued history keeps the scenario in its dataset, and --set changes it from there on")
	case e.from == "":
		s, err := scenarios.Open(args[0], list...)
		return s, nil, err
	}
	c, err := evolve.Load(e.from)
	if err != nil {
		return nil, nil, err
	}
	// Keys of the run are read anew; others hold from now on only.
	var run []scenarios.Edit
	var rules []scenarios.Setting
	for _, edit := range list {
		switch {
		case strings.HasPrefix(edit.Path, "run."):
			run = append(run, edit)
		case edit.Unset:
			return nil, nil, fmt.Errorf("--unset %s: a continued history can change a key, not remove it", edit.Path)
		default:
			rules = append(rules, scenarios.Setting{Path: edit.Path, Value: edit.Value})
		}
	}
	s, err := scenarios.Read(e.from, []byte(c.Scenario), run...)
	if err != nil {
		return nil, nil, err
	}
	if !(s.Run.Span > c.Time) {
		return nil, nil, &evolve.SpanError{Span: s.Run.Span, Begin: c.Time}
	}
	if len(rules) > 0 {
		if s, err = s.Schedule(c.Time, rules); err != nil {
			return nil, nil, err
		}
	}
	return s, c, nil
}

// already reports whether this very history is there, whole.
func (e *evolution) already(runID string) (bool, error) {
	stored, err := evolve.Describe(e.out)
	if err != nil {
		return false, nil // record.Create says what is wrong with the place
	}
	switch {
	case stored.RunID != runID:
		return false, request(fmt.Errorf("%s holds another history (run %s): choose another --out, or --replace it", e.out, stored.RunID))
	case stored.Status == evolve.StatusInterrupted:
		return false, request(fmt.Errorf("%s holds this history up to %.6g Myr, where it was interrupted: go on with --from %s --out NEW, or --replace it", e.out, stored.End/evolve.Megayear, e.out))
	}
	if stored.Status == evolve.StatusFailed {
		return false, &exit{exitStopped, fmt.Errorf("%s holds this history up to %.6g Myr, where it failed: change the scenario, or --replace it", e.out, stored.End/evolve.Megayear)}
	}
	if e.recheck && !stored.Rechecked {
		return false, request(fmt.Errorf("%s holds this history without a recheck: --replace runs it again with one", e.out))
	}
	if !e.quiet {
		fmt.Fprintf(e.stdout, "already there: %s, run %s (--replace runs it again)\n", e.out, runID)
	}
	if _, err := os.Stat(e.picture); err != nil {
		if drawn := e.draw(); drawn != "" && !e.quiet {
			fmt.Fprintf(e.stdout, "picture: %s\n", drawn)
		}
	}
	return true, nil
}

// draw leaves the picture and returns its name. A picture that cannot be drawn
// is no reason to call a finished history a failure.
func (e *evolution) draw() string {
	if e.picture == "none" {
		return ""
	}
	h, err := figure.Load(e.out)
	if err == nil {
		err = figure.Draw(h, e.picture, figure.Options{})
	}
	if err != nil {
		fmt.Fprintf(os.Stderr, "tidekiln: the tables are there, the picture is not: %v\n", err)
		return ""
	}
	return e.picture
}

// checkPicture refuses a name that cannot be drawn before anything is run.
func checkPicture(path string) error {
	if path == "none" {
		return nil
	}
	ext := strings.ToLower(filepath.Ext(path))
	for _, f := range figure.Formats() {
		if ext == f {
			return nil
		}
	}
	return fmt.Errorf("--figure %s: end the name in %s, or write --figure none", path, strings.Join(figure.Formats(), ", "))
}

// checkPicturePlace refuses a picture that could not be written, or that would
// overwrite one that is not known to be this history's.
func (e *evolution) checkPicturePlace() error {
	if e.picture == "none" {
		return nil
	}
	if info, err := os.Stat(e.picture); err == nil && (info.IsDir() || !e.replace) {
		return fmt.Errorf("--figure %s: something is there already: choose another name, --figure none, or --replace it", e.picture)
	}
	parent := filepath.Dir(e.picture)
	if parent == filepath.Dir(filepath.Clean(e.out)) {
		return nil // made with the dataset's
	}
	if info, err := os.Stat(parent); err != nil || !info.IsDir() {
		return fmt.Errorf("--figure %s: there is no directory %s: create it first", e.picture, parent)
	}
	return nil
}

// makeParents makes the directories a dataset goes into, and returns what
// removes those it made as long as they are empty.
func makeParents(path string) (undo func(), err error) {
	var made []string
	for dir := filepath.Dir(filepath.Clean(path)); ; dir = filepath.Dir(dir) {
		if _, err := os.Stat(dir); err == nil || dir == filepath.Dir(dir) {
			break
		}
		made = append(made, dir)
	}
	undo = func() {
		for _, dir := range made {
			_ = os.Remove(dir) // fails on one that holds something, as it should
		}
	}
	if err := os.MkdirAll(filepath.Dir(filepath.Clean(path)), 0o777); err != nil {
		undo()
		return nil, err
	}
	return undo, nil
}

// refused says which kind of failure stands in the way of a dataset.
func refused(err error) error {
	if errors.Is(err, record.ErrFull) {
		return &exit{exitStopped, err}
	}
	return request(err)
}

// defaultOut names the dataset after the scenario.
func defaultOut(args []string, from string) string {
	if from != "" {
		return strings.TrimRight(from, "/") + "-continued"
	}
	return strings.TrimSuffix(filepath.Base(args[0]), ".toml")
}
