package resampling

import (
	"fmt"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/stat/distuv"
)

// Jackknife is the delete-a-group jackknife: deleted[j] is the estimate without
// group j, full the one with all. It returns the variance of the estimate and
// the estimate corrected for bias of order 1/n. weights are the groups' sizes;
// nil stands for equal ones, for which the variance is ((g−1)/g)Σ(θ_j−θ̄)².
// Unequal sizes: Busing, Meijer and van der Leeden 1999, Stat. Comput. 9:3–8.
// Groups should be longer than the correlation time. It panics with fewer than
// two groups, or unless every group has a positive weight.
func Jackknife(full float64, deleted, weights []float64) (variance, corrected float64) {
	g := float64(len(deleted))
	if len(deleted) < 2 || weights != nil && len(weights) != len(deleted) {
		panic("resampling: a jackknife needs at least two groups, with a weight each or none")
	}
	if weights == nil {
		mean := 0.0
		for _, d := range deleted {
			mean += d / g
		}
		for _, d := range deleted {
			variance += (d - mean) * (d - mean)
		}
		return variance * (g - 1) / g, g*full - (g-1)*mean
	}
	total := 0.0
	for _, w := range weights {
		if !(w > 0) {
			panic("resampling: a jackknife group has no weight")
		}
		total += w
	}
	corrected = g * full
	for j, d := range deleted {
		corrected -= (1 - weights[j]/total) * d
	}
	for j, d := range deleted {
		h := total / weights[j]
		pseudo := h*full - (h-1)*d
		variance += (pseudo - corrected) * (pseudo - corrected) / (h - 1) / g
	}
	return variance, corrected
}

// TInterval is the two-sided Student interval of an estimate with the given
// variance and degrees of freedom, which may be infinite (the normal interval).
// It panics on a negative variance, or unless dof > 0 and 0 < confidence < 1.
func TInterval(estimate, variance, dof, confidence float64) (low, high float64) {
	if variance < 0 || !(dof > 0) || !(confidence > 0 && confidence < 1) {
		panic(fmt.Sprintf("resampling: no interval of variance %g, %g degrees of freedom, confidence %g", variance, dof, confidence))
	}
	if variance == 0 {
		return estimate, estimate
	}
	q := distuv.UnitNormal.Quantile(0.5 + confidence/2)
	if !math.IsInf(dof, 1) {
		q = distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.Quantile(0.5 + confidence/2)
	}
	half := q * math.Sqrt(variance)
	return estimate - half, estimate + half
}

// MovingBlocks resamples a series by overlapping blocks of length values
// (Künsch 1989, Ann. Stat. 17:1217–1241) and returns statistic on each of runs
// resamples, each as long as x; length ≈ N^{1/3} is common. Because the ends are
// under-represented, centre on the mean of the resamples rather than on the
// statistic of x. statistic must not keep or change its argument, which is
// reused. It panics unless 1 ≤ length ≤ len(x).
func MovingBlocks(rng *rand.Rand, x []float64, length, runs int, statistic func([]float64) float64) []float64 {
	if length < 1 || length > len(x) {
		panic("resampling: a block must be at least one value and no longer than the series")
	}
	out := make([]float64, runs)
	sample := make([]float64, 0, len(x)+length)
	for i := range out {
		sample = sample[:0]
		for len(sample) < len(x) {
			start := rng.IntN(len(x) - length + 1)
			sample = append(sample, x[start:start+length]...)
		}
		out[i] = statistic(sample[:len(x)])
	}
	return out
}
