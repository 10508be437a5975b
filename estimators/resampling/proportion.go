package resampling

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Wilson is Wilson's score interval of a proportion k/n (Wilson 1927, J. Am.
// Stat. Assoc. 22:209–212). It panics unless n ≥ 1, 0 ≤ k ≤ n and
// 0 < confidence < 1.
func Wilson(k, n int, confidence float64) (low, high float64) {
	mustBeProportion(k, n, confidence)
	z := distuv.UnitNormal.Quantile(0.5 + confidence/2)
	p, m := float64(k)/float64(n), float64(n)
	centre := p + z*z/(2*m)
	half := z * math.Sqrt(p*(1-p)/m+z*z/(4*m*m))
	scale := 1 + z*z/m
	return math.Max(0, (centre-half)/scale), math.Min(1, (centre+half)/scale)
}

// ClopperPearson is the exact binomial interval of a proportion k/n (Clopper and
// Pearson 1934, Biometrika 26:404–413): it covers at least with the confidence
// asked for. It panics as Wilson does.
func ClopperPearson(k, n int, confidence float64) (low, high float64) {
	mustBeProportion(k, n, confidence)
	tail := (1 - confidence) / 2
	low, high = 0, 1
	if k > 0 {
		low = distuv.Beta{Alpha: float64(k), Beta: float64(n - k + 1)}.Quantile(tail)
	}
	if k < n {
		high = distuv.Beta{Alpha: float64(k + 1), Beta: float64(n - k)}.Quantile(1 - tail)
	}
	return low, high
}

func mustBeProportion(k, n int, confidence float64) {
	if n < 1 || k < 0 || k > n || !(confidence > 0 && confidence < 1) {
		panic(fmt.Sprintf("resampling: no interval of %d in %d at confidence %g", k, n, confidence))
	}
}
