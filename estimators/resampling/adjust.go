package resampling

import (
	"math"
	"slices"
)

// Holm adjusts p-values for the family-wise error rate: p₍ᵢ₎(m−i+1), made
// monotone (Holm 1979, Scand. J. Stat. 6:65–70). The input is not changed; the
// result is in its order. It panics on a NaN.
func Holm(p []float64) []float64 {
	out := make([]float64, len(p))
	running := 0.0
	for rank, i := range order(p) {
		running = math.Max(running, math.Min(1, p[i]*float64(len(p)-rank)))
		out[i] = running
	}
	return out
}

// BenjaminiHochberg adjusts p-values for the false discovery rate: p₍ᵢ₎m/i, made
// monotone from the top (Benjamini and Hochberg 1995, J. R. Stat. Soc. B
// 57:289–300). The input is not changed; the result is in its order. It panics
// on a NaN.
func BenjaminiHochberg(p []float64) []float64 {
	out := make([]float64, len(p))
	running := 1.0
	ranked := order(p)
	for rank := len(p) - 1; rank >= 0; rank-- {
		i := ranked[rank]
		running = math.Min(running, p[i]*float64(len(p))/float64(rank+1))
		out[i] = running
	}
	return out
}

// order lists the places of p from the smallest value up, equal ones as given.
func order(p []float64) []int {
	if slices.ContainsFunc(p, math.IsNaN) {
		panic("resampling: a p-value is NaN")
	}
	index := make([]int, len(p))
	for i := range index {
		index[i] = i
	}
	slices.SortStableFunc(index, func(a, b int) int {
		switch {
		case p[a] < p[b]:
			return -1
		case p[a] > p[b]:
			return 1
		}
		return 0
	})
	return index
}
