package discrete

import (
	"fmt"
	"math"
)

// RelevantBins is the number of bins, of those possible, that are likely to be
// in use although only some were seen (the Bayes-like count of Panzeri and
// Treves 1996, Network 7:87–107; this form from memory).
//
// Suppose x unseen bins are in use. With N samples in R₀ seen bins, give each
// unseen one the probability q₀ = 1−(N/(N+R₀))^{1/N} and each seen one
// (1−x q₀)(nᵢ+1)/(N+R₀). The x chosen is the one for which N samples would be
// expected to fill the number of bins nearest R₀; of equally near ones the
// smallest. x = 0 stands for the observed frequencies.
//
// It panics if more bins are seen than possible.
func RelevantBins(counts []int64, possible int) int {
	total, seen := 0.0, 0
	for _, n := range counts {
		if n > 0 {
			total += float64(n)
			seen++
		}
	}
	if seen > possible {
		panic(fmt.Sprintf("discrete: %d bins seen of %d possible", seen, possible))
	}
	if seen == 0 || seen == possible {
		return seen
	}
	// filled is the probability that a bin of probability q holds a sample.
	filled := func(q float64) float64 { return -math.Expm1(total * math.Log1p(-q)) }
	expected := 0.0
	for _, n := range counts {
		if n > 0 {
			expected += filled(float64(n) / total)
		}
	}
	r0 := float64(seen)
	nearest, best := math.Abs(expected-r0), seen
	q0 := -math.Expm1(-math.Log1p(r0/total) / total)
	for x := 1; x <= possible-seen && float64(x)*q0 < 1; x++ {
		expected = float64(x) * filled(q0)
		for _, n := range counts {
			if n > 0 {
				expected += filled((1 - float64(x)*q0) * float64(n+1) / (total + r0))
			}
		}
		if d := math.Abs(expected - r0); d < nearest {
			nearest, best = d, seen+x
		}
	}
	return best
}
