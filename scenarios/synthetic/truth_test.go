package synthetic

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
)

// Weights of the linear codes over the trains, with the baseline that a residual
// subtracts.
var (
	spikeRate   = [5]float64{4: 1}
	eventRate   = [5]float64{1, 1, 1, 1, 0}
	singletRate = [5]float64{0: 1}
	burstRate   = [5]float64{1: 1, 2: 1, 3: 1}
)

func residual(p float64) [5]float64 { return [5]float64{-p, 1 - p, 1 - p, 1 - p, 0} }

func form(v, w [5]float64, m [5][5]complex128) complex128 {
	sum := complex(0, 0)
	for i := range v {
		for j := range w {
			sum += complex(v[i]*w[j], 0) * m[i][j]
		}
	}
	return sum
}

func cross(w [5]float64, c [5][]complex128, stream int) complex128 {
	sum := complex(0, 0)
	for i := range w {
		sum += complex(w[i], 0) * c[i][stream]
	}
	return sum
}

// coherence, squared, of a code read off so many cells with a stream.
func coherence(x *Truth, w [5]float64, cells, stream int, f float64) float64 {
	n := float64(cells)
	noise := n*real(form(w, w, x.Private(f))) + n*n*real(form(w, w, x.Shared(f)))
	return n * n * abs2(cross(w, x.Cross(f), stream)) / noise / real(x.Streams(f)[stream][stream])
}

// bits a second of a code about a stream: −∫ log₂(1−γ²) df over its band.
func bits(x *Truth, w [5]float64, cells, stream int) float64 {
	const steps = 100
	sum, band := 0.0, float64(x.bands[stream])
	for i := range steps {
		sum -= math.Log2(1 - coherence(x, w, cells, stream, band*(float64(i)+0.5)/steps))
	}
	return sum * band / steps
}

// jointBits of two codes about both streams, which are independent: the matrix
// form, up to the wider band.
func jointBits(x *Truth, v, w [5]float64, cells int) float64 {
	const steps = 100
	n, sum, band := complex(float64(cells), 0), 0.0, math.Max(float64(x.bands[0]), float64(x.bands[1]))
	for i := range steps {
		f := band * (float64(i) + 0.5) / steps
		private, shared, c := x.Private(f), x.Shared(f), x.Cross(f)
		codes := [][5]float64{v, w}
		var all, noise [2][2]complex128
		for a := range 2 {
			for b := range 2 {
				all[a][b] = n*form(codes[a], codes[b], private) + n*n*form(codes[a], codes[b], shared)
				noise[a][b] = all[a][b]
				for s := range 2 {
					if power := x.bands[s].density(f); power > 0 {
						noise[a][b] -= n * n * cross(codes[a], c, s) * conj(cross(codes[b], c, s)) / complex(power, 0)
					}
				}
			}
		}
		det := func(m [2][2]complex128) float64 { return real(m[0][0]*m[1][1] - m[0][1]*m[1][0]) }
		sum += math.Log2(det(all) / det(noise))
	}
	return sum * band / steps
}

// marked is a Truth without dead time.
func marked(rate, depth, share, slope float64, bands [2]flatBand) *Truth {
	return &Truth{events: newDeadTime(rate, 0, depth, bands[0]), bands: bands, isi: interval{shortestISI, longestISI},
		sizes: sizes{[4]float64{1 - share, share * .9, share * .1}, [4]float64{-slope, slope * .9, slope * .1}}}
}

// Poisson cells of rate r = 40/s and |H|² S_ss = 10: γ² = 0.2, 0.5, 0.8 for 1, 4
// and 16 cells, (1−γ²)/γ² = 4/N.
func TestSuperposedPoissonCells(t *testing.T) {
	x := marked(40, 0.3, 0.5, 0, [2]flatBand{7.2, 20})
	for cells, want := range map[int]float64{1: .2, 4: .5, 16: .8} {
		// Noise shared at second order vanishes without dead time.
		assert.InDelta(t, want, coherence(x, eventRate, cells, 0, 3), 1e-12)
	}
}

// Without dead time the closed form is that of modulated Poisson cells: of the
// events r private, r²a²S shared; of the residual r p(1−p) private, r²b²[S_yy + a²
// S_xx ∗ S_yy] shared; of bursts r p private, r²[a²p²S_xx + b²S_yy + a²b² S_xx ∗
// S_yy] shared.
func TestWithoutDeadTimeItIsPoisson(t *testing.T) {
	x := marked(8, 0.2, 0.25, 0.05, [2]flatBand{20, 20})
	const f = 7
	product := 64 * .0025 * .04 * (40.0 - f) / 1600 // two flat bands of 20 Hz overlap by 40 − f
	d := residual(.25)
	assert.InDelta(t, 8, real(form(eventRate, eventRate, x.Private(f))), 1e-12)
	assert.InDelta(t, 64*.04/40, real(form(eventRate, eventRate, x.Shared(f))), 1e-12)
	assert.InDelta(t, 8*.25*.75, real(form(d, d, x.Private(f))), 1e-12)
	assert.InDelta(t, 64*.0025/40+product, real(form(d, d, x.Shared(f))), 1e-12)
	assert.InDelta(t, 8*.25, real(form(burstRate, burstRate, x.Private(f))), 1e-12)
	assert.InDelta(t, 64*(.04*.0625+.0025)/40+product, real(form(burstRate, burstRate, x.Shared(f))), 1e-12)
	assert.InDelta(t, 8*.05/40, real(cross(d, x.Cross(f), 1)), 1e-12)
	assert.InDelta(t, 0, cmplx.Abs(cross(d, x.Cross(f), 0)), 1e-12)
}

// Clusters of three spikes about centres of 10/s: S(0) = μ m² = 90 and, far above
// all intervals, S(∞) = μ m = 30 (Bartlett 1963). In between, powers equal their
// mean over a grid of both in-burst intervals.
func TestClusters(t *testing.T) {
	x := marked(10, 0, 0.5, 0, [2]flatBand{20, 20})
	x.sizes = sizes{mean: [4]float64{2: 1}}
	spectrum := func(f float64) float64 { return real(form(spikeRate, spikeRate, x.Private(f))) }
	assert.InDelta(t, 90, spectrum(0), 1e-12)
	assert.InDelta(t, 30, spectrum(1e8), 1e-3)
	const n = 200
	for _, f := range []float64{5, 60, 300} {
		transform := func(s float64) complex128 { return cmplx.Exp(complex(0, -2*math.Pi*f*s)) }
		var mean [4]complex128
		var power [4]float64
		for i := range n {
			for j := range n {
				u := shortestISI + (longestISI-shortestISI)*(float64(i)+0.5)/n
				v := u + shortestISI + (longestISI-shortestISI)*(float64(j)+0.5)/n
				for size, sum := range []complex128{1, 1 + transform(u), 1 + transform(u) + transform(v)} {
					mean[size] += sum / (n * n)
					power[size] += abs2(sum) / (n * n)
				}
			}
		}
		k, p := x.isi.clusters(f)
		for size := range 4 {
			assert.InDelta(t, 0, cmplx.Abs(mean[size]-k[size]), 1e-4, "midpoint rule")
			assert.InDelta(t, power[size], p[size], 1e-4, "midpoint rule")
		}
	}
}

func TestMatricesAreSpectra(t *testing.T) {
	x := drive(t, Settings{Cells: 1, DurationS: 1, BandwidthsHz: [2]float64{20, 8}}).Truth()
	for _, f := range []float64{0, 1, 15, 30} {
		for _, m := range [][5][5]complex128{x.Private(f), x.Shared(f)} {
			for i := range 5 {
				assert.GreaterOrEqual(t, real(m[i][i]), 0.0)
				for j := range 5 {
					assert.InDelta(t, 0, cmplx.Abs(m[i][j]-conj(m[j][i])), 1e-12)
				}
			}
		}
		assert.InDelta(t, 0, cmplx.Abs(cross(residual(x.BurstShare()), x.Cross(f), 0)), 1e-12, "the residual does not follow soma")
	}
}
