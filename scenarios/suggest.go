package scenarios

import (
	"sort"
	"strings"
)

// nearest returns the known name that a mistyped one most likely meant, or "":
// the least number of insertions, deletions and substitutions, at most a third
// of its length, case apart; the first in the alphabet of equals.
func nearest(name string, known []string) string {
	if len(name) > 64 {
		return ""
	}
	sorted := append([]string(nil), known...)
	sort.Strings(sorted)
	best, least := "", max(1, len(name)/3)+1
	for _, k := range sorted {
		if len(k) > 64 {
			continue
		}
		d := editDistance(strings.ToLower(name), strings.ToLower(k))
		if d < least && d < len(k) {
			best, least = k, d
		}
	}
	return best
}

// editDistance is the Levenshtein distance (Levenshtein 1966, Sov. Phys.
// Dokl. 10, 707), in bytes.
func editDistance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := 1
			if a[i] == b[j] {
				cost = 0
			}
			diagonal, row[j+1] = row[j+1], min(row[j+1]+1, row[j]+1, diagonal+cost)
		}
	}
	return row[len(b)]
}
