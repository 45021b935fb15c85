package record

import (
	"crypto/rand"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
)

// Roles of the hidden directories beside a dataset.
const (
	partial  = "partial"  // being built or removed
	replaced = "replaced" // the old dataset while a new one takes its place
)

// sibling is a hidden directory beside a dataset and whose it is.
type sibling struct {
	path string
	role string
	host string
	pid  int
}

// siblingPath makes a new hidden name ".<base>.<role>-<host>-<pid>-<random>".
func siblingPath(dir, role string) string {
	var random [4]byte
	rand.Read(random[:]) // never fails (crypto/rand)
	return filepath.Join(filepath.Dir(dir), fmt.Sprintf(".%s.%s-%s-%d-%s",
		filepath.Base(dir), role, hostname(), os.Getpid(), hex.EncodeToString(random[:])))
}

func hostname() string {
	host, err := os.Hostname()
	if err != nil || host == "" {
		return "unknown"
	}
	return strings.ReplaceAll(host, string(filepath.Separator), "_")
}

// siblings lists the hidden directories that belong to dir.
func siblings(dir string) ([]sibling, error) {
	entries, err := os.ReadDir(filepath.Dir(dir))
	if err != nil {
		return nil, err
	}
	var found []sibling
	for _, e := range entries {
		rest, ok := strings.CutPrefix(e.Name(), "."+filepath.Base(dir)+".")
		if !ok || !e.IsDir() {
			continue
		}
		role, rest, _ := strings.Cut(rest, "-")
		// A host name may hold "-", so the two last parts are taken from the end.
		parts := strings.Split(rest, "-")
		if role != partial && role != replaced || len(parts) < 3 {
			continue
		}
		pid, err := strconv.Atoi(parts[len(parts)-2])
		if err != nil {
			continue
		}
		found = append(found, sibling{
			path: filepath.Join(filepath.Dir(dir), e.Name()),
			role: role,
			host: strings.Join(parts[:len(parts)-2], "-"),
			pid:  pid,
		})
	}
	return found, nil
}

// orphaned reports whether the owner certainly is gone. Of another host nothing
// is known; a process number in use again counts as alive.
func (s sibling) orphaned() bool {
	if s.host != hostname() || s.host == "unknown" {
		return false
	}
	p, err := os.FindProcess(s.pid)
	if err != nil {
		return true
	}
	err = p.Signal(syscall.Signal(0))
	return errors.Is(err, os.ErrProcessDone) || errors.Is(err, syscall.ESRCH)
}

// tidy ends what dead writers of dir left: an old dataset goes back if nothing
// took its place, all else is removed. Only a dataset at dir proves that a
// replacement went through, so an old one is never removed without it.
func tidy(dir string) error {
	left, err := siblings(dir)
	if err != nil {
		return err
	}
	for _, s := range left {
		if !s.orphaned() {
			continue
		}
		remove := func() error { return os.RemoveAll(s.path) }
		if s.role == replaced {
			remove = func() error { return discard(s.path, dir) }
			found, err := inventory(dir)
			switch {
			case errors.Is(err, os.ErrNotExist):
				if err := os.Rename(s.path, dir); err != nil {
					return writeError("moving back the dataset of an interrupted replacement", err)
				}
				continue
			case err != nil || !found.dataset():
				continue
			}
		}
		if err := remove(); err != nil {
			return writeError("removing what a dead process left", err)
		}
	}
	return nil
}
