package record

import (
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// killTimes is the size of the datasets of the victims, large enough that
// writing takes longer than starting a process.
const killTimes = 8000

// TestMain lets the test binary play the victim: with RECORD_VICTIM set it
// writes a dataset there, and with RECORD_RUNS further ones over it.
func TestMain(m *testing.M) {
	dir := os.Getenv("RECORD_VICTIM")
	if dir == "" {
		os.Exit(m.Run())
	}
	runs, err := strconv.Atoi(os.Getenv("RECORD_RUNS"))
	for run := 1; err == nil && run <= runs; run++ {
		fmt.Println(run) // tells the killer that the work begins
		err = writeSample(dir, run, killTimes, CreateOptions{Replace: run > 1})
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

// victim starts a process that writes runs datasets at dir, and returns when
// its work begins.
func victim(t *testing.T, dir string, runs int) *exec.Cmd {
	t.Helper()
	self, err := os.Executable()
	must(t, err)
	cmd := exec.Command(self)
	cmd.Env = append(os.Environ(), "RECORD_VICTIM="+dir, "RECORD_RUNS="+strconv.Itoa(runs))
	cmd.Stderr = os.Stderr
	out, err := cmd.StdoutPipe()
	must(t, err)
	must(t, cmd.Start())
	if _, err := out.Read(make([]byte, 1)); err != nil {
		t.Fatalf("the victim did not start: %v, %v", err, cmd.Wait())
	}
	return cmd
}

// TestKill kills writers at random moments of their work: the dataset must be
// whole or absent, and the next writer must clear away what was left.
func TestKill(t *testing.T) {
	parent := t.TempDir()
	undisturbed := victim(t, filepath.Join(parent, "whole"), 1)
	started := time.Now()
	must(t, undisturbed.Wait())
	// Bounded, so that one slow sync does not stretch all tries.
	length := min(time.Since(started), 200*time.Millisecond)
	random := rand.New(rand.NewPCG(1, 1))
	whole := 0
	for i := range 20 {
		dir := filepath.Join(parent, fmt.Sprint("out", i))
		cmd := victim(t, dir, 1)
		// A little beyond the end, so that some live to see it.
		time.Sleep(time.Duration(random.Float64() * 1.3 * float64(length)))
		cmd.Process.Kill() // fails if it is done already
		cmd.Wait()
		switch _, err := checkSample(dir, killTimes); {
		case err == nil:
			whole++
		case !errors.Is(err, ErrNotExist):
			t.Errorf("try %d, killed within %v: %v", i, length, err)
		}
		w, err := Create(dir, sampleTables(), CreateOptions{Replace: true})
		must(t, err)
		must(t, w.Abort())
		for _, name := range beside(t, parent) {
			if strings.HasPrefix(name, ".") {
				t.Errorf("try %d left %s", i, name)
			}
		}
	}
	t.Logf("%d of 20 were whole, the others absent; kills spread over 1.3 times %v", whole, length)
	if whole == 20 {
		t.Error("no writer was killed in time")
	}
}

// TestKillReplacing kills processes that replace a dataset over and over: one
// whole dataset must always be there or come back with the next writer.
func TestKillReplacing(t *testing.T) {
	parent := t.TempDir()
	dir := filepath.Join(parent, "out")
	must(t, writeSample(dir, 0, killTimes, CreateOptions{}))
	random := rand.New(rand.NewPCG(2, 2))
	for range 8 {
		// Victims start without Replace, so they need a free name.
		must(t, os.RemoveAll(dir))
		cmd := victim(t, dir, 1000)
		for {
			if _, err := os.Stat(dir); err == nil {
				break
			}
			time.Sleep(time.Millisecond)
		}
		time.Sleep(time.Duration(random.Float64() * float64(100*time.Millisecond)))
		must(t, cmd.Process.Kill())
		cmd.Wait()
		w, err := Create(dir, sampleTables(), CreateOptions{Replace: true})
		must(t, err)
		must(t, w.Abort())
		if _, err := checkSample(dir, killTimes); err != nil {
			t.Error(err)
		}
		if names := beside(t, parent); len(names) != 1 {
			t.Errorf("left %v", names)
		}
	}
}

// TestInterruptedReplacement sets up by hand the moment between the two renames
// of a replacement, which random kills seldom meet.
func TestInterruptedReplacement(t *testing.T) {
	parent := t.TempDir()
	dir := filepath.Join(parent, "out")
	dead := victim(t, filepath.Join(parent, "other"), 1)
	must(t, dead.Wait())
	must(t, os.RemoveAll(filepath.Join(parent, "other")))
	hidden := func(role string, pid int) string {
		return filepath.Join(parent, fmt.Sprintf(".out.%s-%s-%d-00112233", role, hostname(), pid))
	}
	pid := dead.Process.Pid
	must(t, writeSample(dir, 1, 10, CreateOptions{}))
	must(t, os.Rename(dir, hidden(replaced, pid)))
	must(t, os.Mkdir(hidden(partial, pid), 0o755))
	for _, look := range []func() error{
		func() error { _, err := Open(dir); return err },
		func() error { _, err := Inspect(dir); return err },
	} {
		if err := look(); !errors.Is(err, ErrNotExist) || !strings.Contains(err.Error(), "mv "+hidden(replaced, pid)+" "+dir) {
			t.Errorf("does not say where the old dataset is: %v", err)
		}
	}
	if _, err := Create(dir, sampleTables(), CreateOptions{}); !errors.Is(err, ErrExists) {
		t.Errorf("the old dataset did not come back: %v", err)
	}
	if run, err := checkSample(dir, 10); run != 1 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}

	// One moment later the new dataset is there and the old one only waits to go.
	must(t, os.Rename(dir, hidden(replaced, pid)))
	must(t, writeSample(filepath.Join(parent, "new"), 2, 10, CreateOptions{}))
	must(t, os.Rename(filepath.Join(parent, "new"), dir))
	// What is not surely dead stays: a living process, another host, other names.
	kept := []string{
		hidden(partial, os.Getpid()),
		filepath.Join(parent, ".out.partial-"+hostname()+"x-"+strconv.Itoa(pid)+"-00112233"),
		filepath.Join(parent, ".out.partial-mine"),
		filepath.Join(parent, ".outer.partial-"+hostname()+"-"+strconv.Itoa(pid)+"-00112233"),
	}
	for _, path := range kept {
		must(t, os.Mkdir(path, 0o755))
	}
	if _, err := Create(dir, sampleTables(), CreateOptions{}); !errors.Is(err, ErrExists) {
		t.Error(err)
	}
	if run, err := checkSample(dir, 10); run != 2 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}
	if names := beside(t, parent); len(names) != 1+len(kept) {
		t.Errorf("%v, want out and %v", names, kept)
	}

	// Something else at the place proves nothing: the only copy stays.
	must(t, os.Rename(dir, hidden(replaced, pid)))
	must(t, os.Mkdir(dir, 0o755))
	w, err := Create(dir, sampleTables(), CreateOptions{})
	must(t, err)
	must(t, w.Abort())
	if run, err := checkSample(hidden(replaced, pid), 10); run != 2 || err != nil {
		t.Errorf("the only copy: run %d, %v", run, err)
	}
}
