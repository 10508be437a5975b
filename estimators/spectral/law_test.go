package spectral

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// wishart fills m with the sum of n outer products of the signals that draw makes
// of fresh unit complex Gaussian values.
func wishart(m *Matrix, n, size int, rng *rand.Rand, draw func(z []complex128)) {
	sum := make([]complex128, size*size)
	z := make([]complex128, size)
	for range n {
		for i := range z {
			z[i] = complex(rng.NormFloat64(), rng.NormFloat64())
		}
		draw(z)
		for i := range z {
			for j := range i + 1 {
				sum[i*size+j] += z[i] * complex(real(z[j]), -imag(z[j]))
			}
		}
	}
	m.Resize(size)
	for i := range size {
		for j := range i + 1 {
			m.Set(i, j, sum[i*size+j])
		}
	}
}

// Goodman's law (Goodman 1957; Carter, Knapp and Nuttall 1973) by simulation, 4
// standard errors of 20 000 draws: E γ̂² = .351894 and variance .0256665 for n = 10,
// γ² = .3; the interval of n = 20, γ² = .5 covers 95.0 %.
func TestCoherenceLaw(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 1))
	m := NewMatrix(2)
	const runs = 20000
	simulate := func(n int, msc float64, each func(estimate float64)) {
		for range runs {
			wishart(m, n, 2, rng, func(z []complex128) {
				z[1] = complex(math.Sqrt(msc), 0)*z[0] + complex(math.Sqrt(1-msc), 0)*z[1]
			})
			each(1 - math.Exp(-m.LogDetRatio(1)))
		}
	}
	sum, sum2 := 0.0, 0.0
	simulate(10, .3, func(g float64) { sum += g; sum2 += g * g })
	mean := sum / runs
	variance := sum2/runs - mean*mean
	assert.InDelta(t, .351894, mean, 4*math.Sqrt(variance/runs))
	assert.InDelta(t, .0256665, variance, 4*variance*math.Sqrt(2.0/runs))
	held := 0
	simulate(20, .5, func(g float64) {
		if low, high := CoherenceInterval(g, 20, 1.959964); low <= .5 && .5 <= high {
			held++
		}
	})
	assert.InDelta(t, .95, float64(held)/runs, 4*math.Sqrt(.95*.05/runs)+.002, "Fisher's transform is good to .002 here")
}

// Independent signals exceed their thresholds at the nominal 5 % (Goodman 1963):
// partial coherence given one series 1−α^{1/(n−2)} at n = 10, multiple coherence of
// two inputs .226374... = the 95 % quantile of Beta(2, 18) at n = 20.
func TestPartialAndMultipleHaveTheirSize(t *testing.T) {
	rng := rand.New(rand.NewPCG(22, 1))
	m := NewMatrix(3)
	const runs = 10000
	partial, multiple := 0, 0
	for range runs {
		// x and y both follow z: coherent, but not given z. Order x, z, y.
		wishart(m, 10, 3, rng, func(z []complex128) { z[0] += z[1]; z[2] += z[1] })
		if 1-math.Exp(-m.Partial()) > NullThreshold(10, 1, .05) {
			partial++
		}
		wishart(m, 20, 3, rng, func([]complex128) {})
		if 1-math.Exp(-m.LogDetRatio(2)) > .226374 {
			multiple++
		}
	}
	assert.InDelta(t, .05, float64(partial)/runs, 4*math.Sqrt(.05*.95/runs))
	assert.InDelta(t, .05, float64(multiple)/runs, 4*math.Sqrt(.05*.95/runs))
}

// Clusters of three spikes with exponential delays of 10 ms about centres at 10/s
// have the density 10[3 + 6/(1+(2πf·10 ms)²)] (Bartlett 1963, J. R. Stat. Soc. B
// 25:264–296): 90, 59.8411 and 30 spikes/s at 0, 16 Hz and far out. Multitaper
// density of 1500 s, bands of a few bins, 4 standard errors.
func TestDensityOfClusters(t *testing.T) {
	rng := rand.New(rand.NewPCG(23, 1))
	const dt, seconds = 0.0005, 1500.0
	x := make([]float64, int(seconds/dt))
	spikes := 0
	for c := rng.ExpFloat64() / 10; c < seconds; c += rng.ExpFloat64() / 10 {
		for range 3 {
			if at := int((c + 0.01*rng.ExpFloat64()) / dt); at < len(x) {
				x[at]++
				spikes++
			}
		}
	}
	d, err := NewMultitaper(4096, 2, 0, dt, 1000)
	require.NoError(t, err)
	density := make([]float64, d.Bins())
	d.AddAuto(density, d.Transforms(nil, x, float64(spikes)/float64(len(x)), d.NewScratch()))
	items := float64(d.Items(len(x)))
	for _, c := range []struct{ low, high, want float64 }{{0, 1, 90}, {15.5, 16.5, 59.8411}, {800, 900, 30}} {
		first, last := int(math.Round(c.low/d.Spacing())), int(math.Round(c.high/d.Spacing()))
		mean := 0.0
		for k := first; k <= last; k++ {
			// Densities of counts a bin, over dt², are of rates.
			mean += density[k] / items / (dt * dt) / float64(last-first+1)
		}
		// Independent values of a segment: its bins, at least the three tapers.
		independent := items / 3 * math.Max(3, float64(last-first+1))
		assert.InDelta(t, c.want, mean, 4*c.want/math.Sqrt(independent)+0.01*c.want, "%g to %g Hz; a bin and a band of a Hz smear by 1 %%", c.low, c.high)
	}
}
