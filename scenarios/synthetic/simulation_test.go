package synthetic

import (
	"maps"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/stat"
)

// The parameter sets that simulations are held against.
var simulated = map[string]Settings{
	"defaults":         {},
	"fast and shallow": {EventRateHz: 9, EventDepth: 0.15, BurstShare: 0.4, BurstDepth: 0.1},
	"unequal bands":    {EventRateHz: 5, EventDepth: 0.3, BurstDepth: 0.08, BandwidthsHz: [2]float64{10, 20}},
	"crowded":          {EventRateHz: 12, EventDepth: 0.3, BurstShare: 0.5, BurstDepth: 0.15, BandwidthsHz: [2]float64{30, 15}},
}

type namedCode struct {
	name    string
	weights [5]float64
}

func linearCodes(p float64) []namedCode {
	return []namedCode{{"spike rate", spikeRate}, {"event rate", eventRate}, {"singlet rate", singletRate}, {"burst rate", burstRate}, {"residual", residual(p)}}
}

// each calls f with the spikes of a train and the trains that each belongs to: 0,
// 1 or 2 for the first spike of an event of so many more, and −1 for the others.
func each(train []int64, f func(time int64, size int)) {
	for i := 0; i < len(train); {
		j := i + 1
		for j < len(train) && train[j]-train[j-1] <= 15e6 {
			j++
		}
		f(train[i], j-i-1)
		for i++; i < j; i++ {
			f(train[i], -1)
		}
	}
}

const topHz = 20

// privateRatio measures the private spectra of codes from the variation between
// cells of the transforms of segments of 1 s under a Hann window, at whole
// frequencies from 2 Hz, where the mean rate has no part, to topHz. It returns the
// ratio to the truth, averaged over frequencies, and its standard error from the
// variation between segments.
func privateRatio(p *PairedDrive, codes []namedCode) (ratio, se []float64) {
	x := p.Truth()
	segments := int(p.settings.DurationS)
	type row [topHz + 2]complex128
	squares := make([][5][topHz + 1]float64, segments) // Σ|z|² over cells
	mean := make([][5]row, segments)                   // Σ z
	var train []int64
	for u := range p.units {
		z := make([][5]row, segments)
		train = p.Train(train, u, 0)
		each(train, func(time int64, size int) {
			at := &z[time/1e9]
			sin, cos := math.Sincos(-2 * math.Pi * float64(time%1e9) / 1e9)
			step, turn := complex(cos, sin), complex(1, 0)
			for k := range topHz + 2 {
				at[4][k] += turn
				if size >= 0 {
					at[size][k] += turn
				}
				turn *= step
			}
		})
		for s := range z {
			for c, code := range codes {
				for k := 2; k <= topHz; k++ {
					sum := complex(0, 0)
					for i, w := range code.weights {
						sum += complex(w, 0) * (z[s][i][k] - (z[s][i][k-1]+z[s][i][k+1])/2)
					}
					squares[s][c][k] += abs2(sum)
					mean[s][c][k] += sum
				}
			}
		}
	}
	n := float64(len(p.units))
	for c, code := range codes {
		value := make([]float64, segments)
		for k := 2; k <= topHz; k++ {
			// The window 1 − cos 2πt has a mean square of 1.5.
			truth := 1.5 * real(form(code.weights, code.weights, x.Private(float64(k))))
			for s := range value {
				value[s] += (squares[s][c][k] - abs2(mean[s][c][k])/n) / (n - 1) / truth / (topHz - 1)
			}
		}
		m, sd := stat.MeanStdDev(value, nil)
		ratio, se = append(ratio, m), append(se, sd/math.Sqrt(float64(segments)))
	}
	return ratio, se
}

// The private spectra of all linear codes: 25 ratios within 4.5 standard errors
// (probability 2e-4 that any one is not) and the truth's own error. Where crowded
// cells burst by a slow stream, the dead time takes 5 % of the residual's.
func TestPrivateSpectraAgainstSimulation(t *testing.T) {
	sets := maps.Clone(simulated)
	sets["slow marks"] = Settings{EventRateHz: 12, EventDepth: 0.1, BurstShare: 0.5, BurstDepth: 0.16, BandwidthsHz: [2]float64{20, 5}}
	for name, s := range sets {
		s.Cells, s.DurationS = 128, 200
		p := drive(t, s)
		codes := linearCodes(p.Truth().BurstShare())
		ratio, se := privateRatio(p, codes)
		for c, code := range codes {
			assert.InDelta(t, 1, ratio[c], 4.5*se[c]+p.Truth().RelativeError(), "%s: %s, standard error %.4f", name, code.name, se[c])
		}
	}
}

// ensemble is the transforms of the trains of so many cells, and of the streams,
// which repeat, so that they do not leak: tone k is k/T.
type ensemble struct {
	trains  [5][]complex128
	streams [2][]complex128
	tones   float64 // T in s
}

func transforms(p *PairedDrive, cells int) *ensemble {
	n := len(p.streams[0].Samples)
	var counts [5][]float64
	for i := range counts {
		counts[i] = make([]float64, n)
	}
	var train []int64
	for u := range cells {
		train = p.Train(train, u, 0)
		each(train, func(time int64, size int) {
			counts[4][time/1e6]++
			if size >= 0 {
				counts[size][time/1e6]++
			}
		})
	}
	e := &ensemble{tones: float64(n) * sampleInterval}
	plan := fourier.NewFFT(n)
	for i := range counts {
		e.trains[i] = plan.Coefficients(nil, counts[i])
	}
	for s := range e.streams {
		e.streams[s] = plan.Coefficients(nil, p.streams[s].Samples)
	}
	return e
}

// bits estimates a code's rate about a stream from tones grouped by 1 Hz, less its
// bias, and gives the standard error for large samples: ln(1−γ̂²) of n tones is low
// by 1/(n−1), of variance 1/n² + 2γ²/n (Goodman 1963, Ann. Math. Stat. 34:152–177).
func (e *ensemble) bits(w [5]float64, stream int, band float64) (rate, se float64) {
	variance := 0.0
	for f := 0.0; f < band; f++ {
		var xx, ww float64
		var wx complex128
		n := 0.0
		for k := int(f*e.tones) + 1; k <= int((f+1)*e.tones); k++ {
			v := complex(0, 0)
			for i := range w {
				v += complex(w[i], 0) * e.trains[i][k]
			}
			x := e.streams[stream][k]
			xx, ww, wx, n = xx+abs2(x), ww+abs2(v), wx+v*conj(x), n+1
		}
		coherence := abs2(wx) / xx / ww
		rate -= (math.Log(1-coherence) + 1/(n-1)) / math.Ln2
		variance += (1/(n*n) + 2*coherence/n) / (math.Ln2 * math.Ln2)
	}
	return rate, math.Sqrt(variance)
}

// Bits/s of every linear code about both streams, 16, 64 and 256 cells, four
// parameter sets: 120 rates, most of them akin, within 4 standard errors (of
// independent ones any would be beyond with probability 0.8 %) and the truth's own
// error.
func TestBitsAgainstSimulation(t *testing.T) {
	for name, s := range simulated {
		s.Cells, s.DurationS = 256, 300
		p := drive(t, s)
		x := p.Truth()
		for _, cells := range []int{16, 64, 256} {
			e := transforms(p, cells)
			for _, code := range linearCodes(x.BurstShare()) {
				for stream, band := range p.settings.BandwidthsHz {
					got, se := e.bits(code.weights, stream, band)
					want := bits(x, code.weights, cells, stream)
					assert.InDelta(t, want, got, 4*se+x.RelativeError()*want, "%s: %s about stream %d, %d cells", name, code.name, stream, cells)
				}
			}
		}
	}
}
