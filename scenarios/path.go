package scenarios

import (
	"strconv"
	"strings"
)

// path is a TOML path from the top of a scenario. An element of a list is its
// number from 1 in brackets: change[2].at.
type path []string

func (p path) with(name string) path { return append(p[:len(p):len(p)], name) }

func (p path) item(i int) path { return p.with("[" + strconv.Itoa(i+1) + "]") }

func (p path) String() string {
	var b strings.Builder
	for i, part := range p {
		switch {
		case strings.HasPrefix(part, "[") && i > 0:
			b.WriteString(part)
			continue
		case i > 0:
			b.WriteByte('.')
		}
		if isBare(part) {
			b.WriteString(part)
		} else {
			b.WriteString(quote(part))
		}
	}
	return b.String()
}

// isBare reports whether a key needs no quotes in TOML.
func isBare(s string) bool {
	for i := range len(s) {
		c := s[i]
		if !(c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= '0' && c <= '9' || c == '-' || c == '_') {
			return false
		}
	}
	return s != ""
}
