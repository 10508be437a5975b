package discrete

import (
	"fmt"
	"math"
	"slices"
)

// Levels quantises x to at most levels equally filled levels, written to dst as
// 0 … used−1, with the used−1 edges between them: the level of a value is the
// number of edges not above it.
//
// Values are taken in rank order, and a level is closed where its size comes
// nearest to an equal share of what remains (at a draw, the earlier place). Equal
// values never part, so that few distinct values, such as small counts, give
// fewer and uneven levels; an empty x gives none. The result depends on the
// values alone, not on their order.
//
// It panics if dst and x differ in length, on a NaN, or unless 1 ≤ levels ≤ 256.
func Levels(dst []uint8, x []float64, levels int) (used int, edges []float64) {
	if len(dst) != len(x) {
		panic(fmt.Sprintf("discrete: dst has %d levels for %d values", len(dst), len(x)))
	}
	if levels < 1 || levels > 256 {
		panic(fmt.Sprintf("discrete: %d levels; between 1 and 256 are possible", levels))
	}
	if len(x) == 0 {
		return 0, nil
	}
	d := divider{remaining: len(x), left: levels}
	if g, ok := newGrid(x); ok {
		g.divide(x, &d)
		g.assign(dst, x, d.edges)
	} else {
		sorted := slices.Clone(x)
		slices.Sort(sorted)
		d.takeSorted(sorted)
		for i, v := range x {
			level, _ := slices.BinarySearchFunc(d.edges, v, func(edge, v float64) int {
				if edge <= v {
					return -1
				}
				return 1
			})
			dst[i] = uint8(level)
		}
	}
	return len(d.edges) + 1, d.edges
}

// divider closes levels one after another as values arrive in rank order.
type divider struct {
	remaining, have int // samples not in a closed level; of these, in the open one
	left            int // levels not closed
	edges           []float64
}

// closes tells whether the open level ends before a group of n equal values:
// have + n/2 is at or beyond an equal share, in whole numbers.
func (d *divider) closes(n int) bool {
	return d.have > 0 && d.left > 1 && (2*d.have+n)*d.left >= 2*d.remaining
}

func (d *divider) take(value float64, n int) {
	if d.closes(n) {
		d.edges = append(d.edges, value)
		d.remaining -= d.have
		d.left--
		d.have = 0
	}
	d.have += n
}

// takeSorted takes values in ascending order, equal ones together.
func (d *divider) takeSorted(x []float64) {
	for i := 0; i < len(x); {
		j := i + 1
		for j < len(x) && x[j] == x[i] {
			j++
		}
		d.take(x[i], j-i)
		i = j
	}
}

// intervals is the number of equal parts of the range that values are first
// distributed over.
const intervals = 2048

// grid knows the interval of every value. Subtraction, product and truncation are
// monotone, rounding included, so intervals are in rank order and equal values
// share one: only an interval in which a level might close needs sorting.
type grid struct {
	low, scale float64
	in         []uint16 // by value
	end        [intervals + 1]int
}

// newGrid is not ok where a plain sort is as good: few values, or a range that
// is empty, infinite or beyond floating point. It panics on a NaN.
func newGrid(x []float64) (g *grid, ok bool) {
	low, high, sum := x[0], x[0], 0.0
	for _, v := range x {
		low, high = min(low, v), max(high, v)
		sum += v
	}
	// Infinities of both signs add up to NaN as well.
	if math.IsNaN(sum) && slices.ContainsFunc(x, math.IsNaN) {
		panic("discrete: a NaN has no level")
	}
	scale := intervals / (high - low)
	if len(x) < intervals || !(scale > 0) || math.IsInf(scale, 1) {
		return nil, false
	}
	g = &grid{low: low, scale: scale, in: make([]uint16, len(x))}
	for i, v := range x {
		b := g.interval(v)
		g.in[i] = uint16(b)
		g.end[b+1]++
	}
	for b := range intervals {
		g.end[b+1] += g.end[b]
	}
	return g, true
}

func (g *grid) interval(v float64) int { return min(int((v-g.low)*g.scale), intervals-1) }

// divide hands the values to d, those of an interval all at once where no level
// can close within it.
func (g *grid) divide(x []float64, d *divider) {
	ordered := make([]float64, len(x))
	next := g.end // start of each interval, moved on as it fills
	for i, v := range x {
		ordered[next[g.in[i]]] = v
		next[g.in[i]]++
	}
	for b := range intervals {
		part := ordered[g.end[b]:g.end[b+1]]
		if len(part) == 0 {
			continue
		}
		// The latest that a group of n within part can come is after all others,
		// at have + part − n: closes then compares at most 2(have+part)−1.
		if (2*(d.have+len(part))-1)*d.left < 2*d.remaining {
			d.have += len(part)
			continue
		}
		slices.Sort(part)
		d.takeSorted(part)
	}
}

// assign counts the edges not above each value: those of lower intervals without
// looking at the value.
func (g *grid) assign(dst []uint8, x, edges []float64) {
	var below [intervals + 1]uint8 // edges in lower intervals
	k := 0
	for b := range intervals {
		for k < len(edges) && g.interval(edges[k]) <= b {
			k++
		}
		below[b+1] = uint8(k)
	}
	for i, v := range x {
		level, most := below[g.in[i]], below[g.in[i]+1]
		for level < most && v >= edges[level] {
			level++
		}
		dst[i] = level
	}
}
