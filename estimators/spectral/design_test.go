package spectral

import (
	"bufio"
	"encoding/json"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// SciPy 1.10 signal.coherence, csd and welch on the same arrays
// (testdata/spectral/make_scipy.py).
func TestWelchEqualsSciPy(t *testing.T) {
	raw, err := os.ReadFile("../../testdata/spectral/scipy.json")
	require.NoError(t, err)
	var g struct {
		Fs                    float64
		X, Y, Freq, Coherence []float64
		CsdRe                 []float64 `json:"csd_re"`
		CsdIm                 []float64 `json:"csd_im"`
		PsdX                  []float64 `json:"psd_x"`
	}
	require.NoError(t, json.Unmarshal(raw, &g))
	d, err := NewWelch(256, 0.5, "hann", 1/g.Fs, g.Fs/2)
	require.NoError(t, err)
	require.Equal(t, len(g.Freq), d.Bins())
	s := d.NewScratch()
	zx, zy := d.Transforms(nil, g.X, 0, s), d.Transforms(nil, g.Y, 0, s)
	sxx, syy, sxy := make([]float64, d.Bins()), make([]float64, d.Bins()), make([]complex128, d.Bins())
	d.AddAuto(sxx, zx)
	d.AddAuto(syy, zy)
	d.AddCross(sxy, zx, zy) // X conj(Y) = SciPy's csd(y, x)
	items := float64(d.Items(len(g.X)))
	for k := range g.Freq {
		oneSided := 2 / items
		if k == 0 || k == d.Bins()-1 {
			oneSided = 1 / items
		}
		assert.InDelta(t, g.Freq[k], float64(k)*d.Spacing(), 1e-9)
		assert.InEpsilon(t, g.PsdX[k], sxx[k]*oneSided, 1e-9)
		assert.InDelta(t, g.CsdRe[k], real(sxy[k])*oneSided, 1e-12)
		assert.InDelta(t, g.CsdIm[k], imag(sxy[k])*oneSided, 1e-12)
		c := cmplx.Abs(sxy[k])
		assert.InDelta(t, g.Coherence[k], c*c/(sxx[k]*syy[k]), 1e-9)
	}
}

// R 4.2 spec.pgram of the UK lung deaths, padded to 128 and smoothed by a
// Daniell kernel over nine frequencies (testdata/spectral/make_r.R).
func TestSmoothedPeriodogramEqualsR(t *testing.T) {
	file, err := os.Open("../../testdata/spectral/spec_pgram.csv")
	require.NoError(t, err)
	defer file.Close()
	var coh, phase []float64
	series := map[string][]float64{}
	for lines := bufio.NewScanner(file); lines.Scan(); {
		line := lines.Text()
		if name, ok := strings.CutPrefix(line, "# "); ok {
			fields := strings.Fields(name)
			if strings.HasSuffix(fields[0], "deaths") {
				for _, f := range fields[1:] {
					v, err := strconv.ParseFloat(f, 64)
					require.NoError(t, err)
					series[fields[0]] = append(series[fields[0]], v)
				}
			}
			continue
		}
		fields := strings.Split(line, ",")
		if v, err := strconv.ParseFloat(fields[0], 64); err == nil && v > 0 {
			c, err := strconv.ParseFloat(fields[1], 64)
			require.NoError(t, err)
			p, err := strconv.ParseFloat(fields[2], 64)
			require.NoError(t, err)
			coh, phase = append(coh, c), append(phase, p)
		}
	}
	require.Len(t, coh, 64)
	d, err := NewWelch(72, 0, "boxcar", 1.0/12, 6)
	require.NoError(t, err)
	require.Equal(t, 65, d.Bins(), "72 months are padded to 128")
	s := d.NewScratch()
	transform := func(name string) []complex128 {
		x, err := centred(name, series[name])
		require.NoError(t, err)
		return d.Transforms(nil, x, 0, s)
	}
	zm, zf := transform("mdeaths"), transform("fdeaths")
	full := func(z []complex128, k int) complex128 { // by conjugate symmetry, circular
		k = ((k % 128) + 128) % 128
		if k > 64 {
			return cmplx.Conj(z[128-k])
		}
		return z[k]
	}
	product := func(a, b []complex128, k int) complex128 {
		if ((k%128)+128)%128 == 0 { // R replaces the value at zero frequency by its neighbours' mean
			return (full(a, 1)*cmplx.Conj(full(b, 1)) + full(a, -1)*cmplx.Conj(full(b, -1))) / 2
		}
		return full(a, k) * cmplx.Conj(full(b, k))
	}
	for k := 1; k <= 64; k++ {
		var mm, ff, mf complex128
		for j := -4; j <= 4; j++ {
			mm += product(zm, zm, k+j)
			ff += product(zf, zf, k+j)
			mf += product(zm, zf, k+j)
		}
		c := cmplx.Abs(mf)
		assert.InDelta(t, coh[k-1], c*c/(real(mm)*real(ff)), 1e-9, "bin %d", k)
		assert.InDelta(t, 0, math.Remainder(phase[k-1]-cmplx.Phase(mf), 2*math.Pi), 1e-9, "bin %d", k)
	}
}

// Transforms against a direct Fourier sum with each taper.
func TestTransformsAgainstDirectSum(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	d, err := NewMultitaper(100, 2.5, 0, 0.01, 20)
	require.NoError(t, err)
	require.Equal(t, 4, d.Tapers())
	x := make([]float64, 350) // three segments and a rest: an even number of items
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	before := append([]float64(nil), x...)
	dirty := make([]complex128, d.Items(len(x))*d.Bins())
	for i := range dirty {
		dirty[i] = cmplx.NaN()
	}
	z := d.Transforms(dirty, x, 0, d.NewScratch())
	assert.Equal(t, before, x, "inputs are not changed")
	for item := range d.Items(len(x)) {
		taper := d.tapers[item%4]
		for k := range d.Bins() {
			want := complex(0, 0)
			for i, v := range taper {
				want += complex(v*x[item/4*100+i], 0) * cmplx.Rect(1, -2*math.Pi*float64(i*k)/128)
			}
			want *= complex(math.Sqrt(0.01), 0)
			assert.InDelta(t, 0, cmplx.Abs(want-z[item*d.Bins()+k]), 1e-12)
		}
	}
}

// Hann overlap: ρ = 1/6 at 50 % and .659155 at 75 % (Harris 1978, table entries
// 16.7 %, 65.9 % from memory); effective counts 9.52381 for K = 10 at 50 % and
// 19.4928 for K = 37 at 75 %; ν = 36K²/(19K−1) (Percival and Walden 1993).
func TestEffectiveCounts(t *testing.T) {
	half, err := NewWelch(4096, 0.5, "hann", 1, 0.5)
	require.NoError(t, err)
	quarter, err := NewWelch(4096, 0.75, "hann", 1, 0.5)
	require.NoError(t, err)
	assert.InDelta(t, 1.0/6, half.overlap(1), 1e-5)
	assert.InDelta(t, 0.659155, quarter.overlap(1), 1e-5)
	n10 := half.Tally(4096 + 9*2048)
	assert.Equal(t, 10.0, n10.Items)
	assert.InDelta(t, 9.52381, n10.NEff(), 1e-4)
	assert.InDelta(t, 36*100.0/(190-1)/2, n10.NEff(), 1e-4)
	assert.InDelta(t, 19.4928, quarter.Tally(4096+36*1024).NEff(), 1e-3)
	taper, err := NewMultitaper(256, 2, 0, 1, 0.5)
	require.NoError(t, err)
	assert.Equal(t, 12.0, taper.Tally(1100).NEff(), "four segments of three tapers")
	assert.Equal(t, 6.0, taper.Tally(1100).Sub(taper.Tally(512)).NEff(), "tallies subtract")
}

func TestBandCells(t *testing.T) {
	d, err := NewMultitaper(128, 2, 0, 1.0/128, 20) // bins of 1 Hz
	require.NoError(t, err)
	b := d.Band(0, 20, nil)
	assert.Equal(t, 0, b.First)
	assert.Len(t, b.Weight, 21)
	assert.Equal(t, 0.5, b.Weight[0], "the cell of zero frequency is half a bin")
	assert.Equal(t, 0.5, b.Weight[20], "the last cell is clipped at the band's edge")
	assert.InDelta(t, 20, b.UsedHz(), 1e-12)
	narrow := d.Band(3.2, 4.1, nil)
	assert.Equal(t, 3, narrow.First)
	assert.InDelta(t, 0.9, narrow.UsedHz(), 1e-12)
	masked := d.Band(0, 20, func(k int) bool { return k != 7 })
	assert.InDelta(t, 19, masked.UsedHz(), 1e-12)
}

func TestDesignErrors(t *testing.T) {
	_, err := NewWelch(64, 1, "hann", 1, 0.5)
	assert.EqualError(t, err, "overlap = 1: from 0 to below 1")
	_, err = NewWelch(64, 0.5, "hanning", 1, 0.5)
	assert.EqualError(t, err, `window = "hanning": one of hann, boxcar`)
	_, err = NewMultitaper(64, 2, 5, 1, 0.5)
	assert.ErrorContains(t, err, "at most 2×half_bandwidth−1")
	_, err = NewMultitaper(6, 2, 0, 1, 0.5)
	assert.ErrorContains(t, err, "at least 8 samples")
}
