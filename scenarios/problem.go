package scenarios

import (
	"fmt"
	"sort"
	"strings"
)

// Problem is one thing wrong with a scenario.
type Problem struct {
	File string // or the option that gave the value, "--set run.span"
	Line int    // from 1; 0 where no line holds the problem
	Key  string // path from the top of the file, "" for the file as a whole
	What string // what is wrong
	Hint string // what to try, "" if What says it
}

// String reads "cinder.toml:14: orbiter.Cinder.radius: needs a unit", the hint
// on a line of its own.
func (p Problem) String() string {
	var b strings.Builder
	b.WriteString(p.File)
	if p.Line > 0 {
		fmt.Fprintf(&b, ":%d", p.Line)
	}
	b.WriteString(": ")
	if p.Key != "" && !strings.HasSuffix(p.File, " "+p.Key) {
		b.WriteString(p.Key + ": ")
	}
	b.WriteString(p.What)
	if p.Hint != "" {
		b.WriteString("\n  hint: " + p.Hint)
	}
	return b.String()
}

// Errors are all the problems of a scenario: those of the file as a whole,
// then by line, then those of edits.
type Errors []Problem

func (e Errors) Error() string {
	lines := make([]string, len(e))
	for i, p := range e {
		lines[i] = p.String()
	}
	return strings.Join(lines, "\n")
}

// sorted orders the problems and drops repetitions.
func (e Errors) sorted() Errors {
	edit := func(p Problem) bool { return strings.HasPrefix(p.File, "--") }
	sort.SliceStable(e, func(i, j int) bool {
		if a, b := edit(e[i]), edit(e[j]); a != b {
			return b
		}
		return e[i].Line < e[j].Line
	})
	seen := map[Problem]bool{}
	kept := e[:0]
	for _, p := range e {
		if !seen[p] {
			seen[p] = true
			kept = append(kept, p)
		}
	}
	return kept
}
