package scenarios

import (
	"cmp"
	"math"
	"slices"
	"strconv"
	"strings"
)

// unitOrder is the place of a unit in the canonical order. The rule looks at
// names alone, so that every container and order of rows gives the same one.
type unitOrder struct {
	silent bool
	value  float64 // of the name, where all names are numbers
	name   string
	trial  int64 // of a pseudo-cell
}

func compareUnits(a, b unitOrder) int {
	if a.silent != b.silent {
		if a.silent {
			return 1
		}
		return -1
	}
	return cmp.Or(cmp.Compare(a.value, b.value), strings.Compare(a.name, b.name), cmp.Compare(a.trial, b.trial))
}

// unitPlaces splits names NAME#TRIAL of pseudo-cells, if all of them are so
// built, and reads names as numbers, if all of them are.
func unitPlaces(names []string) []unitOrder {
	places := make([]unitOrder, len(names))
	folded := len(names) > 0
	for i, name := range names {
		at := strings.LastIndexByte(name, '#')
		if at < 0 {
			folded = false
			break
		}
		trial, err := strconv.ParseInt(name[at+1:], 10, 64)
		if err != nil {
			folded = false
			break
		}
		places[i] = unitOrder{name: name[:at], trial: trial}
	}
	if !folded {
		for i, name := range names {
			places[i] = unitOrder{name: name}
		}
	}
	values := make([]float64, len(names))
	for i, p := range places {
		v, err := strconv.ParseFloat(p.name, 64)
		if err != nil || math.IsNaN(v) || math.IsInf(v, 0) {
			return places
		}
		values[i] = v
	}
	for i := range places {
		places[i].value = values[i]
	}
	return places
}

// Nearest returns the candidate that takes the fewest insertions, deletions and
// substitutions of bytes to reach from name (Levenshtein 1966), or "" where even
// that one would change more than half of the name. Case does not count.
func Nearest(name string, candidates []string) string {
	best, least := "", len(name)/2+1
	for _, c := range candidates {
		if d := editDistance(strings.ToLower(name), strings.ToLower(c)); d < least {
			best, least = c, d
		}
	}
	return best
}

func editDistance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			d := diagonal
			if a[i] != b[j] {
				d++
			}
			diagonal = row[j+1]
			row[j+1] = min(d, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}

// sortedNumbers returns the distinct values of a set, rising.
func sortedNumbers(set map[int64]bool) []int64 {
	out := make([]int64, 0, len(set))
	for n := range set {
		out = append(out, n)
	}
	slices.Sort(out)
	return out
}
