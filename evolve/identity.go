package evolve

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"runtime"
	"runtime/debug"
	"strings"
)

// Physics numbers the equations and methods behind a result. It is raised
// whenever the rows of an unchanged scenario move, and is part of every run's
// identity.
const Physics = 1

// release is the version in CHANGELOG.md.
const release = "0.1.0"

// Version names the build: the release, with the revision of the source for a
// build from a working tree.
func Version() string {
	revision, modified := source()
	if revision == "" {
		return release
	}
	v := release + "+" + revision[:min(12, len(revision))]
	if modified {
		v += ".modified"
	}
	return v
}

// Platform is the operating system and processor. Elementary functions differ
// in their last bit between platforms, so rows are equal to the bit on one only.
func Platform() string { return runtime.GOOS + "/" + runtime.GOARCH }

// source returns the revision the binary was built from and whether the tree
// was modified; "" if the build does not know.
func source() (revision string, modified bool) {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "", false
	}
	for _, s := range info.Settings {
		switch s.Key {
		case "vcs.revision":
			revision = s.Value
		case "vcs.modified":
			modified = s.Value == "true"
		}
	}
	return revision, modified
}

// RunID is the identity of the history of a scenario: a fingerprint of the
// scenario's own, the physics number and the platform, and of the parent's for
// a history that continues another.
func RunID(scenarioID, parentRunID string) string {
	parts := []string{scenarioID, fmt.Sprint(Physics), Platform(), parentRunID}
	sum := sha256.Sum256([]byte(strings.Join(parts, "\n")))
	return hex.EncodeToString(sum[:8])
}
