package stationarity

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/stat/distuv"
)

func generator(t *testing.T, seed uint64) *rand.Rand {
	t.Logf("seed %d", seed)
	return rand.New(rand.NewPCG(seed, 0))
}

// flatBand is a Gaussian signal of n samples and a flat band of m frequencies,
// worth about 2m independent values. It is a quarter of its own period, so that
// its ends do not join.
func flatBand(rng *rand.Rand, n, m int) []float64 {
	spectrum := make([]complex128, 2*n+1)
	for k := 1; k <= 4*m; k++ {
		spectrum[k] = complex(rng.NormFloat64(), rng.NormFloat64())
	}
	return fourier.NewFFT(4*n).Sequence(nil, spectrum)[:n]
}

func naiveAutocorrelation(x []float64, k int) float64 {
	mean := 0.0
	for _, v := range x {
		mean += v / float64(len(x))
	}
	var c0, ck float64
	for i, v := range x {
		c0 += (v - mean) * (v - mean)
		if i+k < len(x) {
			ck += (v - mean) * (x[i+k] - mean)
		}
	}
	return ck / c0
}

func TestAutocorrelationEqualsDirectSum(t *testing.T) {
	rng := generator(t, 1)
	for _, n := range []int{1, 2, 3, 10, 257, longestLag + 1000} {
		x := make([]float64, n)
		level := 0.0
		for i := range x {
			level = 0.99*level + rng.NormFloat64()
			x[i] = 5 + level
		}
		before := slices.Clone(x)
		got := Autocorrelation(slices.Repeat([]float64{math.NaN()}, 3), x)
		require.Len(t, got, n/2+1)
		assert.Equal(t, before, x)
		for _, k := range []int{0, 1, 2, 50, n / 3, n / 2} {
			if k < len(got) && n > 1 {
				// Rounding of transforms: a few eps times log2 n times √n.
				assert.InDelta(t, naiveAutocorrelation(x, k), got[k], 1e-11, "n %d lag %d", n, k)
			}
		}
	}
	assert.Empty(t, Autocorrelation(nil, nil)[1:])
}

// A flat band of m frequencies has 2m independent values. One estimate scatters
// by 1/√m, the mean of 50 by 2 % and less.
func TestIndependentCountsDegreesOfFreedom(t *testing.T) {
	rng := generator(t, 2)
	for _, m := range []int{50, 400} {
		mean := 0.0
		for range 50 {
			mean += Independent(flatBand(rng, 4096, m)) / 50
		}
		assert.InEpsilon(t, 2*m, mean, 0.1)
	}
	assert.Zero(t, Independent([]float64{0.1, 0.1, 0.1}))
}

// The nominal false-alarm rate is 0.1 %; at most 0.5 % are promised. Of 1500
// signals with a true rate of 0.5 %, more than 20 come with a probability below
// 1e-4.
func TestGaussianSignalsPass(t *testing.T) {
	rng := generator(t, 3)
	for _, c := range []struct{ n, m int }{{256, 25}, {512, 100}, {1024, 400}} {
		visible, low := 0, 0
		const signals = 1500
		for range signals {
			s := Gaussianity(flatBand(rng, c.n, c.m))
			if s.PValue < 0.001 {
				low++
			}
			if s.Visible() {
				visible++
			}
		}
		assert.LessOrEqual(t, low, 20, "%d frequencies", c.m)
		assert.LessOrEqual(t, visible, low)
	}
}

// smooth is a moving average, so that transformed signals keep a correlation.
func smooth(rng *rand.Rand, n, width int) []float64 {
	x := make([]float64, n)
	white := make([]float64, n+width)
	for i := range white {
		white[i] = rng.NormFloat64()
	}
	for i := range x {
		for _, v := range white[i : i+width] {
			x[i] += v / math.Sqrt(float64(width))
		}
	}
	return x
}

func TestOtherShapesAreCaught(t *testing.T) {
	rng := generator(t, 4)
	for name, of := range map[string]func(g float64) float64{
		"two-valued": func(g float64) float64 { return math.Copysign(1, g) },
		"uniform":    distuv.UnitNormal.CDF,
		"lognormal":  math.Exp,
		"rectified":  func(g float64) float64 { return math.Max(g, 0) },
	} {
		missed := 0
		const signals = 200
		for range signals {
			x := smooth(rng, 6000, 20) // 60 s at 100 Hz, correlated over 0.2 s
			for i := range x {
				x[i] = of(x[i])
			}
			if !Gaussianity(x).Visible() {
				missed++
			}
		}
		assert.Zero(t, missed, name)
	}
}

func TestShapeOfExtremes(t *testing.T) {
	rng := generator(t, 5)
	x := flatBand(rng, 2048, 300)
	s := Gaussianity(x)
	for _, scale := range []float64{1e-290, 1e290} {
		y := make([]float64, len(x))
		for i := range x {
			y[i] = x[i] / s.SD * scale
		}
		got := Gaussianity(y)
		assert.InEpsilon(t, s.ExcessKurtosis, got.ExcessKurtosis, 1e-6)
		assert.InEpsilon(t, s.PValue, got.PValue, 1e-6)
		assert.InEpsilon(t, Independent(x), Independent(y), 1e-6)
	}
	flat := Gaussianity([]float64{3, 3, 3, 3})
	assert.True(t, math.IsNaN(flat.PValue))
	assert.Equal(t, 3.0, flat.Mean)
	assert.False(t, flat.Visible())
	assert.True(t, math.IsNaN(Gaussianity(flatBand(rng, 4096, 4)).PValue), "8 independent values cannot tell")
}

// For independent values the transforms are those of the trade: check values by
// SciPy 1.10 scipy.stats.skewtest and kurtosistest of arange(1, 51)².
func TestNormalFormsEqualSciPy(t *testing.T) {
	var m2, m3, m4, mean float64
	x := make([]float64, 50)
	for i := range x {
		x[i] = float64((i + 1) * (i + 1))
		mean += x[i] / 50
	}
	for _, v := range x {
		d := v - mean
		m2 += d * d / 50
		m3 += d * d * d / 50
		m4 += d * d * d * d / 50
	}
	assert.InDelta(t, 1.905348922846715, normalSkewness(m3/math.Pow(m2, 1.5), 50), 1e-9)
	assert.InDelta(t, -1.7531448219988126, normalKurtosis(m4/(m2*m2), 50), 1e-9)
}

// Size at a nominal 1 %: of 2000 recordings 20 ± 4.5 are expected, and the rank
// test is known to be conservative with few values a group. More than 42 come
// with a probability below 1e-5.
func TestSteadyValuesPass(t *testing.T) {
	rng := generator(t, 6)
	poisson := distuv.Poisson{Lambda: 3, Src: rng}
	for name, draw := range map[string]func() float64{
		"normal": rng.NormFloat64, "counts": poisson.Rand, "heavy": func() float64 { return math.Exp(2 * rng.NormFloat64()) },
	} {
		alarms := 0
		for range 2000 {
			values := make([]float64, 83)
			for i := range values {
				values[i] = draw()
			}
			if Drift(values).PValue < 0.01 {
				alarms++
			}
		}
		assert.Less(t, alarms, 42, name)
	}
}

func TestDriftIsFound(t *testing.T) {
	rng := generator(t, 7)
	shapes := map[string]func(u float64) float64{
		"trend": func(u float64) float64 { return 3 * u },
		"step":  func(u float64) float64 { return 2 * math.Round(u) },
		"hump":  func(u float64) float64 { return 4 * math.Sin(math.Pi*u) },
	}
	for name, shape := range shapes {
		for range 100 {
			values := make([]float64, 80)
			for i := range values {
				values[i] = shape((float64(i)+0.5)/80) + rng.NormFloat64()
			}
			c := Drift(values)
			assert.Less(t, c.PValue, 0.01, name)
			if name == "trend" {
				assert.InDelta(t, 3, c.Trend, 5*c.TrendSE)
			}
		}
	}
	exact := make([]float64, 20)
	for i := range exact {
		exact[i] = float64(i)
	}
	c := Drift(exact)
	assert.InDelta(t, 20, c.Trend, 1e-9)
	assert.InDelta(t, 9.5, c.Mean, 1e-12)
	assert.Equal(t, []float64{0.5, 2.5, 4.5, 6.5, 8.5, 10.5, 12.5, 14.5, 16.5, 18.5}, c.Blocks)
}

// Check value by SciPy 1.10 scipy.stats.kruskal of the ten pairs.
func TestKruskalWallisWithTies(t *testing.T) {
	values := []float64{1, 2, 2, 3, 5, 4, 4, 4, 7, 1, 2, 2, 9, 8, 3, 3, 6, 6, 5, 7}
	assert.InDelta(t, 0.1014641316054316, kruskalWallis(values, 2), 1e-9)
}

func TestDriftOfLittle(t *testing.T) {
	for _, values := range [][]float64{nil, {1, 2, 3}, make([]float64, 19)} {
		c := Drift(values)
		assert.True(t, math.IsNaN(c.PValue))
		assert.Len(t, c.Blocks, Blocks)
	}
	assert.Equal(t, 1.0, Drift(slices.Repeat([]float64{4}, 40)).PValue)
}

func TestStreamDrift(t *testing.T) {
	rng := generator(t, 8)
	alarms, found := 0, 0
	for range 500 {
		x := flatBand(rng, 2048, 400)
		if StreamDrift(x).PValue < 0.001 {
			alarms++
		}
	}
	for range 50 {
		x := flatBand(rng, 2048, 400)
		sd := Gaussianity(x).SD
		for i := range x {
			x[i] += 2 * sd * float64(i) / float64(len(x))
		}
		if StreamDrift(x).PValue < 0.001 {
			found++
		}
	}
	// 0.5 of 500 expected; more than 5 with a probability below 2e-5.
	assert.LessOrEqual(t, alarms, 5)
	assert.Equal(t, 50, found)
	assert.True(t, math.IsNaN(StreamDrift(flatBand(rng, 2048, 10)).PValue), "too slow to tell")
	assert.True(t, math.IsNaN(StreamDrift(nil).PValue))
}

// 5 % of 1000 pairs are 50 ± 6.9; the number of independent pairs is itself an
// estimate, so 3 to 8 % are let pass: beyond 16 … 100 lies less than 1e-4 even so.
func TestCorrelationHasItsSize(t *testing.T) {
	rng := generator(t, 9)
	rejected := 0
	for range 1000 {
		if _, p := Correlation(flatBand(rng, 512, 50), flatBand(rng, 512, 80)); p < 0.05 {
			rejected++
		}
	}
	assert.Greater(t, rejected, 15)
	assert.Less(t, rejected, 101)
	t.Logf("%d of 1000 rejected", rejected)

	x := flatBand(rng, 2048, 300)
	y := slices.Clone(x)
	r, p := Correlation(x, y)
	assert.InDelta(t, 1, r, 1e-12)
	assert.Less(t, p, 1e-12)
	_, p = Correlation(x, make([]float64, len(x)))
	assert.True(t, math.IsNaN(p))
	assert.Panics(t, func() { Correlation(x, x[1:]) })
}

func ExampleGaussianity() {
	x := make([]float64, 4000)
	for i, v := range rand.New(rand.NewPCG(1, 2)).Perm(len(x)) {
		x[i] = float64(v) // every value once: uniform
	}
	s := Gaussianity(x)
	fmt.Printf("excess kurtosis %.2f, visibly not Gaussian: %v\n", s.ExcessKurtosis, s.Visible())
	// Output: excess kurtosis -1.20, visibly not Gaussian: true
}

func TestBlocksWithoutTests(t *testing.T) {
	c := Drift([]float64{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 100})
	assert.Equal(t, []float64{0, 1, 2, 3, 4, 5, 6, 7, 8, 9}, c.Blocks)
	assert.InDelta(t, 4.5, c.Mean, 1e-12)
	assert.True(t, math.IsNaN(Drift([]float64{1, 2}).Blocks[0]))
}
