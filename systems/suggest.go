package systems

import (
	"sort"
	"strings"
)

// nearest returns the candidates that a mistyped name may have meant, best first:
// those that differ by few letters, or that contain it.
func nearest(name string, candidates []string) []string {
	if len(name) > 64 {
		return nil // no slip of the pen
	}
	type scored struct {
		name string
		d    int
	}
	var found []scored
	low := strings.ToLower(name)
	for _, c := range candidates {
		lc := strings.ToLower(c)
		d := editDistance(low, lc)
		near := d <= 1+len(name)/5
		if !near && len(low) >= 2 && (strings.Contains(lc, low) || strings.Contains(low, lc)) {
			near, d = true, 2
		}
		if near {
			found = append(found, scored{c, d})
		}
	}
	sort.Slice(found, func(i, j int) bool {
		if found[i].d != found[j].d {
			return found[i].d < found[j].d
		}
		return found[i].name < found[j].name
	})
	var out []string
	for _, f := range found {
		out = append(out, f.name)
	}
	return out[:min(len(out), 3)]
}

// editDistance is the number of letters to insert, delete or replace
// (Levenshtein 1966).
func editDistance(a, b string) int {
	ra, rb := []rune(a), []rune(b)
	row := make([]int, len(rb)+1)
	for j := range row {
		row[j] = j
	}
	for i, x := range ra {
		diagonal := row[0]
		row[0] = i + 1
		for j, y := range rb {
			cost := diagonal
			if x != y {
				cost = 1 + min(diagonal, row[j], row[j+1])
			}
			diagonal, row[j+1] = row[j+1], cost
		}
	}
	return row[len(rb)]
}
