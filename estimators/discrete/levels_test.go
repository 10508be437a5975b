package discrete

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"pgregory.net/rapid"
)

func TestLevels(t *testing.T) {
	x := []float64{5, 1, 4, 2, 3, 6, 8, 7}
	dst := make([]uint8, 8)
	used, edges := Levels(dst, x, 4)
	assert.Equal(t, 4, used)
	assert.Equal(t, []float64{3, 5, 7}, edges)
	assert.Equal(t, []uint8{2, 0, 1, 0, 1, 2, 3, 3}, dst)
	assert.Equal(t, []float64{5, 1, 4, 2, 3, 6, 8, 7}, x)
	used, edges = Levels(dst, x, 1)
	assert.Equal(t, 1, used)
	assert.Empty(t, edges)
	assert.Equal(t, make([]uint8, 8), dst)
	used, _ = Levels(dst, x, 256)
	assert.Equal(t, 8, used)
}

// Few distinct values: never parted, and what one takes beyond its share is not
// lost to the others.
func TestLevelsOfCounts(t *testing.T) {
	sizes := func(levels int, groups ...int) []int {
		var x []float64
		for value, n := range groups {
			for range n {
				x = append(x, float64(value))
			}
		}
		dst := make([]uint8, len(x))
		used, _ := Levels(dst, x, levels)
		out := make([]int, used)
		for _, l := range dst {
			out[l]++
		}
		return out
	}
	assert.Equal(t, []int{100}, sizes(4, 100))
	assert.Equal(t, []int{60, 30, 10}, sizes(4, 60, 30, 10))
	assert.Equal(t, []int{4, 1}, sizes(4, 4, 1))
	assert.Equal(t, []int{50, 50}, sizes(2, 20, 30, 30, 20))
	assert.Equal(t, []int{40, 60}, sizes(2, 40, 20, 40), "at a draw, the earlier place")
	assert.Equal(t, []int{33, 33, 34}, sizes(3, slices.Repeat([]int{1}, 100)...))
}

func TestLevelsAtTheEdges(t *testing.T) {
	used, edges := Levels(nil, nil, 4)
	assert.Zero(t, used)
	assert.Empty(t, edges)
	dst := make([]uint8, 6)
	_, edges = Levels(dst, []float64{math.Inf(1), -math.MaxFloat64, math.Inf(-1), 0, math.MaxFloat64, 5e-324}, 6)
	assert.Equal(t, []float64{-math.MaxFloat64, 0, 5e-324, math.MaxFloat64, math.Inf(1)}, edges)
	assert.Equal(t, []uint8{5, 1, 0, 2, 4, 3}, dst)
	assert.Panics(t, func() { Levels(dst, make([]float64, 5), 4) })
	assert.Panics(t, func() { Levels(dst, make([]float64, 6), 0) })
	assert.Panics(t, func() { Levels(dst, make([]float64, 6), 257) })
	assert.Panics(t, func() { Levels(dst[:2], []float64{1, math.NaN()}, 2) })
	assert.Panics(t, func() { Levels(dst[:2], []float64{math.NaN(), 1}, 2) })
}

// plainLevels sorts everything and goes from value to value.
func plainLevels(x []float64, levels int) (dst []uint8, edges []float64) {
	sorted := slices.Clone(x)
	slices.Sort(sorted)
	remaining, have, left := len(x), 0, levels
	for i := 0; i < len(sorted); {
		n := 0
		for _, v := range sorted[i:] {
			if v == sorted[i] {
				n++
			}
		}
		share := float64(remaining) / float64(left)
		if have > 0 && left > 1 && float64(have)+float64(n)/2 >= share-1e-9 {
			edges = append(edges, sorted[i])
			remaining, have, left = remaining-have, 0, left-1
		}
		have += n
		i += n
	}
	for _, v := range x {
		level := 0
		for _, e := range edges {
			if e <= v {
				level++
			}
		}
		dst = append(dst, uint8(level))
	}
	return dst, edges
}

func agree(t assert.TestingT, x []float64, levels int, what string) {
	dst := slices.Repeat([]uint8{255}, len(x))
	used, edges := Levels(dst, x, levels)
	want, wantEdges := plainLevels(x, levels)
	assert.Equal(t, wantEdges, edges, what)
	assert.Equal(t, want, dst, what)
	assert.Equal(t, len(edges)+1, used, what)
}

func TestLevelsAgainstSorting(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.SliceOfN(rapid.Float64Range(-3, 3), 1, 60).Draw(t, "x")
		if rapid.Bool().Draw(t, "ties") {
			for i := range x {
				x[i] = math.Round(x[i])
			}
		}
		agree(t, x, rapid.IntRange(1, 12).Draw(t, "levels"), "")
	})
}

// Long enough for the grid: smooth, tied, heavy-tailed, and beyond floating point.
func TestLevelsOnAGrid(t *testing.T) {
	const n = 2500
	rng := rand.New(rand.NewPCG(3, 3))
	fill := func(f func() float64) []float64 {
		x := make([]float64, n)
		for i := range x {
			x[i] = f()
		}
		return x
	}
	samples := map[string][]float64{
		"normal":       fill(rng.NormFloat64),
		"counts":       fill(func() float64 { return math.Floor(rng.ExpFloat64() * 3) }),
		"half-tied":    fill(func() float64 { return max(0, rng.NormFloat64()) }),
		"heavy-tailed": fill(func() float64 { return math.Exp(8 * rng.NormFloat64()) }),
		"two values":   fill(func() float64 { return float64(rng.IntN(2)) }),
		"constant":     fill(func() float64 { return 3 }),
		"huge":         fill(func() float64 { return rng.NormFloat64() * 1e308 / 4 }),
		"tiny":         fill(func() float64 { return 5e-324 * float64(rng.IntN(5)) }),
		"far from 0":   fill(func() float64 { return 1e15 + float64(rng.IntN(300)) }),
	}
	samples["endless"] = slices.Clone(samples["normal"])
	samples["endless"][7], samples["endless"][8] = math.Inf(1), math.Inf(-1)
	for name, x := range samples {
		for _, levels := range []int{2, 8, 17, 256} {
			agree(t, x, levels, name)
		}
	}
	backwards := slices.Clone(samples["counts"])
	slices.Reverse(backwards)
	dst := make([]uint8, n)
	_, edges := Levels(dst, backwards, 8)
	_, want := plainLevels(samples["counts"], 8)
	assert.Equal(t, want, edges, "the order of values does not matter")
	bad := samples["normal"]
	bad[n/2] = math.NaN()
	assert.Panics(t, func() { Levels(dst, bad, 8) })
}
