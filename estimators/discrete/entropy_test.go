package discrete

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"pgregory.net/rapid"
)

// The vector (10, 5, 3, 1, 1): values recomputed with SciPy 1.10; Panzeri–Treves
// from its 7 relevant bins of 10.
func TestEntropyOfAKnownVector(t *testing.T) {
	counts := []int64{10, 5, 3, 1, 1}
	for method, bits := range map[Method]float64{PlugIn: 1.842738, MillerMadow: 1.987007, Jackknife: 2.067318} {
		got, variance := Entropy(counts, method)
		assert.InDelta(t, bits, got, 1e-6, method.String())
		assert.Positive(t, variance)
		got, _ = Entropy(append(counts, 0, 0), method)
		assert.InDelta(t, bits, got, 1e-6, "bins never seen do not matter to %s", method)
	}
	got, _ := Entropy([]int64{10, 5, 3, 1, 1, 0, 0, 0, 0, 0}, PanzeriTreves)
	assert.InDelta(t, 1.842738+6/(2*20*math.Ln2), got, 1e-6)
	assert.Equal(t, []int64{10, 5, 3, 1, 1}, counts)
}

func TestEntropyAtTheEdges(t *testing.T) {
	for _, m := range Methods() {
		for _, counts := range [][]int64{nil, {0, 0}, {1}, {7}, {0, 7}} {
			bits, variance := Entropy(counts, m)
			assert.Zero(t, bits, "%s of %v", m, counts)
			assert.Zero(t, variance, "%s of %v", m, counts)
		}
		assert.Panics(t, func() { Entropy([]int64{-1, 3}, m) })
		// Equal large counts: log2 4, corrections of 1e-12, rounding 1e-15.
		bits, variance := Entropy([]int64{1e12, 1e12, 1e12, 1e12}, m)
		assert.InDelta(t, 2, bits, 1e-11)
		assert.InDelta(t, 0, variance, 1e-20)
	}
	assert.Equal(t, Method(0), Jackknife, "the default")
	assert.Panics(t, func() { _ = Method(99).String() })
}

// leaveOneOut is the jackknife by its definition: every sample left out in turn.
func leaveOneOut(counts []int64, statistic func([]int64) float64) (estimate, variance float64) {
	n, sum := 0.0, 0.0
	var without []float64
	for i, c := range counts {
		for range c {
			less := slices.Clone(counts)
			less[i]--
			h := statistic(less)
			without = append(without, h)
			sum += h
			n++
		}
	}
	for _, h := range without {
		variance += (h - sum/n) * (h - sum/n) * (n - 1) / n
	}
	return n*statistic(counts) - (n-1)/n*sum, variance
}

func TestJackknifeAgainstLeavingOut(t *testing.T) {
	plugIn := func(c []int64) float64 { h, _ := Entropy(c, PlugIn); return h }
	rapid.Check(t, func(t *rapid.T) {
		counts := rapid.SliceOfN(rapid.Int64Range(0, 9), 1, 7).Draw(t, "counts")
		if slices.Max(counts) == 0 || len(counts) == 1 && counts[0] < 2 {
			return
		}
		want, wantVariance := leaveOneOut(counts, plugIn)
		got, variance := Entropy(counts, Jackknife)
		if math.Abs(got-want) > 1e-11 || math.Abs(variance-wantVariance) > 1e-11 {
			t.Fatalf("%v: %g ± %g, by leaving out %g ± %g", counts, got, variance, want, wantVariance)
		}
	})
}

// Variances against 4000 simulated samples of 400: a variance estimated from M
// normal values has a relative standard error of √(2/M), 2.2 %; 4 of them, and 3 %
// for what is of higher order in 1/N.
func TestVariancesAgainstSimulation(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	p := []float64{.5, .2, .15, .1, .05}
	const runs = 4000
	for _, m := range Methods() {
		sum, square, variance := 0.0, 0.0, 0.0
		for range runs {
			h, v := Entropy(draw(rng, p, 400), m)
			sum += h
			square += h * h
			variance += v / runs
		}
		assert.InEpsilon(t, (square-sum*sum/runs)/(runs-1), variance, 4*math.Sqrt(2.0/runs)+.03, m.String())
	}
}

// draw counts n samples of the distribution p.
func draw(rng *rand.Rand, p []float64, n int) []int64 {
	counts := make([]int64, len(p))
	for range n {
		u, i := rng.Float64(), 0
		for ; i < len(p)-1 && u >= p[i]; i++ {
			u -= p[i]
		}
		counts[i]++
	}
	return counts
}

// R̃ of two vectors with 10 and 20 possible bins, from an independent program;
// bins beyond the seen ones only where samples are few.
func TestRelevantBins(t *testing.T) {
	assert.Equal(t, 7, RelevantBins([]int64{10, 5, 3, 1, 1}, 10))
	assert.Equal(t, 8, RelevantBins([]int64{4, 3, 1, 1, 1}, 20))
	assert.Equal(t, 6, RelevantBins([]int64{10, 5, 3, 1, 1}, 6))
	assert.Equal(t, 5, RelevantBins([]int64{10, 5, 3, 1, 1, 0}, 5))
	assert.Equal(t, 4, RelevantBins([]int64{1000, 1000, 1000, 1000}, 8))
	assert.Equal(t, 1, RelevantBins([]int64{1}, 8))
	assert.Equal(t, 0, RelevantBins([]int64{0, 0}, 2))
	assert.Panics(t, func() { RelevantBins([]int64{1, 1, 1}, 2) })
}
