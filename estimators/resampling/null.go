package resampling

import (
	"fmt"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/mathext"
)

// GammaTail is the probability that a gamma variable with the given mean and
// variance exceeds x: the regularised incomplete gamma function Q(mean²/variance,
// x mean/variance), to about 1e-8 of itself. It serves tests whose statistic
// under the null is a sum of exponential or squared variables, matched in its
// first two moments (Satterthwaite 1946, Biometrics 2:110–114).
//
// What is smaller than 1e-300 is given as 1e-300, so that a p-value never reads as
// 0; x ≤ 0 gives 1. It panics unless mean and variance are positive and finite.
func GammaTail(x, mean, variance float64) float64 {
	shape, scale := mean*mean/variance, variance/mean
	if !(mean > 0) || !(variance > 0) || !(shape > 0) || math.IsInf(shape, 0) || math.IsInf(scale, 0) {
		panic(fmt.Sprintf("resampling: no gamma law of mean %g and variance %g", mean, variance))
	}
	if x <= 0 {
		return 1
	}
	if math.IsInf(x, 1) {
		return smallest
	}
	return math.Max(mathext.GammaIncRegComp(shape, x/scale), smallest)
}

// smallest is the floor of GammaTail.
const smallest = 1e-300

// MonteCarloP is (b+1)/(m+1) for b of m null draws at least as extreme, ties
// included: never 0 (Phipson and Smyth 2010, Stat. Appl. Genet. Mol. Biol. 9:39).
func MonteCarloP(observed float64, null []float64) float64 {
	b := 0
	for _, v := range null {
		if v >= observed {
			b++
		}
	}
	return float64(b+1) / float64(len(null)+1)
}

// Shifts draws m distinct lags of circular shifts of a series of samples values,
// all farther than exclude from 0 on the circle: exclude < lag < samples−exclude,
// in random order. Where fewer are possible, all are returned. Exact only for
// stationary series, with exclude beyond their correlation time. It panics on a
// negative exclude or m.
func Shifts(rng *rand.Rand, samples, exclude, m int) []int {
	if exclude < 0 || m < 0 {
		panic(fmt.Sprintf("resampling: %d shifts beyond a lag of %d", m, exclude))
	}
	possible := samples - 2*exclude - 1
	if possible <= 0 {
		return nil
	}
	lags := rng.Perm(possible)[:min(m, possible)]
	for i := range lags {
		lags[i] += exclude + 1
	}
	return lags
}
