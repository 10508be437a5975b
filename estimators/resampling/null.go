package resampling

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// GammaTail is the probability that a gamma variable with the given mean and
// variance exceeds x. Far in the tail it stays positive down to 1e-300; a
// non-positive x gives 1.
func GammaTail(x, mean, variance float64) float64 {
	if !(mean > 0) || !(variance > 0) {
		panic("resampling: a gamma law needs a positive mean and variance")
	}
	if x <= 0 {
		return 1
	}
	shape, scale := mean*mean/variance, variance/mean
	p := mathext.GammaIncRegComp(shape, x/scale)
	if p > 0 {
		return p
	}
	// Leading term of the continued fraction, Q(a, z) ≈ z^{a−1} e^{−z}/Γ(a)
	// (Abramowitz and Stegun 1964, 6.5.32).
	z := x / scale
	lg, _ := math.Lgamma(shape)
	return math.Max(math.Exp((shape-1)*math.Log(z)-z-lg), 1e-300)
}

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
// all farther than exclude from 0 on the circle, in random order. Of fewer
// possible lags all are returned.
func Shifts(rng *rand.Rand, samples, exclude, m int) []int {
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

// Wilson is Wilson's score interval of a proportion k/n (Wilson 1927, J. Am.
// Stat. Assoc. 22:209–212).
func Wilson(k, n int, confidence float64) (low, high float64) {
	z := distuv.UnitNormal.Quantile(0.5 + confidence/2)
	p, m := float64(k)/float64(n), float64(n)
	centre := p + z*z/(2*m)
	half := z * math.Sqrt(p*(1-p)/m+z*z/(4*m*m))
	scale := 1 + z*z/m
	return math.Max(0, (centre-half)/scale), math.Min(1, (centre+half)/scale)
}

// ClopperPearson is the exact binomial interval of a proportion k/n (Clopper and
// Pearson 1934, Biometrika 26:404–413).
func ClopperPearson(k, n int, confidence float64) (low, high float64) {
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
