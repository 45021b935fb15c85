package main

import (
	"bytes"
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"

	"tidekiln/evolve"
	"tidekiln/evolve/record"
)

// asProgram makes the test binary behave as the program itself.
const asProgram = "TIDEKILN_TEST_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		os.Exit(run(os.Args[1:]))
	}
	os.Exit(m.Run())
}

// program prepares a call in a directory of its own.
func program(dir string, args ...string) *exec.Cmd {
	c := exec.Command(os.Args[0], args...)
	c.Dir = dir
	c.Env = append(os.Environ(), asProgram+"=1")
	return c
}

// call runs the program and returns its exit code and what it printed.
func call(t *testing.T, dir string, args ...string) (code int, stdout, stderr string) {
	t.Helper()
	c := program(dir, args...)
	var out, errs bytes.Buffer
	c.Stdout, c.Stderr = &out, &errs
	err := c.Run()
	var exited *exec.ExitError
	if err != nil && !errors.As(err, &exited) {
		t.Fatal(err)
	}
	return c.ProcessState.ExitCode(), out.String(), errs.String()
}

// listing returns the names in a directory, hidden ones too.
func listing(t *testing.T, dir string) string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return strings.Join(names, " ")
}

func TestEvolveLeavesTablesAndPicture(t *testing.T) {
	dir := t.TempDir()
	code, out, errs := call(t, dir, "evolve", "volcanic-cycle")
	if code != 0 || errs != "" {
		t.Fatalf("exit %d, stderr %q", code, errs)
	}
	for _, want := range []string{"complete, 0 to 1500 Myr", "oscillating", "energy closes to", "volcanic-cycle.png"} {
		if !strings.Contains(out, want) {
			t.Errorf("the summary lacks %q:\n%s", want, out)
		}
	}
	for i, line := range strings.Split(out, "\n") {
		if len(line) > 80 {
			t.Errorf("line %d of the summary is %d wide", i, len(line))
		}
	}
	if got := listing(t, dir); got != "volcanic-cycle volcanic-cycle.png" {
		t.Errorf("left %s", got)
	}
	info, err := record.Inspect(filepath.Join(dir, "volcanic-cycle"))
	if err != nil {
		t.Fatal(err)
	}
	rows := map[string]int64{}
	for _, table := range info.Tables {
		rows[table.Name] = table.Rows
	}
	times := rows["system"] // each Myr, and more where things move
	if times < 1501 || times > 2*1501 {
		t.Errorf("%d times in 1500 Myr", times)
	}
	for name, want := range map[string]int64{"runs": 1, "bodies": 3 * times, "resonances": 2 * times, "outcomes": 3, "attempts": 1, "events": 1} {
		if rows[name] != want {
			t.Errorf("%d rows in %s, want %d", rows[name], name, want)
		}
	}

	code, out, _ = call(t, dir, "evolve", "volcanic-cycle")
	if code != 0 || !strings.Contains(out, "already there") {
		t.Errorf("the same again: exit %d, %q", code, out)
	}
	code, _, errs = call(t, dir, "evolve", "quiet-chain", "-o", "volcanic-cycle")
	if code != 2 || !strings.Contains(errs, "holds another history") || !strings.Contains(errs, "--replace") {
		t.Errorf("another history in its place: exit %d, %q", code, errs)
	}
	code, out, errs = call(t, dir, "evolve", "quiet-chain", "-o", "volcanic-cycle", "--replace", "--quiet", "--figure", "none")
	if code != 0 || out+errs != "" {
		t.Errorf("replacing quietly: exit %d, %q", code, out+errs)
	}
	if s, err := evolve.Describe(filepath.Join(dir, "volcanic-cycle")); err != nil || s.End < 999*evolve.Megayear || s.End > 1001*evolve.Megayear {
		t.Errorf("after replacing: %+v, %v", s, err)
	}
}

func TestRecheck(t *testing.T) {
	dir := t.TempDir()
	code, out, errs := call(t, dir, "evolve", "lone-moon", "--recheck", "--figure", "none")
	if code != 0 || errs != "" {
		t.Fatalf("exit %d, %q", code, errs)
	}
	for _, want := range []string{"recheck", "at tolerance 1e-09: the same outcome", "eccentricity", "event times"} {
		if !strings.Contains(out, want) {
			t.Errorf("the summary lacks %q:\n%s", want, out)
		}
	}
	if code, out, _ := call(t, dir, "evolve", "lone-moon", "--recheck", "--figure", "none"); code != 0 || !strings.Contains(out, "already there") {
		t.Errorf("the same again: exit %d, %q", code, out)
	}
	if code, _, errs := call(t, dir, "evolve", "quiet-chain", "--figure", "none"); code != 0 {
		t.Fatal(errs)
	}
	if code, _, errs := call(t, dir, "evolve", "quiet-chain", "--recheck", "--figure", "none"); code != 2 || !strings.Contains(errs, "--replace") {
		t.Errorf("a recheck of what is there: exit %d, %q", code, errs)
	}
}

func TestContinueAndShow(t *testing.T) {
	dir := t.TempDir()
	if code, _, errs := call(t, dir, "evolve", "volcanic-cycle", "--span", "50 Myr", "-o", "a", "--figure", "none"); code != 0 {
		t.Fatal(errs)
	}
	code, out, errs := call(t, dir, "evolve", "--from", "a", "--span", "100 Myr", "--set", "central.tide.k2_over_Q=2e-5")
	if code != 0 || !strings.Contains(out, "50 to 100 Myr") || !strings.Contains(out, "change: central.tide.k2_over_Q = 2e-5") {
		t.Errorf("exit %d: %s%s", code, out, errs)
	}
	if got := listing(t, dir); got != "a a-continued a-continued.png" {
		t.Errorf("left %s", got)
	}
	code, out, errs = call(t, dir, "evolve", "--from", "a-continued", "--span", "150 Myr", "--set", "orbiter.Cinder.interior.melt_loss.velocity=2e-8 m/s", "-o", "b", "--figure", "none")
	if code != 0 || !strings.Contains(out, "100 to 150 Myr") || !strings.Contains(out, `change: orbiter.Cinder.interior.melt_loss.velocity = "2e-8 m/s"`) {
		t.Errorf("continued twice: exit %d: %s%s", code, out, errs)
	}
	code, _, errs = call(t, dir, "evolve", "--from", "a")
	if code != 2 || !strings.Contains(errs, "--span") {
		t.Errorf("continuing without a longer span: exit %d, %q", code, errs)
	}
	code, _, errs = call(t, dir, "evolve", "--from", "a", "--span", "1 Gyr", "--set", "orbiter.Cinder.mass=1e22 kg")
	if code != 2 || !strings.Contains(errs, "orbiter.Cinder.mass") {
		t.Errorf("continuing with another mass: exit %d, %q", code, errs)
	}

	// The scenario a dataset gives back makes the same run.
	_, text, _ := call(t, dir, "scenarios", "show", "a")
	if err := os.WriteFile(filepath.Join(dir, "again.toml"), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	if code, _, errs := call(t, dir, "evolve", "again.toml", "--figure", "none"); code != 0 {
		t.Fatal(errs)
	}
	first, err := evolve.Describe(filepath.Join(dir, "a"))
	if err != nil {
		t.Fatal(err)
	}
	second, err := evolve.Describe(filepath.Join(dir, "again"))
	if err != nil || first.RunID != second.RunID {
		t.Errorf("run %s gives back the scenario of run %s (%v)", first.RunID, second.RunID, err)
	}
	for _, ext := range []string{"png", "svg", "pdf"} {
		code, out, errs := call(t, dir, "figure", "a", "-o", "x."+ext, "--bodies", "Cinder", "--until", "20 Myr", "--width", "8.5")
		if code != 0 || out != "x."+ext+"\n" {
			t.Errorf("figure: exit %d, %q %q", code, out, errs)
		}
	}
}

// Requests that are wrong: exit code 2, the place and what to try, and nothing
// left behind.
func TestWrongRequests(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) {
		t.Helper()
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	_, good, _ := call(t, dir, "scenarios", "show", "volcanic-cycle")
	write("two.toml", strings.Replace(strings.Replace(good, `radius = "1790 km"`, "radius = 1790", 1), "mass   = ", "mas    = ", 1))
	write("empty.toml", "")
	write("binary.toml", "\x7fELF\x00\x01")
	write("file", "not a directory")
	write("huge.toml", strings.Repeat("# a comment that makes the file huge\n", 3<<20))
	write("taken.png", "somebody's picture")
	write("late.toml", good+"\n[[observed]]\nbody = \"Cinder\"\ncolumn = \"surface_loss\"\nvalue = 1e14\nerror = 1e13\n")
	before := listing(t, dir)
	for _, c := range []struct {
		args string
		want []string
	}{
		{"evolve two.toml", []string{"two.toml:21: orbiter.Cinder.radius: ", `"1790 km"`, "two.toml:14: central.mas", "mass"}},
		{"evolve empty.toml", []string{"empty.toml"}},
		{"evolve binary.toml", []string{"binary.toml"}},
		{"evolve huge.toml", []string{"huge.toml", "larger than"}},
		{"evolve missing.toml", []string{"missing.toml"}},
		{"evolve vulcanic-cycle", []string{"did you mean volcanic-cycle?"}},
		{"evolve", []string{"which scenario"}},
		{"evolve volcanic-cycle quiet-chain", []string{"arg"}},
		{"evolve volcanic-cycle --out file", []string{"file", "choose another"}},
		{"evolve volcanic-cycle --out file/below", []string{"file"}},
		{"evolve volcanic-cycle --out .", []string{"never overwritten", "choose another"}},
		{"evolve volcanic-cycle --out new/deep/out --figure nowhere/x.png", []string{"nowhere", "create it first"}},
		{"evolve late.toml --out new/deep/out", []string{"surface_loss", "surface_loss_W"}},
		{"evolve volcanic-cycle --figure taken.png", []string{"taken.png", "--replace"}},
		{"evolve volcanic-cycle --figure x.jpg", []string{"x.jpg", ".png"}},
		{"evolve volcanic-cycle --set run.span=1500", []string{"--set run.span", "unit"}},
		{"evolve volcanic-cycle --set run.spam=1", []string{"run.spam", "did you mean span?"}},
		{"evolve volcanic-cycle --set nonsense", []string{"PATH=VALUE"}},
		{"evolve volcanic-cycle --unset chain.inner.offset", []string{"chain.inner", "offset"}},
		{"evolve --from nowhere", []string{"nowhere"}},
		{"evolve --nonsense", []string{"--nonsense"}},
		{"nonsense", []string{"nonsense"}},
		{"survey volcanic-cycle --displacement 50", []string{"--displacement 50", "unit"}},
		{"figure nowhere", []string{"nowhere"}},
		{"scenarios check two.toml empty.toml", []string{"two.toml:21", "empty.toml"}},
		{"scenarios keys zzz", []string{"zzz"}},
	} {
		code, out, errs := call(t, dir, strings.Fields(c.args)...)
		if code != 2 {
			t.Errorf("%s: exit %d, want 2 (%s%s)", c.args, code, out, errs)
		}
		for _, want := range c.want {
			if !strings.Contains(errs, want) {
				t.Errorf("%s: the message lacks %q:\n%s", c.args, want, errs)
			}
		}
		if strings.Contains(errs, "goroutine") {
			t.Errorf("%s: panics:\n%s", c.args, errs)
		}
		if now := listing(t, dir); now != before {
			t.Fatalf("%s: leaves %s, there was %s", c.args, now, before)
		}
	}
}

// A place that cannot be written or is full: a clear message and nothing left.
func TestPlacesThatRefuse(t *testing.T) {
	dir := t.TempDir()
	small := filepath.Join(dir, "small")
	if err := os.Mkdir(small, 0o777); err != nil {
		t.Fatal(err)
	}
	if err := exec.Command("mount", "-t", "tmpfs", "-o", "size=64k", "tmpfs", small).Run(); err != nil {
		t.Skip("needs to mount a small file system, which takes root: ", err)
	}
	t.Cleanup(func() {
		if err := exec.Command("umount", "-l", small).Run(); err != nil {
			t.Error("umount: ", err)
		}
	})
	code, _, errs := call(t, dir, "evolve", "volcanic-cycle", "--out", "small/out", "--figure", "none")
	if code != 1 || !strings.Contains(errs, "space") {
		t.Errorf("full disk: exit %d, %q", code, errs)
	}
	if got := listing(t, small); got != "" {
		t.Errorf("full disk: left %s", got)
	}
	if err := exec.Command("mount", "-o", "remount,ro", small).Run(); err != nil {
		t.Fatal("remount: ", err)
	}
	code, _, errs = call(t, dir, "evolve", "volcanic-cycle", "--out", "small/out", "--figure", "none")
	if code != 2 || !strings.Contains(errs, "small") || !strings.Contains(errs, "choose") {
		t.Errorf("read-only disk: exit %d, %q", code, errs)
	}
}

// A run killed at any moment leaves no dataset, or a whole one.
func TestKilledAtAnyMoment(t *testing.T) {
	dir := t.TempDir()
	begun := time.Now()
	if code, _, errs := call(t, dir, "evolve", "volcanic-cycle", "-o", "timed"); code != 0 {
		t.Fatal(errs)
	}
	whole := time.Since(begun)
	rng := rand.New(rand.NewPCG(1, 2))
	var absent, there int
	for i := range 20 {
		out := filepath.Join(dir, fmt.Sprint("run", i))
		c := program(dir, "evolve", "volcanic-cycle", "--out", out)
		if err := c.Start(); err != nil {
			t.Fatal(err)
		}
		time.Sleep(time.Duration(rng.Float64() * float64(whole)))
		_ = c.Process.Kill() // it may have ended already
		_ = c.Wait()
		if _, err := os.Stat(out); errors.Is(err, os.ErrNotExist) {
			absent++
		} else if info, err := record.Inspect(out); err != nil {
			t.Errorf("kill %d: %v", i, err)
		} else if there++; info.Meta == nil {
			t.Errorf("kill %d: a dataset without runs", i)
		}
		// A picture is whole or not there, too.
		if p, err := os.ReadFile(out + ".png"); err == nil && !bytes.HasSuffix(p, []byte("IEND\xaeB`\x82")) {
			t.Errorf("kill %d: a torn picture of %d bytes", i, len(p))
		}
		// The next run cleans up and ends well.
		if i%5 == 0 {
			if code, _, errs := call(t, dir, "evolve", "volcanic-cycle", "--out", out, "--figure", "none"); code != 0 {
				t.Errorf("after kill %d: exit %d, %s", i, code, errs)
			}
		}
	}
	t.Logf("%d absent, %d whole", absent, there)
	if absent == 0 {
		t.Error("no kill came before the end: the test shows nothing")
	}
}

// A history that fails says so each time it is asked for, and one that an event
// ended for good is not continued.
func TestFailuresAndEnds(t *testing.T) {
	dir := t.TempDir()
	for _, want := range []string{"step budget of 50", "where it failed"} {
		code, _, errs := call(t, dir, "evolve", "volcanic-cycle", "--set", "run.max_steps=50", "-o", "short", "--figure", "none")
		if code != 1 || !strings.Contains(errs, want) {
			t.Errorf("exit %d, %q, want %q", code, errs, want)
		}
	}
	args := []string{"evolve", "lone-moon", "--unset", "orbiter.Ember.interior", "--set", "orbiter.Ember.eccentricity=0.6", "--set", "central.tide.k2_over_Q=0.1", "-o", "lost", "--figure", "none"}
	if code, out, errs := call(t, dir, args...); code != 0 || !strings.Contains(out, "eccentricity-limit") {
		t.Fatalf("exit %d: %s%s", code, out, errs)
	}
	code, _, errs := call(t, dir, "evolve", "--from", "lost", "--span", "5 Gyr")
	if code != 2 || !strings.Contains(errs, "nothing to continue") {
		t.Errorf("continuing a lost moon: exit %d, %q", code, errs)
	}
	if code, _, errs := call(t, dir, "evolve", "lone-moon", "--set", `run.stop=[{ event = "solidus-crossed" }]`, "-o", "stopped", "--figure", "none"); code != 0 {
		t.Fatal(errs)
	}
	code, out, errs := call(t, dir, "evolve", "--from", "stopped", "--figure", "none")
	if code != 0 || !strings.Contains(out, "complete") || strings.Contains(out, "solidus") {
		t.Errorf("continuing from a stop that was asked for: exit %d: %s%s", code, out, errs)
	}
}

// Signals end a history that keeps what it has and can go on.
func TestSignals(t *testing.T) {
	for signal, want := range map[os.Signal]int{os.Interrupt: 130, syscall.SIGTERM: 75, syscall.SIGUSR1: 75} {
		dir := t.TempDir()
		c := program(dir, "evolve", "volcanic-cycle", "--span", "10000 Gyr", "--set", "run.tolerance=1e-11",
			"--set", "run.record=10 Myr", "--set", "central.tide.k2_over_Q=1e-9", "--set", "run.max_steps=1000000000", "--out", "out", "--figure", "none")
		var errs bytes.Buffer
		c.Stderr = &errs
		if err := c.Start(); err != nil {
			t.Fatal(err)
		}
		for range 100 {
			if strings.Contains(listing(t, dir), "partial") {
				break
			}
			time.Sleep(10 * time.Millisecond)
		}
		time.Sleep(200 * time.Millisecond)
		if err := c.Process.Signal(signal); err != nil {
			t.Fatal(err)
		}
		_ = c.Wait() // the exit code is judged below
		if code := c.ProcessState.ExitCode(); code != want || !strings.Contains(errs.String(), "--from out") {
			t.Errorf("%v: exit %d, want %d: %s", signal, code, want, errs.String())
			continue
		}
		s, err := evolve.Describe(filepath.Join(dir, "out"))
		if err != nil || s.Status != evolve.StatusInterrupted || !(s.End > 0) {
			t.Fatalf("%v: %+v, %v", signal, s, err)
		}
		code, _, text := call(t, dir, "evolve", "--from", "out", "--span", fmt.Sprintf("%g Myr", s.End/evolve.Megayear+100))
		if code != 0 {
			t.Errorf("%v: going on: exit %d, %s", signal, code, text)
		}
	}
}

func TestSurveyAndReference(t *testing.T) {
	dir := t.TempDir()
	code, out, errs := call(t, dir, "survey", "volcanic-cycle", "--displacement", "50 m")
	if code != 0 || errs != "" {
		t.Fatalf("exit %d, %s", code, errs)
	}
	for _, want := range []string{"Cinder", "0.004963", "stretch-work bound / W", "1.206", "steady state of the resonance 5.02e+13 W", "angle centred on 180 deg"} {
		if !strings.Contains(out, want) {
			t.Errorf("survey lacks %q:\n%s", want, out)
		}
	}
	for _, line := range strings.Split(out, "\n") {
		if len(line) > 80 {
			t.Errorf("a line of %d columns: %s", len(line), line)
		}
	}
	for args, want := range map[string]string{
		"version":                               "physics 1",
		"--version":                             "tidekiln ",
		"scenarios list":                        "red-dwarf-planets",
		"scenarios check lone-moon":             "valid",
		"scenarios keys":                        "orbiter.NAME.interior.rheology.alpha",
		"scenarios show quiet-chain":            "# The moons",
		"scenarios show quiet-chain --resolved": "max_steps",
		"help evolve":                           "--from",
	} {
		code, out, errs := call(t, dir, strings.Fields(args)...)
		if code != 0 || !strings.Contains(out, want) {
			t.Errorf("%s: exit %d, lacks %q: %s%s", args, code, want, out, errs)
		}
	}
	if got := listing(t, dir); got != "" {
		t.Errorf("left %s", got)
	}
}
