package spectral

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/estimators/fourier"
)

// flatBand is Gaussian noise with a flat spectrum below fc, unit variance.
func flatBand(rng *rand.Rand, n int, dt, fc float64) []float64 {
	size := 16
	for size < n {
		size *= 2
	}
	plan := fourier.NewPlan(size)
	x := make([]float64, size)
	// A sum of random sinusoids on the grid of the padded length, by one
	// transform of a random spectrum: Re Σ_k Z_k e^{2πikt/n}.
	re, im := make([]float64, size), make([]float64, size)
	bins := int(fc * float64(size) * dt)
	for k := 0; k <= bins; k++ {
		re[k], im[k] = rng.NormFloat64(), rng.NormFloat64()
	}
	z := plan.NewPacked()
	plan.Pack(z, re, im, nil, nil, 0)
	plan.Forward(z)
	a, b := make([]complex128, size/2+1), make([]complex128, size/2+1)
	plan.Select(0, size/2+1).Spectrum(a, b, z)
	// The complex transform at t is A + iB; its real part is Re A − Im B.
	for t := range size {
		k := t
		sign := 1.0
		if k > size/2 {
			k, sign = size-t, -1
		}
		x[t] = (real(a[k]) - sign*imag(b[k])) / math.Sqrt(float64(bins+1))
	}
	return x[:n]
}

// A flat 20 Hz stream in white noise at signal-to-noise ratio S carries
// 20 log2(1+S) bits/s (Shannon 1949). Mean of 40 estimates within 4 standard
// errors plus the predicted smear; intervals must hold the truth as often as a
// binomial of 40 at 95 % allows at 0.1 % (≥ 32).
func TestInformationOfAWhiteChannel(t *testing.T) {
	const dt, fc, seconds, runs = 0.005, 20.0, 150.0, 40
	rng := rand.New(rand.NewPCG(5, 6))
	n := int(seconds / dt)
	for _, snr := range []float64{0.3, 3} {
		truth := fc * math.Log2(1+snr)
		// Two-sided density of unit variance over ±20 Hz is 1/40; of white
		// samples of variance σ² it is σ² dt.
		sigma := math.Sqrt(1 / (2 * fc) / snr / dt)
		sum, sum2, held := 0.0, 0.0, 0
		for range runs {
			x := flatBand(rng, n, dt, fc)
			y := make([]float64, n)
			for i := range y {
				y[i] = 2 + x[i] + sigma*rng.NormFloat64()
			}
			r, err := Information(x, y, Options{SampleInterval: dt, HighHz: fc})
			require.NoError(t, err)
			sum += r.BitsPerS
			sum2 += r.BitsPerS * r.BitsPerS
			if r.Low <= truth && truth <= r.High {
				held++
			}
			assert.Less(t, r.PValue, 1e-6)
		}
		mean := sum / runs
		se := math.Sqrt((sum2/runs - mean*mean) / (runs - 1))
		sd := se * math.Sqrt(runs)
		assert.InDelta(t, truth, mean, 4*se+0.3*sd, "snr %g", snr)
		assert.GreaterOrEqual(t, held, 32, "snr %g", snr)
	}
}

// Independent signals are called so at the nominal rate: of 1000 tests at 5 %,
// 27 to 76 reject (99.9 % binomial range), and estimates average to zero.
func TestIndependenceHasItsSize(t *testing.T) {
	const dt, fc, runs = 0.01, 20.0, 1000
	rng := rand.New(rand.NewPCG(7, 8))
	n := 4096
	rejected, sum, sum2 := 0, 0.0, 0.0
	for range runs {
		x := flatBand(rng, n, dt, fc)
		y := make([]float64, n)
		for i := range y {
			y[i] = rng.NormFloat64()
		}
		r, err := Information(x, y, Options{SampleInterval: dt, HighHz: fc})
		require.NoError(t, err)
		if r.PValue < 0.05 {
			rejected++
		}
		sum += r.BitsPerS
		sum2 += r.BitsPerS * r.BitsPerS
	}
	mean := sum / runs
	se := math.Sqrt((sum2/runs - mean*mean) / runs)
	assert.InDelta(t, 0, mean, 4*se)
	assert.GreaterOrEqual(t, rejected, 27)
	assert.LessOrEqual(t, rejected, 76)
}

func TestInformationRefusesBadInput(t *testing.T) {
	ok := make([]float64, 100)
	for i := range ok {
		ok[i] = math.Sin(float64(i))
	}
	bad := append([]float64(nil), ok...)
	bad[7] = math.NaN()
	cases := []struct {
		x, y []float64
		o    Options
		want string
	}{
		{ok, ok[:99], Options{SampleInterval: 1}, "the stream has 100 samples and the code 99: they must be sampled together"},
		{ok, ok, Options{}, "sample interval 0 s: must be positive"},
		{bad, ok, Options{SampleInterval: 1}, "stream: sample 7 is NaN: must be finite"},
		{ok, make([]float64, 100), Options{SampleInterval: 1}, "code is constant: it can neither inform nor be informed about"},
		{ok, ok, Options{SampleInterval: 1, HighHz: 0.6}, "band 0 to 0.6 Hz: must rise, and end at or below 0.5 Hz"},
		{ok[:20], ok[:20], Options{SampleInterval: 1, HighHz: 0.5}, "20 samples hold fewer than 2 segments of at least 16"},
	}
	for _, c := range cases {
		_, err := Information(c.x, c.y, c.o)
		assert.EqualError(t, err, c.want)
	}
}

// Signals that determine each other give a large finite rate.
func TestPerfectCoherenceIsFinite(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	x := make([]float64, 4000)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	r, err := Information(x, x, Options{SampleInterval: 0.01, HighHz: 20})
	require.NoError(t, err)
	assert.False(t, math.IsInf(r.BitsPerS, 0) || math.IsNaN(r.BitsPerS))
	assert.Greater(t, r.BitsPerS, 20*40.0)
}

func TestChooseLength(t *testing.T) {
	// 600 s at 20 Hz and 1 ms: smear asks for 11.9 s, so 16.384 s and 36 segments.
	length, warnings := ChooseLength([]int{600000}, 0.001, 20, 2)
	assert.Equal(t, 16384, length)
	assert.Empty(t, warnings)
	// 30 s: 15 segments win over the smear, and that is said.
	length, warnings = ChooseLength([]int{30000}, 0.001, 20, 2)
	assert.Equal(t, 2000, length)
	require.Len(t, warnings, 1)
	assert.Contains(t, warnings[0].Text, "smeared away")
	length, _ = ChooseLength([]int{20}, 0.001, 20, 2)
	assert.Zero(t, length)
	// 60 s at 40 Hz: 2.66 s does both, though no power of two of them does.
	length, warnings = ChooseLength([]int{60000}, 0.001, 40, 2)
	assert.Empty(t, warnings)
	assert.InDelta(t, 2660, length, 10)
	assert.LessOrEqual(t, SmearPerSD(2/(float64(length)*0.001), 40, 60), 0.2)
	// Many short trials: a segment cannot exceed a trial.
	short := make([]int, 300)
	for i := range short {
		short[i] = 2000
	}
	length, _ = ChooseLength(short, 0.001, 20, 2)
	assert.Equal(t, 2000, length)
}

// The edge of a flat band is found to the width of its smearing, and does not
// depend on how finely the stream was sampled.
func TestOwnBand(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	fine := flatBand(rng, 1<<16, 0.001, 20)
	coarse := make([]float64, len(fine)/8)
	for i := range coarse {
		coarse[i] = fine[8*i]
	}
	edge, err := OwnBand([][]float64{fine}, 0.001)
	require.NoError(t, err)
	assert.InDelta(t, 20, edge, 1.5) // segments of 1.6 s: a bin of 0.5 Hz, lobes of two
	same, err := OwnBand([][]float64{coarse}, 0.008)
	require.NoError(t, err)
	assert.InDelta(t, edge, same, 0.6)
	none, err := OwnBand([][]float64{make([]float64, 1000)}, 0.001)
	require.NoError(t, err)
	assert.Zero(t, none)
}

// Closed forms of −∫ log2(1−γ²) df: γ² = ½ over 100 Hz is 100 bits/s; 3 kHz at 30
// dB is 29 901.68 bits/s (Shannon 1949, Proc. IRE 37:10–21); a signal-to-noise
// ratio of 3/(1+(f/10)²) is 10π(√4−1)/ln 2 = 45.3236 bits/s, here to 10 kHz, beyond
// which 3·100/10⁴/ln 2 = 0.0433 are left.
func TestLogCoherenceClosedForms(t *testing.T) {
	rate := func(widthHz float64, cells int, snr func(f float64) float64) float64 {
		b := Band{Weight: make([]float64, cells)}
		sxx, syy, sxy := make([]float64, cells), make([]float64, cells), make([]complex128, cells)
		for i := range b.Weight {
			b.Weight[i] = widthHz / float64(cells)
			s := snr((float64(i) + 0.5) * b.Weight[i])
			sxx[i], syy[i], sxy[i] = 2, 3, complex(math.Sqrt(6*s/(1+s)), 0)
		}
		return b.LogCoherence(sxx, syy, sxy) / math.Ln2
	}
	assert.InDelta(t, 100, rate(100, 7, func(float64) float64 { return 1 }), 1e-9)
	assert.InDelta(t, 29901.68, rate(3000, 11, func(float64) float64 { return 1000 }), 0.005)
	lorentz := func(f float64) float64 { return 3 / (1 + f*f/100) }
	assert.InDelta(t, 45.3236-0.0433, rate(10000, 200000, lorentz), 2e-4)
}

// A Welch design misaligned by 26 of 256 samples keeps ρ² = .876572 of the
// coherence of white signals under a Hann window (Carter 1980, formula of the
// window's own correlation), so an estimate near .698 of a true .8: mean of 3000
// segments within 4 standard errors.
func TestMisalignmentCostsCoherence(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	d, err := NewWelch(256, 0, "hann", 1, 0.5)
	require.NoError(t, err)
	scratch := d.NewScratch()
	const n, lag = 256 * 3000, 26
	x := make([]float64, n+lag)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	y := make([]float64, n)
	for i := range y {
		y[i] = x[i] + 0.5*rng.NormFloat64() // γ² = 1/(1+¼) = .8
	}
	zx, zy := d.Transforms(nil, x[lag:], 0, scratch), d.Transforms(nil, y, 0, scratch)
	sxx, syy, sxy := make([]float64, d.Bins()), make([]float64, d.Bins()), make([]complex128, d.Bins())
	d.AddAuto(sxx, zx)
	d.AddAuto(syy, zy)
	d.AddCross(sxy, zy, zx)
	mean, cells := 0.0, 0.0
	for k := 2; k < d.Bins()-2; k++ {
		c := sxy[k]
		mean += (real(c)*real(c) + imag(c)*imag(c)) / (sxx[k] * syy[k])
		cells++
	}
	assert.InDelta(t, .698, mean/cells, 0.005)
}
