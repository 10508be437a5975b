package discrete

import (
	"fmt"
	"slices"
)

// Levels quantises x to at most levels equiprobable levels, by rank. Equal values
// share a level, so that few distinct values give fewer levels than asked for.
// dst has one entry a value; used is the number of levels and edges are the
// smallest values of levels 1 … used−1. It panics unless 1 ≤ levels ≤ 256 and
// dst is as long as x. x must not hold NaN.
func Levels(dst []uint8, x []float64, levels int) (used int, edges []float64) {
	if levels < 1 || levels > 256 || len(dst) != len(x) {
		panic(fmt.Sprintf("discrete: %d levels of %d values into %d", levels, len(x), len(dst)))
	}
	if len(x) == 0 {
		return 0, nil
	}
	sorted := slices.Clone(x)
	slices.Sort(sorted)
	for l := 1; l < levels; l++ {
		v := sorted[l*len(sorted)/levels]
		last := sorted[0]
		if len(edges) > 0 {
			last = edges[len(edges)-1]
		}
		if v > last {
			edges = append(edges, v)
		}
	}
	for i, v := range x {
		level := uint8(0)
		for _, e := range edges {
			if v < e {
				break
			}
			level++
		}
		dst[i] = level
	}
	return len(edges) + 1, edges
}
