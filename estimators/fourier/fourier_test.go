package fourier

import (
	"encoding/json"
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"os"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	gonum "gonum.org/v1/gonum/dsp/fourier"
)

func noise(n int, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 1))
	x := make([]float64, n)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	return x
}

// dirty is a signal filled with NaN: whatever a call leaves untouched shows.
func dirty(p *Plan) Packed {
	z := p.NewPacked()
	for i := range z {
		z[i] = math.NaN()
	}
	return z
}

func naive(x []float64, n, k int) complex128 {
	sum := complex(0, 0)
	for t, v := range x {
		sum += complex(v, 0) * cmplx.Rect(1, -2*math.Pi*float64(t*k%n)/float64(n))
	}
	return sum
}

// Every bin of two segments against a direct sum, shorter segments zero-padded.
func TestSpectrumAgainstDirectSum(t *testing.T) {
	for _, n := range []int{16, 32, 64, 128, 256} {
		for _, length := range []int{n, n - 3, 1} {
			p := NewPlan(n)
			a, b, w := noise(length, 1), noise(length, 2), noise(length, 3)
			wa, wb := make([]float64, length), make([]float64, length)
			for i := range wa {
				wa[i] = w[i] * (a[i] - 0.25)
				wb[i] = b[i] - 0.25
			}
			z := dirty(p)
			p.Pack(z, a, b, w, nil, 0.25)
			p.Forward(z)
			fa, fb := make([]complex128, n/2+1), make([]complex128, n/2+1)
			p.Select(0, n/2+1).Spectrum(fa, fb, z)
			for k := range fa {
				assert.InDelta(t, 0, cmplx.Abs(fa[k]-naive(wa, n, k)), 1e-11)
				assert.InDelta(t, 0, cmplx.Abs(fb[k]-naive(wb, n, k)), 1e-11)
			}
		}
	}
}

// Every power of two to 2^16 against gonum's transform, relative to the norm.
func TestSpectrumAgainstGonum(t *testing.T) {
	for n := 16; n <= 1<<16; n *= 2 {
		p := NewPlan(n)
		a := noise(n, uint64(n))
		z := dirty(p)
		p.Pack(z, a, nil, nil, nil, 0)
		p.Forward(z)
		fa, fb := make([]complex128, n/2+1), make([]complex128, n/2+1)
		p.Select(0, n/2+1).Spectrum(fa, fb, z)
		want := gonum.NewFFT(n).Coefficients(nil, a)
		scale := math.Sqrt(float64(n))
		for k := range want {
			require.InDelta(t, 0, cmplx.Abs(fa[k]-want[k])/scale, 1e-12, "n %d bin %d", n, k)
			require.InDelta(t, 0, cmplx.Abs(fb[k])/scale, 1e-12, "an absent segment has no spectrum")
		}
		part := make([]complex128, 5)
		p.Select(3, 8).Spectrum(part, make([]complex128, 5), z)
		assert.Equal(t, fa[3:8], part)
	}
}

// The vector kernels give the same bits as the portable ones, for every power of
// two from 2^4 to 2^16 and segments whose length is no multiple of the lanes.
func TestVectorEqualsPortable(t *testing.T) {
	if !vector {
		t.Skip("this processor has no vector kernels")
	}
	defer func() { vector = true }()
	for n := 16; n <= 1<<16; n *= 2 {
		for _, length := range []int{n, n - 5} {
			p := NewPlan(n)
			a, b, w := noise(length, 1), noise(length, 2), noise(length, 3)
			transform := func(on bool) Packed {
				vector = on
				z := dirty(p)
				p.Pack(z, a, b, w, nil, 0.25)
				p.Forward(z)
				return z
			}
			fast, slow := transform(true), transform(false)
			for i := range n {
				for _, at := range []int{i, n + gap + i} {
					require.Equal(t, math.Float64bits(slow[at]), math.Float64bits(fast[at]), "n %d value %d", n, at)
				}
			}
		}
	}
}

func TestMisusePanics(t *testing.T) {
	assert.PanicsWithValue(t, "fourier: length 24 is not a power of two of at least 16", func() { NewPlan(24) })
	assert.Panics(t, func() { NewPlan(8) })
	p := NewPlan(16)
	assert.Panics(t, func() { p.Forward(NewPlan(32).NewPacked()) })
	assert.Panics(t, func() { p.Pack(p.NewPacked(), make([]float64, 17), nil, nil, nil, 0) })
	assert.Panics(t, func() { p.Pack(p.NewPacked(), make([]float64, 4), make([]float64, 5), nil, nil, 0) })
	assert.Panics(t, func() { p.Select(0, 10) })
	assert.Panics(t, func() { Slepian(10, 6, 1) })
}

// SciPy 1.10 signal.windows.dpss (testdata/fourier/make_dpss.py), and its
// concentrations, of which 1−λ₀ = 2.94e−10 and λ₄ … λ₇ for NW 4, n 1024.
func TestSlepianEqualsSciPy(t *testing.T) {
	raw, err := os.ReadFile("../../testdata/fourier/dpss.json")
	require.NoError(t, err)
	var g struct {
		Cases []struct {
			N, K, Every int
			NW          float64
			Ratios      []float64
			Tapers      [][]float64
		}
	}
	require.NoError(t, json.Unmarshal(raw, &g))
	for _, c := range g.Cases {
		got := Slepian(c.N, c.NW, c.K)
		for k, v := range got {
			for i, want := range c.Tapers[k] {
				assert.InDelta(t, want, v[i*c.Every], 1e-9, "n %d NW %g taper %d", c.N, c.NW, k)
			}
			assert.InDelta(t, c.Ratios[k], concentration(v, c.NW), 1e-9)
		}
	}
	v := Slepian(1024, 4, 8)
	for k, want := range map[int]float64{4: .99941018, 5: .99250531, 6: .93665541, 7: .6988389} {
		assert.InDelta(t, want, concentration(v[k], 4), 1e-8)
	}
}

// concentration is the share of a taper's energy within its half-bandwidth, by
// the defining sinc kernel.
func concentration(v []float64, nw float64) float64 {
	w := nw / float64(len(v))
	sum := 0.0
	for i, a := range v {
		for j, b := range v {
			kernel := 2 * w
			if i != j {
				d := float64(i - j)
				kernel = math.Sin(2*math.Pi*w*d) / (math.Pi * d)
			}
			sum += a * b * kernel
		}
	}
	return sum
}

// Long tapers keep their defining properties.
func TestSlepianLong(t *testing.T) {
	v := Slepian(1<<17, 2, 3)
	for i := range v {
		for j := range i + 1 {
			dot := 0.0
			for s := range v[i] {
				dot += v[i][s] * v[j][s]
			}
			want := 0.0
			if i == j {
				want = 1
			}
			assert.InDelta(t, want, dot, 1e-7, "tapers %d and %d", i, j) // rounding grows with n
		}
	}
	short := Slepian(1<<10, 2, 3)
	for i := range v { // the same shape on a finer grid
		assert.InDelta(t, short[i][300], v[i][300*128+64]*math.Sqrt(128), 2e-4)
	}
}

func TestHannIsPeriodic(t *testing.T) {
	assert.InDeltaSlice(t, []float64{0, .5, 1, .5}, Hann(4), 1e-15)
}

func BenchmarkForward(b *testing.B) {
	for n := 256; n <= 1<<16; n *= 4 {
		p := NewPlan(n)
		z := p.NewPacked()
		x, w := noise(n, 1), noise(n, 2)
		b.Run(fmt.Sprintf("pair/%d", n), func(b *testing.B) {
			for b.Loop() {
				p.Pack(z, x, x, w, w, 0)
				p.Forward(z)
			}
		})
		b.Run(fmt.Sprintf("gonum-real/%d", n), func(b *testing.B) {
			f := gonum.NewFFT(n)
			dst := f.Coefficients(nil, x)
			for b.Loop() {
				f.Coefficients(dst, x)
			}
		})
	}
}
